/* The compiled plan beside KLU and LAPACK, at the level of matrices: one thread, finished values.
 *
 *     bench_plan [ROUNDS]
 *
 * Each round fills the plan's slots and runs it over all points; KLU, analysed once, refactors and solves for
 * all ports in one call at each point; zgesv solves the dense matrix. The answers are compared; beyond 1e-9
 * the bench fails. Times are medians of the rounds, in ns for each point. `peak` is the fraction of the
 * core's peak of fused multiply-adds, measured in the same run, eight floating-point operations to a complex
 * multiply-add.
 */
#include <complex.h>
#include <klu.h>
#include <lapacke.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include "solve/plan.h"

enum { MOST_ROUNDS = 101, POINTS = 1001, DENSE_POINTS = 101 };
#define AGREEMENT 1e-9

static double now(void) {
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static void die(const char *what) {
    fprintf(stderr, "bench_plan: %s\n", what);
    exit(1);
}

static void *take(size_t size) {
    void *out = aligned_alloc(64, (size / 64 + 1) * 64);
    if (!out) die("out of memory");
    memset(out, 0, (size / 64 + 1) * 64);
    return out;
}

static int by_size(const void *a, const void *b) {
    double x = *(const double *)a, y = *(const double *)b;
    return x < y ? -1 : x > y;
}

static double median(double *times, int count) {
    qsort(times, (size_t)count, sizeof *times, by_size);
    return times[count / 2];
}

/* ---- the core's peak --------------------------------------------------------------------- */

#if defined(__x86_64__)
#include <immintrin.h>
__attribute__((target("avx512f"))) static double burn_avx512(long n) {
    __m512d x[12], a = _mm512_set1_pd(0.999999), b = _mm512_set1_pd(1e-9);
    for (int i = 0; i < 12; i++) x[i] = _mm512_set1_pd(i);
    for (long k = 0; k < n; k++)
        for (int i = 0; i < 12; i++) x[i] = _mm512_fmadd_pd(x[i], a, b);
    for (int i = 1; i < 12; i++) x[0] = _mm512_add_pd(x[0], x[i]);
    return _mm512_reduce_add_pd(x[0]);
}
__attribute__((target("avx2,fma"))) static double burn_avx2(long n) {
    __m256d x[12], a = _mm256_set1_pd(0.999999), b = _mm256_set1_pd(1e-9);
    for (int i = 0; i < 12; i++) x[i] = _mm256_set1_pd(i);
    for (long k = 0; k < n; k++)
        for (int i = 0; i < 12; i++) x[i] = _mm256_fmadd_pd(x[i], a, b);
    for (int i = 1; i < 12; i++) x[0] = _mm256_add_pd(x[0], x[i]);
    return x[0][0] + x[0][1] + x[0][2] + x[0][3];
}

/* Floating-point operations per second; 0 for the plain kernel. */
static double peak_of(const char *kernel) {
    const long n = 3000000;
    double best = 0, sink = 0;
    if (!strcmp(kernel, "plain")) return 0;
    int wide = !strcmp(kernel, "avx512");
    for (int round = 0; round < 7; round++) {
        double start = now();
        sink += wide ? burn_avx512(n) : burn_avx2(n);
        double rate = 2.0 * 12 * (wide ? 8 : 4) * (double)n / (now() - start);
        if (rate > best) best = rate;
    }
    return sink == 42 ? 0 : best;
}
#else
static double peak_of(const char *kernel) { return kernel ? 0 : 0; }
#endif

/* ---- networks ---------------------------------------------------------------------------- */

typedef struct subject {
    const char *name;
    uint32_t size, count, capacity, ports;
    anb__entry *entries;    /* lower triangle */
    double complex *values; /* [entry][point] */
    uint32_t *first_term;
    anb__term *terms;
    anb__complex *scale, *offset;
} subject;

static subject new_subject(const char *name, uint32_t size, uint32_t ports) {
    subject s = {.name = name, .size = size, .ports = ports, .capacity = 4 * size + 8};
    s.entries = take(s.capacity * sizeof *s.entries);
    s.values = take((size_t)s.capacity * POINTS * sizeof *s.values);
    s.first_term = take((ports + 1) * sizeof *s.first_term);
    s.terms = take(ports * sizeof *s.terms);
    s.scale = take(ports * sizeof *s.scale);
    s.offset = take(ports * sizeof *s.offset);
    return s;
}

static void free_subject(subject *s) {
    free(s->entries);
    free(s->values);
    free(s->first_term);
    free(s->terms);
    free(s->scale);
    free(s->offset);
}

static double complex *entry(subject *s, uint32_t a, uint32_t b) {
    uint32_t row = a > b ? a : b, column = a > b ? b : a;
    for (uint32_t e = 0; e < s->count; e++)
        if (s->entries[e].row == row && s->entries[e].column == column) return s->values + (size_t)e * POINTS;
    if (s->count == s->capacity) die("a network has too many entries");
    s->entries[s->count] = (anb__entry){row, column};
    return s->values + (size_t)s->count++ * POINTS;
}

/* From 0.5 to 1.5 of the design frequency. */
static double frequency(int point) { return 0.5 + (double)point / (POINTS - 1); }

static void line(subject *s, uint32_t a, uint32_t b, double z, double turns, double loss) {
    double complex *aa = entry(s, a, a), *bb = entry(s, b, b), *ab = entry(s, a, b);
    for (int p = 0; p < POINTS; p++) {
        double complex x = loss + I * 6.283185307179586 * turns * frequency(p);
        aa[p] += ccosh(x) / csinh(x) / z;
        bb[p] += ccosh(x) / csinh(x) / z;
        ab[p] -= 1 / csinh(x) / z;
    }
}

static void shunt(subject *s, uint32_t a, double g, double c) {
    double complex *aa = entry(s, a, a);
    for (int p = 0; p < POINTS; p++) aa[p] += g + I * c * frequency(p);
}

static void resistor(subject *s, uint32_t a, uint32_t b, double r) {
    double complex *aa = entry(s, a, a), *bb = entry(s, b, b), *ab = entry(s, a, b);
    for (int p = 0; p < POINTS; p++) {
        aa[p] += 1 / r;
        bb[p] += 1 / r;
        ab[p] -= 1 / r;
    }
}

static void coil(subject *s, uint32_t a, uint32_t b, double x, double r) {
    double complex *aa = entry(s, a, a), *bb = entry(s, b, b), *ab = entry(s, a, b);
    for (int p = 0; p < POINTS; p++) {
        double complex y = 1 / (r + I * x * frequency(p));
        aa[p] += y;
        bb[p] += y;
        ab[p] -= y;
    }
}

static void port(subject *s, uint32_t k, uint32_t unknown) {
    shunt(s, unknown, 1 / 50.0, 0);
    s->terms[k] = (anb__term){unknown, 1};
    s->first_term[k + 1] = k + 1;
    s->scale[k] = anb__cx(sqrt(2.0 / 50), 0);
    s->offset[k] = anb__cx(1, 0);
}

static subject splitter(void) {
    subject s = new_subject("3 nodes", 3, 3);
    line(&s, 0, 1, 70.7, 0.25, 0);
    line(&s, 0, 2, 70.7, 0.25, 0);
    resistor(&s, 1, 2, 100);
    for (uint32_t k = 0; k < 3; k++) port(&s, k, k);
    return s;
}

/* A splitter of two sections with lossy lines, and a coil and a capacitor before each port. */
static subject lossy(void) {
    subject s = new_subject("11 nodes", 11, 3);
    for (uint32_t side = 0; side < 2; side++) {
        line(&s, 3, 4 + side, 60, 0.25, 0.01);
        line(&s, 4 + side, 6 + side, 80, 0.25, 0.01);
        coil(&s, 6 + side, 8 + side, 5, 0.1);
        line(&s, 8 + side, 1 + side, 50, 0.1, 0.01);
        shunt(&s, 8 + side, 0.0001, 0.002);
    }
    resistor(&s, 4, 5, 100);
    resistor(&s, 6, 7, 220);
    coil(&s, 10, 3, 5, 0.1);
    line(&s, 0, 10, 50, 0.2, 0.01);
    for (uint32_t k = 0; k < 3; k++) port(&s, k, k);
    return s;
}

static subject ladder(void) {
    subject s = new_subject("41 nodes", 41, 2);
    for (uint32_t i = 0; i < 40; i++) coil(&s, i, i + 1, 30, 0.3);
    for (uint32_t i = 0; i < 41; i++) shunt(&s, i, 1e-5, 0.012);
    port(&s, 0, 0);
    port(&s, 1, 40);
    return s;
}

/* 63 splitters, each fed through a line, 65 ports. */
static subject feed(void) {
    subject s = new_subject("64-way feed", 189, 65);
    for (uint32_t i = 0; i < 63; i++) {
        uint32_t joint = 63 + 2 * i; /* its two outputs: joint, joint + 1 */
        line(&s, i, joint, 70.7, 0.25, 0.01);
        line(&s, i, joint + 1, 70.7, 0.25, 0.01);
        resistor(&s, joint, joint + 1, 100);
        for (uint32_t side = 0; side < 2 && 2 * i + 2 < 63; side++)
            line(&s, joint + side, 2 * i + 1 + side, 50, 0.13, 0.01);
    }
    port(&s, 0, 0);
    for (uint32_t k = 0; k < 64; k++) port(&s, k + 1, 63 + 62 + k);
    return s;
}

/* ---- ours -------------------------------------------------------------------------------- */

typedef struct ours {
    anb__plan *plan;
    const anb__plan_kernel *kernel;
    uint32_t groups; /* of a block */
    uint32_t *slot_of;
    double *slots, *values,
        *out; /* values: [block][entry][groups][16], as the evaluation of parts leaves them */
    uint8_t suspect[64];
} ours;

static anb_status compile(const subject *s, anb__plan **plan) {
    anb__complex *samples = take((size_t)8 * s->count * sizeof *samples);
    for (uint32_t k = 0; k < 8; k++)
        for (uint32_t e = 0; e < s->count; e++) {
            double complex v = s->values[(size_t)e * POINTS + 125 * k];
            samples[k * s->count + e] = anb__cx(creal(v), cimag(v));
        }
    anb__system system = {.size = s->size,
                          .symmetric = true,
                          .entry_count = s->count,
                          .entries = s->entries,
                          .sample_count = 8,
                          .samples = samples,
                          .port_count = s->ports,
                          .first_term = s->first_term,
                          .terms = s->terms,
                          .scale = s->scale,
                          .offset = s->offset};
    anb_status status = anb__plan_compile(&system, plan);
    free(samples);
    return status;
}

static size_t elements_of(const subject *s) { return (size_t)s->ports * (s->ports + 1) / 2; }

static ours prepare(const subject *s, const char *kernel) {
    ours x = {.kernel = anb__plan_kernel_find(kernel)};
    if (!x.kernel) die("no such kernel");
    if (compile(s, &x.plan) != ANB_OK) die("out of memory");
    x.groups =
        getenv("BENCH_GROUPS") ? (uint32_t)atoi(getenv("BENCH_GROUPS")) : anb__plan_block_groups(x.plan);
    uint32_t block = x.groups * 8, blocks = (POINTS + block - 1) / block;
    x.slots = take((size_t)anb__plan_slot_count(x.plan) * x.groups * 128);
    x.out = take(elements_of(s) * blocks * x.groups * 128);
    x.values = take((size_t)blocks * s->count * x.groups * 128);
    x.slot_of = take(s->count * sizeof *x.slot_of);
    for (uint32_t e = 0; e < s->count; e++) x.slot_of[e] = anb__plan_slot_of(x.plan, e);
    for (uint32_t b = 0; b < blocks; b++)
        for (uint32_t e = 0; e < s->count; e++)
            for (uint32_t k = 0; k < block; k++) {
                uint32_t point = b * block + k < POINTS ? b * block + k : POINTS - 1;
                double *to = x.values + (((size_t)b * s->count + e) * x.groups + k / 8) * 16 + k % 8;
                to[0] = creal(s->values[(size_t)e * POINTS + point]);
                to[8] = cimag(s->values[(size_t)e * POINTS + point]);
            }
    return x;
}

/* ns for each point; with or without copying the values into their slots. */
static double run_ours(const subject *s, ours *x, bool *any_suspect) {
    uint32_t block = x->groups * 8, blocks = (POINTS + block - 1) / block;
    double start = now();
    for (uint32_t b = 0; b < blocks; b++) {
        const double *from = x->values + (size_t)b * s->count * x->groups * 16;
        for (uint32_t e = 0; e < s->count; e++, from += x->groups * 16)
            memcpy(x->slots + (size_t)x->slot_of[e] * x->groups * 16, from, x->groups * 128);
        x->kernel->run(x->plan, x->slots, x->groups, x->out + elements_of(s) * b * x->groups * 16,
                       x->suspect);
        for (uint32_t g = 0; g < x->groups; g++) *any_suspect |= x->suspect[g] != 0;
    }
    return (now() - start) * 1e9 / (blocks * block);
}

/* The plan alone, again and again on a block that stays in the cache; slots get their values each time. */
static double run_fill(const subject *s, ours *x) {
    uint32_t block = x->groups * 8, blocks = (POINTS + block - 1) / block;
    double start = now();
    for (uint32_t b = 0; b < blocks; b++) {
        const double *from = x->values + (size_t)b * s->count * x->groups * 16;
        for (uint32_t e = 0; e < s->count; e++, from += x->groups * 16)
            memcpy(x->slots + (size_t)x->slot_of[e] * x->groups * 16, from, x->groups * 128);
    }
    return (now() - start) * 1e9 / (blocks * block);
}

static void free_ours(ours *x) {
    anb__plan_free(x->plan);
    free(x->slots);
    free(x->values);
    free(x->out);
    free(x->slot_of);
}

/* ---- the others -------------------------------------------------------------------------- */

typedef struct columns {
    int *start, *row;
    uint32_t *source;       /* entry of each place */
    double complex *values; /* [point][place] */
    int count;
} columns;

static columns columns_of(const subject *s) {
    columns c = {.start = take((s->size + 1) * sizeof *c.start), .row = take(2 * s->count * sizeof *c.row)};
    c.source = take(2 * s->count * sizeof *c.source);
    for (uint32_t column = 0; column < s->size; column++) {
        for (uint32_t row = 0; row < s->size; row++)
            for (uint32_t e = 0; e < s->count; e++) {
                const anb__entry *at = &s->entries[e];
                if (!(at->row == row && at->column == column) && !(at->row == column && at->column == row))
                    continue;
                c.row[c.count] = (int)row;
                c.source[c.count++] = e;
            }
        c.start[column + 1] = c.count;
    }
    c.values = take((size_t)POINTS * (size_t)c.count * sizeof *c.values);
    for (int p = 0; p < POINTS; p++)
        for (int k = 0; k < c.count; k++)
            c.values[(size_t)p * (size_t)c.count + (size_t)k] =
                s->values[(size_t)c.source[k] * POINTS + (size_t)p];
    return c;
}

static void free_columns(columns *c) {
    free(c->start);
    free(c->row);
    free(c->source);
    free(c->values);
}

static void unit_sources(const subject *s, double complex *b) {
    memset(b, 0, (size_t)s->size * s->ports * sizeof *b);
    for (uint32_t k = 0; k < s->ports; k++) b[(size_t)k * s->size + s->terms[k].unknown] = 1;
}

static double difference(const subject *s, const ours *x, const double complex *b, uint32_t point) {
    double worst = 0;
    for (uint32_t to = 0; to < s->ports; to++)
        for (uint32_t from = 0; from <= to; from++) {
            size_t element = (size_t)to * (to + 1) / 2 + from;
            const double *here = x->out + (point / 8 * elements_of(s) + element) * 16 + point % 8;
            double complex theirs =
                b[(size_t)from * s->size + s->terms[to].unknown] * (2.0 / 50) - (to == from);
            double error = cabs(here[0] + I * here[8] - theirs);
            if (!(error <= worst)) worst = isnan(error) ? INFINITY : error;
        }
    return worst;
}

/* ns for each point; *worst gets the largest difference where it is not NULL. */
static double run_klu(const subject *s, const columns *c, const ours *x, double *worst) {
    klu_common common;
    klu_defaults(&common);
    common.scale = -1;
    common.btf = 0;
    klu_symbolic *symbolic = klu_analyze((int)s->size, c->start, c->row, &common);
    klu_numeric *numeric =
        symbolic ? klu_z_factor(c->start, c->row, (double *)c->values, symbolic, &common) : NULL;
    if (!numeric) die("KLU fails");
    double complex *b = take((size_t)s->size * s->ports * sizeof *b);
    double time = 0;
    for (uint32_t p = 0; p < POINTS; p++) {
        double start = now();
        klu_z_refactor(c->start, c->row, (double *)(c->values + (size_t)p * (size_t)c->count), symbolic,
                       numeric, &common);
        unit_sources(s, b);
        klu_z_solve(symbolic, numeric, (int)s->size, (int)s->ports, (double *)b, &common);
        time += now() - start;
        double error = worst ? difference(s, x, b, p) : 0;
        if (worst && !(error <= *worst)) *worst = error;
    }
    klu_z_free_numeric(&numeric, &common);
    klu_free_symbolic(&symbolic, &common);
    free(b);
    return time * 1e9 / POINTS;
}

static double run_lapack(const subject *s, const columns *c, uint32_t points) {
    size_t n = s->size;
    double complex *b = take(n * s->ports * sizeof *b), *dense = take(n * n * sizeof *dense);
    lapack_int *pivots = take(n * sizeof *pivots);
    double start = now();
    for (uint32_t p = 0; p < points; p++) {
        memset(dense, 0, n * n * sizeof *dense);
        for (size_t column = 0; column < n; column++)
            for (int k = c->start[column]; k < c->start[column + 1]; k++)
                dense[column * n + (size_t)c->row[k]] = c->values[(size_t)p * (size_t)c->count + (size_t)k];
        unit_sources(s, b);
        if (LAPACKE_zgesv(LAPACK_COL_MAJOR, (lapack_int)n, (lapack_int)s->ports, dense, (lapack_int)n, pivots,
                          b, (lapack_int)n))
            die("zgesv fails");
    }
    double time = (now() - start) * 1e9 / points;
    free(b);
    free(dense);
    free(pivots);
    return time;
}

/* ---- one network ------------------------------------------------------------------------- */

static double compile_us(const subject *s) {
    double times[25];
    for (int k = 0; k < 25; k++) {
        anb__plan *plan;
        anb__complex *unused = take(1);
        free(unused);
        double start = now();
        if (compile(s, &plan) != ANB_OK) die("out of memory");
        times[k] = now() - start;
        anb__plan_free(plan);
    }
    return 1e6 * median(times, 25);
}

static bool measure(subject s, const char *kernel, int rounds) {
    ours x = prepare(&s, kernel);
    columns c = columns_of(&s);
    double mine[MOST_ROUNDS], fill[MOST_ROUNDS], klu[MOST_ROUNDS], dense[MOST_ROUNDS], worst = 0;
    bool suspect = false;
    run_ours(&s, &x, &suspect);
    run_klu(&s, &c, &x, &worst);
    for (int r = 0; r < rounds; r++) {
        mine[r] = run_ours(&s, &x, &suspect);
        fill[r] = run_fill(&s, &x);
        klu[r] = r && s.ports > 8 && r % 4 ? klu[r - 1] : run_klu(&s, &c, &x, NULL);
        dense[r] =
            r && s.size > 100 ? dense[r - 1] : run_lapack(&s, &c, s.size > 100 ? DENSE_POINTS : POINTS);
    }
    double a = median(mine, rounds), f = median(fill, rounds), k = median(klu, rounds),
           d = median(dense, rounds);
    double flops = 8 * (double)anb__plan_operations(x.plan), peak = peak_of(x.kernel->name);
    printf(
        "%-12s %s  ours %8.1f ns (of it values to slots %6.1f)  KLU %9.1f (%5.1f x)  zgesv %10.1f (%6.1f x)  "
        "peak %.2f of %.0f GFLOP/s  compile %.1f us  %u groups  differ %.0e%s\n",
        s.name, x.kernel->name, a, f, k, k / a, d, d / a, peak > 0 ? flops / ((a - f) * 1e-9) / peak : 0,
        peak * 1e-9, compile_us(&s), x.groups, worst, suspect ? "  SUSPECT" : "");
    bool good = worst <= AGREEMENT && !suspect;
    free_ours(&x);
    free_columns(&c);
    free_subject(&s);
    return good;
}

int main(int count, char **arguments) {
    int rounds = count > 1 ? atoi(arguments[1]) : 15;
    if (rounds < 1 || rounds > MOST_ROUNDS) die("ROUNDS is 1 to 101");
    const char *kernel = getenv("ANB_KERNEL");
    bool good = measure(splitter(), kernel, rounds);
    good = measure(lossy(), kernel, rounds) && good;
    good = measure(ladder(), kernel, rounds) && good;
    good = measure(feed(), kernel, rounds) && good;
    if (!good) fprintf(stderr, "bench_plan: answers differ by more than 1e-9, or were refused\n");
    return good ? 0 : 1;
}
