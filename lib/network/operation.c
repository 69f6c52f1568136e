#include "network/operation.h"

#define TWO_PI 6.283185307179586476925

typedef anb__trouble operate_function(anb__complex a, anb__complex b, anb__complex *out);

static anb__trouble checked(anb__complex value, anb__complex *out) {
    if (!anb__cis_finite(value)) return ANB__NOT_FINITE;
    *out = value;
    return ANB__FINE;
}

static anb__trouble real(double value, anb__complex *out) { return checked(anb__cx(value, 0), out); }

/* ---- arithmetic ------------------------------------------------------------- */

static anb__trouble add(anb__complex a, anb__complex b, anb__complex *out) {
    return checked(anb__cadd(a, b), out);
}

static anb__trouble subtract(anb__complex a, anb__complex b, anb__complex *out) {
    return checked(anb__csub(a, b), out);
}

static anb__trouble multiply(anb__complex a, anb__complex b, anb__complex *out) {
    return checked(anb__cmul(a, b), out);
}

static anb__trouble divide(anb__complex a, anb__complex b, anb__complex *out) {
    if (anb__cis_zero(b)) return ANB__BY_ZERO;
    return checked(anb__cdiv(a, b), out);
}

static anb__trouble raise(anb__complex a, anb__complex b, anb__complex *out) {
    bool whole = b.im == 0 && b.re == floor(b.re);
    if (anb__cis_zero(a) && b.re < 0) return ANB__BY_ZERO;
    if (a.im == 0 && a.re < 0 && !whole) return ANB__NEGATIVE_ROOT;
    return checked(anb__cpow(a, b), out);
}

static anb__trouble negate(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    *out = anb__cneg(a);
    if (a.im == 0) out->im = 0;
    return ANB__FINE;
}

static anb__trouble root(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (a.im == 0 && a.re < 0) return ANB__NEGATIVE_ROOT;
    return a.im == 0 ? real(sqrt(a.re), out) : checked(anb__csqrt(a), out);
}

/* ---- parts of a complex number ------------------------------------------------ */

static anb__trouble size(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return real(a.im == 0 ? fabs(a.re) : anb__cabs(a), out);
}

static anb__trouble real_part(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return real(a.re, out);
}

static anb__trouble imaginary_part(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return real(a.im, out);
}

static anb__trouble conjugate(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return checked(anb__cx(a.re, a.im == 0 ? 0 : -a.im), out);
}

static anb__trouble argument(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return real(atan2(a.im, a.re) / TWO_PI, out);
}

/* ---- exponentials and logarithms ------------------------------------------------ */

/* sine and cosine of an angle in turns, exact at quarters of a turn */
static void sine_and_cosine(double turns, double *sine, double *cosine) {
    double quarters = rint(4 * turns);
    double rest = (turns - quarters / 4) * TWO_PI;
    double s = sin(rest), c = cos(rest);
    switch ((int)fmod(quarters, 4) & 3) {
    case 0: *sine = s, *cosine = c; break;
    case 1: *sine = c, *cosine = -s; break;
    case 2: *sine = -s, *cosine = -c; break;
    default: *sine = -c, *cosine = s; break;
    }
}

static anb__trouble exponential(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return checked(anb__cexp(a), out);
}

static anb__trouble exponential_of_turns(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (a.re != 0) return ANB__NOT_REAL;
    sine_and_cosine(a.im, &out->im, &out->re);
    return ANB__FINE;
}

static anb__trouble logarithm(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (anb__cis_zero(a)) return ANB__LOGARITHM_OF_ZERO;
    if (a.im == 0 && a.re < 0) return ANB__NEGATIVE_LOGARITHM;
    return a.im == 0 ? real(log(a.re), out) : checked(anb__clog(a), out);
}

static anb__trouble decimal_logarithm(anb__complex a, anb__complex b, anb__complex *out) {
    anb__trouble trouble = logarithm(a, b, out);
    if (trouble != ANB__FINE) return trouble;
    return a.im == 0 ? real(log10(a.re), out) : checked(anb__cscale(*out, 1 / log(10)), out);
}

static anb__trouble amplitude(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (a.im != 0) return ANB__NOT_REAL;
    return real(pow(10, a.re / 20), out);
}

static anb__trouble decibel(anb__complex a, anb__complex b, anb__complex *out) {
    if (a.im != 0) return ANB__NOT_REAL;
    anb__trouble trouble = decimal_logarithm(a, b, out);
    return trouble == ANB__FINE ? real(20 * out->re, out) : trouble;
}

/* ---- trigonometry ----------------------------------------------------------------- */

static anb__trouble sine(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(sin(a.re), out);
}

static anb__trouble cosine(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(cos(a.re), out);
}

static anb__trouble tangent(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(tan(a.re), out);
}

static anb__trouble sine_of_turns(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    double s, c;
    if (a.im != 0) return ANB__NOT_REAL;
    sine_and_cosine(a.re, &s, &c);
    return real(s, out);
}

static anb__trouble cosine_of_turns(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    double s, c;
    if (a.im != 0) return ANB__NOT_REAL;
    sine_and_cosine(a.re, &s, &c);
    return real(c, out);
}

static anb__trouble tangent_of_turns(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    double s, c;
    if (a.im != 0) return ANB__NOT_REAL;
    sine_and_cosine(a.re, &s, &c);
    return real(s / c, out);
}

static anb__trouble arc_sine(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (a.im != 0) return ANB__NOT_REAL;
    return fabs(a.re) > 1 ? ANB__OUTSIDE_ONE : real(asin(a.re) / TWO_PI, out);
}

static anb__trouble arc_cosine(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    if (a.im != 0) return ANB__NOT_REAL;
    return fabs(a.re) > 1 ? ANB__OUTSIDE_ONE : real(acos(a.re) / TWO_PI, out);
}

static anb__trouble arc_tangent(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(atan(a.re) / TWO_PI, out);
}

static anb__trouble arc_tangent_of_two(anb__complex a, anb__complex b, anb__complex *out) {
    if (a.im != 0 || b.im != 0) return ANB__NOT_REAL;
    return real(atan2(a.re, b.re) / TWO_PI, out);
}

/* ---- choosing and rounding ---------------------------------------------------------- */

static anb__trouble smaller(anb__complex a, anb__complex b, anb__complex *out) {
    if (a.im != 0 || b.im != 0) return ANB__NOT_REAL;
    return real(a.re < b.re ? a.re : b.re, out);
}

static anb__trouble larger(anb__complex a, anb__complex b, anb__complex *out) {
    if (a.im != 0 || b.im != 0) return ANB__NOT_REAL;
    return real(a.re > b.re ? a.re : b.re, out);
}

static anb__trouble rounded(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(round(a.re), out);
}

static anb__trouble rounded_down(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(floor(a.re), out);
}

static anb__trouble rounded_up(anb__complex a, anb__complex b, anb__complex *out) {
    (void)b;
    return a.im != 0 ? ANB__NOT_REAL : real(ceil(a.re), out);
}

static operate_function *const functions[ANB__OPERATION_COUNT] = {
    [ANB__ADD] = add,
    [ANB__SUBTRACT] = subtract,
    [ANB__MULTIPLY] = multiply,
    [ANB__DIVIDE] = divide,
    [ANB__RAISE] = raise,
    [ANB__NEGATE] = negate,
    [ANB__SQRT] = root,
    [ANB__ABS] = size,
    [ANB__EXP] = exponential,
    [ANB__EXP_TURNS] = exponential_of_turns,
    [ANB__LN] = logarithm,
    [ANB__LOG10] = decimal_logarithm,
    [ANB__SIN] = sine,
    [ANB__COS] = cosine,
    [ANB__TAN] = tangent,
    [ANB__SIN_TURNS] = sine_of_turns,
    [ANB__COS_TURNS] = cosine_of_turns,
    [ANB__TAN_TURNS] = tangent_of_turns,
    [ANB__ASIN] = arc_sine,
    [ANB__ACOS] = arc_cosine,
    [ANB__ATAN] = arc_tangent,
    [ANB__ATAN2] = arc_tangent_of_two,
    [ANB__MIN] = smaller,
    [ANB__MAX] = larger,
    [ANB__ROUND] = rounded,
    [ANB__FLOOR] = rounded_down,
    [ANB__CEIL] = rounded_up,
    [ANB__REAL] = real_part,
    [ANB__IMAG] = imaginary_part,
    [ANB__CONJ] = conjugate,
    [ANB__ARG] = argument,
    [ANB__AMPLITUDE] = amplitude,
    [ANB__DECIBEL] = decibel,
};

anb__trouble anb__operate(anb__operation operation, anb__complex a, anb__complex b, anb__complex *out) {
    return functions[operation](a, b, out);
}
