/* Truncated Laurent series: the numbers in which parts state their equations.
 *
 * At 0 Hz the variable is u = sqrt(frequency / 1 Hz): skin effect grows with the square root of
 * frequency, so u and not the frequency is what every part is a power series in. At any other
 * frequency a series has one term, its value there, so that one code serves both. A series is
 *     sum over k = 0 .. terms-1 of c[k] * u^(order + k),
 * with c[0] != 0, or the exact zero (`zero` set). What follows the last term is unknown.
 * Results have as many terms as their operands leave known.
 */
#ifndef ANB_BASE_SERIES_H
#define ANB_BASE_SERIES_H

#include "base/complex.h"

enum { ANB__SERIES_TERMS = 12 };

typedef struct anb__series {
    int order;
    int terms; /* known ones, 1 to ANB__SERIES_TERMS */
    bool zero;
    anb__complex c[ANB__SERIES_TERMS];
} anb__series;

anb__series anb__series_zero(void);
/* A constant, all of whose terms are known. */
anb__series anb__series_constant(anb__complex value);
anb__series anb__series_real(double value);
/* A value at one point: one term. */
anb__series anb__series_value(anb__complex value);
/* value * u^order; a frequency is value 1, order 2. */
anb__series anb__series_power(anb__complex value, int order);
anb__series anb__series_add(const anb__series *a, const anb__series *b);
anb__series anb__series_sub(const anb__series *a, const anb__series *b);
anb__series anb__series_mul(const anb__series *a, const anb__series *b);
anb__series anb__series_scale(const anb__series *a, anb__complex k);
/* These return false where the result has no such series: division by
 * zero, the root of an odd order, exp or log of a pole. */
bool anb__series_div(const anb__series *a, const anb__series *b, anb__series *out);
bool anb__series_sqrt(const anb__series *a, anb__series *out);
bool anb__series_exp(const anb__series *a, anb__series *out);
bool anb__series_log(const anb__series *a, anb__series *out);
/* Any function from its Taylor coefficients t[0 .. ANB__SERIES_TERMS-1] at a's constant
 * term; false where a has a pole. */
bool anb__series_compose(const anb__series *a, const anb__complex *t, anb__series *out);
/* a - m b, for elimination: a coefficient that has cancelled to less than `noise` of what it was summed
 * from is zero. */
anb__series anb__series_eliminate(const anb__series *a, const anb__series *m, const anb__series *b,
                                  double noise);
/* The limit at u = 0; false at a pole. */
bool anb__series_limit(const anb__series *a, anb__complex *out);

#endif
