/* The compiled plan against a dense solve with pivoting in long double, and its kernels against one another.
 */
#include <complex.h>
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include <cmocka.h>

#include "solve/plan.h"

typedef long double complex wide;

/* ---- random numbers: SplitMix64 (G. Steele, D. Lea and C. Flood 2014) -------------------- */

static uint64_t state = 1;

static uint64_t random_bits(void) {
    uint64_t z = state += 0x9e3779b97f4a7c15u;
    z = (z ^ z >> 30) * 0xbf58476d1ce4e5b9u;
    z = (z ^ z >> 27) * 0x94d049bb133111ebu;
    return z ^ z >> 31;
}
static uint32_t random_below(uint32_t n) { return (uint32_t)(random_bits() % n); }
static double random_in(double low, double high) {
    return low + (high - low) * (double)(random_bits() >> 11) * 0x1p-53;
}

/* ---- a matrix under construction --------------------------------------------------------- */

enum { POINTS = 24 }; /* three groups */

typedef struct subject {
    uint32_t size, count, ports;
    bool symmetric;
    anb__entry *entries;
    anb__complex *values; /* [point][entry] */
    uint32_t *place;      /* [row * size + column]: entry + 1; NULL where the size is large */
    uint32_t capacity;
    uint32_t *first_term;
    anb__term *terms;
    anb__complex *scale, *offset;
} subject;

static void *take(size_t count, size_t size) {
    void *out = calloc(count + 1, size);
    assert_non_null(out);
    return out;
}

static subject new_subject(uint32_t size, bool symmetric, uint32_t ports, uint32_t capacity) {
    subject s = {.size = size, .symmetric = symmetric, .ports = ports, .capacity = capacity};
    s.entries = take(capacity, sizeof *s.entries);
    s.values = take((size_t)capacity * POINTS, sizeof *s.values);
    if (size <= 2000) s.place = take((size_t)size * size, sizeof *s.place);
    s.first_term = take(ports + 1, sizeof *s.first_term);
    s.terms = take(4 * (size_t)ports, sizeof *s.terms);
    s.scale = take(ports, sizeof *s.scale);
    s.offset = take(ports, sizeof *s.offset);
    return s;
}

static void free_subject(subject *s) {
    free(s->entries);
    free(s->values);
    free(s->place);
    free(s->first_term);
    free(s->terms);
    free(s->scale);
    free(s->offset);
}

static uint32_t entry_of(subject *s, uint32_t row, uint32_t column) {
    if (s->symmetric && row < column) return entry_of(s, column, row);
    uint32_t *place = s->place ? &s->place[(size_t)row * s->size + column] : NULL;
    if (place && *place) return *place - 1;
    assert_true(s->count < s->capacity);
    s->entries[s->count] = (anb__entry){row, column};
    if (place) *place = s->count + 1;
    return s->count++;
}

static anb__complex *value_of(subject *s, uint32_t point, uint32_t entry) {
    return &s->values[(size_t)point * s->capacity + entry];
}

static void add(subject *s, uint32_t row, uint32_t column, uint32_t point, anb__complex v) {
    anb__complex *to = value_of(s, point, entry_of(s, row, column));
    *to = anb__cadd(*to, v);
}

/* An admittance between two unknowns at all points; b == a: to ground. `make` gives it at a point. */
static void connect(subject *s, uint32_t a, uint32_t b, const anb__complex *y) {
    for (uint32_t p = 0; p < POINTS; p++) {
        add(s, a, a, p, y[p]);
        if (a == b) continue;
        add(s, b, b, p, y[p]);
        add(s, a, b, p, anb__cneg(y[p]));
        if (!s->symmetric) add(s, b, a, p, anb__cneg(y[p]));
    }
}

static double omega_at(uint32_t point) { return 0.5 + point / 16.0; }

/* A resistor, a coil or a capacitor, with a little loss. */
static void random_branch(anb__complex *y) {
    uint32_t kind = random_below(3);
    double value = exp(random_in(-2, 2));
    for (uint32_t p = 0; p < POINTS; p++) {
        double w = omega_at(p);
        if (kind == 0) y[p] = anb__cx(value, 0);
        if (kind == 1) y[p] = anb__cx(0.01 * w * value, w * value);
        if (kind == 2) y[p] = anb__cdiv(anb__cx(value, 0), anb__cx(0.01 * w, w));
    }
}

static void connect_randomly(subject *s, uint32_t a, uint32_t b) {
    anb__complex y[POINTS];
    random_branch(y);
    connect(s, a, b, y);
}

/* A line of `turns` at w = 1 with 1 % loss, as a symmetrical pi of admittances. */
static void connect_line(subject *s, uint32_t a, uint32_t b, double y0, double turns) {
    anb__complex across[POINTS], down[POINTS];
    for (uint32_t p = 0; p < POINTS; p++) {
        double t = 6.283185307179586 * turns * omega_at(p);
        double complex x = 0.01 * t + I * t;
        double complex series = y0 / csinh(x), shunt = y0 * ctanh(x / 2);
        across[p] = anb__cx(creal(series), cimag(series));
        down[p] = anb__cx(creal(shunt), cimag(shunt));
    }
    connect(s, a, b, across);
    connect(s, a, a, down);
    connect(s, b, b, down);
}

/* Port k on one unknown, closed with `r` (complex allowed). */
static void put_port(subject *s, uint32_t k, uint32_t unknown, anb__complex z) {
    anb__complex y[POINTS];
    for (uint32_t p = 0; p < POINTS; p++) y[p] = anb__cdiv(anb__cx(1, 0), z);
    connect(s, unknown, unknown, y);
    s->terms[s->first_term[k]] = (anb__term){unknown, 1};
    s->first_term[k + 1] = s->first_term[k] + 1;
    s->scale[k] = anb__cdiv(anb__cx(sqrt(2 * z.re), 0), z);
    s->offset[k] = anb__cdiv(anb__cconj(z), z);
}

/* ---- the reference ----------------------------------------------------------------------- */

static wide as_wide(anb__complex v) { return (long double)v.re + I * (long double)v.im; }

static void fill_dense(subject *s, uint32_t point, wide *a, uint32_t width) {
    for (uint32_t e = 0; e < s->count; e++) {
        wide v = as_wide(*value_of(s, point, e));
        a[(size_t)s->entries[e].row * width + s->entries[e].column] = v;
        if (s->symmetric) a[(size_t)s->entries[e].column * width + s->entries[e].row] = v;
    }
}

/* Gauss-Jordan with partial pivoting on [A | B]. */
static void solve_dense(wide *a, uint32_t n, uint32_t width) {
    for (uint32_t k = 0; k < n; k++) {
        uint32_t best = k;
        for (uint32_t i = k + 1; i < n; i++)
            if (cabsl(a[(size_t)i * width + k]) > cabsl(a[(size_t)best * width + k])) best = i;
        for (uint32_t j = 0; j < width; j++) {
            wide t = a[(size_t)k * width + j];
            a[(size_t)k * width + j] = a[(size_t)best * width + j];
            a[(size_t)best * width + j] = t;
        }
        wide r = 1 / a[(size_t)k * width + k];
        for (uint32_t j = k; j < width; j++) a[(size_t)k * width + j] *= r;
        for (uint32_t i = 0; i < n; i++) {
            wide f = a[(size_t)i * width + k];
            if (i == k || f == 0) continue;
            for (uint32_t j = k; j < width; j++) a[(size_t)i * width + j] -= f * a[(size_t)k * width + j];
        }
    }
}

static void reference(subject *s, uint32_t point, wide *result) {
    uint32_t width = s->size + s->ports;
    wide *a = take((size_t)s->size * width, sizeof *a);
    fill_dense(s, point, a, width);
    for (uint32_t k = 0; k < s->ports; k++)
        for (uint32_t i = s->first_term[k]; i < s->first_term[k + 1]; i++)
            a[(size_t)s->terms[i].unknown * width + s->size + k] += (long double)s->terms[i].sign;
    solve_dense(a, s->size, width);
    for (uint32_t to = 0; to < s->ports; to++)
        for (uint32_t from = 0; from < s->ports; from++) {
            wide sum = 0;
            for (uint32_t i = s->first_term[to]; i < s->first_term[to + 1]; i++)
                sum +=
                    (long double)s->terms[i].sign * a[(size_t)s->terms[i].unknown * width + s->size + from];
            sum *= as_wide(s->scale[to]) * as_wide(s->scale[from]);
            result[(size_t)to * s->ports + from] = sum - (to == from ? as_wide(s->offset[to]) : 0);
        }
    free(a);
}

/* ---- running a plan ---------------------------------------------------------------------- */

static double *take_aligned(size_t doubles) {
    double *out =
        aligned_alloc(ANB__ALIGNMENT, (doubles * sizeof *out / ANB__ALIGNMENT + 1) * ANB__ALIGNMENT);
    assert_non_null(out);
    for (size_t k = 0; k < doubles; k++) out[k] = NAN; /* whatever stands there must not matter */
    return out;
}

static anb__plan *compile(subject *s, uint32_t samples) {
    anb__complex *values = take((size_t)samples * s->count, sizeof *values);
    for (uint32_t k = 0; k < samples; k++)
        for (uint32_t e = 0; e < s->count; e++)
            values[(size_t)k * s->count + e] = *value_of(s, 3 * k % POINTS, e);
    anb__system system = {.size = s->size,
                          .symmetric = s->symmetric,
                          .entry_count = s->count,
                          .entries = s->entries,
                          .sample_count = samples,
                          .samples = values,
                          .port_count = s->ports,
                          .first_term = s->first_term,
                          .terms = s->terms,
                          .scale = s->scale,
                          .offset = s->offset};
    anb__plan *plan;
    assert_int_equal(anb__plan_compile(&system, &plan), ANB_OK);
    free(values);
    return plan;
}

static uint32_t elements_of(const subject *s) {
    return s->symmetric ? s->ports * (s->ports + 1) / 2 : s->ports * s->ports;
}

/* All points in blocks of `groups`: [point][element], and whether the guard refused each. */
static void run(subject *s, const anb__plan *plan, const char *kernel, uint32_t groups, anb__complex *result,
                bool *refused) {
    uint32_t elements = elements_of(s);
    double *slots = take_aligned((size_t)anb__plan_slot_count(plan) * groups * ANB__GROUP);
    double *out = take_aligned((size_t)elements * groups * ANB__GROUP);
    uint8_t suspect[POINTS / ANB__LANES];
    for (uint32_t first = 0; first < POINTS / ANB__LANES; first += groups) {
        for (uint32_t e = 0; e < s->count; e++)
            for (uint32_t k = 0; k < groups * ANB__LANES; k++) {
                double *to =
                    slots + ((size_t)anb__plan_slot_of(plan, e) * groups + k / 8) * ANB__GROUP + k % 8;
                anb__complex v = *value_of(s, (first * ANB__LANES + k) % POINTS, e);
                to[0] = v.re;
                to[ANB__LANES] = v.im;
            }
        anb__plan_kernel_find(kernel)->run(plan, slots, groups, out, suspect);
        for (uint32_t k = 0; k < groups * ANB__LANES; k++) {
            uint32_t point = first * ANB__LANES + k;
            for (uint32_t i = 0; i < elements; i++) {
                const double *from = out + ((size_t)(k / 8) * elements + i) * ANB__GROUP + k % 8;
                result[(size_t)point * elements + i] = anb__cx(from[0], from[ANB__LANES]);
            }
            refused[point] = suspect[k / 8] >> k % 8 & 1;
        }
    }
    free(slots);
    free(out);
}

static const char *const kernel_names[] = {"plain", "avx2", "avx512"};

/* The worst error of the points that the guard lets pass, by the size of S where that is above 1 (active
 * networks); *kept counts the points. */
static double worst_error(subject *s, const anb__complex *result, const bool *refused, uint32_t step,
                          uint32_t *kept) {
    wide *exact = take((size_t)s->ports * s->ports, sizeof *exact);
    double worst = 0;
    for (uint32_t p = 0; p < POINTS; p += step) {
        if (refused[p]) continue;
        ++*kept;
        reference(s, p, exact);
        long double largest = 1;
        for (uint32_t i = 0; i < s->ports * s->ports; i++) largest = fmaxl(largest, cabsl(exact[i]));
        for (uint32_t to = 0; to < s->ports; to++)
            for (uint32_t from = 0; from < (s->symmetric ? to + 1 : s->ports); from++) {
                uint32_t i = s->symmetric ? to * (to + 1) / 2 + from : to * s->ports + from;
                wide ours = as_wide(result[(size_t)p * elements_of(s) + i]);
                double error = (double)(cabsl(ours - exact[(size_t)to * s->ports + from]) / largest);
                if (!(error <= worst)) worst = isnan(error) ? INFINITY : error;
            }
    }
    free(exact);
    return worst;
}

/* Every kernel and block size that there is: equal to the bit between block sizes, to `tolerance` between
 * kernels. */
static void check_kernels(subject *s, const anb__plan *plan, const anb__complex *result, const bool *refused,
                          double tolerance) {
    size_t count = (size_t)elements_of(s) * POINTS;
    anb__complex *first = take(count, sizeof *first), *other = take(count, sizeof *other);
    bool refused_here[POINTS];
    for (size_t k = 0; k < sizeof kernel_names / sizeof *kernel_names; k++) {
        if (!anb__plan_kernel_find(kernel_names[k])) continue;
        run(s, plan, kernel_names[k], 1, first, refused_here);
        for (size_t i = 0; i < count; i++) {
            size_t point = i / elements_of(s);
            if (refused[point] || refused_here[point]) continue;
            double error = anb__cabs(anb__csub(first[i], result[i])), size = fmax(1, anb__cabs(result[i]));
            if (!(error <= tolerance * size)) fail_msg("kernel %s differs by %g", kernel_names[k], error);
        }
        run(s, plan, kernel_names[k], 3, other, refused_here);
        for (size_t i = 0; i < count; i++)
            if (!refused_here[i / elements_of(s)]) assert_memory_equal(&other[i], &first[i], sizeof *first);
    }
    free(first);
    free(other);
}

/* Compiles, runs, compares every `step`-th point; at least `least` points must have been let pass. Kernels
 * may differ from one another by `between`. */
static void check(subject *s, const char *name, uint32_t step, uint32_t least, double tolerance,
                  double between) {
    anb__plan *plan = compile(s, 8);
    anb__complex *result = take((size_t)elements_of(s) * POINTS, sizeof *result);
    bool refused[POINTS];
    uint32_t kept = 0;
    run(s, plan, NULL, 1, result, refused);
    double worst = worst_error(s, result, refused, step, &kept);
    if (!(worst <= tolerance)) fail_msg("%s: wrong by %g", name, worst);
    if (kept < least) fail_msg("%s: only %u points were let pass", name, kept);
    check_kernels(s, plan, result, refused, between);
    free(result);
    anb__plan_free(plan);
}

/* ---- networks ---------------------------------------------------------------------------- */

static const anb__complex fifty = {1, 0}; /* in units of the reference impedance */

static subject random_network(uint32_t size, bool symmetric, uint32_t ports, uint32_t branches) {
    subject s = new_subject(size, symmetric, ports, 2 * (size + 4 * branches) + 4 * ports + 2 * size);
    for (uint32_t i = 1; i < size; i++) connect_randomly(&s, i, random_below(i));
    for (uint32_t k = 0; k < branches; k++) {
        uint32_t a = random_below(size), b = random_below(size);
        connect_randomly(&s, a, b);
        if (symmetric || a == b) continue;
        double gm = random_in(-1, 1);
        for (uint32_t p = 0; p < POINTS; p++) add(&s, a, b, p, anb__cx(gm, 0));
    }
    return s;
}

static void put_random_ports(subject *s, bool mixed) {
    uint32_t *at = take(s->size, sizeof *at);
    for (uint32_t i = 0; i < s->size; i++) at[i] = i;
    for (uint32_t k = 0; k < s->ports; k++) {
        uint32_t j = k + random_below(s->size - k), t = at[j];
        at[j] = at[k];
        at[k] = t;
        put_port(s, k, t, mixed ? anb__cx(random_in(0.5, 2), random_in(-1, 1)) : fifty);
    }
    free(at);
}

static void random_systems(void **unused) {
    (void)unused;
    for (int trial = 0; trial < 600; trial++) {
        state = (uint64_t)trial + 1000;
        uint32_t size = 1 + random_below(trial % 4 ? 12 : 40);
        uint32_t ports = 1 + random_below(size < 8 ? size : 8);
        bool symmetric = random_below(2);
        subject s = random_network(size, symmetric, ports, random_below(2 * size));
        put_random_ports(&s, random_below(2));
        char name[64];
        snprintf(name, sizeof name, "random network %d", trial);
        check(&s, name, 1, symmetric ? POINTS / 2 : 0, 1.5e-12, 1.5e-12);
        free_subject(&s);
    }
}

/* A binary feed: 2^levels outputs and one input, lines between, a resistor between the outputs of each
 * splitter. */
static subject feed(uint32_t levels) {
    uint32_t outputs = 1u << levels;
    subject s = new_subject(2 * outputs - 1, true, outputs + 1, 16 * outputs);
    for (uint32_t i = 0; i + 1 < outputs; i++) {
        connect_line(&s, i, 2 * i + 1, 0.7, 0.25);
        connect_line(&s, i, 2 * i + 2, 0.7, 0.25);
        anb__complex y[POINTS];
        for (uint32_t p = 0; p < POINTS; p++) y[p] = anb__cx(0.5, 0);
        connect(&s, 2 * i + 1, 2 * i + 2, y);
    }
    put_port(&s, 0, 0, fifty);
    for (uint32_t k = 0; k < outputs; k++) put_port(&s, k + 1, outputs - 1 + k, fifty);
    return s;
}

static subject ladder(uint32_t nodes, uint32_t ports) {
    subject s = new_subject(nodes, true, ports, 3 * nodes + 2 * ports);
    for (uint32_t i = 0; i < nodes; i++) connect_randomly(&s, i, i);
    for (uint32_t i = 1; i < nodes; i++) connect_line(&s, i - 1, i, 1, 0.08);
    for (uint32_t k = 0; k < ports; k++)
        put_port(&s, k, ports > 1 ? (uint32_t)((uint64_t)k * (nodes - 1) / (ports - 1)) : 0, fifty);
    return s;
}

static subject grid(uint32_t side, bool symmetric, uint32_t ports) {
    uint32_t n = side * side;
    subject s = new_subject(n, symmetric, ports, 12 * n);
    for (uint32_t i = 0; i < n; i++) {
        if (i % side) connect_line(&s, i - 1, i, 1, 0.05);
        if (i >= side) connect_line(&s, i - side, i, 1, 0.03);
        if (random_below(4) == 0) connect_randomly(&s, i, i);
        for (uint32_t p = 0; !symmetric && i % side && p < POINTS; p++) add(&s, i, i - 1, p, anb__cx(0.1, 0));
    }
    for (uint32_t k = 0; k < ports; k++) put_port(&s, k, k * (n - 1) / (ports > 1 ? ports - 1 : 1), fifty);
    return s;
}

/* Every unknown tied to every other. */
static subject mesh(uint32_t size, bool symmetric, uint32_t ports) {
    subject s = new_subject(size, symmetric, ports, size * size + size);
    for (uint32_t i = 0; i < size; i++)
        for (uint32_t j = 0; j < i; j++) {
            anb__complex y[POINTS];
            double g = random_in(0, 1.0 / size), b = random_in(-1, 1) / size;
            for (uint32_t p = 0; p < POINTS; p++) y[p] = anb__cx(g, b * omega_at(p));
            connect(&s, i, j, y);
            for (uint32_t p = 0; !symmetric && p < POINTS; p++) add(&s, i, j, p, anb__cx(0, 0.3 / size));
        }
    for (uint32_t k = 0; k < ports; k++) put_port(&s, k, size - 1 - k, fifty);
    return s;
}

static void check_and_free(subject s, const char *name, uint32_t step) {
    check(&s, name, step, POINTS / step, 1e-12, 1e-13);
    free_subject(&s);
}

static void feeds(void **unused) {
    (void)unused;
    check_and_free(feed(1), "feed of 2", 1);
    check_and_free(feed(3), "feed of 8", 1);
    check_and_free(feed(6), "feed of 64", 12);
}

static void ladders(void **unused) {
    (void)unused;
    state = 5;
    for (uint32_t ports = 1; ports <= 8; ports++) {
        subject s = ladder(41, ports);
        check(&s, "ladder", 3, 4, 1e-12, 1e-12);
        free_subject(&s);
    }
    subject s = ladder(600, 40); /* ordered by AMD */
    check(&s, "long ladder", 12, 1, 1e-12, 1e-12);
    free_subject(&s);
}

static void grids(void **unused) {
    (void)unused;
    state = 6;
    check_and_free(grid(12, true, 2), "grid", 12);
    check_and_free(grid(12, false, 2), "grid, not symmetric", 12);
    check_and_free(grid(12, true, 30), "grid of 30 ports", 12);
    check_and_free(grid(9, false, 30), "grid of 30 ports, not symmetric", 12);
    check_and_free(grid(24, true, 7), "larger grid", 24);
}

static void meshes(void **unused) {
    (void)unused;
    state = 7;
    for (uint32_t size = 1; size <= 20; size++) {
        check_and_free(mesh(size, true, size), "mesh", 6);
        check_and_free(mesh(size, false, size), "mesh, not symmetric", 6);
    }
    check_and_free(mesh(60, true, 3), "mesh of 3 ports", 12);
    check_and_free(mesh(75, false, 3), "mesh of 3 ports, not symmetric", 12);
    check_and_free(mesh(70, true, 33), "mesh of 33 ports", 12);
    check_and_free(mesh(210, true, 210), "mesh of 210 ports", 24);
    check_and_free(mesh(330, true, 330), "mesh of 330 ports", 24);
    check_and_free(mesh(110, false, 110), "mesh of 110 ports, not symmetric", 24);
}

/* The order gets no values to look at. */
static void no_samples(void **unused) {
    (void)unused;
    state = 8;
    subject s = random_network(12, true, 2, 10);
    put_random_ports(&s, false);
    anb__plan *plan = compile(&s, 0);
    anb__complex *result = take((size_t)elements_of(&s) * POINTS, sizeof *result);
    bool refused[POINTS];
    uint32_t kept = 0;
    run(&s, plan, NULL, 1, result, refused);
    assert_true(worst_error(&s, result, refused, 1, &kept) <= 1e-12);
    assert_true(kept > POINTS / 2);
    free(result);
    anb__plan_free(plan);
    free_subject(&s);
}

/* ---- ports that are not just one unknown ------------------------------------------------- */

static void make_sums(subject *s, uint32_t shape) {
    uint32_t count = 0;
    for (uint32_t k = 0; k < s->ports; k++) {
        s->first_term[k] = count;
        uint32_t terms = (k + shape) % 4; /* none, one, two or three */
        for (uint32_t i = 0; i < terms; i++)
            s->terms[count++] = (anb__term){(k + 2 * i + shape) % s->size, i % 2 ? -1 : 1};
        s->scale[k] = anb__cx(1.2 + k, 0.3);
        s->offset[k] = anb__cx(0.9, 0.1 * k);
    }
    s->first_term[s->ports] = count;
}

static void ports_as_sums(void **unused) {
    (void)unused;
    for (uint32_t shape = 0; shape < 16; shape++) {
        state = 100 + shape;
        subject s = random_network(4 + shape, shape % 2, 1 + shape % 6, shape);
        put_random_ports(&s, false);
        make_sums(&s, shape);
        char name[64];
        snprintf(name, sizeof name, "sums %u", shape);
        check(&s, name, 1, 1, 1e-11, 1e-11);
        free_subject(&s);
    }
}

static void negative_and_shared_ports(void **unused) {
    (void)unused;
    state = 200;
    for (int shared = 0; shared < 2; shared++) {
        subject s = random_network(9, true, 4, 6);
        put_random_ports(&s, true);
        s.terms[1].sign = -1;
        if (shared) s.terms[3].unknown = s.terms[0].unknown;
        check(&s, shared ? "shared" : "negative", 1, 1, 2e-12, 2e-12);
        free_subject(&s);
    }
}

static void no_ports(void **unused) {
    (void)unused;
    subject s = random_network(5, true, 0, 3);
    anb__plan *plan = compile(&s, 8);
    bool refused[POINTS];
    anb__complex nothing;
    run(&s, plan, NULL, 1, &nothing, refused);
    assert_int_equal(elements_of(&s), 0);
    anb__plan_free(plan);
    free_subject(&s);
}

/* ---- pivots ------------------------------------------------------------------------------ */

/* Ideal transformers n:1 between pairs of nodes: their currents have zeros on the diagonal. */
static void transformers(void **unused) {
    (void)unused;
    for (uint32_t trial = 0; trial < 40; trial++) {
        state = 300 + trial;
        uint32_t nodes = 4 + random_below(10), coils = 1 + random_below(3);
        subject s = random_network(nodes, true, 3, nodes);
        s.size = nodes; /* the currents come behind */
        subject t = new_subject(nodes + coils, trial % 2, 3, 40 * (nodes + coils));
        for (uint32_t e = 0; e < s.count; e++)
            for (uint32_t p = 0; p < POINTS; p++) {
                add(&t, s.entries[e].row, s.entries[e].column, p, *value_of(&s, p, e));
                if (!t.symmetric && s.entries[e].row != s.entries[e].column)
                    add(&t, s.entries[e].column, s.entries[e].row, p, *value_of(&s, p, e));
            }
        for (uint32_t k = 0; k < coils; k++)
            for (uint32_t p = 0; p < POINTS; p++) {
                uint32_t current = nodes + k, a = k, b = nodes - 1 - k;
                add(&t, current, a, p, anb__cx(1, 0));
                add(&t, current, b, p, anb__cx(-1.5, 0));
                if (!t.symmetric) add(&t, a, current, p, anb__cx(1, 0));
                if (!t.symmetric) add(&t, b, current, p, anb__cx(-1.5, 0));
            }
        for (uint32_t k = 0; k < 3; k++) put_port(&t, k, k, fifty);
        check(&t, "transformers", 1, POINTS / 2, 1.5e-12, 1.5e-12);
        free_subject(&s);
        free_subject(&t);
    }
}

/* A node between a coil and a capacitor that resonate nearly or exactly: the guard must refuse what it
 * spoils. */
static void resonance(void **unused) {
    (void)unused;
    subject s = new_subject(3, true, 2, 16);
    anb__complex coil[POINTS], capacitor[POINTS];
    for (uint32_t p = 0; p < POINTS; p++) {
        coil[p] = anb__cx(0, -1);
        capacitor[p] = anb__cx(0, p ? 1 + pow(10, -(double)p) : 1);
    }
    connect(&s, 0, 1, coil);
    connect(&s, 1, 2, capacitor);
    put_port(&s, 0, 0, fifty);
    put_port(&s, 1, 2, fifty);
    anb__plan *plan = compile(&s, 0); /* the order is left in the dark */
    anb__complex *result = take(3 * POINTS, sizeof *result);
    bool refused[POINTS];
    uint32_t kept = 0;
    for (size_t k = 0; k < sizeof kernel_names / sizeof *kernel_names; k++) {
        if (!anb__plan_kernel_find(kernel_names[k])) continue;
        run(&s, plan, kernel_names[k], 1, result, refused);
        assert_true(worst_error(&s, result, refused, 1, &kept) <= 1e-12);
        assert_true(refused[0]);
        for (uint32_t p = 5; p < POINTS; p++) assert_true(refused[p]);
        assert_false(refused[1] || refused[2]);
    }
    free(result);
    anb__plan_free(plan);
    free_subject(&s);
}

/* g in series between two nodes: b + a g/(g + a) is left of g + b. Losses one after the other multiply. */
static void huge_admittances(void **unused) {
    (void)unused;
    for (int two = 0; two < 2; two++) {
        subject s = new_subject(3, true, 2, 16);
        anb__complex first[POINTS], second[POINTS];
        for (uint32_t p = 0; p < POINTS; p++) {
            first[p] = anb__cx(pow(10, p / 2.0), 0);
            second[p] = anb__cx(0, two ? pow(10, p / 4.0) : 1);
        }
        connect(&s, 0, 1, first);
        connect(&s, 1, 2, second);
        put_port(&s, 0, 0, fifty);
        put_port(&s, 1, 2, fifty);
        anb__plan *plan = compile(&s, 8);
        anb__complex *result = take(3 * POINTS, sizeof *result);
        bool refused[POINTS];
        uint32_t kept = 0;
        run(&s, plan, NULL, 1, result, refused);
        assert_true(worst_error(&s, result, refused, 1, &kept) <= 1e-12);
        assert_true(kept >= 6);
        for (uint32_t p = 8; p < POINTS; p++) assert_true(refused[p]);
        free(result);
        anb__plan_free(plan);
        free_subject(&s);
    }
}

/* Whatever is not a number or infinite, wherever it stands, is refused in its lane and in no other. */
static void check_poison(subject *s, double poison) {
    anb__plan *plan = compile(s, 8);
    anb__complex *result = take((size_t)elements_of(s) * POINTS, sizeof *result);
    bool before[POINTS], refused[POINTS];
    run(s, plan, NULL, 1, result, before);
    for (uint32_t e = 0; e < s->count; e++) {
        uint32_t point = e % POINTS;
        anb__complex kept = *value_of(s, point, e);
        value_of(s, point, e)->im = poison;
        for (size_t k = 0; k < sizeof kernel_names / sizeof *kernel_names; k++) {
            if (!anb__plan_kernel_find(kernel_names[k])) continue;
            run(s, plan, kernel_names[k], 3, result, refused);
            for (uint32_t p = 0; p < POINTS; p++) assert_int_equal(refused[p], p == point || before[p]);
        }
        *value_of(s, point, e) = kept;
    }
    free(result);
    anb__plan_free(plan);
}

static void poison(void **unused) {
    (void)unused;
    state = 9;
    for (int symmetric = 0; symmetric < 2; symmetric++) {
        subject s = grid(5, symmetric, 2), m = mesh(8, symmetric, 7);
        check_poison(&s, NAN);
        check_poison(&s, INFINITY);
        check_poison(&m, NAN);
        check_poison(&m, INFINITY);
        free_subject(&s);
        free_subject(&m);
    }
}

/* ---- time -------------------------------------------------------------------------------- */

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(random_systems), cmocka_unit_test(feeds),
        cmocka_unit_test(ladders),        cmocka_unit_test(grids),
        cmocka_unit_test(meshes),         cmocka_unit_test(no_samples),
        cmocka_unit_test(ports_as_sums),  cmocka_unit_test(negative_and_shared_ports),
        cmocka_unit_test(no_ports),       cmocka_unit_test(transformers),
        cmocka_unit_test(resonance),      cmocka_unit_test(huge_admittances),
        cmocka_unit_test(poison),
    };
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
