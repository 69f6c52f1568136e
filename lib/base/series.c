#include "base/series.h"

/* A sum whose parts cancel to less than this share of them is rounding noise, and zero. */
#define NOISE 4e-15

static int least(int a, int b) { return a < b ? a : b; }

/* Drops leading zeros, and their terms with them. */
static void normalise(anb__series *s) {
    int skip = 0;
    while (skip < s->terms && anb__cis_zero(s->c[skip])) skip++;
    if (skip == s->terms) {
        s->zero = true;
        return;
    }
    if (!skip) return;
    for (int k = skip; k < s->terms; k++) s->c[k - skip] = s->c[k];
    s->order += skip;
    s->terms -= skip;
}

anb__series anb__series_zero(void) { return (anb__series){.zero = true, .terms = ANB__SERIES_TERMS}; }

anb__series anb__series_power(anb__complex value, int order) {
    anb__series out = {.order = order, .terms = ANB__SERIES_TERMS, .zero = anb__cis_zero(value)};
    out.c[0] = value;
    return out;
}

anb__series anb__series_constant(anb__complex value) { return anb__series_power(value, 0); }

anb__series anb__series_real(double value) { return anb__series_power(anb__cx(value, 0), 0); }

anb__series anb__series_value(anb__complex value) {
    anb__series out = anb__series_constant(value);
    out.terms = 1;
    return out;
}

static anb__complex term_of(const anb__series *s, int order) {
    int k = order - s->order;
    return k >= 0 && k < s->terms ? s->c[k] : anb__cx(0, 0);
}

static double quiet(double sum, double a, double b) {
    return fabs(sum) <= NOISE * (fabs(a) + fabs(b)) ? 0 : sum;
}

anb__series anb__series_add(const anb__series *a, const anb__series *b) {
    if (a->zero) return *b;
    if (b->zero) return *a;
    anb__series out;
    out.order = least(a->order, b->order);
    out.terms = least(least(a->order + a->terms, b->order + b->terms) - out.order, ANB__SERIES_TERMS);
    out.zero = false;
    for (int k = 0; k < out.terms; k++) {
        anb__complex x = term_of(a, out.order + k), y = term_of(b, out.order + k), sum = anb__cadd(x, y);
        out.c[k] = out.terms == 1 ? sum : anb__cx(quiet(sum.re, x.re, y.re), quiet(sum.im, x.im, y.im));
    }
    normalise(&out);
    return out;
}

anb__series anb__series_sub(const anb__series *a, const anb__series *b) {
    anb__series minus = anb__series_scale(b, anb__cx(-1, 0));
    return anb__series_add(a, &minus);
}

anb__series anb__series_scale(const anb__series *a, anb__complex k) {
    if (a->zero || anb__cis_zero(k)) return anb__series_zero();
    anb__series out = *a;
    for (int i = 0; i < out.terms; i++) out.c[i] = anb__cmul(a->c[i], k);
    return out;
}

anb__series anb__series_mul(const anb__series *a, const anb__series *b) {
    if (a->zero || b->zero) return anb__series_zero();
    anb__series out = {.order = a->order + b->order, .terms = least(a->terms, b->terms)};
    for (int i = 0; i < out.terms; i++)
        for (int k = 0; k + i < out.terms; k++)
            out.c[i + k] = anb__cadd(out.c[i + k], anb__cmul(a->c[i], b->c[k]));
    normalise(&out);
    return out;
}

bool anb__series_div(const anb__series *a, const anb__series *b, anb__series *out) {
    if (b->zero) return false;
    if (a->zero) {
        *out = anb__series_zero();
        return true;
    }
    anb__series q = {.order = a->order - b->order, .terms = least(a->terms, b->terms)};
    for (int k = 0; k < q.terms; k++) {
        anb__complex rest = a->c[k];
        for (int i = 0; i < k; i++) rest = anb__csub(rest, anb__cmul(q.c[i], b->c[k - i]));
        q.c[k] = anb__cdiv(rest, b->c[0]);
    }
    *out = q;
    return true;
}

bool anb__series_sqrt(const anb__series *a, anb__series *out) {
    if (a->zero) {
        *out = *a;
        return true;
    }
    if (a->order % 2) return false;
    anb__series r = {.order = a->order / 2, .terms = a->terms};
    r.c[0] = anb__csqrt(a->c[0]);
    anb__complex twice = anb__cscale(r.c[0], 2);
    for (int k = 1; k < r.terms; k++) {
        anb__complex rest = a->c[k];
        for (int i = 1; i < k; i++) rest = anb__csub(rest, anb__cmul(r.c[i], r.c[k - i]));
        r.c[k] = anb__cdiv(rest, twice);
    }
    *out = r;
    return true;
}

bool anb__series_compose(const anb__series *a, const anb__complex *t, anb__series *out) {
    anb__series x = *a;
    if (!a->zero && a->order < 0) return false;
    if (!a->zero && a->order == 0) {
        if (a->terms == 1) {
            *out = anb__series_value(t[0]);
            return true;
        }
        x.c[0] = anb__cx(0, 0);
        normalise(&x);
    }
    anb__series sum = anb__series_zero();
    for (int k = ANB__SERIES_TERMS - 1; k >= 0; k--) {
        anb__series term = anb__series_constant(t[k]);
        sum = anb__series_mul(&sum, &x);
        sum = anb__series_add(&sum, &term);
    }
    *out = sum;
    return true;
}

static anb__complex constant_term(const anb__series *a) {
    return !a->zero && a->order == 0 ? a->c[0] : anb__cx(0, 0);
}

bool anb__series_exp(const anb__series *a, anb__series *out) {
    anb__complex t[ANB__SERIES_TERMS];
    t[0] = anb__cexp(constant_term(a));
    for (int k = 1; k < ANB__SERIES_TERMS; k++) t[k] = anb__cscale(t[k - 1], 1.0 / k);
    return anb__series_compose(a, t, out);
}

bool anb__series_log(const anb__series *a, anb__series *out) {
    if (a->zero || a->order != 0) return false;
    anb__complex t[ANB__SERIES_TERMS], power = anb__cx(-1, 0);
    anb__complex inverse = anb__cdiv(anb__cx(-1, 0), a->c[0]);
    t[0] = anb__clog(a->c[0]);
    for (int k = 1; k < ANB__SERIES_TERMS; k++) {
        power = anb__cmul(power, inverse);
        t[k] = anb__cscale(power, 1.0 / k);
    }
    return anb__series_compose(a, t, out);
}

bool anb__series_limit(const anb__series *a, anb__complex *out) {
    *out = constant_term(a);
    return a->zero || a->order >= 0;
}

static double size_of(anb__complex c) { return fabs(c.re) + fabs(c.im); }

anb__series anb__series_eliminate(const anb__series *a, const anb__series *m, const anb__series *b,
                                  double noise) {
    if (m->zero || b->zero) return *a;
    int order = m->order + b->order, end = order + least(m->terms, b->terms);
    anb__series out = {.order = order, .terms = ANB__SERIES_TERMS};
    if (!a->zero) {
        out.order = least(a->order, order);
        end = least(end, a->order + a->terms);
    }
    out.terms = least(end - out.order, ANB__SERIES_TERMS);
    for (int k = 0; k < out.terms; k++) {
        anb__complex sum = a->zero ? anb__cx(0, 0) : term_of(a, out.order + k);
        double size = size_of(sum);
        for (int i = 0; i < m->terms && i <= k + out.order - order; i++) {
            anb__complex product = anb__cmul(m->c[i], term_of(b, k + out.order - m->order - i));
            sum = anb__csub(sum, product);
            size += size_of(product);
        }
        out.c[k] = size_of(sum) <= noise * size ? anb__cx(0, 0) : sum;
    }
    normalise(&out);
    return out;
}
