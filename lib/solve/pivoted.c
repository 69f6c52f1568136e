#include "solve/pivoted.h"

#include <klu.h>
#include <stdlib.h>
#include <string.h>

enum { DENSE_UP_TO = 24 }; /* unknowns; beyond it KLU is faster */
#define SINGULAR 1e-13     /* smallest over largest pivot of rows that are scaled to 1 */
#define KLU_PIVOT_TOLERANCE                                                                                  \
    0.1 /* a diagonal pivot is kept from this share of its column's largest entry on */

struct anb__pivoted {
    uint32_t size, entry_count, probe_count;
    const anb__probe *probes;
    uint32_t *place_of;         /* entry -> index into `matrix` */
    int *column_start, *row_of; /* compressed columns: [size + 1], [places] */
    double *matrix;             /* complex, [places], rows scaled */
    double *row_scale;          /* [size] */
    double *x, *rest;           /* complex, [probes][size] */
    double *dense;              /* complex, [size][size] by columns; small systems only */
    uint32_t *pivots;           /* small systems only */
    klu_symbolic *symbolic;
    klu_common common;
};

/* ---- the pattern ------------------------------------------------------------------------ */

typedef struct place {
    uint32_t row, column, entry;
} place;

static int by_column(const void *a, const void *b) {
    const place *x = a, *y = b;
    if (x->column != y->column) return x->column < y->column ? -1 : 1;
    if (x->row != y->row) return x->row < y->row ? -1 : 1;
    return 0;
}

/* Compressed columns from entries in any order. */
static bool compress(anb__pivoted *p, const uint32_t *rows, const uint32_t *columns) {
    place *places = malloc((p->entry_count + 1) * sizeof *places);
    if (!places) return false;
    for (uint32_t i = 0; i < p->entry_count; i++) places[i] = (place){rows[i], columns[i], i};
    qsort(places, p->entry_count, sizeof *places, by_column);
    int count = -1;
    for (uint32_t i = 0; i < p->entry_count; i++) {
        if (!i || by_column(&places[i], &places[i - 1])) {
            p->row_of[++count] = (int)places[i].row;
            p->column_start[places[i].column + 1] = count + 1;
        }
        p->place_of[places[i].entry] = (uint32_t)count;
    }
    for (uint32_t c = 0; c < p->size; c++)
        if (p->column_start[c + 1] < p->column_start[c]) p->column_start[c + 1] = p->column_start[c];
    free(places);
    return true;
}

static bool allocate(anb__pivoted *p) {
    size_t size = p->size + 1, entries = p->entry_count + 1, probes = p->probe_count + 1;
    p->place_of = malloc(entries * sizeof *p->place_of);
    p->column_start = calloc(size + 1, sizeof *p->column_start);
    p->row_of = malloc(entries * sizeof *p->row_of);
    p->matrix = malloc(2 * entries * sizeof *p->matrix);
    p->row_scale = malloc(size * sizeof *p->row_scale);
    p->x = malloc(2 * size * probes * sizeof *p->x);
    p->rest = malloc(2 * size * probes * sizeof *p->rest);
    if (p->size <= DENSE_UP_TO) {
        p->dense = malloc(2 * size * size * sizeof *p->dense);
        p->pivots = malloc(size * sizeof *p->pivots);
        if (!p->dense || !p->pivots) return false;
    }
    return p->place_of && p->column_start && p->row_of && p->matrix && p->row_scale && p->x && p->rest;
}

static anb_status analyse(anb__pivoted *p) {
    klu_defaults(&p->common);
    p->common.scale = -1; /* rows are scaled here */
    p->common.btf = 0;
    p->common.tol = KLU_PIVOT_TOLERANCE;
    if (p->size <= DENSE_UP_TO) return ANB_OK;
    p->symbolic = klu_analyze((int)p->size, p->column_start, p->row_of, &p->common);
    return p->symbolic || p->common.status == KLU_SINGULAR ? ANB_OK : ANB_MEMORY;
}

anb_status anb__pivoted_new(uint32_t size, const uint32_t *rows, const uint32_t *columns,
                            uint32_t entry_count, const anb__probe *probes, uint32_t probe_count,
                            anb__pivoted **out) {
    anb__pivoted *p = calloc(1, sizeof *p);
    anb_status status = ANB_MEMORY;
    *out = NULL;
    if (!p) return status;
    p->size = size;
    p->entry_count = entry_count;
    p->probe_count = probe_count;
    p->probes = probes;
    if (allocate(p) && compress(p, rows, columns)) status = analyse(p);
    if (status == ANB_OK)
        *out = p;
    else
        anb__pivoted_free(p);
    return status;
}

void anb__pivoted_free(anb__pivoted *p) {
    if (!p) return;
    if (p->symbolic) klu_free_symbolic(&p->symbolic, &p->common);
    free(p->place_of);
    free(p->column_start);
    free(p->row_of);
    free(p->matrix);
    free(p->row_scale);
    free(p->x);
    free(p->rest);
    free(p->dense);
    free(p->pivots);
    free(p);
}

/* ---- one point ----------------------------------------------------------------------------- */

/* Sums the entries into the matrix and scales every row so that its largest entry is about 1 (by a power
 * of two, which rounds nothing). False for a row without entries or one that is not finite. */
static bool load(anb__pivoted *p, const anb__complex *values) {
    int places = p->column_start[p->size];
    memset(p->matrix, 0, 2 * (size_t)places * sizeof *p->matrix);
    for (uint32_t i = 0; i < p->entry_count; i++) {
        p->matrix[2 * p->place_of[i]] += values[i].re;
        p->matrix[2 * p->place_of[i] + 1] += values[i].im;
    }
    for (uint32_t i = 0; i < p->size; i++) p->row_scale[i] = 0;
    for (int k = 0; k < places; k++) {
        double size = fabs(p->matrix[2 * k]) + fabs(p->matrix[2 * k + 1]);
        if (!(size <= p->row_scale[p->row_of[k]])) p->row_scale[p->row_of[k]] = size;
    }
    for (uint32_t i = 0; i < p->size; i++) {
        if (!(p->row_scale[i] > 0) || !isfinite(p->row_scale[i])) return false;
        p->row_scale[i] = ldexp(1, -ilogb(p->row_scale[i]));
    }
    for (int k = 0; k < places; k++) {
        p->matrix[2 * k] *= p->row_scale[p->row_of[k]];
        p->matrix[2 * k + 1] *= p->row_scale[p->row_of[k]];
    }
    return true;
}

static anb__complex at(const double *x, size_t k) { return anb__cx(x[2 * k], x[2 * k + 1]); }
static void put(double *x, size_t k, anb__complex value) {
    x[2 * k] = value.re;
    x[2 * k + 1] = value.im;
}

/* rest = b - M x for every probe. */
static void residual(anb__pivoted *p) {
    size_t n = p->size;
    memset(p->rest, 0, 2 * n * p->probe_count * sizeof *p->rest);
    for (uint32_t l = 0; l < p->probe_count; l++) {
        double *rest = p->rest + 2 * n * l, *x = p->x + 2 * n * l;
        rest[2 * p->probes[l].row] = p->probes[l].value * p->row_scale[p->probes[l].row];
        for (uint32_t c = 0; c < p->size; c++) {
            anb__complex xc = at(x, c);
            if (anb__cis_zero(xc)) continue;
            for (int k = p->column_start[c]; k < p->column_start[c + 1]; k++) {
                size_t r = (size_t)p->row_of[k];
                put(rest, r, anb__csub(at(rest, r), anb__cmul(at(p->matrix, (size_t)k), xc)));
            }
        }
    }
}

static void add_correction(anb__pivoted *p) {
    for (size_t i = 0; i < 2 * (size_t)p->size * p->probe_count; i++) p->x[i] += p->rest[i];
}

/* ---- dense ---------------------------------------------------------------------------------- */

/* Column by column, partial pivoting; L below the diagonal. */
static bool dense_factor(anb__pivoted *p) {
    size_t n = p->size;
    double largest = 0, smallest = INFINITY;
    memset(p->dense, 0, 2 * n * n * sizeof *p->dense);
    for (size_t c = 0; c < n; c++)
        for (int k = p->column_start[c]; k < p->column_start[c + 1]; k++)
            put(p->dense, c * n + (size_t)p->row_of[k], at(p->matrix, (size_t)k));
    for (size_t k = 0; k < n; k++) {
        size_t best = k;
        for (size_t i = k + 1; i < n; i++)
            if (anb__cabs(at(p->dense, k * n + i)) > anb__cabs(at(p->dense, k * n + best))) best = i;
        double size = anb__cabs(at(p->dense, k * n + best));
        largest = fmax(largest, size);
        smallest = fmin(smallest, size);
        if (!(smallest > SINGULAR * largest)) return false;
        p->pivots[k] = (uint32_t)best;
        for (size_t c = 0; c < n; c++) {
            anb__complex swap = at(p->dense, c * n + k);
            put(p->dense, c * n + k, at(p->dense, c * n + best));
            put(p->dense, c * n + best, swap);
        }
        anb__complex inverse = anb__cdiv(anb__cx(1, 0), at(p->dense, k * n + k));
        for (size_t i = k + 1; i < n; i++)
            put(p->dense, k * n + i, anb__cmul(at(p->dense, k * n + i), inverse));
        for (size_t c = k + 1; c < n; c++) {
            anb__complex factor = at(p->dense, c * n + k);
            if (anb__cis_zero(factor)) continue;
            for (size_t i = k + 1; i < n; i++)
                put(p->dense, c * n + i,
                    anb__csub(at(p->dense, c * n + i), anb__cmul(at(p->dense, k * n + i), factor)));
        }
    }
    return true;
}

static void dense_solve(const anb__pivoted *p, double *b) {
    size_t n = p->size;
    for (uint32_t l = 0; l < p->probe_count; l++, b += 2 * n) {
        for (size_t k = 0; k < n; k++) {
            anb__complex swap = at(b, k);
            put(b, k, at(b, p->pivots[k]));
            put(b, p->pivots[k], swap);
        }
        for (size_t k = 0; k < n; k++)
            for (size_t i = k + 1; i < n; i++)
                put(b, i, anb__csub(at(b, i), anb__cmul(at(p->dense, k * n + i), at(b, k))));
        for (size_t k = n; k-- > 0;) {
            put(b, k, anb__cdiv(at(b, k), at(p->dense, k * n + k)));
            for (size_t i = 0; i < k; i++)
                put(b, i, anb__csub(at(b, i), anb__cmul(at(p->dense, k * n + i), at(b, k))));
        }
    }
}

static anb__solved solve_dense(anb__pivoted *p) {
    if (!dense_factor(p)) return ANB__UNDETERMINED;
    residual(p);
    dense_solve(p, p->rest);
    add_correction(p);
    residual(p);
    dense_solve(p, p->rest);
    add_correction(p);
    return ANB__SOLVED;
}

/* ---- sparse ------------------------------------------------------------------------------------ */

static anb__solved solve_sparse(anb__pivoted *p) {
    if (!p->symbolic) return ANB__UNDETERMINED;
    klu_numeric *numeric = klu_z_factor(p->column_start, p->row_of, p->matrix, p->symbolic, &p->common);
    if (!numeric) return p->common.status == KLU_SINGULAR ? ANB__UNDETERMINED : ANB__NO_MEMORY;
    anb__solved solved = ANB__UNDETERMINED;
    if (klu_z_rcond(p->symbolic, numeric, &p->common) && p->common.rcond > SINGULAR) {
        for (int pass = 0; pass < 2; pass++) {
            residual(p);
            klu_z_solve(p->symbolic, numeric, (int)p->size, (int)p->probe_count, p->rest, &p->common);
            add_correction(p);
        }
        solved = ANB__SOLVED;
    }
    klu_z_free_numeric(&numeric, &p->common);
    return solved;
}

anb__solved anb__pivoted_solve(anb__pivoted *p, const anb__complex *values, anb__complex *out) {
    size_t n = p->size;
    memset(p->x, 0, 2 * n * p->probe_count * sizeof *p->x);
    if (!load(p, values)) return ANB__UNDETERMINED;
    anb__solved solved = p->dense ? solve_dense(p) : solve_sparse(p);
    if (solved != ANB__SOLVED) return solved;
    for (uint32_t k = 0; k < p->probe_count; k++)
        for (uint32_t l = 0; l < p->probe_count; l++) {
            anb__complex *to = &out[(size_t)k * p->probe_count + l];
            *to = at(p->x, n * l + p->probes[k].unknown);
            if (!anb__cis_finite(*to)) return ANB__UNDETERMINED;
        }
    return ANB__SOLVED;
}
