/* The whole engine beside the obvious ways, in one run and on one thread.
 *
 *     bench_sweep [--points N] [--rounds N] NETLIST...
 *
 * Ours: parts evaluated, matrix filled, plan run, guard on, S in the library's own form (in blocks to a
 * consumer that reads every entry where it would pass 256 MiB). The baselines get finished
 * matrix values: KLU, analysed once, refactored and solved for all ports in one call at each frequency; and
 * zgesv of LAPACK. All answers are compared; beyond 1e-9 the bench fails. Times are medians of the rounds.
 */
#include <klu.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include "context.h"
#include "data/data.h"
#include "sweep/engine.h"

/* after our own: it brings <complex.h>, whose macros take common words */
#include <lapacke.h>

enum { MOST_ROUNDS = 101, LAPACK_POINTS = 101, CHUNK = 4096 };
#define AGREEMENT 1e-9
#define IN_MEMORY (256u << 20) /* bytes of S; beyond it goes in blocks */

static double now(void) {
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static void die(const char *what) {
    fprintf(stderr, "bench_sweep: %s\n", what);
    exit(1);
}

static void *take(size_t size) {
    void *out = aligned_alloc(64, (size / 64 + 1) * 64);
    if (!out) die("out of memory");
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

/* ---- the core's peak ---------------------------------------------------------------------------- */

/* Fused multiply-adds per second times two, with enough independent chains to hide the latency. */
#if defined(__x86_64__)
#include <immintrin.h>
__attribute__((target("avx512f"))) static double burn_512(long n) {
    __m512d x[12], a = _mm512_set1_pd(0.999999), b = _mm512_set1_pd(1e-9);
    for (int i = 0; i < 12; i++) x[i] = _mm512_set1_pd(i);
    for (long k = 0; k < n; k++)
        for (int i = 0; i < 12; i++) x[i] = _mm512_fmadd_pd(x[i], a, b);
    for (int i = 1; i < 12; i++) x[0] = _mm512_add_pd(x[0], x[i]);
    return _mm512_reduce_add_pd(x[0]);
}
__attribute__((target("avx2,fma"))) static double burn_256(long n) {
    __m256d x[12], a = _mm256_set1_pd(0.999999), b = _mm256_set1_pd(1e-9);
    for (int i = 0; i < 12; i++) x[i] = _mm256_set1_pd(i);
    for (long k = 0; k < n; k++)
        for (int i = 0; i < 12; i++) x[i] = _mm256_fmadd_pd(x[i], a, b);
    for (int i = 1; i < 12; i++) x[0] = _mm256_add_pd(x[0], x[i]);
    return x[0][0] + x[0][1] + x[0][2] + x[0][3];
}
#endif

static double peak_flops(const char *kernel) {
    long n = 2000000;
    double best = 0, sink = 0, width = 0;
    for (int round = 0; round < 5; round++) {
        double start = now();
#if defined(__x86_64__)
        if (!strcmp(kernel, "avx512"))
            sink += burn_512(n), width = 8;
        else if (!strcmp(kernel, "avx2"))
            sink += burn_256(n), width = 4;
#endif
        double rate = 2 * 12 * width * (double)n / (now() - start);
        if (rate > best) best = rate;
    }
    if (sink == 42) puts("");
    return best;
}

/* ---- one netlist ---------------------------------------------------------------------------------- */

typedef struct subject {
    const anb_netlist *netlist;
    anb__engine engine;
    anb__bench bench;
    uint64_t points;
    uint32_t ports;
    size_t elements; /* of S, packed or full */
    double *hz;
} subject;

/* The library's sweep, by the point. The last block's S is left in `s`. */
static double run_ours(subject *x, double *s, uint64_t chunk) {
    double start = now(), sum = 0;
    for (uint64_t first = 0; first < x->points; first += chunk) {
        uint64_t count = x->points - first < chunk ? x->points - first : chunk;
        if (anb__compute_points(&x->bench, x->hz + first, count, s) != ANB_OK) die("a point has no solution");
        if (chunk < x->points)
            for (size_t k = 0; k < (count + 7) / 8 * x->elements * 16; k++) sum += s[k];
    }
    double time = now() - start;
    if (sum == 42) puts("");
    return time / (double)x->points;
}

/* Finished matrix values at a chunk of frequencies: [point][entry], full matrix entries. */
typedef struct matrices {
    uint32_t size, entries;
    int *start, *row; /* compressed columns */
    double *values;   /* complex, [point][place] */
    uint64_t points;
} matrices;

typedef struct place {
    uint32_t row, column, entry;
} place;

static int by_place(const void *a, const void *b) {
    const place *x = a, *y = b;
    if (x->column != y->column) return x->column < y->column ? -1 : 1;
    return x->row < y->row ? -1 : x->row > y->row;
}

static void fill_values(subject *x, const place *places, matrices *m) {
    const anb__assembly *a = &x->engine.assembly;
    double *slots = take((size_t)a->entry_count * 16 * sizeof(double));
    double *scratch = take(anb__assembly_scratch(a, 1) * sizeof(double)), hz[8];
    uint32_t *identity = take(a->entry_count * sizeof *identity);
    for (uint32_t i = 0; i < a->entry_count; i++) identity[i] = i;
    for (uint64_t p = 0; p < m->points; p++) {
        if (p % 8 == 0) {
            for (uint64_t k = 0; k < 8; k++) hz[k] = x->hz[p + k < x->points ? p + k : x->points - 1];
            x->engine.fill(a, identity, hz, 1, scratch, slots);
        }
        for (uint32_t k = 0; k < m->entries; k++)
            for (int part = 0; part < 2; part++)
                m->values[2 * (p * m->entries + k) + (size_t)part] =
                    slots[places[k].entry * 16 + 8 * (size_t)part + p % 8];
    }
    free(slots);
    free(scratch);
    free(identity);
}

static void build_matrices(subject *x, uint64_t points, matrices *m) {
    const anb__assembly *a = &x->engine.assembly;
    place *places = take(2 * (size_t)a->entry_count * sizeof *places);
    *m = (matrices){.size = a->unknown_count, .points = points};
    for (uint32_t e = 0; e < a->entry_count; e++) {
        places[m->entries++] = (place){a->rows[e], a->columns[e], e};
        if (a->symmetric && a->rows[e] != a->columns[e])
            places[m->entries++] = (place){a->columns[e], a->rows[e], e};
    }
    qsort(places, m->entries, sizeof *places, by_place);
    m->start = take((m->size + 1) * sizeof *m->start);
    m->row = take(m->entries * sizeof *m->row);
    memset(m->start, 0, (m->size + 1) * sizeof *m->start);
    for (uint32_t k = 0; k < m->entries; k++) {
        m->row[k] = (int)places[k].row;
        m->start[places[k].column + 1]++;
    }
    for (uint32_t c = 0; c < m->size; c++) m->start[c + 1] += m->start[c];
    m->values = take(2 * points * m->entries * sizeof(double));
    fill_values(x, places, m);
    free(places);
}

/* The right-hand sides: the voltage of port k is read by the vector that its source drives. */
static void sources(const subject *x, double *b) {
    const anb__nodes *nodes = &x->engine.nodes;
    uint32_t n = x->engine.assembly.unknown_count;
    memset(b, 0, 2 * (size_t)n * x->ports * sizeof *b);
    for (uint32_t k = 0; k < x->ports; k++)
        for (uint32_t i = nodes->first_port_term[k]; i < nodes->first_port_term[k + 1]; i++)
            b[2 * ((size_t)k * n + nodes->port_terms[i].unknown)] += nodes->port_terms[i].sign;
}

/* The largest difference from our S of one point's solution vectors. */
static double difference(const subject *x, const double *solution, const double *s, uint64_t point) {
    const anb__nodes *nodes = &x->engine.nodes;
    uint32_t n = x->engine.assembly.unknown_count;
    bool packed = x->engine.assembly.symmetric;
    double worst = 0;
    for (uint32_t to = 0; to < x->ports; to++)
        for (uint32_t from = 0; from < (packed ? to + 1 : x->ports); from++) {
            size_t element = packed ? (size_t)to * (to + 1) / 2 + from : (size_t)to * x->ports + from;
            const double *ours = s + (point / 8 * x->elements + element) * 16 + point % 8;
            anb__complex v = {0, 0}, zt = x->netlist->network.ports[to].z,
                         zf = x->netlist->network.ports[from].z;
            for (uint32_t i = nodes->first_port_term[to]; i < nodes->first_port_term[to + 1]; i++) {
                size_t at = 2 * ((size_t)from * n + nodes->port_terms[i].unknown);
                v = anb__cadd(
                    v, anb__cscale(anb__cx(solution[at], solution[at + 1]), nodes->port_terms[i].sign));
            }
            v = anb__cdiv(anb__cscale(v, 2 * sqrt(zt.re * zf.re)), anb__cmul(zt, zf));
            if (to == from) v = anb__csub(v, anb__cdiv(anb__cconj(zt), zt));
            double error = anb__cabs(anb__csub(v, anb__cx(ours[0], ours[8])));
            if (!(error <= worst)) worst = error;
        }
    return worst;
}

/* KLU over the chunk; the worst difference of the points that are compared. */
static double run_klu(const subject *x, const matrices *m, const double *s, double *worst) {
    klu_common common;
    klu_defaults(&common);
    common.scale = -1;
    common.btf = 0;
    klu_symbolic *symbolic = klu_analyze((int)m->size, m->start, m->row, &common);
    klu_numeric *numeric = symbolic ? klu_z_factor(m->start, m->row, m->values, symbolic, &common) : NULL;
    if (!numeric) die("KLU finds the first point singular");
    size_t size = 2 * (size_t)m->size * x->ports;
    double *b = take(size * sizeof *b), *start_b = take(size * sizeof *b);
    sources(x, start_b);
    double time = 0;
    for (uint64_t p = 0; p < m->points; p++) {
        double start = now();
        klu_z_refactor(m->start, m->row, m->values + 2 * p * m->entries, symbolic, numeric, &common);
        memcpy(b, start_b, size * sizeof *b);
        klu_z_solve(symbolic, numeric, (int)m->size, (int)x->ports, b, &common);
        time += now() - start;
        if (worst && p % 97 == 0) {
            double error = difference(x, b, s, p);
            if (!(error <= *worst)) *worst = error;
        }
    }
    klu_z_free_numeric(&numeric, &common);
    klu_free_symbolic(&symbolic, &common);
    free(b);
    free(start_b);
    return time / (double)m->points;
}

static double run_lapack(const subject *x, const matrices *m, uint64_t points, const double *s,
                         double *worst) {
    size_t n = m->size, size = 2 * n * x->ports;
    double *b = take(size * sizeof *b), *start_b = take(size * sizeof *b),
           *dense = take(2 * n * n * sizeof *dense);
    lapack_int *pivots = take(n * sizeof *pivots);
    double time = 0;
    sources(x, start_b);
    for (uint64_t p = 0; p < points; p++) {
        double start = now();
        memset(dense, 0, 2 * n * n * sizeof *dense);
        for (uint32_t c = 0; c < m->size; c++)
            for (int k = m->start[c]; k < m->start[c + 1]; k++)
                memcpy(dense + 2 * (c * n + (size_t)m->row[k]), m->values + 2 * (p * m->entries + (size_t)k),
                       16);
        memcpy(b, start_b, size * sizeof *b);
        if (LAPACKE_zgesv(LAPACK_COL_MAJOR, (lapack_int)n, (lapack_int)x->ports,
                          (lapack_complex_double *)dense, (lapack_int)n, pivots, (lapack_complex_double *)b,
                          (lapack_int)n))
            die("zgesv finds a point singular");
        time += now() - start;
        double error = difference(x, b, s, p);
        if (!(error <= *worst)) *worst = error;
    }
    free(b);
    free(start_b);
    free(dense);
    free(pivots);
    return time / (double)points;
}

static double compile_time(const anb_netlist *netlist) {
    double times[MOST_ROUNDS];
    for (int i = 0; i < MOST_ROUNDS; i++) {
        anb__engine engine;
        if (anb__engine_new(&netlist->network, &netlist->grid, getenv("ANB_KERNEL"), &engine) != ANB_OK)
            die("out of memory");
        times[i] = engine.compile_seconds;
        anb__engine_clear(&engine);
    }
    return median(times, MOST_ROUNDS);
}

static void prepare(const anb_netlist *netlist, uint64_t points, subject *x) {
    *x = (subject){.netlist = netlist, .ports = netlist->network.port_count};
    if (anb__engine_new(&netlist->network, &netlist->grid, getenv("ANB_KERNEL"), &x->engine) != ANB_OK ||
        anb__bench_new(&x->engine, &x->bench) != ANB_OK)
        die("out of memory");
    double low, high;
    x->points = points ? points : netlist->grid.count;
    if (anb__grid_fill(&netlist->grid, 0, 1, &low) ||
        anb__grid_fill(&netlist->grid, netlist->grid.count - 1, 1, &high))
        die("out of memory");
    x->hz = take(x->points * sizeof *x->hz);
    for (uint64_t k = 0; k < x->points; k++)
        x->hz[k] = low + (high - low) * (double)k / (double)(x->points > 1 ? x->points - 1 : 1);
    x->elements =
        x->engine.assembly.symmetric ? (size_t)x->ports * (x->ports + 1) / 2 : (size_t)x->ports * x->ports;
}

/* One netlist at one number of points; true where the answers agree. */
static bool measure(const anb_netlist *netlist, const char *name, uint64_t points, int rounds) {
    subject x;
    matrices m;
    prepare(netlist, points, &x);
    size_t bytes = (x.points + 7) / 8 * x.elements * 128;
    uint64_t chunk = bytes > IN_MEMORY ? CHUNK : (x.points + 7) / 8 * 8;
    uint64_t compared = x.points < chunk ? x.points : chunk;
    build_matrices(&x, compared > CHUNK ? CHUNK : compared, &m);
    double *s = take((chunk + 7) / 8 * x.elements * 128);
    uint64_t lapack_points = m.points < LAPACK_POINTS ? m.points : LAPACK_POINTS;
    double ours[MOST_ROUNDS], klu[MOST_ROUNDS], lapack[MOST_ROUNDS], worst = 0;
    run_ours(&x, s, chunk); /* warms up */
    if (anb__compute_points(&x.bench, x.hz, compared, s) != ANB_OK) die("a point has no solution");
    run_klu(&x, &m, s, &worst);
    run_lapack(&x, &m, lapack_points, s, &worst);
    for (int r = 0; r < rounds; r++) {
        ours[r] = run_ours(&x, s, chunk);
        klu[r] = run_klu(&x, &m, s, NULL);
        double ignored = 0;
        lapack[r] = r && x.ports > 8 ? lapack[0] : run_lapack(&x, &m, lapack_points, s, &ignored);
    }
    double a = median(ours, rounds), b = median(klu, rounds), c = median(lapack, rounds);
    const char *kernel = x.engine.kernel->name;
    double flops = 8 * (double)anb__plan_operations(x.engine.plan) / a, peak = peak_flops(kernel);
    printf("%-16s %8llu points %6u unknowns %3u ports  ours %10.1f ns  KLU %10.1f ns (%5.1f x)  zgesv %11.1f "
           "ns (%6.1f x)"
           "  peak %4.2f  compile %6.1f us  differ %.1e  pivoted %llu\n",
           name, (unsigned long long)x.points, x.engine.assembly.unknown_count, x.ports, 1e9 * a, 1e9 * b,
           b / a, 1e9 * c, c / a, peak > 0 ? flops / peak : 0, 1e6 * compile_time(netlist), worst,
           (unsigned long long)x.bench.pivoted_points);
    anb__bench_clear(&x.bench);
    anb__engine_clear(&x.engine);
    free(x.hz);
    free(m.start);
    free(m.row);
    free(m.values);
    free(s);
    return worst <= AGREEMENT;
}

int main(int count, char **arguments) {
    uint64_t points = 0;
    int rounds = 11, bad = 0, netlists = 0;
    for (int i = 1; i < count; i++) {
        if (!strcmp(arguments[i], "--points") && i + 1 < count) {
            points = strtoull(arguments[++i], NULL, 10);
            continue;
        }
        if (!strcmp(arguments[i], "--rounds") && i + 1 < count) {
            rounds = atoi(arguments[++i]);
            if (rounds < 1 || rounds > MOST_ROUNDS) die("--rounds takes 1 to 101");
            continue;
        }
        anb_context *context = anb_context_new();
        anb_netlist *netlist;
        if (!context) die("out of memory");
        if (anb_netlist_read(context, arguments[i], NULL, &netlist) != ANB_OK) die(arguments[i]);
        const char *name = strrchr(arguments[i], '/');
        bad += !measure(netlist, name ? name + 1 : arguments[i], points, rounds);
        netlists++;
        anb_netlist_free(netlist);
        anb_context_free(context);
    }
    if (!netlists) die("usage: bench_sweep [--points N] [--rounds N] NETLIST...");
    if (bad) fprintf(stderr, "bench_sweep: answers differ by more than 1e-9\n");
    return bad ? 1 : 0;
}
