/* Resistors, inductors, capacitors, impedances and admittances: one branch each.
 *
 * All of them are  v D - i N = 0  with N/D the impedance (docs/theory.md, eq. 5 to 9).
 */
#include "parts/stamp.h"

#define TWO_PI 6.283185307179586476925

static const anb__complex zero = {0, 0}, one = {1, 0};

static bool set_branch(const anb__series *n, const anb__series *d, anb__equations *out) {
    anb__equations_clear(out, 1);
    *anb__a(out, 0, 0) = *d;
    *anb__b(out, 0, 0) = anb__series_scale(n, anb__cx(-1, 0));
    return true;
}

static anb__series times_s_plus(const anb__series *factor, const anb__point *point, const anb__series *rest) {
    anb__series out = anb__series_mul(factor, &point->s);
    return anb__series_add(&out, rest);
}

/* An impedance z with the admittance s c across it: N = z, D = 1 + s c z. */
static bool set_with_capacitance(const anb__series *z, const anb__series *c, const anb__point *point,
                                 anb__equations *out) {
    anb__series unity = anb__series_constant(one), cz = anb__series_mul(c, z);
    anb__series d = times_s_plus(&cz, point, &unity);
    return set_branch(z, &d, out);
}

/* ---- resistor ----------------------------------------------------------------- */

static bool resistor_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series r, esl, cp;
    if (!anb__argument_series(part, ANB__ARG_R, point, 0, &r) ||
        !anb__argument_series(part, ANB__ARG_ESL, point, 0, &esl) ||
        !anb__argument_series(part, ANB__ARG_CP, point, 0, &cp))
        return false;
    anb__series z = times_s_plus(&esl, point, &r);
    return set_with_capacitance(&z, &cp, point, out);
}

static void resistor_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__complex r = anb__constant(part, ANB__ARG_R, 0), cp = anb__constant(part, ANB__ARG_CP, 0);
    double esl = anb__constant(part, ANB__ARG_ESL, 0).re;
    if (esl != 0) {
        anb__stamp_terms(stamper, 0, 0, zero, cp, zero);
        anb__stamp_branch(stamper, &(anb__series_branch){.resistance = r.re, .inductance = {esl, 0}});
    } else {
        anb__stamp_terms(stamper, 0, 0, anb__cdiv(one, r), cp, zero);
    }
}

const anb__family anb__family_resistor = {resistor_equations, resistor_stamps, true};

/* ---- inductor ------------------------------------------------------------------- */

/* The series resistance of a Q at one frequency, per sqrt(Hz): 2 pi at l / q at `at`. */
static double root_of_q(const anb__argument *q, double l) {
    return TWO_PI * sqrt(q->at_hz) * l / q->value.re;
}

/* The capacitance that resonates with l at srf, and the inductance that does with c. */
static double resonant_with(double other, double srf_hz) {
    double omega = TWO_PI * srf_hz;
    return 1 / (omega * omega * other);
}

static bool series_resonant(const anb__placed *part, const anb__series *other, const anb__point *point,
                            anb__series *out) {
    anb__series srf;
    *out = anb__series_zero();
    if (!anb__has(part, ANB__ARG_SRF)) return true;
    if (!anb__argument_series(part, ANB__ARG_SRF, point, 0, &srf)) return false;
    anb__series omega = anb__series_scale(&srf, anb__cx(TWO_PI, 0)), unity = anb__series_constant(one);
    omega = anb__series_mul(&omega, &omega);
    omega = anb__series_mul(&omega, other);
    return anb__series_div(&unity, &omega, out);
}

static bool inductor_impedance(const anb__placed *part, const anb__series *l, const anb__point *point,
                               anb__series *z) {
    anb__series r, q, unity = anb__series_constant(one);
    const anb__argument *argument = anb__argument_of(part, ANB__ARG_Q);
    if (!anb__argument_series(part, ANB__ARG_RESISTANCE, point, 0, &r) ||
        !anb__argument_series(part, ANB__ARG_Q, point, 0, &q))
        return false;
    *z = times_s_plus(l, point, &r);
    if (!argument) return true;
    anb__series loss = anb__series_mul(l, argument->has_at ? &point->root : &point->frequency);
    double factor = TWO_PI * (argument->has_at ? sqrt(argument->at_hz) : 1);
    loss = anb__series_scale(&loss, anb__cx(factor, 0));
    if (!anb__series_div(&unity, &q, &q)) return false;
    loss = anb__series_mul(&loss, &q);
    *z = anb__series_add(z, &loss);
    return true;
}

static bool inductor_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series l, z, c;
    if (!anb__argument_series(part, ANB__ARG_L, point, 0, &l) || !inductor_impedance(part, &l, point, &z) ||
        !series_resonant(part, &l, point, &c))
        return false;
    return set_with_capacitance(&z, &c, point, out);
}

static void inductor_stamps(const anb__placed *part, anb__stamper *stamper) {
    const anb__argument *q = anb__argument_of(part, ANB__ARG_Q);
    double l = anb__constant(part, ANB__ARG_L, 0).re, r = anb__constant(part, ANB__ARG_RESISTANCE, 0).re;
    double c = anb__has(part, ANB__ARG_SRF) ? resonant_with(l, anb__constant(part, ANB__ARG_SRF, 0).re) : 0;
    anb__complex inductance = anb__cx(l, q && !q->has_at ? -l / q->value.re : 0);
    double root = q && q->has_at ? root_of_q(q, l) : 0;
    if (r == 0 && root == 0) {
        anb__stamp_terms(stamper, 0, 0, zero, anb__cx(c, 0), anb__cdiv(one, inductance));
        return;
    }
    anb__stamp_terms(stamper, 0, 0, zero, anb__cx(c, 0), zero);
    anb__stamp_branch(stamper,
                      &(anb__series_branch){.resistance = r, .root = root, .inductance = inductance});
}

const anb__family anb__family_inductor = {inductor_equations, inductor_stamps, true};

/* ---- capacitor ------------------------------------------------------------------- */

/* The complex capacitance c' = c (1 - j loss_tangent), and for a Q that is the same everywhere, a series
 * resistance 1/(w c q), the factor 1 + j (c'/c)/q that 1/(s c') becomes by it. */
static bool capacitor_values(const anb__placed *part, const anb__point *point, const anb__series *c,
                             anb__series *lossy, anb__series *quality) {
    anb__series tangent, q, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_LOSS_TANGENT, point, 0, &tangent) ||
        !anb__argument_series(part, ANB__ARG_Q, point, 0, &q))
        return false;
    tangent = anb__series_scale(&tangent, anb__cx(0, -1));
    tangent = anb__series_add(&unity, &tangent);
    *lossy = anb__series_mul(c, &tangent);
    *quality = unity;
    const anb__argument *argument = anb__argument_of(part, ANB__ARG_Q);
    if (!argument || argument->has_at) return true;
    if (!anb__series_div(&unity, &q, &q)) return false;
    q = anb__series_scale(&q, anb__cx(0, 1));
    q = anb__series_mul(&q, &tangent);
    *quality = anb__series_add(&unity, &q);
    return true;
}

/* The series resistance: `esr`, or of a Q at one frequency 1/(2 pi at c q). */
static bool capacitor_resistance(const anb__placed *part, const anb__point *point, const anb__series *c,
                                 anb__series *r) {
    const anb__argument *argument = anb__argument_of(part, ANB__ARG_Q);
    anb__series q, unity = anb__series_constant(one);
    if (!anb__argument_series(part, ANB__ARG_ESR, point, 0, r) ||
        !anb__argument_series(part, ANB__ARG_Q, point, 0, &q))
        return false;
    if (!argument || !argument->has_at) return true;
    q = anb__series_mul(&q, c);
    q = anb__series_scale(&q, anb__cx(TWO_PI * argument->at_hz, 0));
    if (!anb__series_div(&unity, &q, &q)) return false;
    *r = anb__series_add(r, &q);
    return true;
}

/* N = quality + s c' (r + s esl), D = s c', with c' the lossy capacitance. */
static bool capacitor_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series c, lossy, quality, r, esl, resonant;
    if (!anb__argument_series(part, ANB__ARG_C, point, 0, &c) ||
        !anb__argument_series(part, ANB__ARG_ESL, point, 0, &esl))
        return false;
    if (c.zero) {
        anb__series nothing = anb__series_zero(), unity = anb__series_constant(one);
        return set_branch(&unity, &nothing, out);
    }
    if (!capacitor_values(part, point, &c, &lossy, &quality) || !capacitor_resistance(part, point, &c, &r) ||
        !series_resonant(part, &c, point, &resonant))
        return false;
    esl = anb__series_add(&esl, &resonant);
    anb__series d = anb__series_mul(&lossy, &point->s), z = times_s_plus(&esl, point, &r);
    anb__series n = anb__series_mul(&d, &z);
    n = anb__series_add(&n, &quality);
    return set_branch(&n, &d, out);
}

static void capacitor_stamps(const anb__placed *part, anb__stamper *stamper) {
    const anb__argument *q = anb__argument_of(part, ANB__ARG_Q);
    double c = anb__constant(part, ANB__ARG_C, 0).re,
           tangent = anb__constant(part, ANB__ARG_LOSS_TANGENT, 0).re;
    double r = anb__constant(part, ANB__ARG_ESR, 0).re, esl = anb__constant(part, ANB__ARG_ESL, 0).re;
    if (c == 0) return;
    if (q && q->has_at) r += 1 / (TWO_PI * q->at_hz * c * q->value.re);
    if (anb__has(part, ANB__ARG_SRF)) esl += resonant_with(c, anb__constant(part, ANB__ARG_SRF, 0).re);
    anb__complex lossy = anb__cx(c, -c * tangent);
    double share = q && !q->has_at ? 1 / q->value.re : 0;
    anb__complex quality = anb__cx(1 + tangent * share, share);
    if (r == 0 && esl == 0) {
        anb__stamp_terms(stamper, 0, 0, zero, anb__cdiv(lossy, quality), zero);
        return;
    }
    anb__stamp_branch(stamper, &(anb__series_branch){.resistance = r,
                                                     .inductance = {esl, 0},
                                                     .elastance = anb__cdiv(quality, lossy)});
}

const anb__family anb__family_capacitor = {capacitor_equations, capacitor_stamps, true};

/* ---- impedance, admittance ---------------------------------------------------------- */

static bool impedance_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series z, unity = anb__series_constant(one);
    return anb__argument_series(part, ANB__ARG_Z, point, 0, &z) && set_branch(&z, &unity, out);
}

static void impedance_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__stamp_terms(stamper, 0, 0, anb__cdiv(one, anb__constant(part, ANB__ARG_Z, 0)), zero, zero);
}

const anb__family anb__family_impedance = {impedance_equations, impedance_stamps, true};

static bool admittance_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    anb__series y, unity = anb__series_constant(one);
    return anb__argument_series(part, ANB__ARG_Y, point, 0, &y) && set_branch(&unity, &y, out);
}

static void admittance_stamps(const anb__placed *part, anb__stamper *stamper) {
    anb__stamp_terms(stamper, 0, 0, anb__constant(part, ANB__ARG_Y, 0), zero, zero);
}

const anb__family anb__family_admittance = {admittance_equations, admittance_stamps, true};
