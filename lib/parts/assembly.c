#include "parts/assembly.h"

#include <stdlib.h>
#include <string.h>

#include "parts/stamper.h"

/* ---- from stamps to an assembly -------------------------------------------------------- */

static bool is_reciprocal(const anb__network *network) {
    for (uint32_t i = 0; i < network->part_count; i++)
        if (!anb__family_of(&network->parts[i])->reciprocal) return false;
    return true;
}

static void stamp_all(anb__stamper *stamper, const anb__network *network, const anb__shunt *shunts,
                      uint32_t shunt_count) {
    for (uint32_t i = 0; i < shunt_count && !stamper->failed; i++) anb__stamp_shunt(stamper, &shunts[i]);
    for (uint32_t i = 0; i < network->part_count && !stamper->failed; i++) {
        const anb__placed *part = &network->parts[i];
        if (anb__connection_of(network, part) == ANB__CONNECTS_BY_EQUATIONS)
            anb__stamp_part(stamper, part, network->branches + part->first_branch);
    }
}

static int by_value(const void *a, const void *b) {
    const anb__share *x = a, *y = b;
    return x->value < y->value ? -1 : x->value > y->value;
}

/* Sums the shares of equal values; returns how many are left. */
static uint32_t merge(anb__share *shares, uint32_t count) {
    uint32_t kept = 0;
    if (count > 1) qsort(shares, count, sizeof *shares, by_value);
    for (uint32_t i = 0; i < count; i++) {
        if (kept && shares[kept - 1].value == shares[i].value)
            shares[kept - 1].factor += shares[i].factor;
        else
            shares[kept++] = shares[i];
    }
    return kept;
}

/* Sorts the loose shares by entry (a counting sort keeps their order), then merges each entry's. */
static bool gather_shares(const anb__stamper *stamper, anb__assembly *out) {
    uint32_t entries = out->entry_count, count = stamper->shares.count;
    const anb__loose_share *loose = stamper->shares.items;
    out->first_share = calloc((size_t)entries + 2, sizeof *out->first_share);
    out->shares = malloc((count ? count : 1) * sizeof *out->shares);
    if (!out->first_share || !out->shares) return false;
    uint32_t *next = out->first_share + 1;
    for (uint32_t i = 0; i < count; i++) next[loose[i].entry + 1]++;
    for (uint32_t e = 0; e < entries; e++) next[e + 1] += next[e];
    for (uint32_t i = 0; i < count; i++) out->shares[next[loose[i].entry]++] = loose[i].share;
    uint32_t kept = 0, first = 0;
    for (uint32_t e = 0; e < entries; e++) {
        uint32_t end = out->first_share[e + 1], merged = merge(out->shares + first, end - first);
        memmove(out->shares + kept, out->shares + first, merged * sizeof *out->shares);
        out->first_share[e] = kept;
        kept += merged;
        first = end;
    }
    out->first_share[entries] = kept;
    return true;
}

static void *taken(anb__list *list, uint32_t *count) {
    void *items = list->items;
    *count = list->count;
    *list = (anb__list){0};
    return items;
}

static bool split_places(const anb__stamper *stamper, anb__assembly *out) {
    uint32_t count = stamper->places.count;
    const anb__place_of_entry *places = stamper->places.items;
    out->rows = malloc((count ? count : 1) * sizeof *out->rows);
    out->columns = malloc((count ? count : 1) * sizeof *out->columns);
    if (!out->rows || !out->columns) return false;
    for (uint32_t i = 0; i < count; i++) {
        out->rows[i] = places[i].row;
        out->columns[i] = places[i].column;
    }
    return true;
}

anb_status anb__assemble(const anb__network *network, const anb__numbering *numbering,
                         const anb__shunt *shunts, uint32_t shunt_count, anb__assembly *out) {
    anb__stamper stamper = {.numbering = numbering, .unknown_count = numbering->unknown_count};
    *out = (anb__assembly){0};
    stamper.symmetric = is_reciprocal(network);
    stamp_all(&stamper, network, shunts, shunt_count);
    out->symmetric = stamper.symmetric;
    out->unknown_count = stamper.unknown_count;
    out->value_count = stamper.value_count;
    bool done = !stamper.failed && split_places(&stamper, out);
    if (done) {
        out->base = taken(&stamper.base, &out->entry_count);
        out->waves = taken(&stamper.waves, &out->wave_count);
        out->branches = taken(&stamper.series, &out->branch_count);
        out->lines = taken(&stamper.lines, &out->line_count);
        out->generics = taken(&stamper.generics, &out->generic_count);
        done = gather_shares(&stamper, out);
    }
    anb__stamper_clear(&stamper);
    return done ? ANB_OK : ANB_MEMORY;
}

void anb__assembly_clear(anb__assembly *assembly) {
    free(assembly->rows);
    free(assembly->columns);
    free(assembly->base);
    free(assembly->first_share);
    free(assembly->shares);
    free(assembly->waves);
    free(assembly->branches);
    free(assembly->lines);
    free(assembly->generics);
    *assembly = (anb__assembly){0};
}

size_t anb__assembly_scratch(const anb__assembly *assembly, uint32_t groups) {
    return ((size_t)assembly->value_count * ANB__GROUP + 4 * ANB__LANES) * groups;
}

/* ---- parts that are evaluated point by point ------------------------------------------------ */

/* Solves B Y = -A for Y, m x m with m <= 4, by elimination with row pivoting; NaN where B is singular. */
static void admittances(int m, anb__complex *a, anb__complex *b, anb__complex *y) {
    for (int k = 0; k < m; k++) {
        int best = k;
        for (int i = k + 1; i < m; i++)
            if (anb__cabs(b[i * m + k]) > anb__cabs(b[best * m + k])) best = i;
        for (int j = 0; j < m; j++) {
            anb__complex swap = b[k * m + j];
            b[k * m + j] = b[best * m + j];
            b[best * m + j] = swap;
            swap = a[k * m + j];
            a[k * m + j] = a[best * m + j];
            a[best * m + j] = swap;
        }
        for (int i = 0; i < m; i++) {
            if (i == k) continue;
            anb__complex factor = anb__cdiv(b[i * m + k], b[k * m + k]);
            for (int j = 0; j < m; j++) {
                b[i * m + j] = anb__csub(b[i * m + j], anb__cmul(factor, b[k * m + j]));
                a[i * m + j] = anb__csub(a[i * m + j], anb__cmul(factor, a[k * m + j]));
            }
        }
    }
    for (int i = 0; i < m; i++)
        for (int j = 0; j < m; j++) y[i * m + j] = anb__cneg(anb__cdiv(a[i * m + j], b[i * m + i]));
}

static anb__complex value_of(const anb__series *series) {
    return series->zero || series->order ? anb__cx(0, 0) : series->c[0];
}

void anb__evaluate_generic(const anb__placed *part, const double *hz, double *out, size_t stride) {
    int m = part->branch_count, size = m * m;
    anb__complex a[ANB__MOST_BRANCHES * ANB__MOST_BRANCHES], b[ANB__MOST_BRANCHES * ANB__MOST_BRANCHES],
        y[ANB__MOST_BRANCHES * ANB__MOST_BRANCHES];
    for (int lane = 0; lane < ANB__LANES; lane++) {
        anb__point point;
        anb__equations equations;
        anb__point_at(hz[lane], &point);
        bool defined = anb__part_equations(part, &point, &equations);
        for (int k = 0; k < size; k++) {
            a[k] = defined ? value_of(&equations.a[k]) : anb__cx(NAN, NAN);
            b[k] = defined ? value_of(&equations.b[k]) : anb__cx(NAN, NAN);
        }
        admittances(m, a, b, y);
        for (int k = 0; k < size; k++) {
            out[(size_t)k * stride + (size_t)lane] = y[k].re;
            out[(size_t)k * stride + ANB__LANES + (size_t)lane] = y[k].im;
        }
    }
}

/* ---- the kernels ------------------------------------------------------------------------------- */

anb__assembly_fill anb__fill_plain;
#if defined(__x86_64__)
anb__assembly_fill anb__fill_avx2, anb__fill_avx512;
#endif

static const struct {
    const char *name;
    anb__assembly_fill *fill;
} kernels[] = {
#if defined(__x86_64__)
    {"avx512", anb__fill_avx512},
    {"avx2", anb__fill_avx2},
#endif
    {"plain", anb__fill_plain},
};

static bool runs_here(const char *name) {
#if defined(__x86_64__)
    if (!strcmp(name, "avx512"))
        return __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq");
    if (!strcmp(name, "avx2")) return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
#endif
    return !strcmp(name, "plain");
}

anb__assembly_fill *anb__assembly_kernel(const char *name) {
    for (size_t i = 0; i < sizeof kernels / sizeof *kernels; i++)
        if ((!name || !strcmp(name, kernels[i].name)) && runs_here(kernels[i].name)) return kernels[i].fill;
    return NULL;
}
