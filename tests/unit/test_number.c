/* Numbers to text and back. What is compared with std::to_chars by the million stands in
 * tests/bench/number_compare.cpp. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <float.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/number.h"

static void writes(double value, const char *text) {
    char buffer[ANB__NUMBER_SIZE + 1];
    buffer[anb__number_write(value, buffer)] = '\0';
    assert_string_equal(buffer, text);
}

static void test_shortest(void **state) {
    (void)state;
    writes(0, "0");
    writes(-0.0, "-0");
    writes(1, "1");
    writes(-50, "-50");
    writes(0.1, "0.1");
    writes(0.001, "0.001");
    writes(0.0001, "1e-04"); /* not longer than plain */
    writes(10000, "10000");
    writes(100000, "1e+05");
    writes(433920000, "433920000");
    writes(0.3, "0.3");
    writes(0.1 + 0.2, "0.30000000000000004");
    writes(5e-324, "5e-324");
    writes(DBL_MIN, "2.2250738585072014e-308");
    writes(DBL_MAX, "1.7976931348623157e+308");
    writes(9007199254740993.0, "9007199254740992");
    writes(INFINITY, "inf");
    writes(-INFINITY, "-inf");
    writes(NAN, "nan");
}

static void test_digits(void **state) {
    char buffer[ANB__NUMBER_SIZE + 1];
    static const struct {
        double value;
        int digits, shift;
        const char *text;
    } cases[] = {{2.0 / 3, 3, 0, "0.667"},
                 {0.5, 1, 0, "0.5"},
                 {2.5, 1, 0, "2"}, /* halves go to even */
                 {3.5, 1, 0, "4"},
                 {0.125, 2, 0, "0.12"},
                 {0.375, 2, 0, "0.38"},
                 {999.96, 4, 0, "1000"},
                 {1e22, 3, 0, "1e+22"},
                 {5e-324, 3, 0, "4.94e-324"},
                 {123456789, 17, -6, "123.456789"},
                 {1e9, 5, -9, "1"},
                 {-0.04, 1, 0, "-0.04"}};
    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        buffer[anb__number_write_digits(cases[i].value, cases[i].digits, cases[i].shift, buffer)] = '\0';
        assert_string_equal(buffer, cases[i].text);
    }
}

static void test_shift(void **state) {
    char buffer[ANB__NUMBER_SIZE + 1];
    (void)state;
    buffer[anb__number_write_shifted(433920000, -6, buffer)] = '\0';
    assert_string_equal(buffer, "433.92");
    buffer[anb__number_write_shifted(1e9, -9, buffer)] = '\0';
    assert_string_equal(buffer, "1");
    buffer[anb__number_write_shifted(0, -9, buffer)] = '\0';
    assert_string_equal(buffer, "0");
    buffer[anb__number_write_shifted(-1.5e-300, -9, buffer)] = '\0';
    assert_string_equal(buffer, "-1.5e-309");
}

static void reads(const char *text, int shift, double value, size_t length) {
    double got = NAN;
    assert_int_equal(anb__number_read_scaled(text, strlen(text), shift, &got), length);
    if (length && memcmp(&got, &value, sizeof got))
        fail_msg("%s reads as %.17g, not %.17g", text, got, value);
}

static void test_read(void **state) {
    (void)state;
    reads("3.3", -12, 3.3e-12, 3);
    reads("4.7nH", -9, 4.7e-9, 3);
    reads("1..8", 0, 1, 1); /* a point needs a digit behind it */
    reads(".5", 0, 0.5, 2);
    reads("5.", 0, 5, 1);
    reads("1e3Hz", 0, 1000, 3);
    reads("2e", 0, 2, 1); /* and an exponent too */
    reads("2e+", 0, 2, 1);
    reads("x", 0, 0, 0);
    reads(".", 0, 0, 0);
    reads("", 0, 0, 0);
    reads("0.0000", 0, 0, 6);
    reads("1e400", 0, INFINITY, 5);
    reads("1e-400", 0, 0, 6);
    reads("1e99999999999999999999", 0, INFINITY, 22);
    reads("9007199254740993", 0, 9007199254740992.0, 16); /* a tie */
    reads("9007199254740993.0000000000000000000000000000001", 0, 9007199254740994.0, 48);
    reads("2.2250738585072011e-308", 0, 2.2250738585072011e-308, 23);
    reads("1.7976931348623158e308", 0, DBL_MAX, 22);
    reads("1.7976931348623159e308", 0, INFINITY, 22);
    reads("2.4703282292062327208e-324", 0, 0, 26); /* just below half the least */
    reads("2.4703282292062327209e-324", 0, 5e-324, 26);
}

/* The middle between two doubles in all its digits goes to the even one; a digit more decides. */
static void test_middles(void **state) {
    static char text[900];
    (void)state;
    for (uint64_t k = 0; k < 500; k++) {
        uint64_t bits = k * 0x123456789ABCDEFu % 0x7FE0000000000000u;
        double low, got;
        memcpy(&low, &bits, sizeof low);
        double high = nextafter(low, INFINITY), even = bits & 1 ? high : low;
        long double middle = ((long double)low + (long double)high) / 2; /* exact in 64 bits */
        int length = snprintf(text, sizeof text, "%.780Le", middle);
        assert_true(length > 0 && (size_t)length < sizeof text);
        anb__number_read(text, (size_t)length, &got);
        assert_memory_equal(&got, &even, sizeof got);
        char *exponent = strchr(text, 'e');
        exponent[-1] = '1';
        anb__number_read(text, (size_t)length, &got);
        assert_memory_equal(&got, &high, sizeof got);
    }
}

/* SplitMix64 (G. L. Steele, D. Lea and C. H. Flood 2014). */
static uint64_t next_bits(uint64_t *state) {
    uint64_t z = *state += 0x9E3779B97F4A7C15u;
    z = (z ^ z >> 30) * 0xBF58476D1CE4E5B9u;
    z = (z ^ z >> 27) * 0x94D049BB133111EBu;
    return z ^ z >> 31;
}

static void test_round_trip(void **state) {
    uint64_t seed = 1;
    (void)state;
    for (int i = 0; i < 200000; i++) {
        uint64_t bits = next_bits(&seed) & INT64_MAX;
        char buffer[ANB__NUMBER_SIZE + 1];
        double value, got;
        memcpy(&value, &bits, sizeof value);
        if (!isfinite(value)) continue;
        size_t length = anb__number_write(value, buffer);
        assert_true(length <= ANB__NUMBER_SIZE);
        assert_int_equal(anb__number_read(buffer, length, &got), length);
        assert_memory_equal(&got, &value, sizeof got);
        length = anb__number_write_digits(value, 17, 0, buffer);
        anb__number_read(buffer, length, &got);
        assert_memory_equal(&got, &value, sizeof got);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_shortest), cmocka_unit_test(test_digits),
                                       cmocka_unit_test(test_shift),    cmocka_unit_test(test_read),
                                       cmocka_unit_test(test_middles),  cmocka_unit_test(test_round_trip)};
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
