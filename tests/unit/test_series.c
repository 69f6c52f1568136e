/* Truncated series, in which parts state their equations. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>

#include "base/series.h"

static void assert_term(const anb__series *s, int order, double re, double im) {
    anb__complex c = {0, 0};
    if (!s->zero && order >= s->order && order < s->order + s->terms) c = s->c[order - s->order];
    if (!(fabs(c.re - re) <= 1e-14 * (1 + fabs(re)) && fabs(c.im - im) <= 1e-14 * (1 + fabs(im))))
        fail_msg("term %d is %.17g %+.17g j, not %.17g %+.17g j", order, c.re, c.im, re, im);
}

static anb__series u(int order, double factor) { return anb__series_power(anb__cx(factor, 0), order); }

static void test_arithmetic(void **state) {
    (void)state;
    anb__series one = u(0, 1), x = u(1, 2), sum = anb__series_add(&one, &x),
                square = anb__series_mul(&sum, &sum), q;
    assert_term(&square, 0, 1, 0);
    assert_term(&square, 1, 4, 0);
    assert_term(&square, 2, 4, 0);
    assert_true(anb__series_div(&one, &sum, &q)); /* 1 - 2u + 4u^2 - ... */
    assert_term(&q, 3, -8, 0);
    assert_true(anb__series_div(&sum, &x, &q)); /* 1/(2u) + 1 */
    assert_term(&q, -1, 0.5, 0);
    assert_term(&q, 0, 1, 0);
    q = anb__series_sub(&sum, &sum);
    assert_true(q.zero);
    assert_false(anb__series_div(&one, &q, &x));
}

static void test_functions(void **state) {
    (void)state;
    anb__series x = u(1, 1), one = u(0, 1), two = u(0, 2), r, e;
    assert_true(anb__series_exp(&x, &e));
    assert_term(&e, 3, 1.0 / 6, 0);
    anb__series shifted = anb__series_add(&two, &x);
    assert_true(anb__series_exp(&shifted, &e));
    assert_term(&e, 1, exp(2), 0);
    anb__series linear = anb__series_add(&one, &x);
    assert_true(anb__series_sqrt(&linear, &r));
    assert_term(&r, 2, -0.125, 0);
    assert_true(anb__series_log(&linear, &r));
    assert_term(&r, 3, 1.0 / 3, 0);
    assert_false(anb__series_sqrt(&x, &r));
    anb__series pole = u(-2, 1);
    assert_false(anb__series_exp(&pole, &r));
    assert_false(anb__series_log(&pole, &r));
}

static void test_limit(void **state) {
    (void)state;
    anb__complex limit;
    anb__series x = u(2, 3), pole = u(-1, 3), product = anb__series_mul(&x, &pole);
    assert_true(anb__series_limit(&product, &limit));
    assert_true(limit.re == 0);
    assert_false(anb__series_limit(&pole, &limit));
}

/* Terms that are not known spoil no other, and are never invented. */
static void test_known_terms(void **state) {
    (void)state;
    anb__series value = anb__series_value(anb__cx(5, 0)), one = u(0, 1), sum = anb__series_add(&value, &one);
    assert_int_equal(sum.terms, 1);
    assert_term(&sum, 0, 6, 0);
    anb__series x = u(3, 1), product = anb__series_mul(&value, &x);
    assert_int_equal(product.order, 3);
    assert_int_equal(product.terms, 1);
}

/* What is left of a cancelled coefficient is zero, what is not noise stays. */
static void test_elimination(void **state) {
    (void)state;
    anb__series third = u(0, 1.0 / 3), three = u(0, 3), x = u(2, 1), row = anb__series_add(&third, &x);
    anb__series nearly = u(0, 1.0 / 9 * (1 + 4e-16)), r = anb__series_eliminate(&row, &three, &nearly, 1e-12);
    assert_int_equal(r.order, 2);
    assert_term(&r, 2, 1, 0);
    anb__series apart = u(0, 1.0 / 9 * (1 + 1e-9));
    r = anb__series_eliminate(&row, &three, &apart, 1e-12);
    assert_int_equal(r.order, 0);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_arithmetic), cmocka_unit_test(test_functions),
                                       cmocka_unit_test(test_limit), cmocka_unit_test(test_known_terms),
                                       cmocka_unit_test(test_elimination)};
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
