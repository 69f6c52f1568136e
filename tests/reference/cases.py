"""Pairs of a netlist and the same network built part by part, for every kind of part and option.

cases() -> Case(kind, text, net, frequencies). Most are the items of tables.py, each in two surroundings; the
rest are networks of their own: resonances, half waves, 0 Hz, networks without ground, complex references, and
the statements of the language that shape a network.
"""
from collections import namedtuple

from mpmath import mpf, pi, sqrt

from network import (At, Chain, GROUND, Network, Shunt, capacitor, coupled_inductors, coupled_lines, inductor,
                     line, line4, open_, open_stub, resistor, short, shorted_stub, transconductance,
                     transformer4)
from tables import GHZ, MULTI_TERMINAL, QUARTER, TWO_PORT, TWO_TERMINAL

Case = namedtuple("Case", "kind text net frequencies")

# 0 Hz, low, odd places, and where quarter-wave parts at 1 GHz are half and whole waves
FREQUENCIES = [0.0, 1e6, 333e6, 500e6, 1e9, 2e9, 4e9, 5.7e9]


# ---- surroundings --------------------------------------------------------------------------------

def surround_two_terminal(text, item):
    net = _ports(50, 75)
    net.chain("a", item, "b", Shunt(resistor(300)))
    yield "port a: 50 ohm\nport b: 75 ohm\na -- %s -- b -- shunt 300 ohm" % text, net
    net = _ports(50, 75)
    net.chain("a", resistor(20), "m", inductor(3e-9), "b")
    net.chain("m", Shunt(item))
    yield "port a: 50 ohm\nport b: 75 ohm\na -- 20 ohm -- m -- 3 nH -- b\nm -- shunt %s" % text, net


def surround_two_port(text, item):
    net = _ports(50, 75)
    net.chain("a", item, "b")
    yield "port a: 50 ohm\nport b: 75 ohm\na -- %s -- b" % text, net
    net = _ports(50, 75)
    net.chain("a", capacitor(4e-12), "m", item, "n", resistor(5), "b")
    net.chain("n", Shunt(inductor(8e-9)))
    net.chain("a", resistor(150), "n")
    yield ("port a: 50 ohm\nport b: 75 ohm\na -- 4 pF -- m -- %s -- n -- 5 ohm -- b\n"
           "n -- shunt 8 nH\na -- 150 ohm -- n") % text, net


_PORTS = {"a": 50, "b": 75, "c": 50, "d": 100}


def surround_multi_terminal(text, nodes, part):
    nodes = list(nodes)
    net, head = Network(), ""
    for p, z in _PORTS.items():
        net.port(z, p)
        head += f"port {p}: {z} ohm\n"
    net.on(part, *nodes)
    for p in _PORTS:
        net.chain(p, Shunt(resistor(400)))
        head += f"{p} -- shunt 400 ohm\n"
    if "m" in nodes:
        net.chain("m", Shunt(capacitor(2e-12)))
        head += "m -- shunt 2 pF\n"
    yield head + f"{text} on ({', '.join(nodes)})", net


# ---- networks of their own -----------------------------------------------------------------------

def _ports(*impedances):
    net = Network()
    for name, z in zip("abcdefgh", impedances):
        net.port(z, name)
    return net


def _two_ports_text(za="50 ohm", zb="50 ohm"):
    return f"port a: {za}\nport b: {zb}\n"


def _resonance():
    f = float(1 / (2 * pi * sqrt(mpf("10e-9") * mpf("10e-12"))))
    return [f / 2, f, f * (1 + 1e-9), 2 * f]


def special():
    l, c = inductor(10e-9), capacitor(10e-12)
    net = _ports(50, 50)
    net.chain("a", l, "m", c, "b")
    yield Case("resonance", _two_ports_text() + "a -- 10 nH -- m -- 10 pF -- b", net, _resonance())
    net = _ports(50, 50)
    net.chain("a", l | c, "b")
    yield Case("resonance", _two_ports_text() + "a -- (10 nH || 10 pF) -- b", net, _resonance())
    net = _ports(50, 50)
    net.chain("a", short(), "b", Shunt(Chain(l, c)))
    yield Case("resonance", _two_ports_text() + "a -- short -- b -- shunt (10 nH -- 10 pF)", net,
               _resonance())
    net = _ports(50, 50)
    net.chain("a", resistor(10), "m", resistor(10), "b")
    net.chain("m", Shunt(l), Shunt(c))
    yield Case("resonance", _two_ports_text() + "a -- 10 ohm -- m -- 10 ohm -- b\n"
               "m -- shunt 10 nH -- shunt 10 pF", net, _resonance())

    near = [0.0, 1e9, 2e9, 2e9 * (1 + 1e-11), 2e9 * (1 + 1e-8), 4e9, 20e9]
    net = _ports(50, 50)
    net.chain("a", line(70.7, turns=QUARTER), "b")
    yield Case("half waves", _two_ports_text() + "a -- line(70.7 ohm, 90 deg @ 1 GHz) -- b", net, near)
    net = _ports(50, 50)
    net.chain("a", line(70.7, turns=QUARTER), "m", line(30, turns=QUARTER), "b")
    net.chain("a", line(40, turns=At(0.75, GHZ)), "b")
    yield Case("half waves", _two_ports_text() + "a -- line(70.7 ohm, 90 deg @ 1 GHz) -- m\n"
               "m -- line(30 ohm, 90 deg @ 1 GHz) -- b\na -- line(40 ohm, 270 deg @ 1 GHz) -- b", net, near)
    net = _ports(50, 50, 50)
    for x, y in ("ab", "bc", "ca"):
        net.chain(x, line(60, turns=QUARTER), y)
    yield Case("half waves", "port a, b, c: 50 ohm\nside = line(60 ohm, 90 deg @ 1 GHz)\n"
               "a -- side -- b -- side -- c -- side -- a", net, near)
    net = _ports(50, 50)
    net.chain("a", line(75, turns=At(mpf("10000.125"), GHZ)), "b")
    yield Case("half waves", _two_ports_text() + "a -- line(75 ohm, 10000.125 wave @ 1 GHz) -- b", net,
               [0.0, 5e8, 1e9, 2e9])

    yield from _zero_hertz()
    yield from _grounds()
    yield from _references()
    yield from _language()


def _zero_hertz():
    low = [0.0, 1.0, 1e3, 1e6]
    net = _ports(50, 50)
    net.chain("a", capacitor(10e-12), "m", resistor(20), "k", capacitor(22e-12), "b")
    net.chain("m", capacitor(1e-12), "k")
    net.chain("b", inductor(1e-6), "p", inductor(2e-6), "q", inductor(3e-6), "b")
    net.chain("q", resistor(100), GROUND)
    yield Case("0 Hz", _two_ports_text() + "a -- 10 pF -- m -- 20 ohm -- k -- 22 pF -- b\nm -- 1 pF -- k\n"
               "b -- 1 uH -- p -- 2 uH -- q -- 3 uH -- b\nq -- 100 ohm -- ground", net, low)
    # a floating gate: its voltage is the capacitors' ratio, and drives a current
    net = _ports(50, 50)
    net.chain("a", capacitor(3e-12), "g", Shunt(capacitor(1e-12)))
    net.on(transconductance(0.02), "g", GROUND, "b", GROUND)
    yield Case("0 Hz", _two_ports_text() + "a -- 3 pF -- g -- shunt 1 pF\n"
               "transconductance(20 mS) on (g, ground, b, ground)", net, low)
    # a loop of coils: its current is the inductances' ratio, and is seen by an ideal transformer
    net = _ports(50, 50)
    net.chain("a", inductor(1e-6), "p", Shunt(inductor(2e-6)))
    net.chain("p", inductor(3e-6), "q")
    net.on(transformer4(1), "q", GROUND, "b", GROUND)
    net.chain("b", Shunt(inductor(4e-6)))
    yield Case("0 Hz", _two_ports_text() + "a -- 1 uH -- p -- shunt 2 uH\np -- 3 uH -- q\n"
               "transformer(1) on (q, ground, b, ground)\nb -- shunt 4 uH", net, low)
    net = _ports(50, 50)
    net.chain("a", capacitor(1e-12), "m", line(60, turns=QUARTER), "n", capacitor(2e-12), "b")
    net.chain("n", Shunt(open_stub(40, turns=QUARTER)))
    yield Case("0 Hz", _two_ports_text() +
               "a -- 1 pF -- m -- line(60 ohm, 90 deg @ 1 GHz) -- n -- 2 pF -- b\n"
               "n -- shunt open_stub(40 ohm, 90 deg @ 1 GHz)", net, low)
    net = _ports(50, 50)
    net.chain("a", line(60, turns=QUARTER), "b")
    net.chain("a", line(70, turns=QUARTER), "b")
    net.chain("a", Shunt(shorted_stub(40, turns=QUARTER)))
    yield Case("0 Hz", _two_ports_text() +
               "a -- (line(60 ohm, 90 deg @ 1 GHz) || line(70 ohm, 90 deg @ 1 GHz)) -- b\n"
               "a -- shunt shorted_stub(40 ohm, 90 deg @ 1 GHz)", net, low)
    net = _ports(50, 50)
    net.on(coupled_inductors(1e-6, 4e-6, 1), "a", GROUND, "m", "n")
    net.chain("m", resistor(30), "n")
    net.chain("m", capacitor(1e-9), "b")
    yield Case("0 Hz", _two_ports_text() + "coupled_inductors(1 uH, 4 uH, 1) on (a, ground, m, n)\n"
               "m -- 30 ohm -- n\nm -- 1 nF -- b", net, low)
    net = _ports(50, 50)
    net.on(coupled_lines(80, 40, {"turns": QUARTER}), "a", "m", "n", "b")
    net.chain("m", capacitor(1e-12), "n")
    yield Case("0 Hz", _two_ports_text() +
               "coupled_lines(90 deg @ 1 GHz, even = 80 ohm, odd = 40 ohm) on (a, m, n, b)\n"
               "m -- 1 pF -- n", net, low)
    net = _ports(50, 50)
    net.chain("a", inductor(1e-6, q=At(30, 1e8)), "m", Shunt(inductor(2e-6, q=At(50, 1e8))))
    net.chain("m", inductor(1e-6, q=40), "b", Shunt(inductor(1e-6, q=20)))
    yield Case("0 Hz", _two_ports_text() + "a -- inductor(1 uH, q = 30 @ 100 MHz) -- m\n"
               "m -- shunt inductor(2 uH, q = 50 @ 100 MHz)\nm -- inductor(1 uH, q = 40) -- b\n"
               "b -- shunt inductor(1 uH, q = 20)", net, low)
    net = _ports(50, 50)
    net.chain("a", capacitor(1e-12, q=100), "m", Shunt(capacitor(3e-12, q=50)))
    net.on(transconductance(0.05), "m", GROUND, "b", GROUND)
    net.chain("m", capacitor(2e-12, loss_tangent=0.1), "b")
    yield Case("0 Hz", _two_ports_text() +
               "a -- capacitor(1 pF, q = 100) -- m -- shunt capacitor(3 pF, q = 50)\n"
               "transconductance(50 mS) on (m, ground, b, ground)\n"
               "m -- capacitor(2 pF, loss_tangent = 0.1) -- b", net, low)


def _grounds():
    net = Network()
    net.port(100, "p", "q")
    net.port(100, "r", "s")
    net.chain("p", inductor(5e-9), "r")
    net.chain("q", inductor(5e-9), "s")
    net.chain("r", capacitor(2e-12), "s")
    net.chain("p", resistor(300), "q")
    yield Case("no ground", "port left: 100 ohm at p, q\nport right: 100 ohm at r, s\np -- 5 nH -- r\n"
               "q -- 5 nH -- s\nr -- 2 pF -- s\np -- 300 ohm -- q", net, FREQUENCIES)
    net = Network()
    net.port(50, "a")
    net.port(100, "p", "m")
    net.on(transformer4(1.5), "a", GROUND, "p", "k")
    net.chain("k", capacitor(3e-12), "m")
    yield Case("no ground", "port a: 50 ohm\nport out: 100 ohm at p, m\n"
               "transformer(1.5) on (a, ground, p, k)\nk -- 3 pF -- m", net, FREQUENCIES)
    net = Network()
    net.port(50, "a", "b")
    net.port(75, "b", "c")
    net.port(60, "c", "a")
    net.chain("a", resistor(100), "m", inductor(4e-9), "b")
    net.chain("m", capacitor(1e-12), "c")
    yield Case("ports between nodes", "port x: 50 ohm at a, b\nport y: 75 ohm at b, c\n"
               "port z: 60 ohm at c, a\na -- 100 ohm -- m -- 4 nH -- b\nm -- 1 pF -- c", net, FREQUENCIES)
    net = Network()
    net.port(50, "a", GROUND)
    net.port(75, GROUND, "b")
    net.chain("a", inductor(4e-9), "b", Shunt(capacitor(1e-12)))
    yield Case("ports between nodes", "port x: 50 ohm at a, ground\nport y: 75 ohm at ground, b\n"
               "a -- 4 nH -- b -- shunt 1 pF", net, FREQUENCIES)
    for n in (2, 3, 7):
        net = Network()
        text = ""
        for k in range(n):
            net.port(25 * (k + 1), "a")
            text += f"port p{k}: {25 * (k + 1)} ohm at a\n"
        net.chain("a", Shunt(capacitor(1e-12)))
        yield Case("ports on one node", text + "a -- shunt 1 pF", net, FREQUENCIES)
    net = Network()
    net.port(50, "a")
    net.port(50, "m", "n")
    net.on(line4(60, turns=QUARTER), "a", "m", GROUND, "n")
    yield Case("line with returns", "port a: 50 ohm\nport out: 50 ohm at m, n\n"
               "line(60 ohm, 90 deg @ 1 GHz) on (a, m, ground, n)", net, FREQUENCIES)
    net = _ports(50, 50)
    net.chain("a", short(), "x", short(), "y", short(), "a")
    net.chain("y", short() | short(), "b")
    net.chain("a", open_(), "b")
    net.chain("b", resistor(10), "dangle")
    net.chain("b", resistor(75), GROUND)
    yield Case("loops of wires", _two_ports_text() + "a -- 0 ohm -- x -- 0 ohm -- y -- 0 ohm -- a\n"
               "y -- (short || short) -- b\na -- open -- b\nb -- 10 ohm -- dangle\nb -- 75 ohm -- ground",
               net, FREQUENCIES)
    net = _ports(50, 50)
    net.chain("a", Shunt(short()), resistor(10), "b")
    yield Case("loops of wires", _two_ports_text() + "a -- shunt short -- 10 ohm -- b", net, FREQUENCIES)


def _references():
    for za, zb, ta, tb in ((20 - 15j, 80 + 30j, "20 ohm - j*15 ohm", "80 ohm + j*30 ohm"),
                           (5 + 100j, 75, "5 ohm + j*100 ohm", "75 ohm"),
                           (1e-3, 1e5, "1 mohm", "100 kohm"), (50, 377, "50 ohm", "377 ohm")):
        net = _ports(za, zb)
        net.chain("a", inductor(3e-9), "b", Shunt(capacitor(1.2e-12)))
        yield Case("references", _two_ports_text(ta, tb) + "a -- 3 nH -- b -- shunt 1.2 pF", net, FREQUENCIES)
    net = Network()
    net.port(30 - 40j, "a")
    net.chain("a", resistor(20), "m", Shunt(inductor(2e-9)))
    yield Case("references", "port a: 30 ohm - j*40 ohm\na -- 20 ohm -- m -- shunt 2 nH", net, FREQUENCIES)


def _language():
    net = _ports(50, 50)
    for name in ("x", "y"):
        net.chain("a", Shunt(capacitor(1e-12)), inductor(8e-9), name, resistor(4), "b")
    yield Case("networks", "network cell(l, r = 4 ohm) {\n    port left, right\n"
               "    left -- shunt 1 pF -- l -- m -- r -- right\n}\nport a, b: 50 ohm\n"
               "a -- cell(8 nH) -- b\nx1: cell(8 nH, r = 4 ohm) on (a, b)", net, FREQUENCIES)
    net = _ports(50, 50)
    net.chain("a", Chain(inductor(8e-9, q=At(45, 9e8)), Shunt(capacitor(2e-12, q=150))), "b",
              Shunt(Chain(resistor(30), capacitor(1e-12, q=150))))
    yield Case("networks", "network damper(r) {\n    port hot\n    hot -- r -- cap(1 pF) -- ground\n}\n"
               "cap(c) = capacitor(c, q = 150)\ncoil(l) = inductor(l, q = 45 @ 900 MHz)\nport a, b: 50 ohm\n"
               "a -- coil(8 nH) -- shunt cap(2 pF) -- b\nb -- shunt damper(30 ohm)", net, FREQUENCIES)
    net = _ports(50, 50)
    net.chain("a", inductor(8e-9, q=At(40, 1e8)), "m", inductor(3e-9, resistance=0.5), "b")
    net.chain("m", Shunt(capacitor(2e-12, esr=0.2)), Shunt(inductor(9e-9, q=70)))
    yield Case("assume", "assume inductor(q = 40 @ 100 MHz)\nassume capacitor(esr = 0.2 ohm)\n"
               "port a, b: 50 ohm\na -- 8 nH -- m -- inductor(3 nH, resistance = 0.5 ohm) -- b\n"
               "m -- shunt 2 pF -- shunt inductor(9 nH, q = 70)", net, FREQUENCIES)
    net = Network()
    net.port(50, "n1")
    for k in range(1, 8):
        net.chain(f"n{k}", line(sqrt(mpf(2)) * 50, turns=QUARTER), f"n{2 * k}")
        net.chain(f"n{k}", line(sqrt(mpf(2)) * 50, turns=QUARTER), f"n{2 * k + 1}")
        net.chain(f"n{2 * k}", resistor(100), f"n{2 * k + 1}")
    for k in range(8, 16):
        net.port(50, f"n{k}")
    yield Case("for", "arm = line(sqrt(2)*50 ohm, 90 deg @ 1 GHz)\nport common: 50 ohm at n[1]\n"
               "for k in 8 .. 15 { port out[k]: 50 ohm at n[k] }\n"
               "for k in 1 .. 7 {\n    n[k] -- arm -- n[2*k]\n    n[k] -- arm -- n[2*k+1]\n"
               "    n[2*k] -- 100 ohm -- n[2*k+1]\n}", net, [0.0, 7e8, 1e9, 2e9])
    net = _ports(50, 50)
    net.chain("a", inductor(4.7e-9), "m", capacitor(2.2e-12), "b")
    net.chain("m", Shunt(resistor(4700)))
    yield Case("values", "port a, b: 50 ohm\nparts = [4.7 nH, 9 nH]\n"
               "if count(parts) == 2 { pick = parts[1] } else { pick = parts[2] }\n"
               "a -- pick -- m -- c1: 2.2 pF -- b\n"
               "m -- shunt preferred(4.6 kohm, E24)", net, FREQUENCIES)
    net = _ports(50, 50)
    net.chain("a", resistor(25), "b", Shunt(resistor(max(1, 40))))
    net.join("b", "c")
    net.chain("c", inductor(2e-9), GROUND)
    yield Case("values", "port a, b: 50 ohm\njoin b, c\nhalf = min(50 ohm, 100 ohm)/2\n"
               "a -- half -- b -- shunt max(1 ohm, round(39.6)*1 ohm)\nc -- 2 nH -- ground", net, FREQUENCIES)


# ---- all of them ---------------------------------------------------------------------------------

def cases():
    for kind, text, item in TWO_TERMINAL:
        for whole, net in surround_two_terminal(text, item):
            yield Case(kind, whole, net, FREQUENCIES)
    for kind, text, item in TWO_PORT:
        for whole, net in surround_two_port(text, item):
            yield Case(kind, whole, net, FREQUENCIES)
    for kind, text, nodes, part in MULTI_TERMINAL:
        for whole, net in surround_multi_terminal(text, nodes, part):
            yield Case(kind, whole, net, FREQUENCIES)
    yield from special()
