#include "base/complex.h"

anb__complex anb__cdiv(anb__complex a, anb__complex b) {
    if (fabs(b.re) >= fabs(b.im)) {
        double ratio = b.im / b.re, below = b.re + b.im * ratio;
        return anb__cx((a.re + a.im * ratio) / below, (a.im - a.re * ratio) / below);
    }
    double ratio = b.re / b.im, below = b.re * ratio + b.im;
    return anb__cx((a.re * ratio + a.im) / below, (a.im * ratio - a.re) / below);
}

anb__complex anb__csqrt(anb__complex a) {
    if (anb__cis_zero(a)) return anb__cx(0, a.im);
    double size = anb__cabs(a);
    double root = sqrt(0.5 * (size + fabs(a.re)));
    double other = 0.5 * a.im / root;
    if (a.re >= 0) return anb__cx(root, other);
    return anb__cx(fabs(other), copysign(root, a.im));
}

anb__complex anb__cexp(anb__complex a) {
    double size = exp(a.re);
    if (a.im == 0) return anb__cx(size, a.im);
    return anb__cx(size * cos(a.im), size * sin(a.im));
}

anb__complex anb__clog(anb__complex a) { return anb__cx(log(anb__cabs(a)), atan2(a.im, a.re)); }

static anb__complex whole_power(anb__complex a, double exponent) {
    unsigned n = (unsigned)fabs(exponent);
    anb__complex out = anb__cx(1, 0);
    for (anb__complex square = a; n; n >>= 1, square = anb__cmul(square, square))
        if (n & 1) out = anb__cmul(out, square);
    return exponent < 0 ? anb__cdiv(anb__cx(1, 0), out) : out;
}

enum { LARGEST_WHOLE_POWER = 64 }; /* beyond it, logarithms are as exact */

anb__complex anb__cpow(anb__complex a, anb__complex b) {
    bool whole = b.im == 0 && b.re == floor(b.re) && fabs(b.re) <= LARGEST_WHOLE_POWER;
    if (a.im == 0 && b.im == 0 && (a.re >= 0 || b.re == floor(b.re))) return anb__cx(pow(a.re, b.re), 0);
    if (whole) return whole_power(a, b.re);
    if (anb__cis_zero(a)) return a;
    return anb__cexp(anb__cmul(b, anb__clog(a)));
}
