/* From texts to networks: chains, groups, scopes, networks, labels, sweeps, limits. */
#include <math.h>
#include <stdlib.h>

#include "test_expand_support.h"

static char *text_of_parts(const char *netlist, void (*write)(const anb__network *, FILE *)) {
    static expansion e;
    char *text = NULL;
    size_t size = 0;
    expand_text(&e, netlist);
    FILE *to = open_memstream(&text, &size);
    if (e.status == ANB_OK) write(&e.network, to);
    else write_messages(&e, to);
    fclose(to);
    expansion_free(&e);
    return text;
}

static void check(const char *netlist, const char *expected) {
    char *text = text_of_parts(netlist, write_parts);
    if (strcmp(text, expected)) fail_msg("\n%s\nbecame\n%s\nnot\n%s", netlist, text, expected);
    free(text);
}

#define PORTS "port a, b: 50 ohm\n"

/* ---- chains ------------------------------------------------------------------------ */

static void values_become_parts(void **state) {
    (void)state;
    check(PORTS "a -- 50 ohm -- 2 mS -- 3 nH -- 4 pF -- b\n", "resistor: a 3 r=50\n"
                                                              "admittance: 3 4 y=0.002\n"
                                                              "inductor: 4 5 l=3e-09\n"
                                                              "capacitor: 5 b c=4e-12\n");
    check(PORTS "a -- 30 ohm + j*20 ohm -- b\na -- short -- b\na -- 0 ohm -- b\na -- open -- b\n",
          "impedance: a b z=30+20j\n"
          "resistor: a b r=0\n"
          "resistor: a b r=0\n");
    check(PORTS "z = sqrt(2)*50 ohm\nf = 1 GHz\na -- z/(2*pi*f) -- b -- shunt 1/(2*pi*f*z)\n",
          "inductor: a b l=1.1253953952e-08\n"
          "capacitor: b ground c=2.25079079039e-12\n");
}

static void shunts_do_not_move_along(void **state) {
    (void)state;
    check(PORTS "a -- shunt 1 pF -- 2 nH -- shunt 3 pF -- b\n", "capacitor: a ground c=1e-12\n"
                                                                "inductor: a b l=2e-09\n"
                                                                "capacitor: b ground c=3e-12\n");
    check(PORTS "a -- 1 ohm -- shunt 2 ohm -- shunt 3 ohm -- 4 ohm -- b -- shunt 5 ohm\n",
          "resistor: a 3 r=1\n"
          "resistor: 3 ground r=2\n"
          "resistor: 3 ground r=3\n"
          "resistor: 3 b r=4\n"
          "resistor: b ground r=5\n");
    check(PORTS "x = shunt 1 pF -- shunt 2 pF\na -- x -- 3 ohm -- b\n", "capacitor: a ground c=1e-12\n"
                                                                        "capacitor: a ground c=2e-12\n"
                                                                        "resistor: a b r=3\n");
}

static void stubs(void **state) {
    (void)state;
    check(PORTS "a -- shunt line(40 ohm, 1 ns) -- shunt (line(40 ohm, 1 ns) -- open) -- 1 ohm -- b\n",
          "line: a ground, ground ground z=40 length=1e-09\n"
          "line: a ground, 3 ground z=40 length=1e-09\n"
          "resistor: a b r=1\n");
    check(PORTS "a -- shorted_stub(30 ohm, 45 deg @ 1 GHz) -- shunt open_stub(30 ohm, 1 mm) -- b\n",
          "shorted_stub: a b z=30 length=0.125@1000000000\n"
          "open_stub: b ground z=30 length=0.001\n");
}

static void groups_and_parallels(void **state) {
    (void)state;
    check(PORTS "a -- 1 ohm || 2 ohm || (3 ohm -- 4 ohm) -- b\n", "resistor: a b r=1\n"
                                                                  "resistor: a b r=2\n"
                                                                  "resistor: a 3 r=3\n"
                                                                  "resistor: 3 b r=4\n");
    check(PORTS "a -- (shunt 1 ohm -- 2 ohm -- shunt 3 ohm) || line(50 ohm, 1 ns) -- b\n",
          "resistor: a ground r=1\n"
          "resistor: a b r=2\n"
          "resistor: b ground r=3\n"
          "line: a ground, b ground z=50 length=1e-09\n");
    check(PORTS "a -- shunt 1 ohm || 2 ohm -- 3 ohm -- b\n", "resistor: a ground r=1\n"
                                                             "resistor: a ground r=2\n"
                                                             "resistor: a b r=3\n");
}

static void reversed_and_inverse(void **state) {
    (void)state;
    check(PORTS "x = 1 ohm -- shunt 2 pF -- isolator()\na -- reversed(x) -- b\n",
          "resistor: b 3 r=1\n"
          "capacitor: 3 ground c=2e-12\n"
          "isolator: 3 ground, a ground\n");
    check(PORTS "x = 1 ohm -- shunt 2 pF -- isolator()\na -- inverse(x) -- b\n",
          "inverse resistor: b 3 r=1\n"
          "inverse capacitor: 3 ground c=2e-12\n"
          "inverse isolator: 3 ground, a ground\n");
    check(PORTS "a -- inverse(inverse(isolator())) -- reversed(inverse(isolator())) -- b\n",
          "isolator: a ground, 3 ground\n"
          "inverse isolator: 3 ground, b ground\n");
}

static void repeated(void **state) {
    (void)state;
    check(PORTS "a -- repeat(3, 1 ohm -- shunt 2 ohm) -- b\n", "resistor: a 3 r=1\n"
                                                               "resistor: 3 ground r=2\n"
                                                               "resistor: 3 4 r=1\n"
                                                               "resistor: 4 ground r=2\n"
                                                               "resistor: 4 b r=1\n"
                                                               "resistor: b ground r=2\n");
    check(PORTS "a -- repeat(2, shunt 2 ohm) -- 1 ohm -- b\n", "resistor: a ground r=2\n"
                                                               "resistor: a ground r=2\n"
                                                               "resistor: a b r=1\n");
}

/* ---- terminals ------------------------------------------------------------------------- */

static void parts_with_on(void **state) {
    (void)state;
    check(PORTS "transformer(2) on (a, ground, b, c)\nc -- 1 ohm -- ground\n",
          "transformer: a ground, b c n=2\n"
          "resistor: c ground r=1\n");
    check(PORTS "transformer(2) on (b2 = c, a1 = a, a2 = ground, b1 = b)\nc -- 1 ohm -- ground\n",
          "transformer: a ground, b c n=2\n"
          "resistor: c ground r=1\n");
    check(PORTS "line(50 ohm, 1 ns) on (a, b, c, d)\nc -- 1 ohm -- d\n", "line: a c, b d z=50 length=1e-09\n"
                                                                         "resistor: c d r=1\n");
    check(PORTS "coupled_lines(1 ns, even = 60 ohm, odd = 40 ohm) on (a, b, c, d)\nc -- 1 ohm -- d\n",
          "coupled_lines: a ground, b ground, c ground, d ground length=1e-09 even=60 odd=40\n"
          "resistor: c d r=1\n");
    check(PORTS "coupled_inductors(1 nH, 2 nH, 0.5) on (a, ground, ground, b)\n",
          "coupled_inductors: a ground, ground b k=0.5 l1=1e-09 l2=2e-09\n");
    check(PORTS "circulator() on (a, b, c)\nc -- 1 ohm -- ground\n",
          "circulator: a ground, b ground, c ground\n"
          "resistor: c ground r=1\n");
    check(PORTS "g: transconductance(20 mS) on (a, ground, b, ground)\n",
          "transconductance g: a ground, b ground gm=0.02\n");
    check(PORTS "attenuator(3 dB) on (a, b)\n", "attenuator: a ground, b ground loss=3\n");
}

static void joined_nodes_are_one(void **state) {
    (void)state;
    check(PORTS "join x[0], b, y\na -- 1 ohm -- x[0]\ny -- 2 ohm -- z\njoin z, ground\n",
          "resistor: a b r=1\n"
          "resistor: b ground r=2\n");
}

static void what_only_open_touches_has_no_node(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e, PORTS "a -- 1 ohm -- b\na -- open -- x\n");
    assert_int_equal(e.status, ANB_OK);
    assert_int_equal(e.network.node_count, 3);
    expansion_free(&e);
}

/* ---- names, loops, conditions ----------------------------------------------------------------- */

static void loops_count_both_ends(void **state) {
    (void)state;
    check(PORTS
          "join n[0], a\njoin n[2], b\nfor k in 1 .. 2 {\n x = k*1 ohm\n n[k-1] -- r[k]: x -- n[k]\n}\n",
          "resistor r[1]: a n[1] r=1\n"
          "resistor r[2]: n[1] b r=2\n");
    check(PORTS "a -- 1 ohm -- b\nfor k in 1 .. 0 { a -- 2 ohm -- b }\n", "resistor: a b r=1\n");
    check(PORTS "all = 1 .. 2\nfor i in all { for k in all { m[i][k] -- i*k*1 ohm -- a }\n}\n"
                "m[1][1] -- 1 ohm -- m[1][2]\nm[2][1] -- 1 ohm -- m[2][2] -- 1 ohm -- b\n",
          "resistor: m[1][1] a r=1\n"
          "resistor: m[1][2] a r=2\n"
          "resistor: m[2][1] a r=2\n"
          "resistor: m[2][2] a r=4\n"
          "resistor: m[1][1] m[1][2] r=1\n"
          "resistor: m[2][1] m[2][2] r=1\n"
          "resistor: m[2][2] b r=1\n");
}

static void conditions_choose(void **state) {
    (void)state;
    static const char text[] = PORTS
        "if n == 1 {\n x = 1 ohm\n} else if n == 2 and not (n > 2) {\n x = 2 ohm\n} else {\n x = 3 ohm\n}\n"
        "a -- x -- b\n";
    for (int n = 1; n <= 3; n++) {
        char netlist[400], expected[40];
        snprintf(netlist, sizeof netlist, "n = %d\n%s", n, text);
        snprintf(expected, sizeof expected, "resistor: a b r=%d\n", n);
        check(netlist, expected);
    }
}

static void networks_have_their_own_names(void **state) {
    (void)state;
    check(PORTS "a -- pair(1 ohm) -- b\nL: pair(3 ohm, k = 4) on (a, b)\nL.m -- 9 ohm -- L.s.m\n"
                "network pair(r, k = 2) {\n port p, q\n p -- r1: r -- m -- k*r -- q\n"
                " if k > 2 {\n s: pair(k*1 ohm, k = 0) on (p, q)\n }\n}\n",
          "resistor: a 3 r=1\n"
          "resistor: 3 b r=2\n"
          "resistor L.r1: a L.m r=3\n"
          "resistor: L.m b r=12\n"
          "resistor L.s.r1: a L.s.m r=4\n"
          "resistor: L.s.m b r=0\n"
          "resistor: L.m L.s.m r=9\n");
    check(PORTS "a -- 1 ohm -- b\nshort_end() on (b)\na -- shunt short_end()\n"
                "network short_end() {\n port x\n x -- 7 ohm -- ground\n}\n",
          "resistor: a b r=1\n"
          "resistor: b ground r=7\n"
          "resistor: a ground r=7\n");
    check(PORTS "a -- through() -- 1 ohm -- b\nnetwork through() {\n port x, y\n join x, y\n}\n",
          "resistor: a b r=1\n");
}

static void own_parts_see_where_they_are_defined(void **state) {
    (void)state;
    check(PORTS "unit = 2 ohm\ntwice(n) = n*unit -- shunt unit\nnetwork cell(n) {\n port p, q\n p -- "
                "twice(n) -- q\n}\n"
                "a -- cell(3) -- b\n",
          "resistor: a b r=6\n"
          "resistor: b ground r=2\n");
}

static void assumed_options(void **state) {
    (void)state;
    check(PORTS
          "a -- 1 nH -- b\nassume inductor(q = 40 @ 100 MHz), capacitor(esr = 1 ohm)\n"
          "a -- 1 nH -- b\na -- inductor(1 nH, resistance = 2 ohm) -- b\na -- inductor(1 nH, q = 7) -- b\n"
          "a -- 2 pF -- b\n",
          "inductor: a b l=1e-09\n"
          "inductor: a b l=1e-09 q=40@100000000\n"
          "inductor: a b l=1e-09 resistance=2\n"
          "inductor: a b l=1e-09 q=7\n"
          "capacitor: a b c=2e-12 esr=1\n");
    check(PORTS "coil = inductor(1 nH)\nassume inductor(q = 40)\na -- coil -- b\na -- n() -- b\n"
                "network n() {\n port p, q\n p -- 2 nH -- q\n}\n",
          "inductor: a b l=1e-09\n"
          "inductor: a b l=2e-09\n");
    check(PORTS
          "assume line(permittivity = 4, loss = 2 dB/m)\na -- line(50 ohm, 1 m) -- line(50 ohm, 1 ns) -- b\n",
          "line: a ground, 3 ground z=50 length=1 loss=2 permittivity=4\n"
          "line: 3 ground, b ground z=50 length=1e-09\n");
}

static void a_composite_may_have_a_label(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e, PORTS "a -- tank: (l: 1 nH || 2 pF) -- b\n");
    assert_int_equal(e.status, ANB_OK);
    assert_int_equal(e.network.label_count, 2);
    assert_string_equal(e.network.labels[0].name, "tank.l");
    assert_string_equal(e.network.labels[1].name, "tank");
    assert_int_equal(e.network.labels[1].part_count, 2);
    assert_string_equal(e.network.parts[0].label, "tank.l");
    assert_null(e.network.parts[1].label);
    expansion_free(&e);
}

static void equal_placements_share_their_arguments(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e, PORTS
                "for k in 1 .. 3 { a -- line(50 ohm, 90 deg @ 1 GHz) -- b }\na -- line(50 ohm, length = 0.25 "
                "wave @ 1 GHz) -- b\na -- line(51 ohm, 90 deg @ 1 GHz) -- b\n");
    assert_int_equal(e.status, ANB_OK);
    for (int i = 1; i < 4; i++) assert_ptr_equal(e.network.parts[i].arguments, e.network.parts[0].arguments);
    assert_ptr_not_equal(e.network.parts[4].arguments, e.network.parts[0].arguments);
    expansion_free(&e);
}

/* ---- ports, sweeps, drives ------------------------------------------------------------------------ */

static void ports_stand_anywhere(void **state) {
    (void)state;
    char *text = text_of_parts(
        "port a: 20 ohm - j*15 ohm\nport x: 75 ohm at p, q\nfor k in 1 .. 2 { port o[k]: 50 ohm at n[k] "
        "}\nn[1] -- 1 ohm -- p\nn[2] -- 1 ohm -- q\na -- 1 ohm -- q\n",
        write_ports);
    assert_string_equal(
        text, "a: 20-15j a ground\nx: 75+0j p q\no[1]: 50+0j n[1] ground\no[2]: 50+0j n[2] ground\n");
    free(text);
}

#define THROUGH PORTS "a -- 1 ohm -- b\n"

static void sweeps_are_counted(void **state) {
    (void)state;
    static expansion e;
    expand_text(
        &e, THROUGH
        "band = 1 GHz .. 2 GHz\nsweep band points 5\nsweep 1 GHz .. 2 GHz step 0.3 GHz\n"
        "sweep 1 MHz .. 10 GHz per decade 50\nsweep at 0 Hz, 3 GHz\nsweep 1 MHz .. 1.5 MHz step 0.1 MHz\n"
        "sweep 1 GHz .. 1 GHz per decade 3\nsweep 1 MHz .. 3 MHz per decade 10\n");
    static const uint64_t counts[] = {5, 4, 201, 2, 6, 1, 6};
    assert_int_equal(e.status, ANB_OK);
    assert_int_equal(e.network.sweep_count, 7);
    for (int i = 0; i < 7; i++) assert_int_equal(e.network.sweeps[i].count, counts[i]);
    assert_true(e.network.sweeps[3].list[1] == 3e9);
    expansion_free(&e);
}

static void replacements(void **state) {
    (void)state;
    static expansion e;
    const char *set[] = {"r = 7 ohm", "t=3 ohm", "c = 2 pF"};
    anb_overrides overrides = {set, 3, "1 GHz .. 2 GHz points 3"};
    expand_with(&e, "test.anab",
                PORTS "r = 1 ohm\ntune t = 2 ohm within 1 ohm .. 4 ohm\ncases c = [1 pF, 3 pF]\n"
                      "a -- 2*r -- t -- c -- b\nsweep at 1 MHz\n",
                &overrides);
    assert_int_equal(e.status, ANB_OK);
    assert_true(e.network.parts[0].arguments[0].value.re == 14);
    assert_true(e.network.parts[1].arguments[0].value.re == 3);
    assert_true(e.network.parts[2].arguments[0].value.re == 2e-12);
    assert_int_equal(e.network.sweep_count, 1);
    assert_int_equal(e.network.sweeps[0].count, 3);
    expansion_free(&e);
}

static void drives_and_kept_statements(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e,
                THROUGH "drive b: 10 dBm, 90 deg\ndrive a: 2 W\ntune t = 2 ohm within 1 ohm .. 4 ohm\n"
                        "cases c = 1 pF .. 3 pF points 3\na -- t -- c -- b\nrequire gain(a, b) >= -3 dB\n"
                        "require abs(S(b, a)) + vswr(a) <= 2 over 1 GHz .. 2 GHz weight 2\nsweep at 1 GHz\n");
    assert_int_equal(e.status, ANB_OK);
    assert_int_equal(e.network.drive_count, 2);
    assert_int_equal(e.network.drives[0].port, 1);
    assert_true(fabs(e.network.drives[0].watt - 0.01) < 1e-17 && e.network.drives[0].phase_turns == 0.25);
    assert_int_equal(e.network.drives[1].port, 0);
    assert_int_equal(e.network.requirements.count, 2);
    assert_int_equal(e.network.tunes.count, 1);
    assert_int_equal(e.network.cases.count, 1);
    assert_true(e.network.needs_sweep);
    expansion_free(&e);
}

static void a_sweep_is_asked_for_by_those_who_need_it(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e, THROUGH);
    assert_int_equal(e.status, ANB_OK);
    assert_false(anb__require_sweep(&e.report, e.file, &e.network));
    assert_string_equal(e.report.first->code, "no-sweep");
    expansion_free(&e);
}

/* ---- what a text may not do to us -------------------------------------------------------------------- */

static void expect_limit(const char *netlist, const char *words) {
    static expansion e;
    expand_text(&e, netlist);
    assert_int_equal(e.status, ANB_INVALID);
    assert_int_equal(e.report.errors, 1);
    if (!strstr(e.report.first->text, words)) fail_msg("%s\n%s", netlist, e.report.first->text);
    expansion_free(&e);
}

static void limits(void **state) {
    (void)state;
    expect_limit(THROUGH "for k in 1 .. 1000001 { }\n", "1 000 000 rounds of one loop");
    expect_limit(THROUGH "for i in 1 .. 1000 { for k in 1 .. 1000 { a -- 1 ohm || 2 ohm -- b }\n}\n",
                 "1 000 000 parts");
    expect_limit(THROUGH "for i in 1 .. 1000 { for k in 1 .. 100000 { } }\n", "10 000 000 rounds");
    expect_limit(THROUGH "sweep 1 Hz .. 1 GHz points 10000001\n", "10 000 000 points");
    expect_limit(THROUGH "sweep 0 Hz .. 1 GHz step 1 Hz\n", "10 000 000 points");
    expect_limit(THROUGH "cases x = 1 .. 2 points 40\ncases y = 1 .. 2 points 30\n", "1000 combinations");
    expect_limit(THROUGH "a -- n() -- b\nnetwork n() {\n port p, q\n p -- n() -- q\n}\n",
                 "places itself without end");
}

/* Each use of a name is a use of all that it stands for. */
static void doubling_meets_the_limit(void **state) {
    (void)state;
    char text[4096] = PORTS "x0 = open || open\n";
    size_t at = strlen(text);
    for (int i = 0; i < 40; i++) at += (size_t)sprintf(text + at, "x%d = x%d || x%d\n", i + 1, i, i);
    strcpy(text + at, "a -- x40 -- b\n");
    expect_limit(text, "10 000 000 rounds");
}

static void long_expressions_need_no_stack(void **state) {
    (void)state;
    enum { TERMS = 50000 };
    char *text = malloc(16 * TERMS), *at = text + sprintf(text, PORTS "x = 0 ohm");
    for (int i = 0; i < TERMS; i++) at += sprintf(at, " + 1 ohm");
    sprintf(at, "\na -- x -- b\n");
    check(text, "resistor: a b r=50000\n");
    free(text);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(values_become_parts),
        cmocka_unit_test(shunts_do_not_move_along),
        cmocka_unit_test(stubs),
        cmocka_unit_test(groups_and_parallels),
        cmocka_unit_test(reversed_and_inverse),
        cmocka_unit_test(repeated),
        cmocka_unit_test(parts_with_on),
        cmocka_unit_test(joined_nodes_are_one),
        cmocka_unit_test(what_only_open_touches_has_no_node),
        cmocka_unit_test(loops_count_both_ends),
        cmocka_unit_test(conditions_choose),
        cmocka_unit_test(networks_have_their_own_names),
        cmocka_unit_test(own_parts_see_where_they_are_defined),
        cmocka_unit_test(assumed_options),
        cmocka_unit_test(a_composite_may_have_a_label),
        cmocka_unit_test(equal_placements_share_their_arguments),
        cmocka_unit_test(ports_stand_anywhere),
        cmocka_unit_test(sweeps_are_counted),
        cmocka_unit_test(replacements),
        cmocka_unit_test(drives_and_kept_statements),
        cmocka_unit_test(a_sweep_is_asked_for_by_those_who_need_it),
        cmocka_unit_test(limits),
        cmocka_unit_test(doubling_meets_the_limit),
        cmocka_unit_test(long_expressions_need_no_stack),
    };
    int failures = cmocka_run_group_tests(tests, NULL, NULL);
    return failures ? 1 : 0;
}
