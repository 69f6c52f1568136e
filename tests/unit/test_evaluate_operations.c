/* Operations, programs of the frequency and their limits at 0 Hz, preferred values, dimensions. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>

#include <cmocka.h>
#include <math.h>

#include "network/quantity.h"

static void assert_near(double value, double expected, double tolerance) {
    if (!(fabs(value - expected) <= tolerance)) fail_msg("%.17g, %.17g expected", value, expected);
}

static anb__complex operate(anb__operation operation, double a, double b) {
    anb__complex out = {NAN, NAN};
    assert_int_equal(anb__operate(operation, anb__cx(a, 0), anb__cx(b, 0), &out), ANB__FINE);
    return out;
}

static anb__trouble trouble(anb__operation operation, anb__complex a, anb__complex b) {
    anb__complex out;
    return anb__operate(operation, a, b, &out);
}

static void quarter_turns_are_exact(void **state) {
    (void)state;
    static const double expected[] = {0, 1, 0, -1};
    for (int k = -400; k <= 400; k++) {
        int at = ((k % 4) + 4) % 4;
        assert_true(operate(ANB__SIN_TURNS, k / 4.0, 0).re == expected[at]);
        assert_true(operate(ANB__COS_TURNS, k / 4.0, 0).re == expected[(at + 1) % 4]);
    }
    assert_near(operate(ANB__SIN_TURNS, 1.0 / 12, 0).re, 0.5, 1e-16);
    assert_near(operate(ANB__TAN_TURNS, 0.125, 0).re, 1, 2e-16);
    assert_int_equal(trouble(ANB__TAN_TURNS, anb__cx(0.25, 0), anb__cx(0, 0)), ANB__NOT_FINITE);
}

static void inverse_functions_give_turns(void **state) {
    (void)state;
    assert_near(operate(ANB__ASIN, 0.5, 0).re, 1.0 / 12, 2e-17);
    assert_near(operate(ANB__ACOS, -1, 0).re, 0.5, 1e-16);
    assert_near(operate(ANB__ATAN2, 1, -1).re, 0.375, 1e-16);
    assert_int_equal(trouble(ANB__ASIN, anb__cx(1.5, 0), anb__cx(0, 0)), ANB__OUTSIDE_ONE);
}

static void troubles_have_names(void **state) {
    (void)state;
    anb__complex zero = {0, 0}, one = {1, 0}, minus = {-2, 0}, j = {0, 1};
    assert_int_equal(trouble(ANB__DIVIDE, one, zero), ANB__BY_ZERO);
    assert_int_equal(trouble(ANB__RAISE, zero, minus), ANB__BY_ZERO);
    assert_int_equal(trouble(ANB__SQRT, minus, zero), ANB__NEGATIVE_ROOT);
    assert_int_equal(trouble(ANB__RAISE, minus, anb__cx(0.5, 0)), ANB__NEGATIVE_ROOT);
    assert_int_equal(trouble(ANB__LN, minus, zero), ANB__NEGATIVE_LOGARITHM);
    assert_int_equal(trouble(ANB__LOG10, zero, zero), ANB__LOGARITHM_OF_ZERO);
    assert_int_equal(trouble(ANB__MIN, j, one), ANB__NOT_REAL);
    assert_int_equal(trouble(ANB__EXP, anb__cx(1000, 0), zero), ANB__NOT_FINITE);
    assert_int_equal(trouble(ANB__MULTIPLY, anb__cx(1e200, 0), anb__cx(1e200, 0)), ANB__NOT_FINITE);
}

/* ---- programs ------------------------------------------------------------------------ */

static anb__arena arena;
static uint32_t making;

static anb__term *number(double value) { return anb__term_constant(&arena, anb__cx(value, 0)); }

static const anb__program *program(anb__term *term) {
    const anb__program *p = anb__program_of(&arena, &arena, term, &making);
    assert_non_null(p);
    return p;
}

static int free_arena(void **state) {
    (void)state;
    anb__arena_free(&arena);
    return 0;
}

static void programs_agree_with_operations(void **state) {
    (void)state;
    anb__term *f = anb__term_frequency(&arena);
    anb__term *root = anb__term_operation(&arena, ANB__SQRT, f, NULL);
    anb__term *sum = anb__term_operation(&arena, ANB__ADD, root,
                                         anb__term_operation(&arena, ANB__MULTIPLY, f, f));
    anb__complex out;
    assert_true(anb__program_value(program(sum), 9, &out));
    assert_true(out.re == 84 && out.im == 0);
    anb__term *inverse = anb__term_operation(&arena, ANB__DIVIDE, number(1), f);
    assert_false(anb__program_value(program(inverse), 0, &out));
}

/* x is doubled a hundred times: each value is computed once, or this would never end. */
static void shared_terms_are_computed_once(void **state) {
    (void)state;
    anb__term *x = anb__term_frequency(&arena);
    anb__complex out;
    for (int i = 0; i < 100; i++) x = anb__term_operation(&arena, ANB__ADD, x, x);
    assert_true(anb__program_value(program(x), 1, &out));
    assert_true(out.re == ldexp(1, 100));
}

static void deep_expressions_need_no_stack(void **state) {
    (void)state;
    anb__term *fraction = number(0);
    for (int i = 0; i < 200; i++) /* of the kind 1 + 1/(1 + 1/(1 + ... )) */
        fraction = anb__term_operation(
            &arena, ANB__DIVIDE, number(1),
            anb__term_operation(&arena, ANB__ADD, anb__term_frequency(&arena), fraction));
    program(fraction);
    anb__term *x = number(0);
    anb__complex out;
    for (int i = 0; i < 200000; i++)
        x = anb__term_operation(&arena, ANB__ADD, x, anb__term_frequency(&arena));
    assert_true(anb__program_value(program(x), 1, &out));
    assert_true(out.re == 200000);
}

static void too_many_values_at_once_are_refused(void **state) {
    (void)state;
    anb__term *f = anb__term_frequency(&arena), *x = f, *kept[100];
    for (int i = 0; i < 100; i++) x = kept[i] = anb__term_operation(&arena, ANB__ADD, x, f);
    for (int i = 0; i < ANB__PROGRAM_SLOTS - 4; i++)
        x = anb__term_operation(&arena, ANB__ADD, kept[99 - i], x);
    assert_non_null(anb__program_of(&arena, &arena, x, &making));
    for (int i = 0; i < 100; i++) x = anb__term_operation(&arena, ANB__ADD, kept[99 - i], x);
    assert_null(anb__program_of(&arena, &arena, x, &making));
}

/* ---- limits at 0 Hz ---------------------------------------------------------------------- */

/* Each operation's series, summed at a small u, against the operation itself. */
static double value_of(const anb__series *s, double u) {
    double sum = 0;
    for (int k = s->zero ? 0 : s->terms - 1; !s->zero && k >= 0; k--) sum = sum * u + s->c[k].re;
    return s->zero ? 0 : sum * pow(u, s->order);
}

static void series_agree_with_operations(void **state) {
    (void)state;
    static const struct {
        anb__operation operation;
        double start;
    } cases[] = {{ANB__SQRT, 2},        {ANB__ABS, -3},        {ANB__EXP, 0.3},       {ANB__LN, 2},
                 {ANB__LOG10, 3},       {ANB__SIN, 0.4},       {ANB__COS, 0.4},       {ANB__TAN, 0.4},
                 {ANB__SIN_TURNS, 0.1}, {ANB__COS_TURNS, 0.1}, {ANB__TAN_TURNS, 0.1}, {ANB__ASIN, 0.2},
                 {ANB__ACOS, 0.2},      {ANB__ATAN, 0.7},      {ANB__ROUND, 1.2},     {ANB__FLOOR, 1.2},
                 {ANB__CEIL, 1.2},      {ANB__AMPLITUDE, 3},   {ANB__DECIBEL, 4},     {ANB__NEGATE, 1},
                 {ANB__REAL, 1},        {ANB__CONJ, 1},        {ANB__ROUND, 2.5},     {ANB__CEIL, 2},
                 {ANB__FLOOR, 2}};
    double u = 0.01;
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        anb__series start = anb__series_real(cases[i].start), step = anb__series_power(anb__cx(0.5, 0), 2);
        anb__series x = anb__series_add(&start, &step), out;
        assert_true(anb__operate_series(cases[i].operation, &x, &x, &out));
        assert_near(value_of(&out, u), operate(cases[i].operation, cases[i].start + 0.5 * u * u, 0).re,
                    4e-15);
    }
}

static void two_operands_agree_too(void **state) {
    (void)state;
    static const anb__operation operations[] = {ANB__ADD,   ANB__SUBTRACT, ANB__MULTIPLY, ANB__DIVIDE,
                                                ANB__RAISE, ANB__ATAN2,    ANB__MIN,      ANB__MAX};
    double u = 0.01;
    for (size_t i = 0; i < sizeof operations / sizeof *operations; i++) {
        anb__series a = anb__series_real(1.5), b = anb__series_real(0.75),
                    step = anb__series_power(anb__cx(1, 0), 1);
        anb__series out;
        a = anb__series_add(&a, &step);
        b = anb__series_sub(&b, &step);
        assert_true(anb__operate_series(operations[i], &a, &b, &out));
        assert_near(value_of(&out, u), operate(operations[i], 1.5 + u, 0.75 - u).re, 4e-15);
    }
}

static void powers_of_the_frequency(void **state) {
    (void)state;
    anb__series f = anb__series_power(anb__cx(1, 0), 2), half = anb__series_real(0.5), out;
    assert_true(anb__operate_series(ANB__RAISE, &f, &half, &out));
    assert_int_equal(out.order, 1);
    anb__series third = anb__series_real(1.0 / 3);
    assert_false(anb__operate_series(ANB__RAISE, &f, &third, &out)); /* no power of sqrt(frequency) */
    anb__series zero = anb__series_zero();
    assert_false(anb__operate_series(ANB__LN, &f, &zero, &out));
    assert_true(anb__operate_series(ANB__FLOOR, &f, &zero, &out));
    assert_true(value_of(&out, 0) == 0);
    assert_true(anb__operate_series(ANB__CEIL, &f, &zero, &out)); /* from above */
    assert_true(value_of(&out, 0) == 1);
}

static void a_pole_stays_a_pole(void **state) {
    (void)state;
    anb__term *inverse = anb__term_operation(&arena, ANB__DIVIDE, number(3), anb__term_frequency(&arena));
    anb__series out;
    assert_true(anb__program_series(program(inverse), &out));
    assert_int_equal(out.order, -2);
    assert_true(out.c[0].re == 3);
}

/* ---- preferred values and dimensions ---------------------------------------------------------- */

/* IEC 60063:2015, tables 1 to 3: values of E24, E48, E96 and E192, among them those that the formula of the
 * series misses (E24 from 2.7 to 4.7 and 8.2, E192 9.20). Typed from memory. */
static void preferred_values(void **state) {
    (void)state;
    static const struct {
        double value;
        int per_decade;
        double expected;
    } cases[] = {{2.72, 24, 2.7},      {3.05, 24, 3.0},       {8.3, 24, 8.2},      {5e3, 24, 5.1e3},
                 {5.2e-9, 12, 5.6e-9}, {47e-12, 3, 47e-12},   {1.5e-9, 6, 1.5e-9}, {50, 48, 51.1},
                 {50, 96, 49.9},       {9.19, 192, 9.2},      {9.9, 96, 10},       {0.0979, 192, 0.0976},
                 {9.7e5, 24, 1e6},     {3.3e-12, 24, 3.3e-12}};
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        double value = anb__preferred_value(cases[i].value, cases[i].per_decade);
        if (value != cases[i].expected) fail_msg("%.17g, %.17g expected", value, cases[i].expected);
    }
    int per_decade;
    assert_false(anb__preferred_series("E7", &per_decade));
    assert_true(anb__preferred_series("E192", &per_decade));
    assert_int_equal(per_decade, 192);
}

static void dimensions_combine(void **state) {
    (void)state;
    anb__dimension out, per_metre = ANB__LEVEL_PER_METRE, metre = ANB__METRE;
    assert_true(anb__dimension_quotient(anb__ohm, anb__hertz, &out));
    assert_true(anb__same_dimension(out, anb__henry));
    assert_true(anb__dimension_product(per_metre, metre, &out));
    assert_true(anb__same_dimension(out, anb__level));
    assert_true(anb__dimension_quotient(anb__level, anb__level, &out));
    assert_true(anb__same_dimension(out, anb__plain));
    assert_false(anb__dimension_product(anb__level, anb__level, &out));
    assert_false(anb__dimension_product(anb__dbm, anb__plain, &out));
    assert_false(anb__dimension_power(anb__ohm, 1.0 / 7, &out));
    assert_true(anb__dimension_power(anb__ohm, 0.5, &out));
    assert_int_equal(out.ohm, 3);
    for (int i = 0; i < 8; i++) {
        bool fits = anb__dimension_product(out, out, &out);
        if (!fits) return;
    }
    fail_msg("exponents have no end");
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(quarter_turns_are_exact),
        cmocka_unit_test(inverse_functions_give_turns),
        cmocka_unit_test(troubles_have_names),
        cmocka_unit_test_teardown(programs_agree_with_operations, free_arena),
        cmocka_unit_test_teardown(shared_terms_are_computed_once, free_arena),
        cmocka_unit_test_teardown(deep_expressions_need_no_stack, free_arena),
        cmocka_unit_test_teardown(too_many_values_at_once_are_refused, free_arena),
        cmocka_unit_test(series_agree_with_operations),
        cmocka_unit_test(two_operands_agree_too),
        cmocka_unit_test(powers_of_the_frequency),
        cmocka_unit_test_teardown(a_pole_stays_a_pole, free_arena),
        cmocka_unit_test(preferred_values),
        cmocka_unit_test(dimensions_combine),
    };
    int failures = cmocka_run_group_tests(tests, NULL, NULL);
    return failures ? 1 : 0;
}
