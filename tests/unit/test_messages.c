/* What a person gets wrong, and what they read then: the exact place and text of every message. */
#include <stdlib.h>
#include <sys/stat.h>
#include <unistd.h>

#include "test_expand_support.h"

/* A netlist below the line `port a, b: 50 ohm`, and everything that is said of it. Spans are
 * line:first column-column behind it. */
static const struct mistake {
    const char *name, *netlist, *messages;
} mistakes[] = {
    {"missing unit",
     "a -- line(70.7, 90 deg @ 1 GHz) -- b\n",
     "2:11-15: error: `70.7` has no unit: `z` of `line` is an impedance in ohm [missing-unit]\n"
     "    hint: write `70.7 ohm`\n"},
    {"wrong unit",
     "a -- line(50 pF, 90 deg @ 1 GHz) -- b\n",
     "2:11-16: error: `50 pF` is a capacitance in F, but `z` of `line` is an impedance in ohm "
     "[wrong-unit]\n"},
    {"unit case",
     "sweep at 10 mhz, 20 MHz\n"
     "a -- 5 ohm -- b\n",
     "2:10-16: error: `mhz` is not a unit [unit]\n"
     "    hint: `10 MHz`\n"},
    {"range unit",
     "a -- 5 ohm -- b\n"
     "sweep 900 .. 1100 MHz points 3\n",
     "3:7-10: error: `900` has no unit: the other end of the range is a frequency in Hz "
     "[missing-unit]\n"
     "    hint: write `900 MHz`\n"},
    {"decimal comma",
     "a -- 3,3 pF -- b\n",
     "2:6-12: error: a decimal comma? Numbers have a point [decimal-comma]\n"
     "    hint: `3.3 pF`\n"},
    {"letter for unit",
     "a -- 100k -- b\n",
     "2:6-10: error: `k` is not a unit [unit]\n"
     "    hint: a prefix needs its unit: `100 kohm`, `100 kHz`\n"},
    {"letter for point",
     "a -- 4k7 -- b\n",
     "2:6-9: error: `k7` is not a unit [unit]\n"
     "    hint: a point and a unit: `4.7 kohm`\n"},
    {"imaginary suffix",
     "a -- impedance((10 + 3j)*1 ohm) -- b\n",
     "2:22-24: error: `j` is not a unit [unit]\n"
     "    hint: the imaginary unit is a factor: `3*j`\n"},
    {"inch",
     "a -- line(50 ohm, 5 in) -- b\n",
     "2:19-23: error: `in` is not a unit [unit]\n"
     "    hint: `5 inch`\n"},
    {"times",
     "z0 = 50 ohm\n"
     "a -- 2 z0 -- b\n",
     "3:6-10: error: `z0` is not a unit [unit]\n"
     "    hint: a product is written with a star: `2*z0`\n"},
    {"unknown part",
     "a -- resitor(50 ohm) -- b\n",
     "2:6-13: error: there is no part, network or function `resitor` [unknown-part]\n"
     "    hint: did you mean `resistor`?\n"},
    {"unknown option",
     "a -- line(50 ohm, 90 deg @ 1 GHz, los = 1 dB) -- b\n",
     "2:35-38: error: `line` has no option `los` [unknown-option]\n"
     "    hint: did you mean `loss`?\n"},
    {"unknown option no guess",
     "a -- inductor(2 nH, colour = 40) -- b\n",
     "2:21-27: error: `inductor` has no option `colour` [unknown-option]\n"
     "    hint: it has `l`, `q`, `resistance`, `srf`, `rating`\n"},
    {"unknown measure",
     "a -- 5 ohm -- b\n"
     "require isolaton(a, b) >= 20 dB\n",
     "3:9-17: error: there is no measure or function `isolaton` [unknown-measure]\n"
     "    hint: did you mean `isolation`?\n"},
    {"misspelt node",
     "a -- 1 ohm -- middle -- 2 ohm -- b\n"
     "middle -- shunt 3 ohm\n"
     "a -- 1 ohm -- midle -- 2 ohm -- b\n",
     "4:15-20: warning: the node `midle` is written once and is one letter off `middle` [near-miss]\n"
     "    hint: did you mean `middle`?\n"},
    {"lonely node",
     "a -- 1 ohm -- b\n"
     "b -- 2 ohm -- dangle\n",
     "3:15-21: warning: only one terminal touches the node `dangle` [lonely-node]\n"},
    {"misspelt port",
     "port right: 50 ohm\n"
     "a -- 5 ohm -- b -- 5 ohm -- rigth\n",
     "2:6-11: error: nothing touches the port `right` [untouched-port]\n"
     "    note 3:29: only one terminal touches the node `rigth`\n"
     "    hint: did you mean `right`?\n"},
    {"misspelt value between parts",
     "zline = 5 ohm\n"
     "a -- 1 ohm -- zlime -- 1 ohm -- b\n",
     "3:15-20: warning: the node `zlime` is written once and is one letter off the value `zline` "
     "[near-miss]\n"
     "    hint: did you mean `zline`?\n"},
    {"misspelt value",
     "zline = 5 ohm\n"
     "a -- zlime -- b\n",
     "3:6-11: error: `zlime` is not defined, and as a node it has nothing between it and `a` "
     "[undefined-name]\n"
     "    hint: did you mean `zline`?\n"},
    {"two nodes",
     "a -- mid -- 50 ohm -- b\n",
     "2:1-9: error: there is nothing between the nodes `a` and `mid` [two-nodes]\n"
     "    hint: `join a, mid` makes them one node\n"},
    {"two nodes around a shunt",
     "a -- shunt 1 pF -- b\n",
     "2:1-21: error: there is nothing between the nodes `a` and `b` [two-nodes]\n"
     "    hint: `join a, b` makes them one node\n"},
    {"mid air",
     "a -- 10 ohm -- b\n"
     "a -- 50 ohm\n",
     "3:6-12: error: the chain ends in mid-air after `50 ohm` [mid-air]\n"
     "    hint: end it with a node, e.g. `-- ground`, or write `shunt 50 ohm`\n"},
    {"chain start",
     "10 ohm -- b\n"
     "a -- 5 ohm -- b\n",
     "2:1-7: error: a chain begins with a node, but `10 ohm` is none [chain-start]\n"
     "    hint: write `a -- 10 ohm -- b`\n"},
    {"undefined",
     "a -- line(zline, 90 deg @ 1 GHz) -- b\n"
     "a -- zline*2 -- b\n",
     "2:11-16: error: `zline` is not defined [undefined-name]\n"},
    {"before its definition",
     "a -- 2*z -- b\n"
     "z = 5 ohm\n",
     "2:8-9: error: `z` is not defined [undefined-name]\n"
     "    note 3:1: it is defined here: a value stands before its use\n"},
    {"defined twice",
     "z0 = 50 ohm\n"
     "z0 = 75 ohm\n"
     "a -- z0 -- b\n",
     "3:1-3: error: `z0` is defined twice [defined-twice]\n"
     "    note 2:1: `z0` is first defined here\n"},
    {"missing brace",
     "a -- 50 ohm -- b\n"
     "for k in 1 .. 3 {\n"
     "    a -- k*10 ohm -- b\n",
     "3:17-18: error: this `{` is not closed [open-brace]\n"
     "    hint: close it with `}`\n"},
    {"missing parenthesis",
     "a -- line(50 ohm, 90 deg @ 1 GHz -- b\n",
     "2:10-11: error: this `(` is not closed [open-bracket]\n"
     "    hint: close it with `)`\n"},
    {"unreadable data",
     "a -- touchstone(\"nowhere.s2p\") -- b\n",
     "2:17-30: error: `nowhere.s2p` cannot be read: there is no such file [unreadable-file]\n"},
    {"unreadable include",
     "include \"nowhere.anab\"\n"
     "a -- 50 ohm -- b\n",
     "2:9-23: error: `nowhere.anab` cannot be read: there is no such file [unreadable-file]\n"},
    {"recursion",
     "a -- loop() -- b\n"
     "network loop() {\n"
     "    port p, q\n"
     "    p -- loop() -- q\n"
     "}\n",
     "5:10-16: error: the network `loop` places itself without end [recursion]\n"
     "    note 3:9: it is defined here\n"
     "    note 2:6: in `loop`, placed here\n"
     "    hint: networks may stand in one another 200 deep\n"},
    {"own recursion",
     "one(x) = two(x)\n"
     "two(x) = one(x)\n"
     "a -- one(1 ohm) -- b\n",
     "3:10-16: error: `one` is made of itself [recursion]\n"
     "    note 2:1: it is defined here\n"
     "    note 2:10: in `two`, used here\n"
     "    note 4:6: in `one`, used here\n"},
    {"division by zero",
     "n = 2 - 2\n"
     "r = 50 ohm/n\n"
     "a -- r -- b\n",
     "3:5-13: error: `50 ohm/n` divides by zero [division-by-zero]\n"},
    {"not finite",
     "r = 1e200 ohm*1e200\n"
     "a -- r -- b\n",
     "2:5-20: error: `1e200 ohm*1e200` is not finite [not-finite]\n"},
    {"negative root",
     "a -- sqrt(-4)*1 ohm -- b\n",
     "2:6-14: error: `sqrt(-4)` is the root of a negative number [negative-root]\n"},
    {"untouched port",
     "port spare: 50 ohm\n"
     "a -- 5 ohm -- b\n",
     "2:6-11: error: nothing touches the port `spare` [untouched-port]\n"},
    {"unequal dimensions",
     "a -- 50 ohm + 3 nH -- b\n",
     "2:6-19: error: `50 ohm` is an impedance in ohm and `3 nH` is an inductance in H: they cannot "
     "be added [unequal-dimensions]\n"},
    {"frequency in a chain",
     "a -- 3 GHz -- b\n",
     "2:6-11: error: `3 GHz` is a frequency in Hz, which is no part: a chain takes ohm, S, H or F "
     "[no-part]\n"},
    {"no unit in a chain",
     "a -- 70 -- b\n",
     "2:6-8: error: `70` has no unit, so it is no part [missing-unit]\n"
     "    hint: write `70 ohm`, or S, H or F with their prefixes\n"},
    {"number of nodes",
     "transformer(2) on (a, b, ground)\n"
     "a -- 5 ohm -- b\n",
     "2:19-33: error: `transformer` has 4 terminals (a1, a2, b1, b2), but lies on 3 nodes "
     "[node-count]\n"},
    {"needs on",
     "a -- circulator() -- b\n",
     "2:6-18: error: `circulator` has 3 terminals: it cannot stand in a chain [needs-on]\n"
     "    hint: write `circulator(...) on (p1, p2, p3)`\n"},
    {"ports of a network",
     "a -- 5 ohm -- b\n"
     "split(5 ohm) on (a, b)\n"
     "network split(z) {\n"
     "    port x, y, z1\n"
     "    x -- z -- y -- z -- z1\n"
     "}\n",
     "3:1-23: error: the network `split` has 3 ports (x, y, z1), but lies on 2 nodes [node-count]\n"
     "    note 4:9: it is defined here\n"
     "    hint: write `split(...) on (x, y, z1)`\n"},
    {"one port in a chain",
     "a -- load() -- b\n"
     "a -- 5 ohm -- b\n"
     "network load() {\n"
     "    port x\n"
     "    x -- 50 ohm -- ground\n"
     "}\n",
     "2:6-12: error: the network `load` has one port, `x`, so it has no other end [node-count]\n"
     "    note 4:9: it is defined here\n"
     "    hint: write `shunt load(...)`, or place it with `on`\n"},
    {"inside a network",
     "z0 = 50 ohm\n"
     "a -- cell() -- b\n"
     "network cell() {\n"
     "    port p, q\n"
     "    p -- z0 -- q\n"
     "}\n",
     "6:10-12: error: `z0` is not defined in `cell` [undefined-name]\n"
     "    note 2:1: it is defined here, outside\n"
     "    note 3:6: in `cell`, placed here\n"
     "    hint: a network sees its own parameters and names only: make `z0` a parameter\n"},
    {"value of a loop",
     "for k in 1 .. 2 {\n"
     "    x = k*1 ohm\n"
     "    a -- x -- b\n"
     "}\n"
     "a -- 2*x -- b\n",
     "6:8-9: error: `x` lives in the block that defines it only [undefined-name]\n"
     "    note 3:5: it is defined here\n"},
    {"label twice",
     "a -- r: 5 ohm -- b\n"
     "a -- r: 6 ohm -- b\n",
     "3:6-7: error: there are two parts with the label `r` [defined-twice]\n"
     "    note 2:6: this is the first\n"},
    {"label in a loop",
     "for k in 1 .. 2 { a -- r: 5 ohm -- b }\n",
     "2:24-25: error: there are two parts with the label `r` [defined-twice]\n"
     "    hint: in a loop a label needs an index: `r[k]`\n"},
    {"two kinds",
     "x = 5 ohm\n"
     "a -- 5 ohm -- b\n"
     "a -- x: 6 ohm -- b\n",
     "4:6-7: error: `x` is a value, so it cannot be a label as well [two-kinds]\n"
     "    note 2:1: `x` is a value here\n"},
    {"missing at",
     "a -- line(50 ohm, 90 deg) -- b\n",
     "2:19-25: error: `length` of `line` is an angle, so it needs the frequency at which it holds "
     "[missing-at]\n"
     "    hint: write `90 deg @ 1 GHz`\n"},
    {"contradiction",
     "a -- inductor(1 nH, q = 40, resistance = 1 ohm) -- b\n",
     "2:6-48: error: `q` and `resistance` of `inductor` contradict each other: give one "
     "[contradiction]\n"},
    {"missing argument",
     "a -- line(50 ohm) -- b\n",
     "2:6-18: error: `line` needs `length` [missing-argument]\n"
     "    hint: `line(z, length)`\n"},
    {"at in arithmetic",
     "l = 90 deg @ 1 GHz\n"
     "a -- line(50 ohm, 2*l) -- b\n",
     "3:21-22: error: `l` holds at one frequency: it is passed on to a part, never calculated with "
     "[at-in-arithmetic]\n"},
    {"tolerance of a port",
     "port c: 50 ohm +/- 5%\n"
     "a -- 5 ohm -- b -- 5 ohm -- c\n",
     "2:9-22: error: `50 ohm +/- 5%` has a tolerance: a port's impedance may have none "
     "[tolerance-here]\n"},
    {"frequency of a port",
     "port c: 50 ohm*frequency/(1 GHz)\n"
     "a -- 5 ohm -- b -- 5 ohm -- c\n",
     "2:9-33: error: `50 ohm*frequency/(1 GHz)` depends on `frequency`: a port's impedance may not "
     "[frequency-here]\n"},
    {"negative port",
     "port c: -(50 ohm)\n"
     "a -- 5 ohm -- b -- 5 ohm -- c\n",
     "2:9-18: error: the real part of a port's impedance has to be above zero; that of `-(50 ohm)` "
     "is not [not-positive]\n"},
    {"negative resistance",
     "a -- -5 ohm -- b\n",
     "2:6-12: warning: `-5 ohm` is a negative resistance [negative-value]\n"},
    {"shunt label",
     "a -- c1: shunt 3 pF -- 5 ohm -- b\n",
     "2:6-15: error: a label stands behind `shunt`, not before it [label-before-shunt]\n"
     "    hint: `shunt c1: ...`\n"},
    {"node in parentheses",
     "a -- (3 ohm -- a -- 4 ohm) -- b\n",
     "2:16-17: error: `a` is a node: a chain in parentheses, or one that is a value, holds parts and "
     "`shunt` items only [node-inside]\n"},
    {"wrong place",
     "for k in 1 .. 2 {\n"
     "    sweep at 1 GHz\n"
     "}\n"
     "a -- 5 ohm -- b\n",
     "3:5-19: error: `sweep` stands at the top level only, not in a loop [wrong-place]\n"},
    {"taken name",
     "line(x) = 2*x\n"
     "a -- 5 ohm -- b\n",
     "2:1-5: error: `line` is a part of the language: choose another name [taken-name]\n"},
    {"backwards",
     "a -- 5 ohm -- b\n"
     "sweep 2 GHz .. 1 GHz points 3\n",
     "3:7-21: error: the sweep ends below its start [backwards]\n"},
    {"sweep numbers",
     "a -- 5 ohm -- b\n"
     "sweep 1 GHz .. 2 GHz points 0\n"
     "sweep 1 GHz .. 2 GHz step 0 Hz\n"
     "sweep at -1 GHz\n"
     "sweep 0 Hz .. 1 GHz per decade 3\n",
     "3:29-30: error: the number of points is at least 1, not 0 [too-few]\n"
     "4:27-31: error: the step of a sweep has to be above 0 Hz [not-positive]\n"
     "5:10-16: error: a frequency cannot be negative [negative-frequency]\n"
     "6:7-11: error: decades begin above 0 Hz: 0 has no logarithm [not-positive]\n"},
    {"list element",
     "z = [1 ohm, 2 ohm]\n"
     "a -- z[3] -- b\n"
     "a -- z -- b\n",
     "3:8-9: error: `z` has 2 elements, so there is no number 3 [no-such-element]\n"
     "4:6-7: error: `z` is a list, which is no part [no-part]\n"
     "    hint: take one of its elements: `z[1]`\n"},
    {"not yet",
     "a -- coax(1 mm, 2 mm) -- b\n"
     "a -- 5 ohm -- b\n",
     "2:6-22: error: `coax(...)` is not available in this version [not-yet]\n"},
    {"unknown reference",
     "a -- r1: 5 ohm -- b\n"
     "require gain(a, bb) >= -3 dB at 1 GHz\n"
     "require dissipated(r2) <= 1 W at 1 GHz\n"
     "drive c: 1 W\n",
     "3:17-19: error: there is no port `bb` [undefined-name]\n"
     "    hint: did you mean `b`?\n"
     "4:20-22: error: there is no part with the label `r2` [undefined-name]\n"
     "    hint: did you mean `r1`?\n"
     "5:7-8: error: there is no port `c` [undefined-name]\n"},
    {"several at once",
     "a -- line(70.7, 90 deg @ 1 GHz) -- b\n"
     "a -- inductor(2 nH, qx = 40) -- b\n"
     "b -- shunt 3 GHz\n",
     "2:11-15: error: `70.7` has no unit: `z` of `line` is an impedance in ohm [missing-unit]\n"
     "    hint: write `70.7 ohm`\n"
     "3:21-23: error: `inductor` has no option `qx` [unknown-option]\n"
     "    hint: did you mean `q`?\n"
     "4:12-17: error: `3 GHz` is a frequency in Hz, which is no part: a chain takes ohm, S, H or F "
     "[no-part]\n"},
    {"nothing follows",
     "z1 = 50 ohm/0\n"
     "z2 = 2*z1\n"
     "a -- z2 -- line(z1, 90 deg @ 1 GHz) -- b\n",
     "2:6-14: error: `50 ohm/0` divides by zero [division-by-zero]\n"},
    {"requirements",
     "a -- 5 ohm -- b\n"
     "require isolation(a) >= 20 dB\n"
     "require return_loss(a) >= 20\n"
     "require S(b, a) >= 3\n"
     "require vswr(a) within 2 .. 1\n"
     "require gain(a, b) >= -3 dB over 2 GHz .. 1 GHz\n"
     "require 3 dB >= 2 dB\n"
     "require spread(abs(S(a, b))*3) <= 1\n"
     "require spread(S(a, b)) <= 1\n"
     "require gain(a, b) >= -3 dB at 1 GHz weight 0\n"
     "x = gain(a, b)\n",
     "3:9-21: error: the measure is written `isolation(p, q)` [argument-count]\n"
     "4:27-29: error: `20` has no unit: this limit is a level in dB [missing-unit]\n"
     "    hint: write `20 dB`\n"
     "5:9-16: error: `S(b, a)` is complex, so it has no limit [not-real]\n"
     "    hint: write `abs(S(b, a))`\n"
     "6:24-30: error: the range ends below its start [backwards]\n"
     "7:34-48: error: the range ends below its start [backwards]\n"
     "8:9-13: error: `3 dB` holds no measure to be required [no-measure]\n"
     "10:16-23: error: `spread` takes a real measure; `S(a, b)` is none [no-measure]\n"
     "11:45-46: error: a weight has to be above zero [not-positive]\n"
     "12:5-15: error: `gain` is a measure: it stands in `require` only [measure-here]\n"},
    {"tune and cases",
     "tune t = 3 ohm within 4 ohm .. 5 ohm\n"
     "tune u = 3 ohm series E25\n"
     "tune v = 3 ohm from [3 ohm, 4 nH]\n"
     "cases w = [1 ohm, 2 H]\n"
     "cases y = 1 ohm .. 3 ohm\n"
     "a -- t -- u -- v -- b\n"
     "if t > 3 ohm { a -- 1 ohm -- b }\n",
     "2:10-15: error: the start `3 ohm` lies outside `4 ohm .. 5 ohm` [outside-range]\n"
     "3:23-26: error: `E25` is no series of preferred values: there are E3, E6, E12, E24, E48, E96 "
     "and E192 [unknown-series]\n"
     "4:29-33: error: `4 nH` is an inductance in H, but a value of this list is an impedance in ohm "
     "[wrong-unit]\n"
     "5:19-22: error: the first case is an impedance in ohm, but this one is an inductance in H "
     "[unequal-dimensions]\n"
     "6:11-25: error: a range of `cases` needs its number of points [missing-points]\n"
     "8:4-5: error: `t` depends on a `tune` name: a condition may not [tune-here]\n"},
    {"drives",
     "a -- 5 ohm -- b\n"
     "drive a: 10 ohm\n"
     "drive b: 10 dBm, 3\n",
     "3:10-16: error: `10 ohm` is an impedance in ohm, but the power of a `drive` is a power in W "
     "[wrong-unit]\n"
     "4:18-19: error: `3` has no unit: the phase of a `drive` is an angle in deg [missing-unit]\n"
     "    hint: write `3 deg`\n"},
    {"bare part",
     "a -- isolator -- b\n",
     "2:6-14: error: `isolator` without parentheses is a node, not the part [bare-part]\n"
     "    hint: write `isolator(...)`\n"},
    {"bare network",
     "a -- cell -- b\n"
     "network cell() {\n"
     "    port p, q\n"
     "    p -- 5 ohm -- q\n"
     "}\n",
     "2:6-10: error: `cell` is a network, so it cannot be a node as well [two-kinds]\n"
     "    note 3:9: `cell` is a network here\n"
     "    hint: write `cell(...)`\n"},
    {"far nodes",
     "L: cell() on (a, b)\n"
     "L.mdi -- 5 ohm -- K.mid\n"
     "network cell() {\n"
     "    port p, q\n"
     "    p -- 5 ohm -- mid -- 5 ohm -- q\n"
     "}\n",
     "3:1-6: error: `L` has no node `mdi` [undefined-name]\n"
     "    hint: did you mean `mid`?\n"
     "3:19-24: error: there is no placement with the label `K` [undefined-name]\n"},
    {"unused network",
     "a -- 5 ohm -- b\n"
     "network cell(z) {\n"
     "    port p, q\n"
     "    p -- resitor(z) -- q\n"
     "}\n"
     "half(x) = x/2 + y\n",
     "5:10-17: error: there is no part, network or function `resitor` [unknown-part]\n"
     "    hint: did you mean `resistor`?\n"
     "7:17-18: error: `y` is not defined [undefined-name]\n"},
    {"index",
     "z = [1 ohm, 2 ohm]\n"
     "a -- n[1.5] -- 1 ohm -- b\n"
     "a -- z[0] -- b\n",
     "3:8-11: error: an index is a whole number, which `1.5` is not [not-whole]\n"
     "4:8-9: error: `z` has 2 elements, so there is no number 0 [no-such-element]\n"
     "    hint: elements count from 1\n"},
    {"levels",
     "x = 10 dBm + 10 dBm\n"
     "y = 2*10 dBm\n"
     "z = 3 dB*2 dB\n"
     "a -- 1 ohm -- b\n",
     "2:5-20: error: `10 dBm` is a power in dBm and `10 dBm` is a power in dBm: they cannot be added "
     "[unequal-dimensions]\n"
     "    hint: powers add in W; dBm is a logarithmic scale\n"
     "3:5-13: error: `2*10 dBm` has no meaning: dBm is a power on a scale of its own, which has sums "
     "with dB only [no-product]\n"
     "4:5-14: error: `3 dB*2 dB` has no meaning: a level in dB is multiplied or divided by plain "
     "numbers only [no-product]\n"},
    {"functions",
     "x = sin(1 ohm)\n"
     "y = exp(90 deg)\n"
     "z = round(2.5 ohm)\n"
     "u = min(1 ohm, 2 H)\n"
     "v = preferred(48 ohm, E25)\n"
     "w = sqrt(1, 2)\n"
     "t = asin(2)\n"
     "s = ln(0)\n"
     "a -- 1 ohm -- b\n",
     "2:9-14: error: `1 ohm` is an impedance in ohm, but the argument of `sin` is an angle in deg or "
     "a plain number [wrong-unit]\n"
     "3:9-15: error: `exp` takes an angle times `j`, or a plain number [real-angle]\n"
     "    hint: write `j*90 deg`\n"
     "4:11-18: error: `2.5 ohm` is an impedance in ohm, but the argument of `round` is a plain "
     "number [wrong-unit]\n"
     "5:16-19: error: `2 H` is an inductance in H, but the first argument of `min` is an impedance "
     "in ohm [unequal-dimensions]\n"
     "6:23-26: error: `E25` is no series of preferred values: there are E3, E6, E12, E24, E48, E96 "
     "and E192 [unknown-series]\n"
     "7:5-15: error: `sqrt` takes 1 argument, not 2 [argument-count]\n"
     "8:5-12: error: `asin(2)` takes numbers from -1 to 1 only [outside-domain]\n"
     "9:5-10: error: `ln(0)` is the logarithm of zero [logarithm-of-zero]\n"},
    {"ambiguous unit",
     "m = 3\n"
     "a -- attenuator(0.2 dB/m) -- b\n",
     "3:17-25: error: `0.2 dB/m` could be a unit or a division by the value `m` [ambiguous-unit]\n"
     "    hint: write blanks around the `/` to divide; for the unit, give the value another name\n"},
    {"two readings",
     "a -- 1/2 ohm -- b\n",
     "2:6-13: error: `1/2 ohm` has two readings [two-readings]\n"
     "    hint: `(1/2)*1 ohm`, or `1/(2 ohm)`\n"},
    {"missing brace of a network",
     "a -- cell() -- b\n"
     "network cell() {\n"
     "    port p, q\n"
     "    p -- 5 ohm -- q\n"
     "sweep at 1 GHz\n",
     "3:16-17: error: this `{` is not closed [open-brace]\n"
     "    hint: close it with `}`\n"},
    {"broken definitions are known",
     "z0 = 50 ohm * )\n"
     "coil(l) = inductor(l,, q)\n"
     "network cell(z {\n"
     "    port p, q\n"
     "}\n"
     "a -- z0 -- coil(1 nH) -- cell(1) -- b\n"
     "a -- 2*z0 -- b\n",
     "2:15-16: error: a value or a part is expected here, not `)` [expected]\n"
     "3:22-23: error: a value or a part is expected here, not `,` [expected]\n"
     "4:13-14: error: this `(` is not closed [open-bracket]\n"
     "    hint: close it with `)`\n"},
    {"shunt under parallel",
     "a -- 3 ohm || shunt 3 pF -- b\n",
     "2:15-20: error: `shunt` may not stand under `||` [shunt-in-parallel]\n"},
    {"typographic minus",
     "a -- −5 ohm -- b\n",
     "2:6-7: error: this is the typographic minus, U+2212 [typographic-minus]\n"
     "    hint: write `-`, the hyphen of the keyboard\n"},
};

static char *messages_of(const char *path, const char *netlist) {
    static expansion e;
    char *text = NULL;
    size_t size = 0;
    expand_with(&e, path, netlist, NULL);
    FILE *to = open_memstream(&text, &size);
    write_messages(&e, to);
    fclose(to);
    if ((e.status == ANB_INVALID) != (e.report.errors > 0)) fail_msg("status %d", e.status);
    expansion_free(&e);
    return text;
}

static void check(const char *name, const char *path, const char *netlist, const char *expected) {
    char *text = messages_of(path, netlist);
    if (strcmp(text, expected)) fail_msg("%s\n%s\nis told\n%s\nnot\n%s", name, netlist, text, expected);
    free(text);
}

static void every_mistake_has_its_words(void **state) {
    (void)state;
    for (size_t i = 0; i < sizeof mistakes / sizeof *mistakes; i++) {
        char netlist[2000];
        snprintf(netlist, sizeof netlist, "port a, b: 50 ohm\n%s", mistakes[i].netlist);
        check(mistakes[i].name, "", netlist, mistakes[i].messages);
    }
}

static void a_netlist_has_a_port(void **state) {
    (void)state;
    check("no port", "", "a -- 50 ohm -- b\n",
          "1:1-1: error: the netlist has no port [no-port]\n"
          "    hint: declare its ports, e.g. `port in, out: 50 ohm`\n");
}

static void no_more_than_twenty_errors_are_kept(void **state) {
    (void)state;
    static expansion e;
    char netlist[4000] = "port a, b: 50 ohm\na -- 1 ohm -- b\n";
    size_t at = strlen(netlist), kept = 0;
    for (int i = 0; i < 30; i++) at += (size_t)sprintf(netlist + at, "x%d = 1/0\n", i);
    expand_text(&e, netlist);
    for (const anb__diagnostic *d = e.report.first; d; d = d->next) kept++;
    assert_int_equal(e.report.errors, 30);
    assert_int_equal(kept, 20);
    expansion_free(&e);
}

/* ---- overrides ------------------------------------------------------------------------ */

static void overrides_are_checked(void **state) {
    (void)state;
    static expansion e;
    const char *set[] = {"z0=75", "zz=3 ohm", "f0"};
    anb_overrides overrides = {set, 3, NULL};
    char *text = NULL;
    size_t size = 0;
    expand_with(&e, "", "z0 = 50 ohm\nport a, b: z0\na -- 1 ohm -- b\n", &overrides);
    FILE *to = open_memstream(&text, &size);
    write_messages(&e, to);
    fclose(to);
    assert_non_null(
        strstr(text, "--set:1:4-6: error: `75` has no unit: `z0` is an impedance in ohm [missing-unit]\n"
                     "    hint: write `75 ohm`\n"));
    assert_non_null(
        strstr(text, "--set:1:1-3: error: the netlist has no value `zz` at its top level [undefined-name]\n"
                     "    hint: did you mean `z0`?\n"));
    assert_int_equal(e.report.errors, 3);
    free(text);
    expansion_free(&e);
}

/* ---- files ------------------------------------------------------------------------------- */

static char folder[] = "anabranch-test-XXXXXX"; /* below the working directory */

static void write_file(const char *name, const char *text) {
    char path[200];
    snprintf(path, sizeof path, "%s/%s", folder, name);
    FILE *file = fopen(path, "w");
    assert_non_null(file);
    fputs(text, file);
    fclose(file);
}

static const char *in_folder(const char *name) {
    static char path[200];
    snprintf(path, sizeof path, "%s/%s", folder, name);
    return path;
}

static const char *const files[] = {"a.anab", "b.anab", "c.anab", "part.s2p", "main.anab", "deep.anab"};

static int make_folder(void **state) {
    (void)state;
    return mkdtemp(folder) ? 0 : -1;
}

static int remove_folder(void **state) {
    (void)state;
    for (size_t i = 0; i < sizeof files / sizeof *files; i++) unlink(in_folder(files[i]));
    return rmdir(folder);
}

/* The messages, with the folder's name taken out. */
static void check_in_folder(const char *netlist, const char *expected) {
    char *text = messages_of(in_folder("main.anab"), netlist), *at;
    size_t length = strlen(folder) + 1;
    while ((at = strstr(text, folder))) memmove(at, at + length, strlen(at + length) + 1);
    if (strcmp(text, expected)) fail_msg("%s\nis told\n%s\nnot\n%s", netlist, text, expected);
    free(text);
}

static void files_are_read_once(void **state) {
    (void)state;
    write_file("a.anab", "include \"b.anab\"\nr = 2*half\n");
    write_file("b.anab", "half = 25 ohm\n");
    check_in_folder("include \"a.anab\"\ninclude \"b.anab\"\nport a, b: r\na -- half -- b\n", "");
}

static void mistakes_in_files_have_their_place(void **state) {
    (void)state;
    write_file("a.anab", "r = 50 ohm/0\n");
    check_in_folder("include \"a.anab\"\nport a, b: r\na -- r -- b\n",
                    "a.anab:1:5-13: error: `50 ohm/0` divides by zero [division-by-zero]\n");
}

static void include_loops_are_refused(void **state) {
    (void)state;
    write_file("a.anab", "include \"b.anab\"\n");
    write_file("b.anab", "\ninclude \"a.anab\"\n");
    check_in_folder("include \"a.anab\"\nport a, b: 50 ohm\na -- 1 ohm -- b\n",
                    "b.anab:2:9-17: error: `a.anab` includes itself, by way of this line [include-loop]\n");
}

static void data_and_nodes_are_counted(void **state) {
    (void)state;
    write_file("part.s2p", "# Hz S RI R 50\n1 0 0 1 0 1 0 0 0\n");
    check_in_folder(
        "port a, b: 50 ohm\na -- 1 ohm -- b\ntouchstone(\"part.s2p\") on (a, b, a, b)\n",
        "main.anab:3:27-39: error: the file has 2 ports, so it cannot lie on 4 nodes [node-count]\n");
    check_in_folder("port a, b: 50 ohm\na -- touchstone(\"part.s2p\") -- b\n",
                    "main.anab:2:6-28: error: `touchstone(...)` cannot be read yet: data of files come in "
                    "a later version [not-yet]\n");
    check_in_folder(
        "port a, b: 50 ohm\na -- 1 ohm -- b\na -- touchstone(\"part.s2p\", outside = drop) -- b\n",
        "main.anab:3:39-43: error: `outside` can be `hold` only [wrong-option]\n");
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(every_mistake_has_its_words),
        cmocka_unit_test(a_netlist_has_a_port),
        cmocka_unit_test(no_more_than_twenty_errors_are_kept),
        cmocka_unit_test(overrides_are_checked),
        cmocka_unit_test(files_are_read_once),
        cmocka_unit_test(mistakes_in_files_have_their_place),
        cmocka_unit_test(include_loops_are_refused),
        cmocka_unit_test(data_and_nodes_are_counted),
    };
    int failures = cmocka_run_group_tests(tests, make_folder, remove_folder);
    return failures ? 1 : 0;
}
