/* Parts whose equations are constant: transformers, blocks with an S-matrix of their own, controlled
 * sources; and coupled inductors (docs/theory.md, eq. 13 to 18). */
#include "parts/stamp.h"

#define TWO_PI 6.283185307179586476925
#define NEPER_PER_DB 0.1151292546497022842009 /* ln(10)/20 */

static const anb__complex one = {1, 0}, zero = {0, 0};

static void stamp_constant(anb__stamper *stamper, int row, int column, anb__complex y) {
    anb__stamp_terms(stamper, row, column, y, zero, zero);
}

/* ---- transformer: v2 = n v1, i1 = -n i2 ------------------------------------------- */

static bool transformer_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series n, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_N, point, 0, &n)) return false;
    anb__equations_clear(out, 2);
    *anb__a(out, 0, 0) = n;
    *anb__a(out, 0, 1) = anb__series_scale(&unity, anb__cx(-1, 0));
    *anb__b(out, 1, 0) = unity;
    *anb__b(out, 1, 1) = n;
    return true;
}

/* With i2 as an unknown of its own; its row is v2 - n v1 = 0. */
static void stamp_turns(anb__stamper *stamper, double n) {
    int current = anb__stamp_unknown(stamper);
    stamp_constant(stamper, current, 0, anb__cx(-n, 0));
    stamp_constant(stamper, current, 1, one);
}

static void transformer_stamps(const anb__placed *part, anb__stamper *stamper) {
    stamp_turns(stamper, anb__constant(part, ANB__ARG_N, 0).re);
}

const anb__family anb__family_transformer = {transformer_equations, transformer_stamps, true};

/* ---- coupled inductors: v = s L i ----------------------------------------------------- */

static bool coils_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series l1, l2, k, m;
    if (!anb__argument_series(part, ANB__ARG_L1, point, 0, &l1) ||
        !anb__argument_series(part, ANB__ARG_L2, point, 0, &l2) ||
        !anb__argument_series(part, ANB__ARG_K, point, 0, &k))
        return false;
    m = anb__series_mul(&l1, &l2);
    if (!anb__series_sqrt(&m, &m)) return false;
    m = anb__series_mul(&m, &k);
    anb__equations_clear(out, 2);
    const anb__series *values[4] = {&l1, &m, &m, &l2};
    anb__series minus_s = anb__series_scale(&point->s, anb__cx(-1, 0));
    for (int i = 0; i < 4; i++) out->b[i] = anb__series_mul(values[i], &minus_s);
    *anb__a(out, 0, 0) = *anb__a(out, 1, 1) = anb__series_constant(one);
    return true;
}

enum { TIGHT = 1000 }; /* beyond 1 - k^2 = 1/TIGHT the inverse of L loses too many digits */

static void coils_stamps(const anb__placed *part, anb__stamper *stamper) {
    double l1 = anb__constant(part, ANB__ARG_L1, 0).re, l2 = anb__constant(part, ANB__ARG_L2, 0).re;
    double k = anb__constant(part, ANB__ARG_K, 0).re, m = k * sqrt(l1 * l2);
    double leakage = (1 - k) * (1 + k), determinant = l1 * l2 * leakage;
    if (determinant != 0 && leakage * TIGHT > 1) {
        anb__stamp_terms(stamper, 0, 0, zero, zero, anb__cx(l2 / determinant, 0));
        anb__stamp_terms(stamper, 1, 0, zero, zero, anb__cx(-m / determinant, 0));
        anb__stamp_terms(stamper, 1, 1, zero, zero, anb__cx(l1 / determinant, 0));
        return;
    }
    double turn = part->negated ? -1 : 1;
    int first = anb__stamp_unknown(stamper), second = anb__stamp_unknown(stamper);
    stamp_constant(stamper, first, 0, one);
    stamp_constant(stamper, second, 1, one);
    anb__stamp_terms(stamper, first, first, zero, anb__cx(-l1 * turn, 0), zero);
    anb__stamp_terms(stamper, second, first, zero, anb__cx(-m * turn, 0), zero);
    anb__stamp_terms(stamper, second, second, zero, anb__cx(-l2 * turn, 0), zero);
}

const anb__family anb__family_coupled_inductors = {coils_equations, coils_stamps, true};

/* ---- blocks with a constant S-matrix: (v - z i) = S (v + z i) ----------------------------- */

/* A = 1 - S, B = -z (1 + S). */
static bool scattering_equations(const anb__placed *part, const anb__point *point, const anb__series *s,
                                 int size, anb__equations *out) {
    anb__series z, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_Z, point, 50, &z)) return false;
    anb__series minus_z = anb__series_scale(&z, anb__cx(-1, 0));
    anb__equations_clear(out, size);
    for (int k = 0; k < size * size; k++) {
        anb__series identity = k % (size + 1) ? anb__series_zero() : unity;
        out->a[k] = anb__series_sub(&identity, &s[k]);
        out->b[k] = anb__series_add(&identity, &s[k]);
        out->b[k] = anb__series_mul(&out->b[k], &minus_z);
    }
    return true;
}

/* A matched reciprocal block that passes t = e^-x both ways is a line of the exponent x, and
 * has its admittance; at x = 0 and at half a turn it is a transformer instead. */
static void stamp_matched(const anb__placed *part, anb__complex x, anb__stamper *stamper) {
    anb__complex up = anb__cexp(x), down = anb__cexp(anb__cneg(x));
    anb__complex sinh_x = anb__cscale(anb__csub(up, down), 0.5),
                 cosh_x = anb__cscale(anb__cadd(up, down), 0.5);
    if (anb__cabs(sinh_x) < 1e-9 * anb__cabs(cosh_x)) {
        stamp_turns(stamper, cosh_x.re < 0 ? -1 : 1);
        return;
    }
    anb__complex y = anb__cdiv(one, anb__cmul(sinh_x, anb__constant(part, ANB__ARG_Z, 50)));
    stamp_constant(stamper, 0, 0, anb__cmul(cosh_x, y));
    stamp_constant(stamper, 1, 0, anb__cneg(y));
    stamp_constant(stamper, 1, 1, anb__cmul(cosh_x, y));
}

static bool matched_equations(const anb__placed *part, const anb__point *point, const anb__series *t,
                              anb__equations *out) {
    anb__series nothing = anb__series_zero(), s[4] = {nothing, *t, *t, nothing};
    return scattering_equations(part, point, s, 2, out);
}

static bool attenuator_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series x, t;
    if (!anb__argument_series(part, ANB__ARG_LOSS, point, 0, &x)) return false;
    x = anb__series_scale(&x, anb__cx(-NEPER_PER_DB, 0));
    return anb__series_exp(&x, &t) && matched_equations(part, point, &t, out);
}

static void attenuator_stamps(const anb__placed *part, anb__stamper *stamper) {
    stamp_matched(part, anb__cx(NEPER_PER_DB * anb__constant(part, ANB__ARG_LOSS, 0).re, 0), stamper);
}

const anb__family anb__family_attenuator = {attenuator_equations, attenuator_stamps, true};

static bool phase_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series x, t;
    if (!anb__argument_series(part, ANB__ARG_PHASE, point, 0, &x)) return false;
    x = anb__series_scale(&x, anb__cx(0, -TWO_PI));
    return anb__series_exp(&x, &t) && matched_equations(part, point, &t, out);
}

static void phase_stamps(const anb__placed *part, anb__stamper *stamper) {
    stamp_matched(part, anb__cx(0, TWO_PI * anb__constant(part, ANB__ARG_PHASE, 0).re), stamper);
}

const anb__family anb__family_phase_shift = {phase_equations, phase_stamps, true};

/* Constant admittance of a block whose ports pass their waves on in a ring or one way only. */

static bool isolator_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series s[4] = {anb__series_zero(), anb__series_zero(), anb__series_constant(one),
                        anb__series_zero()};
    return scattering_equations(part, point, s, 2, out);
}

/* i1 = v1/z, i2 = (v2 - 2 v1)/z. */
static void isolator_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__complex y = anb__cdiv(one, anb__constant(part, ANB__ARG_Z, 50));
    stamp_constant(stamper, 0, 0, y);
    stamp_constant(stamper, 1, 0, anb__cscale(y, -2));
    stamp_constant(stamper, 1, 1, y);
}

const anb__family anb__family_isolator = {isolator_equations, isolator_stamps, false};

/* The sense of rotation: what enters at port k leaves at port k + 1. */
static bool circulator_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series s[9];
    for (int k = 0; k < 9; k++) {
        bool passes = k / 3 == (k % 3 + 1) % 3;
        s[k] = passes ? anb__series_constant(one) : anb__series_zero();
    }
    return scattering_equations(part, point, s, 3, out);
}

/* Y = (1 - S)(1 + S)^-1 / z is antisymmetric: 1/z from each port to the one before, -1/z to the next. */
static void circulator_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__complex y = anb__cdiv(one, anb__constant(part, ANB__ARG_Z, 50));
    for (int k = 0; k < 3; k++) {
        stamp_constant(stamper, (k + 1) % 3, k, anb__cneg(y));
        stamp_constant(stamper, k, (k + 1) % 3, y);
    }
}

const anb__family anb__family_circulator = {circulator_equations, circulator_stamps, false};

/* ---- gyrator: v1 = -r i2, v2 = r i1 ------------------------------------------------------- */

static bool gyrator_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series r, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_R, point, 0, &r)) return false;
    anb__equations_clear(out, 2);
    *anb__a(out, 0, 0) = *anb__a(out, 1, 1) = unity;
    *anb__b(out, 0, 1) = r;
    *anb__b(out, 1, 0) = anb__series_scale(&r, anb__cx(-1, 0));
    return true;
}

static void gyrator_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__complex y = anb__cdiv(one, anb__constant(part, ANB__ARG_R, 0));
    stamp_constant(stamper, 0, 1, y);
    stamp_constant(stamper, 1, 0, anb__cneg(y));
}

const anb__family anb__family_gyrator = {gyrator_equations, gyrator_stamps, false};

/* ---- transconductance: i1 = 0, i2 = gm v1 --------------------------------------------------- */

static bool transconductance_equations(const anb__placed *part, const anb__point *point,
                                       anb__equations *out) {
    anb__series gm, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_GM, point, 0, &gm)) return false;
    anb__equations_clear(out, 2);
    *anb__b(out, 0, 0) = *anb__b(out, 1, 1) = unity;
    *anb__a(out, 1, 0) = anb__series_scale(&gm, anb__cx(-1, 0));
    return true;
}

static void transconductance_stamps(const anb__placed *part, anb__stamper *stamper) {
    stamp_constant(stamper, 1, 0, anb__constant(part, ANB__ARG_GM, 0));
}

const anb__family anb__family_transconductance = {transconductance_equations, transconductance_stamps, false};
