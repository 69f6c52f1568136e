/* Expressions: values, dimensions, functions, what depends on the frequency. */
#include <math.h>

#include "test_expand_support.h"

#define PI 3.14159265358979323846

/* The value of an expression in a unit, by way of an impedance. */
static anb_status evaluate(expansion *e, const char *before, const char *expression, const char *unit) {
    char text[1000];
    snprintf(text, sizeof text, "port a, b: 50 ohm\n%s\na -- impedance((%s)/(1 %s)*1 ohm) -- b\n", before,
             expression, unit);
    expand_text(e, text);
    return e->status;
}

static void check(const char *expression, const char *unit, double re, double im) {
    static expansion e;
    if (evaluate(&e, "f0 = 1 GHz\nz0 = 50 ohm\nlist = [1, 4, 9]", expression, unit) != ANB_OK) {
        write_messages(&e, stderr);
        fail_msg("%s", expression);
    }
    anb__complex value = e.network.parts[0].arguments[0].value;
    double error = hypot(value.re - re, value.im - im);
    if (!(error <= 1e-15 * (1 + hypot(re, im))))
        fail_msg("%s = %.17g%+.17gj, %.17g%+.17gj expected", expression, value.re, value.im, re, im);
    expansion_free(&e);
}

static void arithmetic(void **state) {
    (void)state;
    check("1 + 2*3 - 4/8", "", 6.5, 0);
    check("2^3^2", "", 512, 0);
    check("-2^2", "", -4, 0);
    check("2^-1", "", 0.5, 0);
    check("(-8)^3", "", -512, 0);
    check("j*j", "", -1, 0);
    check("(1 + j)^2", "", 0, 2);
    check("1/(1 + j)", "", 0.5, -0.5);
    check("z0*(1 + 5%)", "ohm", 52.5, 0);
    check("20 ppm", "", 2e-5, 0);
    check("list[2] + count(list)", "", 7, 0);
}

static void dimensions(void **state) {
    (void)state;
    check("z0/(2*pi*f0)", "nH", 50 / (2 * PI), 0);
    check("1/(2*pi*f0*z0)", "pF", 1e3 / (100 * PI), 0);
    check("1/(2*pi*sqrt(1 nH*1 pF))", "Hz", 1 / (2 * PI * sqrt(1e-9 * 1e-12)), 0);
    check("sqrt(4 ohm*9 ohm)", "ohm", 6, 0);
    check("((2 ohm)^3)^(1/3)", "ohm", 2, 0);
    check("c0/(1 GHz)", "mm", 299.792458, 0);
    check("1 V/(50 ohm)", "mA", 20, 0);
    check("10 V*2 A", "W", 20, 0);
    check("1 inch + 1 mil", "mm", 25.4254, 0);
}

static void levels(void **state) {
    (void)state;
    check("3 dB + 1 dB", "dB", 4, 0);
    check("2*3 dB", "dB", 6, 0);
    check("1 Np", "dB", 8.685889638065036553, 0);
    check("0.2 dB/m*10 m", "dB", 2, 0);
    check("6 dB/(3 dB)", "", 2, 0);
    check("10 dBm - 7 dBm", "dB", 3, 0);
    check("(10 dBm + 3 dB) - 7 dBm", "dB", 6, 0);
    check("amplitude(20 dB)", "", 10, 0);
    check("decibel(100)", "dB", 40, 0);
}

static void angles(void **state) {
    (void)state;
    check("90 deg", "wave", 0.25, 0);
    check("pi*1 rad", "deg", 180, 0);
    check("sin(30 deg)", "", 0.5, 0);
    check("sin(180 deg) + cos(90 deg)", "", 0, 0);
    check("cos(pi/3)", "", cos(PI / 3), 0);
    check("tan(45 deg)", "", 1, 0);
    check("exp(j*90 deg)", "", 0, 1);
    check("exp(j*0.5)", "", cos(0.5), sin(0.5));
    check("atan2(1, -1)", "deg", 135, 0);
    check("asin(1) + acos(1) + atan(1)", "deg", 135, 0);
    check("arg(-1)", "deg", 180, 0);
    check("arg(1 ohm + j*1 ohm)", "deg", 45, 0);
}

static void functions(void **state) {
    (void)state;
    check("abs(3 ohm + j*4 ohm)", "ohm", 5, 0);
    check("abs(0 ohm - 3 ohm)", "ohm", 3, 0);
    check("real(3 + j*4) + imag(3 + j*4)*j + conj(j)", "", 3, 3);
    check("exp(1) + ln(exp(2)) + log10(1000)", "", exp(1) + 5, 0);
    check("min(3 ohm, 1 ohm, 2 ohm) + max(3 ohm, 4 ohm)", "ohm", 5, 0);
    check("round(2.5) + floor(-1.5) + ceil(1.2)", "", 3, 0);
    check("preferred(48 ohm, E24)", "ohm", 47, 0);
    check("preferred(5.2 nH, E12)", "nH", 5.6, 0);
    check("sqrt(j)", "", sqrt(0.5), sqrt(0.5));
}

/* ---- the frequency ----------------------------------------------------------------------- */

static void check_at(const char *expression, double hz, double re, double im) {
    static expansion e;
    anb__complex value;
    if (evaluate(&e, "z0 = 50 ohm", expression, "ohm") != ANB_OK) {
        write_messages(&e, stderr);
        fail_msg("%s", expression);
    }
    const anb__program *program = e.network.parts[0].arguments[0].program;
    assert_non_null(program);
    assert_true(anb__program_value(program, hz, &value));
    if (!(hypot(value.re - re, value.im - im) <= 1e-14 * hypot(re, im)))
        fail_msg("%s = %.17g%+.17gj", expression, value.re, value.im);
    expansion_free(&e);
}

static void what_depends_on_the_frequency(void **state) {
    (void)state;
    check_at("0.1 ohm*sqrt(frequency/1 GHz) + j*2*pi*frequency*3 nH", 4e9, 0.2, 2 * PI * 12);
    check_at("z0*sin(frequency/(1 GHz)*90 deg)", 1e9, 50, 0);
    check_at("z0*exp(-j*2*pi*frequency*1 ns)", 0.25e9, 0, -50);
    check_at("max(z0, frequency*1 ohm/(1 GHz))", 60e9, 60, 0);
    check_at("z0*amplitude(6 dB*(frequency/(1 GHz)))/amplitude(6 dB)", 1e9, 50, 0);
}

static void limits_at_zero(void **state) {
    (void)state;
    static expansion e;
    anb__series series;
    anb__complex limit;
    assert_int_equal(evaluate(&e, "", "sin(frequency*1 ns)/(frequency*1 ns)*3 ohm", "ohm"), ANB_OK);
    const anb__program *program = e.network.parts[0].arguments[0].program;
    assert_false(anb__program_value(program, 0, &limit));
    assert_true(anb__program_series(program, &series) && anb__series_limit(&series, &limit));
    assert_true(fabs(limit.re - 3) < 1e-14 && limit.im == 0);
    expansion_free(&e);
}

/* ---- what belongs to a value -------------------------------------------------------------------- */

static void tolerances_keep_the_nominal_value(void **state) {
    (void)state;
    check("50 ohm +/- 5%", "ohm", 50, 0);
    check("50 ohm +/- 1 ohm normal", "ohm", 50, 0);
}

static void powers_become_watts(void **state) {
    (void)state;
    static expansion e;
    expand_text(&e, "port a, b: 50 ohm\na -- resistor(50 ohm, rating = 30 dBm) -- b\n");
    assert_int_equal(e.status, ANB_OK);
    const anb__argument *rating = anb__argument_of(&e.network.parts[0], ANB__ARG_RATING);
    assert_non_null(rating);
    assert_true(fabs(rating->value.re - 1) < 1e-15);
    expansion_free(&e);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(arithmetic),
        cmocka_unit_test(dimensions),
        cmocka_unit_test(levels),
        cmocka_unit_test(angles),
        cmocka_unit_test(functions),
        cmocka_unit_test(what_depends_on_the_frequency),
        cmocka_unit_test(limits_at_zero),
        cmocka_unit_test(tolerances_keep_the_nominal_value),
        cmocka_unit_test(powers_become_watts),
    };
    int failures = cmocka_run_group_tests(tests, NULL, NULL);
    return failures ? 1 : 0;
}
