/* The evaluation of parts, one vector of points at a time. Included by assembly_plain.c, assembly_avx2.c and
 * assembly_avx512.c, each compiled for its instruction set.
 *
 * Sine, cosine and exponential are Taylor polynomials on reduced arguments (|angle| <= pi/4,
 * |exponent| <= ln(2)/2), their remainders below half a unit of the last place.
 */
#include "base/lanes.h"
#include "parts/assembly.h"

#define TWO_PI 6.283185307179586476925

/* What the frequencies of a block give, [groups * ANB__LANES] each. */
typedef struct frequencies {
    const double *hz;
    double *omega, *inverse, *root; /* 2 pi f, 1/(2 pi f), sqrt(f) */
} frequencies;

/* ---- elementary functions ---------------------------------------------------------- */

/* Sine and cosine of 2 pi (turns), turns within -1/2 .. 1/2. */
static inline void sine_cosine(anb__vec turns, anb__vec *sine, anb__vec *cosine) {
    static const double s[] = {-1.0 / 1307674368000, 1.0 / 6227020800, -1.0 / 39916800, 1.0 / 362880,
                               -1.0 / 5040,          1.0 / 120,        -1.0 / 6};
    static const double c[] = {1.0 / 20922789888000, -1.0 / 87178291200, 1.0 / 479001600, -1.0 / 3628800,
                               1.0 / 40320,          -1.0 / 720,         1.0 / 24};
    anb__vec quarters = turns * 4, whole = anb__vround(quarters);
    anb__vec x = (quarters - whole) * (TWO_PI / 4), z = x * x;
    anb__vec ps = anb__all(s[0]), pc = anb__all(c[0]);
    for (int k = 1; k < 7; k++) {
        ps = anb__fma(ps, z, anb__all(s[k]));
        pc = anb__fma(pc, z, anb__all(c[k]));
    }
    anb__vec sin_x = anb__fma(x * z, ps, x);
    anb__vec half = z * 0.5, one_less = 1 - half;
    anb__vec cos_x = one_less + anb__fma(z * z, pc, (1 - one_less) - half);
    /* the quadrant, -2 .. 2: odd swaps the two; the signs follow */
    anb__vec parity = whole - 2 * anb__vround(whole * 0.5);
    anb__ivec odd = parity != 0;
    anb__ivec back = anb__vabs(whole) == 2;
    anb__vec swapped_s = anb__select(odd, cos_x, sin_x), swapped_c = anb__select(odd, sin_x, cos_x);
    anb__ivec sign = INT64_MIN + (anb__ivec){0};
    anb__ivec minus_s = (back | (whole == -1)) & sign, minus_c = (back | (whole == 1)) & sign;
    *sine = (anb__vec)((anb__ivec)swapped_s ^ minus_s);
    *cosine = (anb__vec)((anb__ivec)swapped_c ^ minus_c);
}

/* e^y for y <= 0, and e^y - 1, which is exact near 0 as well. */
static inline anb__vec exponential(anb__vec y, anb__vec *less_one_out) {
    static const double p[] = {1.0 / 6227020800, 1.0 / 479001600, 1.0 / 39916800, 1.0 / 3628800,
                               1.0 / 362880,     1.0 / 40320,     1.0 / 5040,     1.0 / 720,
                               1.0 / 120,        1.0 / 24,        1.0 / 6,        0.5};
    const double ln2_hi = 6.93147180369123816490e-01, ln2_lo = 1.90821492927058770002e-10;
    y = anb__select(y < -700, anb__all(-700), y);
    anb__vec k = anb__vround(y * 1.44269504088896340736);
    anb__vec r = anb__fnma(k, anb__all(ln2_lo), anb__fnma(k, anb__all(ln2_hi), y));
    anb__vec q = anb__all(p[0]);
    for (int i = 1; i < 12; i++) q = anb__fma(q, r, anb__all(p[i]));
    anb__vec less_one = anb__fma(q, r * r, r);
    /* 2^k by adding k to the exponent: k + 1.5*2^52 has k in its low bits */
    anb__ivec bits = (anb__ivec)(k + 6755399441055744.0) - (anb__ivec)anb__all(6755399441055744.0);
    anb__vec scale = (anb__vec)((bits + 1023) << 52);
    *less_one_out = anb__fma(scale, less_one, scale - 1);
    return anb__fma(scale, less_one, scale);
}

/* ---- waves ---------------------------------------------------------------------------- */

/* a*b - p, exactly, where p is the rounded product. */
static inline anb__vec product_error(anb__vec a, anb__vec b, anb__vec p) {
#if ANB__WIDTH > 2
    return anb__fma(a, b, -p);
#else
    /* T. J. Dekker 1971: halves of 26 bits, whose products are exact */
    anb__vec wide_a = a * 134217729, wide_b = b * 134217729;
    anb__vec a_hi = wide_a - (wide_a - a), b_hi = wide_b - (wide_b - b), a_lo = a - a_hi, b_lo = b - b_hi;
    return ((a_hi * b_hi - p) + a_hi * b_lo + a_lo * b_hi) + a_lo * b_lo;
#endif
}

/* The phase in turns, within -1/2 .. 1/2, right to the last digit however many turns it has. */
static inline anb__vec reduced_turns(const anb__wave *wave, anb__vec hz) {
    anb__vec hi = anb__all(wave->turns_hi), product = hz * hi;
    anb__vec rest = anb__fma(hz, anb__all(wave->turns_lo), product_error(hz, hi, product));
    anb__vec turns = product - anb__vround(product) + rest;
    return turns - anb__vround(turns);
}

static inline void store_value(double *values, uint32_t groups, uint32_t value, size_t lane, anb__vec re,
                               anb__vec im) {
    double *to =
        values + (size_t)value * groups * ANB__GROUP + lane / ANB__LANES * ANB__GROUP + lane % ANB__LANES;
    anb__store(to, re);
    anb__store(to + ANB__LANES, im);
}

static inline void store_imaginary(double *values, uint32_t groups, uint32_t value, size_t lane,
                                   anb__vec im) {
    double *to =
        values + (size_t)value * groups * ANB__GROUP + lane / ANB__LANES * ANB__GROUP + lane % ANB__LANES;
    anb__store(to + ANB__LANES, im);
}

/* Near a multiple of half a wave coth x and 1/sinh x are large and nearly opposite, and where both ends of a
 * line meet they cancel before any pivot could tell: such lanes are left to the pivoted way, by values that
 * are no numbers. */
#define LEAST_SINH 1e-4

static inline anb__vec unless_small(anb__vec value, anb__vec square) {
    return anb__select(square < LEAST_SINH * LEAST_SINH, anb__all(__builtin_nan("")), value);
}

static void lossless_wave(const anb__wave_values *w, const frequencies *f, uint32_t groups, double *values) {
    for (size_t lane = 0; lane < (size_t)groups * ANB__LANES; lane += ANB__WIDTH) {
        anb__vec sine, cosine;
        sine_cosine(reduced_turns(&w->wave, anb__load(f->hz + lane)), &sine, &cosine);
        if (w->value[ANB__TANH] != ANB__NO_VALUE)
            store_imaginary(values, groups, w->value[ANB__TANH], lane, sine / cosine);
        if (w->value[ANB__COTH] == ANB__NO_VALUE && w->value[ANB__CSCH] == ANB__NO_VALUE) continue;
        anb__vec csch = -1 / unless_small(sine, sine * sine);
        if (w->value[ANB__COTH] != ANB__NO_VALUE)
            store_imaginary(values, groups, w->value[ANB__COTH], lane, cosine * csch);
        if (w->value[ANB__CSCH] != ANB__NO_VALUE)
            store_imaginary(values, groups, w->value[ANB__CSCH], lane, csch);
    }
}

/* sinh x, cosh x and 1 of x = loss + j 2 pi turns, all times e^-|loss|. */
typedef struct hyperbolic {
    anb__vec sinh_re, sinh_im, cosh_re, cosh_im, unit;
} hyperbolic;

static inline hyperbolic hyperbolic_of(anb__vec loss, anb__vec turns) {
    anb__vec sine, cosine, fall;
    sine_cosine(turns, &sine, &cosine);
    anb__vec unit = exponential(-anb__vabs(loss), &fall);
    anb__vec s = fall * (2 + fall) * -0.5, c = 1 - s;
    s = anb__select(loss < 0, -s, s);
    return (hyperbolic){s * cosine, c * sine, c * cosine, s * sine, unit};
}

/* a/b */
static inline void divide(anb__vec a_re, anb__vec a_im, anb__vec b_re, anb__vec b_im, anb__vec *re,
                          anb__vec *im) {
    anb__vec inverse = 1 / anb__fma(b_re, b_re, b_im * b_im);
    *re = anb__fma(a_re, b_re, a_im * b_im) * inverse;
    *im = anb__fnma(a_re, b_im, a_im * b_re) * inverse;
}

static void lossy_wave(const anb__wave_values *w, const frequencies *f, uint32_t groups, double *values) {
    const anb__wave *wave = &w->wave;
    for (size_t lane = 0; lane < (size_t)groups * ANB__LANES; lane += ANB__WIDTH) {
        anb__vec hz = anb__load(f->hz + lane), re, im;
        anb__vec loss = anb__fma(anb__load(f->root + lane), anb__all(wave->root), anb__all(wave->constant));
        loss = anb__fma(hz, anb__all(wave->linear), loss);
        hyperbolic h = hyperbolic_of(loss, reduced_turns(wave, hz));
        if (w->value[ANB__TANH] != ANB__NO_VALUE) {
            divide(h.sinh_re, h.sinh_im, h.cosh_re, h.cosh_im, &re, &im);
            store_value(values, groups, w->value[ANB__TANH], lane, re, im);
        }
        h.sinh_re = unless_small(h.sinh_re, anb__fma(h.sinh_re, h.sinh_re, h.sinh_im * h.sinh_im));
        if (w->value[ANB__COTH] != ANB__NO_VALUE) {
            divide(h.cosh_re, h.cosh_im, h.sinh_re, h.sinh_im, &re, &im);
            store_value(values, groups, w->value[ANB__COTH], lane, re, im);
        }
        if (w->value[ANB__CSCH] != ANB__NO_VALUE) {
            divide(h.unit, anb__all(0), h.sinh_re, h.sinh_im, &re, &im);
            store_value(values, groups, w->value[ANB__CSCH], lane, re, im);
        }
    }
}

/* ---- lines of constants, branches ------------------------------------------------------- */

/* x = sqrt(z y) with a real part that is not negative; Y0 = y/x. */
static void constants_line(const anb__line_values *line, const frequencies *f, uint32_t groups,
                           double *values) {
    const anb__line_model *m = &line->model;
    for (size_t lane = 0; lane < (size_t)groups * ANB__LANES; lane += ANB__WIDTH) {
        anb__vec omega = anb__load(f->omega + lane), re, im;
        anb__vec wl = omega * m->l, wc = omega * m->c;
        anb__vec w_re = anb__fnma(wl, wc, anb__all(m->r * m->g)),
                 w_im = anb__fma(wl, anb__all(m->g), wc * m->r);
        anb__vec size = anb__vsqrt(anb__fma(w_re, w_re, w_im * w_im));
        anb__vec large = anb__vsqrt((size + anb__vabs(w_re)) * 0.5), small = anb__vabs(w_im) * 0.5 / large;
        anb__vec x_re = anb__select(w_re < 0, small, large), x_im = anb__select(w_re < 0, large, small);
        x_im = anb__select(w_im < 0, -x_im, x_im);
        anb__vec turns = x_im * (1 / TWO_PI), y0_re, y0_im;
        divide(anb__all(m->g), wc, x_re, x_im, &y0_re, &y0_im);
        hyperbolic h = hyperbolic_of(x_re, turns - anb__vround(turns));
        h.sinh_re = unless_small(h.sinh_re, anb__fma(h.sinh_re, h.sinh_re, h.sinh_im * h.sinh_im));
        divide(h.cosh_re, h.cosh_im, h.sinh_re, h.sinh_im, &re, &im);
        store_value(values, groups, line->value, lane, anb__fnma(im, y0_im, re * y0_re),
                    anb__fma(im, y0_re, re * y0_im));
        divide(h.unit, anb__all(0), h.sinh_re, h.sinh_im, &re, &im);
        store_value(values, groups, line->value + 1, lane, anb__fnma(im, y0_im, re * y0_re),
                    anb__fma(im, y0_re, re * y0_im));
    }
}

static void series_branch(const anb__branch_value *value, const frequencies *f, uint32_t groups,
                          double *values) {
    const anb__series_branch *b = &value->branch;
    for (size_t lane = 0; lane < (size_t)groups * ANB__LANES; lane += ANB__WIDTH) {
        anb__vec omega = anb__load(f->omega + lane), inverse = anb__load(f->inverse + lane), re, im;
        anb__vec z_re = anb__fma(anb__load(f->root + lane), anb__all(b->root), anb__all(b->resistance));
        z_re = anb__fnma(omega, anb__all(b->inductance.im), z_re);
        z_re = anb__fma(inverse, anb__all(b->elastance.im), z_re);
        anb__vec z_im = anb__fnma(inverse, anb__all(b->elastance.re), omega * b->inductance.re);
        divide(anb__all(1), anb__all(0), z_re, z_im, &re, &im);
        store_value(values, groups, value->value, lane, re, im);
    }
}

/* ---- entries ------------------------------------------------------------------------------ */

/* An entry at one vector of points: its base terms and its shares of the values, summed in registers. */
static inline void set_entry(const anb__assembly *a, uint32_t e, const frequencies *f, const double *values,
                             uint32_t groups, size_t lane, double *to) {
    const anb__base_terms *t = &a->base[e];
    size_t at = lane / ANB__LANES * ANB__GROUP + lane % ANB__LANES;
    anb__vec omega = anb__load(f->omega + lane), inverse = anb__load(f->inverse + lane);
    anb__vec re = anb__fnma(omega, anb__all(t->b.im), anb__all(t->a.re));
    anb__vec im = anb__fma(omega, anb__all(t->b.re), anb__all(t->a.im));
    re = anb__fma(inverse, anb__all(t->c.im), re);
    im = anb__fnma(inverse, anb__all(t->c.re), im);
    for (uint32_t i = a->first_share[e]; i < a->first_share[e + 1]; i++) {
        const anb__share *share = &a->shares[i];
        const double *from = values + (size_t)share->value * groups * ANB__GROUP + at;
        anb__vec factor = anb__all(share->factor);
        im = anb__fma(factor, anb__load(from + ANB__LANES), im);
        if (!share->imaginary) re = anb__fma(factor, anb__load(from), re);
    }
    anb__store(to + at, re);
    anb__store(to + at + ANB__LANES, im);
}

static void prepare(const double *hz, uint32_t groups, double *scratch, frequencies *f) {
    size_t lanes = (size_t)groups * ANB__LANES;
    *f = (frequencies){hz, scratch, scratch + lanes, scratch + 2 * lanes};
    for (size_t lane = 0; lane < lanes; lane += ANB__WIDTH) {
        anb__vec omega = anb__load(hz + lane) * TWO_PI;
        anb__store(f->omega + lane, omega);
        anb__store(f->inverse + lane, 1 / omega);
        anb__store(f->root + lane, anb__vsqrt(anb__load(hz + lane)));
    }
}

static void evaluate_generics(const anb__assembly *a, const double *hz, uint32_t groups, double *values) {
    for (uint32_t i = 0; i < a->generic_count; i++)
        for (uint32_t g = 0; g < groups; g++)
            anb__evaluate_generic(a->generics[i].part, hz + g * ANB__LANES,
                                  values + ((size_t)a->generics[i].value * groups + g) * ANB__GROUP,
                                  (size_t)groups * ANB__GROUP);
}

anb__assembly_fill ANB__KERNEL(fill);
void ANB__KERNEL(fill)(const anb__assembly *a, const uint32_t *slot_of, const double *hz, uint32_t groups,
                       double *scratch, double *slots) {
    frequencies f;
    prepare(hz, groups, scratch, &f);
    double *values = scratch + 3 * (size_t)groups * ANB__LANES;
    for (uint32_t i = 0; i < a->wave_count; i++)
        (a->waves[i].lossless ? lossless_wave : lossy_wave)(&a->waves[i], &f, groups, values);
    for (uint32_t i = 0; i < a->branch_count; i++) series_branch(&a->branches[i], &f, groups, values);
    for (uint32_t i = 0; i < a->line_count; i++) constants_line(&a->lines[i], &f, groups, values);
    evaluate_generics(a, hz, groups, values);
    for (uint32_t e = 0; e < a->entry_count; e++) {
        double *to = slots + (size_t)slot_of[e] * groups * ANB__GROUP;
        for (size_t lane = 0; lane < (size_t)groups * ANB__LANES; lane += ANB__WIDTH)
            set_entry(a, e, &f, values, groups, lane, to);
    }
}
