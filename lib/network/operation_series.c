/* The operations in truncated series of u = sqrt(frequency), for limits at 0 Hz. */
#include <stddef.h>

#include "network/operation.h"

#define TWO_PI 6.283185307179586476925
#define LN10 2.302585092994045684018

typedef bool series_function(const anb__series *a, const anb__series *b, anb__series *out);

/* ---- looking at a series ------------------------------------------------------ */

static anb__series conjugate_of(const anb__series *a) {
    anb__series out = *a;
    for (int k = 0; k < out.terms; k++) out.c[k] = anb__cconj(out.c[k]);
    return out;
}

static bool is_real(const anb__series *a) {
    if (a->zero) return true;
    for (int k = 0; k < a->terms; k++)
        if (a->c[k].im != 0) return false;
    return true;
}

/* True where the series is one number; 0 terms count as known zeros. */
static bool is_constant(const anb__series *a, anb__complex *value) {
    *value = anb__cx(0, 0);
    if (a->zero) return true;
    if (a->order != 0) return false;
    *value = a->c[0];
    for (int k = 1; k < a->terms; k++)
        if (!anb__cis_zero(a->c[k])) return false;
    return true;
}

/* The sign that the real part has just above 0 Hz. */
static int sign_of(const anb__series *a) {
    if (a->zero) return 0;
    for (int k = 0; k < a->terms; k++)
        if (a->c[k].re != 0) return a->c[k].re > 0 ? 1 : -1;
    return 0;
}

/* The same of what follows the constant term. */
static int tendency_of(const anb__series *a) {
    if (a->zero) return 0;
    for (int k = 0; k < a->terms; k++)
        if (a->order + k > 0 && a->c[k].re != 0) return a->c[k].re > 0 ? 1 : -1;
    return 0;
}

static anb__complex constant_term(const anb__series *a) {
    return !a->zero && a->order == 0 ? a->c[0] : anb__cx(0, 0);
}

static bool scaled(const anb__series *a, double factor, anb__series *out) {
    *out = anb__series_scale(a, anb__cx(factor, 0));
    return true;
}

/* ---- arithmetic ----------------------------------------------------------------- */

static bool add(const anb__series *a, const anb__series *b, anb__series *out) {
    *out = anb__series_add(a, b);
    return true;
}

static bool subtract(const anb__series *a, const anb__series *b, anb__series *out) {
    *out = anb__series_sub(a, b);
    return true;
}

static bool multiply(const anb__series *a, const anb__series *b, anb__series *out) {
    *out = anb__series_mul(a, b);
    return true;
}

static bool divide(const anb__series *a, const anb__series *b, anb__series *out) {
    return anb__series_div(a, b, out);
}

static bool negate(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return scaled(a, -1, out);
}

static bool root(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    if (is_real(a) && sign_of(a) < 0) return false;
    return anb__series_sqrt(a, out);
}

/* a = lead u^order (1 + ...): the power of each factor by itself. */
static bool power_of_series(const anb__series *a, double exponent, anb__series *out) {
    double order = a->order * exponent;
    if (order != rint(order) || fabs(order) > 1000) return false;
    if (is_real(a) && sign_of(a) < 0 && exponent != rint(exponent)) return false;
    anb__series lead = anb__series_power(a->c[0], a->order), rest, logarithm;
    if (!anb__series_div(a, &lead, &rest) || !anb__series_log(&rest, &logarithm)) return false;
    logarithm = anb__series_scale(&logarithm, anb__cx(exponent, 0));
    if (!anb__series_exp(&logarithm, &rest)) return false;
    lead = anb__series_power(anb__cpow(a->c[0], anb__cx(exponent, 0)), (int)order);
    *out = anb__series_mul(&rest, &lead);
    return true;
}

static bool raise(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__complex exponent;
    if (is_constant(b, &exponent) && exponent.im == 0) {
        if (a->zero && exponent.re < 0) return false;
        *out = exponent.re == 0 ? anb__series_real(1) : *a;
        return a->zero || exponent.re == 0 || power_of_series(a, exponent.re, out);
    }
    anb__series logarithm;
    if ((is_real(a) && sign_of(a) < 0) || !anb__series_log(a, &logarithm)) return false;
    logarithm = anb__series_mul(&logarithm, b);
    return anb__series_exp(&logarithm, out);
}

/* ---- parts of a complex number ----------------------------------------------------- */

static bool conjugate(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    *out = conjugate_of(a);
    return true;
}

static bool real_part(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    anb__series other = conjugate_of(a), sum = anb__series_add(a, &other);
    return scaled(&sum, 0.5, out);
}

static bool imaginary_part(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    anb__series other = conjugate_of(a), difference = anb__series_sub(a, &other);
    *out = anb__series_scale(&difference, anb__cx(0, -0.5));
    return true;
}

static bool size(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    if (is_real(a)) return scaled(a, sign_of(a), out);
    anb__series other = conjugate_of(a), square = anb__series_mul(a, &other);
    return anb__series_sqrt(&square, out);
}

static bool argument(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    *out = anb__series_zero();
    if (a->zero) return true;
    anb__series lead = anb__series_power(a->c[0], a->order), rest, logarithm, turn;
    if (!anb__series_div(a, &lead, &rest) || !anb__series_log(&rest, &logarithm)) return false;
    imaginary_part(&logarithm, NULL, &turn);
    double angle = atan2(a->c[0].im, a->c[0].re);
    anb__series start = anb__series_real(angle);
    turn = anb__series_add(&turn, &start);
    return scaled(&turn, 1 / TWO_PI, out);
}

/* ---- exponentials and logarithms ----------------------------------------------------- */

static bool exponential(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return anb__series_exp(a, out);
}

static bool exponential_of_turns(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    anb__series radians = anb__series_scale(a, anb__cx(TWO_PI, 0));
    return anb__series_exp(&radians, out);
}

static bool logarithm(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    if (is_real(a) && sign_of(a) < 0) return false;
    return anb__series_log(a, out);
}

static bool decimal_logarithm(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series natural;
    return logarithm(a, b, &natural) && scaled(&natural, 1 / LN10, out);
}

static bool amplitude(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    anb__series exponent = anb__series_scale(a, anb__cx(LN10 / 20, 0));
    return is_real(a) && anb__series_exp(&exponent, out);
}

static bool decibel(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series natural;
    return is_real(a) && logarithm(a, b, &natural) && scaled(&natural, 20 / LN10, out);
}

/* ---- trigonometry ------------------------------------------------------------------------ */

/* sin(x + phase) from its Taylor coefficients at the constant term */
static bool shifted_sine(const anb__series *a, double phase, anb__series *out) {
    anb__complex t[ANB__SERIES_TERMS];
    double x = constant_term(a).re + phase, factor = 1;
    if (!is_real(a)) return false;
    for (int k = 0; k < ANB__SERIES_TERMS; k++) {
        double value = k % 2 ? cos(x) : sin(x);
        t[k] = anb__cx((k / 2 % 2 ? -value : value) * factor, 0);
        factor /= k + 1;
    }
    return anb__series_compose(a, t, out);
}

static bool sine(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return shifted_sine(a, 0, out);
}

static bool cosine(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return shifted_sine(a, TWO_PI / 4, out);
}

static bool tangent(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series s, c;
    return sine(a, b, &s) && cosine(a, b, &c) && anb__series_div(&s, &c, out);
}

static bool sine_of_turns(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series radians = anb__series_scale(a, anb__cx(TWO_PI, 0));
    return sine(&radians, b, out);
}

static bool cosine_of_turns(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series radians = anb__series_scale(a, anb__cx(TWO_PI, 0));
    return cosine(&radians, b, out);
}

static bool tangent_of_turns(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series radians = anb__series_scale(a, anb__cx(TWO_PI, 0));
    return tangent(&radians, b, out);
}

/* A function of known value at a's constant term x, from its derivative as a series in h around x. */
static bool integrate(const anb__series *a, double value, const anb__series *derivative, anb__series *out) {
    anb__complex t[ANB__SERIES_TERMS] = {{value / TWO_PI, 0}};
    for (int k = 1; k < ANB__SERIES_TERMS; k++) {
        int at = k - 1 - derivative->order;
        if (at >= 0 && at < derivative->terms) t[k] = anb__cscale(derivative->c[at], 1 / (k * TWO_PI));
    }
    return anb__series_compose(a, t, out);
}

static anb__series square_around(double x) {
    anb__series h = anb__series_power(anb__cx(1, 0), 1), start = anb__series_real(x);
    anb__series sum = anb__series_add(&start, &h);
    return anb__series_mul(&sum, &sum);
}

static bool arc_tangent(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    double x = constant_term(a).re;
    anb__series square = square_around(x), one = anb__series_real(1), below = anb__series_add(&one, &square);
    anb__series derivative;
    return is_real(a) && anb__series_div(&one, &below, &derivative) &&
           integrate(a, atan(x), &derivative, out);
}

static bool arc_of(const anb__series *a, double value, double sign, anb__series *out) {
    double x = constant_term(a).re;
    anb__series square = square_around(x), one = anb__series_real(sign), unity = anb__series_real(1);
    anb__series below = anb__series_sub(&unity, &square), edge, derivative;
    if (!is_real(a) || fabs(x) >= 1) return false;
    return anb__series_sqrt(&below, &edge) && anb__series_div(&one, &edge, &derivative) &&
           integrate(a, value, &derivative, out);
}

static bool arc_sine(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return arc_of(a, asin(constant_term(a).re), 1, out);
}

static bool arc_cosine(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return arc_of(a, acos(constant_term(a).re), -1, out);
}

static bool arc_tangent_of_two(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series turned = anb__series_scale(a, anb__cx(0, 1)), sum = anb__series_add(b, &turned);
    return is_real(a) && is_real(b) && argument(&sum, NULL, out);
}

/* ---- choosing and rounding ------------------------------------------------------------------ */

static bool smaller(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series difference = anb__series_sub(a, b);
    *out = sign_of(&difference) <= 0 ? *a : *b;
    return is_real(a) && is_real(b);
}

static bool larger(const anb__series *a, const anb__series *b, anb__series *out) {
    anb__series difference = anb__series_sub(a, b);
    *out = sign_of(&difference) >= 0 ? *a : *b;
    return is_real(a) && is_real(b);
}

/* A step function next to its limit at 0 Hz: `shift` makes it floor (0) or round (1/2). */
static bool step_down(const anb__series *a, double shift, anb__series *out) {
    if (!is_real(a) || (!a->zero && a->order < 0)) return false;
    double limit = constant_term(a).re + shift, step = floor(limit);
    if (limit == step && tendency_of(a) < 0) step -= 1;
    *out = anb__series_real(step);
    return true;
}

static bool rounded_down(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return step_down(a, 0, out);
}

static bool rounded_up(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    anb__series minus = anb__series_scale(a, anb__cx(-1, 0)), below;
    return step_down(&minus, 0, &below) && scaled(&below, -1, out);
}

static bool rounded(const anb__series *a, const anb__series *b, anb__series *out) {
    (void)b;
    return step_down(a, 0.5, out);
}

static series_function *const functions[ANB__OPERATION_COUNT] = {
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

bool anb__operate_series(anb__operation operation, const anb__series *a, const anb__series *b,
                         anb__series *out) {
    return functions[operation](a, b, out);
}
