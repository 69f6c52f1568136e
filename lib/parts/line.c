/* Transmission lines with a real impedance: two-ports and stubs (docs/theory.md, eq. 10 to 12). */
#include "parts/wave.h"

static const anb__complex one = {1, 0};

/* Z sinh(x/2) and sinh(x/2) / Z, with Z the argument `name`. */
static bool with_impedance(const anb__placed *part, anb__argument_name name, const anb__point *point,
                           const anb__series *sinh_half, anb__series *ys, anb__series *zs) {
    anb__series z;
    if (!anb__argument_series(part, name, point, 0, &z)) return false;
    *zs = anb__series_mul(sinh_half, &z);
    return anb__series_div(sinh_half, &z, ys);
}

/* ---- line ----------------------------------------------------------------------- */

static bool line_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series s, c, ys, zs;
    if (!anb__half_wave(part, ANB__ARG_LENGTH, point, &s, &c) ||
        !with_impedance(part, ANB__ARG_Z, point, &s, &ys, &zs))
        return false;
    anb__equations_clear(out, 2);
    anb__line_rows(out, 0, 0, 1, 1, &ys, &zs, &c);
    return true;
}

static void line_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__wave wave = anb__wave_of(part, ANB__ARG_LENGTH, 1);
    double y = 1 / anb__constant(part, ANB__ARG_Z, 0).re;
    anb__stamp_wave(stamper, 0, 0, &wave, ANB__COTH, y);
    anb__stamp_wave(stamper, 1, 0, &wave, ANB__CSCH, -y);
    anb__stamp_wave(stamper, 1, 1, &wave, ANB__COTH, y);
}

const anb__family anb__family_line = {line_equations, line_stamps, true};

/* ---- stubs: one branch whose impedance is that of the stub -------------------------- */

/* From the two equations of the line with nothing (open) or ground (shorted) at its end:
 * open: v sinh x = Z i cosh x; shorted: v cosh x = Z i sinh x, with the functions of the whole
 * length from those of its half: sinh x = 2 s c, cosh x = c^2 + s^2. */
static bool stub_equations(const anb__placed *part, const anb__point *point, bool open, anb__equations *out) {
    anb__series s, c, z, sinh_x, cosh_x, square;
    if (!anb__half_wave(part, ANB__ARG_LENGTH, point, &s, &c) ||
        !anb__argument_series(part, ANB__ARG_Z, point, 0, &z))
        return false;
    sinh_x = anb__series_mul(&s, &c);
    sinh_x = anb__series_scale(&sinh_x, anb__cx(2, 0));
    cosh_x = anb__series_mul(&c, &c);
    square = anb__series_mul(&s, &s);
    cosh_x = anb__series_add(&cosh_x, &square);
    anb__equations_clear(out, 1);
    *anb__a(out, 0, 0) = open ? sinh_x : cosh_x;
    *anb__b(out, 0, 0) = anb__series_mul(open ? &cosh_x : &sinh_x, &z);
    *anb__b(out, 0, 0) = anb__series_scale(anb__b(out, 0, 0), anb__cx(-1, 0));
    return true;
}

static void stub_stamps(const anb__placed *part, anb__wave_function function, anb__stamper *stamper) {
    anb__wave wave = anb__wave_of(part, ANB__ARG_LENGTH, 1);
    anb__stamp_wave(stamper, 0, 0, &wave, function, 1 / anb__constant(part, ANB__ARG_Z, 0).re);
}

static bool open_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    return stub_equations(part, point, true, out);
}
static bool shorted_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    return stub_equations(part, point, false, out);
}
static void open_stamps(const anb__placed *part, anb__stamper *stamper) {
    stub_stamps(part, ANB__TANH, stamper);
}
static void shorted_stamps(const anb__placed *part, anb__stamper *stamper) {
    stub_stamps(part, ANB__COTH, stamper);
}

const anb__family anb__family_open_stub = {open_equations, open_stamps, true};
const anb__family anb__family_shorted_stub = {shorted_equations, shorted_stamps, true};

/* ---- coupled lines: two modes, each a line between sums or differences ----------------- */

static anb__argument_name length_of(const anb__placed *part, anb__argument_name own) {
    return anb__has(part, own) ? own : ANB__ARG_LENGTH;
}

/* The rows of one mode: line voltages v(a) + sign v(b), currents alike. Branches a1, a2, b1, b2. */
static bool mode_rows(const anb__placed *part, const anb__point *point, anb__argument_name impedance,
                      anb__argument_name length, int row, double sign, anb__equations *out) {
    anb__series s, c, ys, zs;
    if (!anb__half_wave(part, length_of(part, length), point, &s, &c) ||
        !with_impedance(part, impedance, point, &s, &ys, &zs))
        return false;
    anb__line_rows(out, row, 0, 1, 1, &ys, &zs, &c);
    anb__line_rows(out, row, 2, 3, sign, &ys, &zs, &c);
    return true;
}

static bool coupled_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__equations_clear(out, 4);
    return mode_rows(part, point, ANB__ARG_EVEN, ANB__ARG_EVEN_LENGTH, 0, 1, out) &&
           mode_rows(part, point, ANB__ARG_ODD, ANB__ARG_ODD_LENGTH, 2, -1, out);
}

static void mode_stamps(const anb__placed *part, anb__argument_name impedance, anb__argument_name length,
                        double sign, anb__stamper *stamper) {
    anb__wave wave = anb__wave_of(part, length_of(part, length), 1);
    double y = 0.5 / anb__constant(part, impedance, 0).re;
    for (int row = 0; row < 4; row++)
        for (int column = 0; column <= row; column++) {
            bool same_end = row % 2 == column % 2, same_line = row / 2 == column / 2;
            double factor = (same_end ? y : -y) * (same_line ? 1 : sign);
            anb__stamp_wave(stamper, row, column, &wave, same_end ? ANB__COTH : ANB__CSCH, factor);
        }
}

static void coupled_stamps(const anb__placed *part, anb__stamper *stamper) {
    mode_stamps(part, ANB__ARG_EVEN, ANB__ARG_EVEN_LENGTH, 1, stamper);
    mode_stamps(part, ANB__ARG_ODD, ANB__ARG_ODD_LENGTH, -1, stamper);
}

const anb__family anb__family_coupled_lines = {coupled_equations, coupled_stamps, true};

/* ---- a line from its constants ---------------------------------------------------------- */

/* sinh(x/2)/x and cosh(x/2) from w = (x/2)^2, both even in x: their power series near 0, and
 * through the root elsewhere. Times e^-|Re x/2| so that they stay finite. */
static bool even_functions(const anb__series *w, anb__series *sinh_over_x, anb__series *cosh_half) {
    bool small = w->zero || w->order > 0 || anb__cabs(w->c[0]) < 0.25;
    if (small && (w->zero || w->order >= 0)) {
        /* a term w^k has the coefficients 1/(2k)! and 0.5/(2k+1)! */
        anb__series power = anb__series_constant(one);
        *sinh_over_x = *cosh_half = anb__series_zero();
        double factorial = 1;
        for (int k = 0; k < ANB__SERIES_TERMS; k++) {
            anb__series term = anb__series_scale(&power, anb__cx(1 / factorial, 0));
            *cosh_half = anb__series_add(cosh_half, &term);
            term = anb__series_scale(&power, anb__cx(0.5 / (factorial * (2 * k + 1)), 0));
            *sinh_over_x = anb__series_add(sinh_over_x, &term);
            factorial *= (2 * k + 1) * (2 * k + 2);
            power = anb__series_mul(&power, w);
        }
        return true;
    }
    anb__series half, up, down, minus;
    if (!anb__series_sqrt(w, &half)) return false;
    double size = half.order == 0 ? fabs(half.c[0].re) : 0;
    minus = anb__series_scale(&half, anb__cx(-1, 0));
    anb__series shift = anb__series_real(-size);
    anb__series rising = anb__series_add(&half, &shift), falling = anb__series_add(&minus, &shift);
    if (!anb__series_exp(&rising, &up) || !anb__series_exp(&falling, &down)) return false;
    *cosh_half = anb__series_add(&up, &down);
    *cosh_half = anb__series_scale(cosh_half, anb__cx(0.5, 0));
    *sinh_over_x = anb__series_sub(&up, &down);
    *sinh_over_x = anb__series_scale(sinh_over_x, anb__cx(0.25, 0));
    return anb__series_div(sinh_over_x, &half, sinh_over_x);
}

/* v = r + s l and the like, for the whole length. */
static bool per_length(const anb__placed *part, anb__argument_name constant, anb__argument_name slope,
                       const anb__series *length, const anb__point *point, anb__series *out) {
    anb__series first, second;
    if (!anb__argument_series(part, constant, point, 0, &first) ||
        !anb__argument_series(part, slope, point, 0, &second))
        return false;
    second = anb__series_mul(&second, &point->s);
    *out = anb__series_add(&first, &second);
    *out = anb__series_mul(out, length);
    return true;
}

static bool constants_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series length, z, y, w, s, c;
    if (!anb__argument_series(part, ANB__ARG_LENGTH, point, 0, &length) ||
        !per_length(part, ANB__ARG_R, ANB__ARG_L, &length, point, &z) ||
        !per_length(part, ANB__ARG_G, ANB__ARG_C, &length, point, &y))
        return false;
    w = anb__series_mul(&z, &y);
    w = anb__series_scale(&w, anb__cx(0.25, 0));
    if (!even_functions(&w, &s, &c)) return false;
    y = anb__series_mul(&y, &s);
    z = anb__series_mul(&z, &s);
    anb__equations_clear(out, 2);
    anb__line_rows(out, 0, 0, 1, 1, &y, &z, &c);
    return true;
}

static void constants_stamps(const anb__placed *part, anb__stamper *stamper) {
    double length = anb__constant(part, ANB__ARG_LENGTH, 0).re;
    anb__stamp_line_constants(stamper,
                              &(anb__line_model){.r = length * anb__constant(part, ANB__ARG_R, 0).re,
                                                 .l = length * anb__constant(part, ANB__ARG_L, 0).re,
                                                 .g = length * anb__constant(part, ANB__ARG_G, 0).re,
                                                 .c = length * anb__constant(part, ANB__ARG_C, 0).re});
}

const anb__family anb__family_line_constants = {constants_equations, constants_stamps, true};
