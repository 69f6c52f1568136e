#include "parts/wave.h"

#define TWO_PI 6.283185307179586476925
#define PI 3.141592653589793238463
#define NEPER_PER_DB 0.1151292546497022842009 /* ln(10)/20 */
#define SPEED_OF_LIGHT 299792458.0            /* m/s, exact: SI Brochure, 9th edition (2019) */

/* sqrt(permittivity), or 1/velocity_factor: how much slower than light. */
static long double slowness(const anb__placed *part) {
    if (anb__has(part, ANB__ARG_VELOCITY_FACTOR))
        return 1 / (long double)anb__constant(part, ANB__ARG_VELOCITY_FACTOR, 1).re;
    return sqrtl((long double)anb__constant(part, ANB__ARG_PERMITTIVITY, 1).re);
}

long double anb__turns_per_hertz(const anb__placed *part, anb__argument_name name) {
    const anb__argument *length = anb__argument_of(part, name);
    if (length->has_at) return (long double)length->value.re / length->at_hz;
    if (length->dimension.metre) return length->value.re * slowness(part) / SPEED_OF_LIGHT;
    return length->value.re;
}

/* Nepers of the whole length for the part's loss, in dB or dB per metre. */
static double loss_nepers(const anb__placed *part, anb__argument_name length) {
    const anb__argument *loss = anb__argument_of(part, ANB__ARG_LOSS);
    double metres = loss->dimension.metre ? anb__constant(part, length, 0).re : 1;
    return NEPER_PER_DB * loss->value.re * metres;
}

anb__wave anb__wave_of(const anb__placed *part, anb__argument_name name, double scale) {
    long double turns = anb__turns_per_hertz(part, name) * scale;
    anb__wave wave = {.turns_hi = (double)turns};
    wave.turns_lo = (double)(turns - wave.turns_hi);
    const anb__argument *loss = anb__argument_of(part, ANB__ARG_LOSS);
    if (loss && loss->has_at)
        wave.root = scale * loss_nepers(part, name) / sqrt(loss->at_hz);
    else if (loss)
        wave.constant = scale * loss_nepers(part, name);
    wave.linear = PI * fabs(wave.turns_hi) * anb__constant(part, ANB__ARG_LOSS_TANGENT, 0).re;
    return wave;
}

/* ---- half the exponent, at a point -------------------------------------------- */

/* The phase in turns, reduced to -1/2 .. 1/2: the product is exact to twice the digits of a
 * double, so that a line of a million waves is as right as a short one. */
static double reduced_turns(const anb__wave *wave, double hz) {
    double product = hz * wave->turns_hi;
    double rest = fma(hz, wave->turns_hi, -product) + hz * wave->turns_lo;
    return product - rint(product) + rest;
}

static void half_wave_at(const anb__wave *half, double hz, anb__complex *sinh_half, anb__complex *cosh_half) {
    double loss = half->constant + half->root * sqrt(hz) + half->linear * hz;
    double fall = expm1(-2 * fabs(loss)); /* e^-2|loss| - 1 */
    double sinh_loss = copysign(-0.5 * fall, loss), cosh_loss = 1 + 0.5 * fall;
    double quarters = 4 * reduced_turns(half, hz), whole = rint(quarters);
    double angle = (quarters - whole) * (PI / 2), sine = sin(angle), cosine = cos(angle);
    int quadrant = (int)whole & 3;
    double s = quadrant == 0 ? sine : quadrant == 1 ? cosine : quadrant == 2 ? -sine : -cosine;
    double c = quadrant == 0 ? cosine : quadrant == 1 ? -sine : quadrant == 2 ? -cosine : sine;
    *sinh_half = anb__cx(sinh_loss * c, cosh_loss * s);
    *cosh_half = anb__cx(cosh_loss * c, sinh_loss * s);
}

/* ---- half the exponent, in series or with values that depend on the frequency ------- */

static bool turns_series(const anb__placed *part, anb__argument_name name, const anb__point *point,
                         anb__series *out) {
    const anb__argument *length = anb__argument_of(part, name);
    anb__series factor;
    if (!anb__argument_series(part, name, point, 0, out)) return false;
    *out = anb__series_mul(out, &point->frequency);
    if (length->has_at) *out = anb__series_scale(out, anb__cx(1 / length->at_hz, 0));
    if (length->has_at || !length->dimension.metre) return true;
    *out = anb__series_scale(out, anb__cx(1 / SPEED_OF_LIGHT, 0));
    if (anb__has(part, ANB__ARG_VELOCITY_FACTOR))
        return anb__argument_series(part, ANB__ARG_VELOCITY_FACTOR, point, 1, &factor) &&
               anb__series_div(out, &factor, out);
    if (!anb__argument_series(part, ANB__ARG_PERMITTIVITY, point, 1, &factor) ||
        !anb__series_sqrt(&factor, &factor))
        return false;
    *out = anb__series_mul(out, &factor);
    return true;
}

static bool loss_series(const anb__placed *part, anb__argument_name length, const anb__series *turns,
                        const anb__point *point, anb__series *out) {
    const anb__argument *loss = anb__argument_of(part, ANB__ARG_LOSS);
    anb__series metres, tangent;
    if (!anb__argument_series(part, ANB__ARG_LOSS, point, 0, out) ||
        !anb__argument_series(part, length, point, 0, &metres) ||
        !anb__argument_series(part, ANB__ARG_LOSS_TANGENT, point, 0, &tangent))
        return false;
    *out = anb__series_scale(out, anb__cx(NEPER_PER_DB, 0));
    if (loss && loss->dimension.metre) *out = anb__series_mul(out, &metres);
    if (loss && loss->has_at) {
        anb__series ratio = anb__root_ratio(loss, point);
        *out = anb__series_mul(out, &ratio);
    }
    tangent = anb__series_mul(&tangent, turns);
    double sign = !turns->zero && turns->c[0].re < 0 ? -PI : PI;
    tangent = anb__series_scale(&tangent, anb__cx(sign, 0));
    *out = anb__series_add(out, &tangent);
    return true;
}

static bool half_wave_series(const anb__placed *part, anb__argument_name name, const anb__point *point,
                             anb__series *sinh_half, anb__series *cosh_half) {
    anb__series turns, x, up, down;
    if (!turns_series(part, name, point, &turns) || !loss_series(part, name, &turns, point, &x)) return false;
    anb__series phase = anb__series_scale(&turns, anb__cx(0, TWO_PI));
    x = anb__series_add(&x, &phase);
    x = anb__series_scale(&x, anb__cx(0.5, 0));
    double size = x.zero || x.order != 0 ? 0 : fabs(x.c[0].re);
    if (!anb__series_exp(&x, &up)) return false;
    x = anb__series_scale(&x, anb__cx(-1, 0));
    if (!anb__series_exp(&x, &down)) return false;
    anb__complex factor = anb__cx(0.5 * exp(-size), 0);
    *sinh_half = anb__series_sub(&up, &down);
    *cosh_half = anb__series_add(&up, &down);
    *sinh_half = anb__series_scale(sinh_half, factor);
    *cosh_half = anb__series_scale(cosh_half, factor);
    return true;
}

bool anb__half_wave(const anb__placed *part, anb__argument_name name, const anb__point *point,
                    anb__series *sinh_half, anb__series *cosh_half) {
    if (point->hz == 0) return half_wave_series(part, name, point, sinh_half, cosh_half);
    anb__placed constant = *part;
    anb__argument values[ANB__ARG_COUNT];
    constant.arguments = values;
    for (int i = 0; i < part->argument_count; i++) {
        values[i] = part->arguments[i];
        if (values[i].program && !anb__program_value(values[i].program, point->hz, &values[i].value))
            return false;
    }
    anb__wave half = anb__wave_of(&constant, name, 0.5);
    anb__complex s, c;
    half_wave_at(&half, point->hz, &s, &c);
    *sinh_half = anb__series_value(s);
    *cosh_half = anb__series_value(c);
    return anb__cis_finite(s) && anb__cis_finite(c);
}

void anb__line_rows(anb__equations *out, int row, int first, int second, double weight, const anb__series *ys,
                    const anb__series *zs, const anb__series *c) {
    anb__complex plus = anb__cx(weight, 0), minus = anb__cx(-weight, 0);
    *anb__a(out, row, first) = *anb__a(out, row, second) = anb__series_scale(ys, plus);
    *anb__b(out, row, first) = *anb__b(out, row, second) = anb__series_scale(c, minus);
    *anb__a(out, row + 1, first) = anb__series_scale(c, plus);
    *anb__a(out, row + 1, second) = anb__series_scale(c, minus);
    *anb__b(out, row + 1, first) = anb__series_scale(zs, minus);
    *anb__b(out, row + 1, second) = anb__series_scale(zs, plus);
}
