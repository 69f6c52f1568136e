/* Complex numbers as two doubles. C's own `_Complex` is not used: its products
 * call a library routine for infinities, which costs time and hides the rounding. */
#ifndef ANB_BASE_COMPLEX_H
#define ANB_BASE_COMPLEX_H

#include <math.h>
#include <stdbool.h>

typedef struct anb__complex {
    double re, im;
} anb__complex;

static inline anb__complex anb__cx(double re, double im) { return (anb__complex){re, im}; }
static inline anb__complex anb__cadd(anb__complex a, anb__complex b) {
    return anb__cx(a.re + b.re, a.im + b.im);
}
static inline anb__complex anb__csub(anb__complex a, anb__complex b) {
    return anb__cx(a.re - b.re, a.im - b.im);
}
static inline anb__complex anb__cmul(anb__complex a, anb__complex b) {
    return anb__cx(a.re * b.re - a.im * b.im, a.re * b.im + a.im * b.re);
}
static inline anb__complex anb__cscale(anb__complex a, double k) {
    return anb__cx(a.re * k, a.im * k);
}
static inline anb__complex anb__cneg(anb__complex a) { return anb__cx(-a.re, -a.im); }
static inline anb__complex anb__cconj(anb__complex a) { return anb__cx(a.re, -a.im); }
static inline double anb__cabs(anb__complex a) { return hypot(a.re, a.im); }
static inline bool anb__cis_zero(anb__complex a) { return a.re == 0 && a.im == 0; }
static inline bool anb__cis_finite(anb__complex a) { return isfinite(a.re) && isfinite(a.im); }

/* Smith's division (R. L. Smith 1962): no overflow in between. */
anb__complex anb__cdiv(anb__complex a, anb__complex b);
/* The root with a non-negative real part. */
anb__complex anb__csqrt(anb__complex a);
anb__complex anb__cexp(anb__complex a);
anb__complex anb__clog(anb__complex a);
anb__complex anb__cpow(anb__complex a, anb__complex b);

#endif
