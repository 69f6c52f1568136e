/* The plan's operations, all lanes of a block at each. Included by kernels_plain.c, kernels_avx2.c and
 * kernels_avx512.c, each compiled for its instruction set.
 *
 * The guard is a running estimate of the rounding errors. A diagonal element D carries in its *history* the
 * sum of |D|^2 as it was before each of its updates, and |l|^4 times the history of the pivot that updates
 * it, about the square of its absolute error in units of the last place: it grows where little is left of
 * large numbers, and an error is handed on with the square of the multiplier l, so that losses one after
 * another multiply. Offdiagonal elements need no look: their updates are geometric means of the diagonal
 * ones'. At each pivot growth^2 = (history of D + sum of |a|^2 over its column) / |D|^2, and the lane's
 * measure is the sum of growth^4 over all pivots: it is led by the largest, and it keeps what is not a
 * number, as a maximum would not. A pivot that only hands on its error, and has no part in the inverse that
 * is wanted, counts a small share of it (INNER_SHARE): what its loss does to the result stands in the
 * histories of its neighbours, and is little in a chain of resonators that a port damps further on. The share
 * is there for losses so large that they are no longer handed on in proportion.
 */
#include "base/lanes.h"
#include "solve/plan_code.h"

#define INNER_SHARE 1e-10 /* of growth^2 */

#define ALWAYS_INLINE static inline __attribute__((always_inline))

typedef struct run {
    double *slots;
    size_t stride; /* doubles of a slot: groups * ANB__GROUP */
    uint32_t groups;
    double *histories, *growth; /* [groups * ANB__LANES] each */
    double *scratch;
    double *out;
    size_t out_stride; /* doubles of a group of the result */
    const anb__complex *constants;
    bool symmetric;
} run;

/* ---- complex vectors -------------------------------------------------------------------------- */

typedef struct cell {
    anb__vec re, im;
} cell;

ALWAYS_INLINE cell get(const double *from) { return (cell){anb__load(from), anb__load(from + ANB__LANES)}; }
ALWAYS_INLINE void put(double *to, cell c) {
    anb__store(to, c.re);
    anb__store(to + ANB__LANES, c.im);
}
ALWAYS_INLINE cell zero(void) { return (cell){anb__all(0), anb__all(0)}; }
ALWAYS_INLINE cell all(anb__complex c) { return (cell){anb__all(c.re), anb__all(c.im)}; }
ALWAYS_INLINE cell times(cell a, cell b) {
    return (cell){anb__fnma(a.im, b.im, a.re * b.re), anb__fma(a.im, b.re, a.re * b.im)};
}
/* c - a b */
ALWAYS_INLINE cell less(cell c, cell a, cell b) {
    return (cell){anb__fma(a.im, b.im, anb__fnma(a.re, b.re, c.re)),
                  anb__fnma(a.im, b.re, anb__fnma(a.re, b.im, c.im))};
}
/* sum + |a|^2 */
ALWAYS_INLINE anb__vec plus_square(anb__vec sum, cell a) {
    return anb__fma(a.im, a.im, anb__fma(a.re, a.re, sum));
}

ALWAYS_INLINE anb__vec square_of(cell a) { return anb__fma(a.im, a.im, a.re * a.re); }

/* 1/a and 1/|a|^2 by one division. Pivots are admittances and impedances; their squares do not overflow. An
 * infinite one makes both not a number, for the guard to see. */
typedef struct reciprocal {
    cell of;
    anb__vec square;
} reciprocal;

ALWAYS_INLINE reciprocal invert(cell a) {
    anb__vec square = 1 / anb__fma(a.re, a.re, a.im * a.im);
    cell of = {a.re * square, -a.im * square};
    return (reciprocal){of, anb__fma(of.re + of.im, anb__all(0), square)};
}

/* ---- addresses ------------------------------------------------------------------------------------- */

ALWAYS_INLINE double *slot(const run *x, uint32_t number) { return x->slots + number * x->stride; }
ALWAYS_INLINE double *history(const run *x, uint32_t number) {
    return x->histories + number * (x->stride / 2);
}

/* Steps through a block a vector at a time: `at` within a slot, `half` within a history. */
typedef struct step {
    size_t at, half;
} step;

ALWAYS_INLINE step step_of(uint32_t k) {
    const uint32_t group = k / ANB__VECTORS, part = k % ANB__VECTORS * ANB__WIDTH;
    return (step){(size_t)group * ANB__GROUP + part, (size_t)group * ANB__LANES + part};
}

/* sum + growth^4 of a pivot, `squares` being its history and column */
ALWAYS_INLINE anb__vec plus_growth(anb__vec sum, anb__vec squares, anb__vec inverse_square) {
    const anb__vec growth_square = squares * inverse_square;
    return anb__fma(growth_square, growth_square, sum);
}
ALWAYS_INLINE void add_growth(const run *x, step s, anb__vec squares, anb__vec inverse_square) {
    anb__store(x->growth + s.half, plus_growth(anb__load(x->growth + s.half), squares, inverse_square));
}
/* A pivot's history as one of its neighbours gets it; |l|^2 is |column| |row| / |pivot|^2. */
ALWAYS_INLINE anb__vec handed_on(anb__vec past, anb__vec history, anb__vec column, anb__vec row,
                                 anb__vec inverse_square) {
    return anb__fma((column * inverse_square) * (row * inverse_square), history, past);
}

/* ---- one unknown ----------------------------------------------------------------------------------------
 */

/* ELIMINATE: neighbours d; keep; pivot's slot, its history; the slots of column [d] (and of row [d] where not
 * symmetric); the histories of the neighbours [d]; then (from, to) of each element that is updated, row by
 * row: the lower triangle where symmetric, else d x d. If `keep`, L replaces the column, U the row and 1/D
 * the pivot. */

enum { MOST_UPDATES = ANB__FIXED * ANB__FIXED };

typedef struct elimination {
    double *pivot, *own_history;
    double *column[ANB__FIXED], *row[ANB__FIXED], *history[ANB__FIXED];
    double *from[MOST_UPDATES], *to[MOST_UPDATES];
} elimination;

ALWAYS_INLINE const uint32_t *read_elimination(const run *x, const uint32_t *op, int d, bool symmetric,
                                               elimination *e) {
    e->pivot = slot(x, *op++);
    e->own_history = history(x, *op++);
    for (int k = 0; k < d; k++) e->column[k] = slot(x, *op++);
    for (int k = 0; k < d; k++) e->row[k] = symmetric ? e->column[k] : slot(x, *op++);
    for (int k = 0; k < d; k++) e->history[k] = history(x, *op++);
    for (int k = 0; k < (symmetric ? d * (d + 1) / 2 : d * d); k++) {
        e->from[k] = slot(x, *op++);
        e->to[k] = slot(x, *op++);
    }
    return op;
}

ALWAYS_INLINE void eliminate_step(const run *x, const elimination *e, step s, const int d,
                                  const bool symmetric, const bool keep) {
    cell column[ANB__FIXED], row[ANB__FIXED], factor[ANB__FIXED];
    anb__vec below[ANB__FIXED], beside[ANB__FIXED]; /* squares */
    const reciprocal pivot = invert(get(e->pivot + s.at));
    const anb__vec past = anb__load(e->own_history + s.half);
    anb__vec squares = past;
    for (int k = 0; k < d; k++) {
        column[k] = get(e->column[k] + s.at);
        row[k] = symmetric ? column[k] : get(e->row[k] + s.at);
        below[k] = square_of(column[k]);
        beside[k] = symmetric ? below[k] : square_of(row[k]);
        squares += symmetric ? below[k] : below[k] + beside[k];
        factor[k] = times(column[k], pivot.of);
    }
    add_growth(x, s, keep ? squares : squares * INNER_SHARE, pivot.square);
    int n = 0;
    for (int i = 0; i < d; i++)
        for (int j = 0; j < (symmetric ? i + 1 : d); j++, n++) {
            const cell old = get(e->from[n] + s.at);
            put(e->to[n] + s.at, less(old, factor[i], row[j]));
            if (i != j) continue;
            const anb__vec own = plus_square(anb__load(e->history[i] + s.half), old);
            anb__store(e->history[i] + s.half, handed_on(own, past, below[i], beside[i], pivot.square));
        }
    if (!keep) return;
    put(e->pivot + s.at, pivot.of);
    for (int k = 0; k < d; k++) put(e->column[k] + s.at, factor[k]);
    for (int k = 0; k < d && !symmetric; k++) put(e->row[k] + s.at, times(row[k], pivot.of));
}

ALWAYS_INLINE const uint32_t *eliminate_by(const run *x, const uint32_t *op, const int d,
                                           const bool symmetric) {
    elimination e;
    const bool keep = *op++;
    op = read_elimination(x, op, d, symmetric, &e);
    const uint32_t steps = x->groups * ANB__VECTORS;
    if (keep)
        for (uint32_t k = 0; k < steps; k++) eliminate_step(x, &e, step_of(k), d, symmetric, true);
    else
        for (uint32_t k = 0; k < steps; k++) eliminate_step(x, &e, step_of(k), d, symmetric, false);
    return op;
}

static const uint32_t *eliminate(const run *x, const uint32_t *op) {
    const uint32_t d = *op++;
    if (x->symmetric) {
        switch (d) {
        case 0:
            return eliminate_by(x, op, 0, true);
        case 1:
            return eliminate_by(x, op, 1, true);
        case 2:
            return eliminate_by(x, op, 2, true);
        case 3:
            return eliminate_by(x, op, 3, true);
        default:
            return eliminate_by(x, op, 4, true);
        }
    }
    switch (d) {
    case 0:
        return eliminate_by(x, op, 0, false);
    case 1:
        return eliminate_by(x, op, 1, false);
    case 2:
        return eliminate_by(x, op, 2, false);
    case 3:
        return eliminate_by(x, op, 3, false);
    default:
        return eliminate_by(x, op, 4, false);
    }
}

/* ---- a small block ---------------------------------------------------------------------------------------
 */

/* INVERT: size m; whether the inverse goes into the result only (else into the slots only); the number of a
 * constant; first slot of the packed lower triangle, and of the upper one; histories [m]; the elements of the
 * result, in the order of the slots (lower, then upper where not symmetric); constants [m] to be taken from
 * the diagonal. */

typedef struct small {
    cell a[ANB__FIXED][ANB__FIXED]; /* the matrix, then L and U below and above the diagonal */
    cell z[ANB__FIXED][ANB__FIXED]; /* the inverse */
    cell inverse[ANB__FIXED];       /* 1/D */
    anb__vec history[ANB__FIXED], growth;
} small;

ALWAYS_INLINE void factor_small(small *b, const int m, const bool symmetric) {
    for (int k = 0; k < m; k++) {
        reciprocal pivot = invert(b->a[k][k]);
        b->inverse[k] = pivot.of;
        cell row[ANB__FIXED];
        anb__vec squares = b->history[k];
        for (int i = k + 1; i < m; i++) {
            row[i] = symmetric ? b->a[i][k] : b->a[k][i];
            const anb__vec below = square_of(b->a[i][k]), beside = symmetric ? below : square_of(row[i]);
            squares += symmetric ? below : below + beside;
            b->history[i] = plus_square(b->history[i], b->a[i][i]);
            b->history[i] = handed_on(b->history[i], b->history[k], below, beside, pivot.square);
            b->a[i][k] = times(b->a[i][k], pivot.of);
            if (!symmetric) b->a[k][i] = times(row[i], pivot.of);
        }
        b->growth = plus_growth(b->growth, squares, pivot.square);
        for (int i = k + 1; i < m; i++)
            for (int j = k + 1; j < (symmetric ? i + 1 : m); j++)
                b->a[i][j] = less(b->a[i][j], b->a[i][k], row[j]);
    }
}

/* Takahashi's recurrence; the inverse multiplied by `scale`. */
ALWAYS_INLINE void invert_small(small *b, cell scale, const int m, const bool symmetric) {
    for (int i = m - 1; i >= 0; i--) {
        for (int j = i + 1; j < m; j++) {
            cell across = zero(), down = zero();
            for (int k = i + 1; k < m; k++) {
                cell u = symmetric ? b->a[k][i] : b->a[i][k];
                across = less(across, u, b->z[k][j]);
                if (!symmetric) down = less(down, b->a[k][i], b->z[j][k]);
            }
            b->z[i][j] = across;
            b->z[j][i] = symmetric ? across : down;
        }
        cell sum = times(b->inverse[i], scale);
        for (int k = i + 1; k < m; k++) sum = less(sum, symmetric ? b->a[k][i] : b->a[i][k], b->z[k][i]);
        b->z[i][i] = sum;
    }
}

/* Where the elements are: packed columns of the lower triangle, then packed rows of the upper one. */
typedef struct places {
    double *lower[MOST_UPDATES], *upper[MOST_UPDATES];
    double *history[ANB__FIXED];
    double *to_lower[MOST_UPDATES], *to_upper[MOST_UPDATES]; /* the results' */
    size_t to_step;                                          /* from a group's result to the next one's */
    cell scale, offset[ANB__FIXED];
} places;

ALWAYS_INLINE void load_small(const run *x, const places *p, step s, small *b, const int m,
                              const bool symmetric) {
    int n = 0;
    for (int c = 0; c < m; c++) {
        b->history[c] = anb__load(p->history[c] + s.half);
        for (int r = c; r < m; r++, n++) {
            b->a[r][c] = get(p->lower[n] + s.at);
            if (!symmetric && r > c) b->a[c][r] = get(p->upper[n] + s.at);
        }
    }
    b->growth = anb__load(x->growth + s.half);
}

ALWAYS_INLINE void store_small(const places *p, size_t at, const small *b, const int m, const bool symmetric,
                               const bool is_result) {
    int n = 0;
    for (int c = 0; c < m; c++)
        for (int r = c; r < m; r++, n++) {
            cell value = b->z[r][c];
            if (is_result && r == c) value = (cell){value.re - p->offset[c].re, value.im - p->offset[c].im};
            put(p->to_lower[n] + at, value);
            if (!symmetric && r > c) put(p->to_upper[n] + at, b->z[c][r]);
        }
}

ALWAYS_INLINE void small_step(const run *x, const places *p, uint32_t k, const int m, const bool symmetric,
                              const bool is_result) {
    small b;
    step s = step_of(k);
    load_small(x, p, s, &b, m, symmetric);
    factor_small(&b, m, symmetric);
    anb__store(x->growth + s.half, b.growth);
    invert_small(&b, p->scale, m, symmetric);
    size_t at = k / ANB__VECTORS * p->to_step + k % ANB__VECTORS * ANB__WIDTH;
    store_small(p, at, &b, m, symmetric, is_result);
}

ALWAYS_INLINE double *element(const run *x, uint32_t number) { return x->out + (size_t)number * ANB__GROUP; }

ALWAYS_INLINE const uint32_t *read_places(const run *x, const uint32_t *op, places *p, const int m,
                                          const bool symmetric, const bool is_result) {
    const int count = m * (m + 1) / 2;
    p->scale = all(x->constants[*op++]);
    const uint32_t lower = *op++, upper = *op++;
    for (int k = 0; k < m; k++) p->history[k] = history(x, *op++);
    for (int n = 0; n < count; n++, op++) {
        p->lower[n] = slot(x, lower + (uint32_t)n);
        p->to_lower[n] = is_result ? element(x, *op) : p->lower[n];
    }
    for (int n = 0; n < count && !symmetric; n++, op++) {
        p->upper[n] = slot(x, upper + (uint32_t)n);
        p->to_upper[n] = is_result ? element(x, *op) : p->upper[n];
    }
    p->to_step = is_result ? x->out_stride : ANB__GROUP;
    for (int k = 0; k < m; k++, op++)
        if (is_result) p->offset[k] = all(x->constants[*op]);
    return op;
}

ALWAYS_INLINE const uint32_t *invert_block_by(const run *x, const uint32_t *op, const int m,
                                              const bool symmetric) {
    places p;
    const bool is_result = *op++;
    op = read_places(x, op, &p, m, symmetric, is_result);
    const uint32_t steps = x->groups * ANB__VECTORS;
    if (is_result)
        for (uint32_t k = 0; k < steps; k++) small_step(x, &p, k, m, symmetric, true);
    else
        for (uint32_t k = 0; k < steps; k++) small_step(x, &p, k, m, symmetric, false);
    return op;
}

static const uint32_t *invert_block(const run *x, const uint32_t *op) {
    const uint32_t m = *op++;
    if (x->symmetric) {
        switch (m) {
        case 1:
            return invert_block_by(x, op, 1, true);
        case 2:
            return invert_block_by(x, op, 2, true);
        case 3:
            return invert_block_by(x, op, 3, true);
        default:
            return invert_block_by(x, op, 4, true);
        }
    }
    switch (m) {
    case 1:
        return invert_block_by(x, op, 1, false);
    case 2:
        return invert_block_by(x, op, 2, false);
    case 3:
        return invert_block_by(x, op, 3, false);
    default:
        return invert_block_by(x, op, 4, false);
    }
}

/* ---- rows of the inverse ---------------------------------------------------------------------- */

/* INVERSE: neighbours d; how many targets in slots, how many in the result; the factors' slots [d]; for each
 * target its slot or element, then the slots of its sources [d]; the slot of 1/D or NOWHERE; if it is
 * somewhere: the number of a constant for it, the slot of the diagonal element or NOWHERE, its element of the
 * result or NOWHERE and the constant to be taken from it, its sources [d]. */

/* - sum of factors times sources */
ALWAYS_INLINE cell sum_of(const run *x, cell sum, const cell *factor, const uint32_t *sources, size_t at,
                          const int d) {
    for (int k = 0; k < d; k++) sum = less(sum, factor[k], get(slot(x, sources[k]) + at));
    return sum;
}

ALWAYS_INLINE void inverse_step(const run *x, const uint32_t *op, uint32_t k, const int d) {
    const uint32_t in_slots = op[0], in_result = op[1];
    const size_t at = step_of(k).at;
    double *out = x->out + k / ANB__VECTORS * x->out_stride + k % ANB__VECTORS * ANB__WIDTH;
    cell factor[ANB__FIXED];
    op += 2;
    for (int i = 0; i < d; i++) factor[i] = get(slot(x, *op++) + at);
    for (uint32_t n = 0; n < in_slots; n++, op += d + 1)
        put(slot(x, *op) + at, sum_of(x, zero(), factor, op + 1, at, d));
    for (uint32_t n = 0; n < in_result; n++, op += d + 1)
        put(out + (size_t)*op * ANB__GROUP, sum_of(x, zero(), factor, op + 1, at, d));
    if (*op == ANB__NOWHERE) return;
    cell own = times(get(slot(x, op[0]) + at), all(x->constants[op[1]]));
    cell sum = sum_of(x, own, factor, op + 5, at, d);
    if (op[2] != ANB__NOWHERE) put(slot(x, op[2]) + at, sum);
    if (op[3] == ANB__NOWHERE) return;
    cell offset = all(x->constants[op[4]]);
    put(out + (size_t)op[3] * ANB__GROUP, (cell){sum.re - offset.re, sum.im - offset.im});
}

/* Any number of neighbours: the factors stay in memory. */
static void inverse_step_long(const run *x, const uint32_t *op, uint32_t k, const uint32_t d);

static const uint32_t *end_of_inverse(const uint32_t *op, uint32_t d) {
    op += 2 + d + (size_t)(op[0] + op[1]) * (d + 1);
    return *op == ANB__NOWHERE ? op + 1 : op + 5 + d;
}

static const uint32_t *inverse_row(const run *x, const uint32_t *op) {
    const uint32_t d = *op++, steps = x->groups * ANB__VECTORS;
    for (uint32_t k = 0; k < steps; k++) switch (d) {
        case 0:
            inverse_step(x, op, k, 0);
            break;
        case 1:
            inverse_step(x, op, k, 1);
            break;
        case 2:
            inverse_step(x, op, k, 2);
            break;
        case 3:
            inverse_step(x, op, k, 3);
            break;
        case 4:
            inverse_step(x, op, k, 4);
            break;
        default:
            inverse_step_long(x, op, k, d);
        }
    return end_of_inverse(op, d);
}

ALWAYS_INLINE cell long_sum(const run *x, cell sum, const uint32_t *factors, const uint32_t *sources,
                            size_t at, uint32_t d) {
    for (uint32_t k = 0; k < d; k++)
        sum = less(sum, get(slot(x, factors[k]) + at), get(slot(x, sources[k]) + at));
    return sum;
}

static void inverse_step_long(const run *x, const uint32_t *op, uint32_t k, const uint32_t d) {
    const uint32_t in_slots = op[0], in_result = op[1], *factors = op + 2;
    const size_t at = step_of(k).at;
    double *out = x->out + k / ANB__VECTORS * x->out_stride + k % ANB__VECTORS * ANB__WIDTH;
    op += 2 + d;
    for (uint32_t n = 0; n < in_slots; n++, op += d + 1)
        put(slot(x, *op) + at, long_sum(x, zero(), factors, op + 1, at, d));
    for (uint32_t n = 0; n < in_result; n++, op += d + 1)
        put(out + (size_t)*op * ANB__GROUP, long_sum(x, zero(), factors, op + 1, at, d));
    if (*op == ANB__NOWHERE) return;
    cell own = times(get(slot(x, op[0]) + at), all(x->constants[op[1]]));
    cell sum = long_sum(x, own, factors, op + 5, at, d);
    if (op[2] != ANB__NOWHERE) put(slot(x, op[2]) + at, sum);
    if (op[3] == ANB__NOWHERE) return;
    cell offset = all(x->constants[op[4]]);
    put(out + (size_t)op[3] * ANB__GROUP, (cell){sum.re - offset.re, sum.im - offset.im});
}

/* ---- bookkeeping ------------------------------------------------------------------------------ */

/* CLEAR: how many runs; (first slot, slots) of each */
static const uint32_t *clear(const run *x, const uint32_t *op) {
    for (uint32_t count = *op++; count; count--, op += 2)
        memset(slot(x, op[0]), 0, op[1] * x->stride * sizeof(double));
    return op;
}

/* SCALE: how many; (slot, constant) of each */
static const uint32_t *scale(const run *x, const uint32_t *op) {
    for (uint32_t count = *op++; count; count--, op += 2) {
        double *at = slot(x, op[0]);
        const cell factor = all(x->constants[op[1]]);
        for (uint32_t k = 0; k < x->groups * ANB__VECTORS; k++) {
            double *here = at + step_of(k).at;
            put(here, times(get(here), factor));
        }
    }
    return op;
}

/* COPY: how many; of each the element of the result, the slot, and the constant to be taken from it or
 * NOWHERE */
static const uint32_t *copy(const run *x, const uint32_t *op) {
    for (uint32_t count = *op++; count; count--, op += 3) {
        const double *from = slot(x, op[1]);
        double *to = element(x, op[0]);
        const cell offset = op[2] == ANB__NOWHERE ? zero() : all(x->constants[op[2]]);
        for (uint32_t k = 0; k < x->groups * ANB__VECTORS; k++) {
            cell value = get(from + step_of(k).at);
            put(to + k / ANB__VECTORS * x->out_stride + k % ANB__VECTORS * ANB__WIDTH,
                (cell){value.re - offset.re, value.im - offset.im});
        }
    }
    return op;
}

/* COMBINE: how many elements of the result; of each, in their order, a constant for the sum, the one to be
 * taken from it or NOWHERE, how many terms; (slot, whether it counts negative) of each */
static cell combination(const run *x, const uint32_t *op, size_t at) {
    cell sum = zero();
    const uint32_t *term = op + 3;
    for (uint32_t i = 0; i < op[2]; i++, term += 2) {
        cell value = get(slot(x, term[0]) + at);
        anb__vec sign = anb__all(term[1] ? -1 : 1);
        sum = (cell){anb__fma(sign, value.re, sum.re), anb__fma(sign, value.im, sum.im)};
    }
    cell product = times(sum, all(x->constants[op[0]]));
    cell offset = op[1] == ANB__NOWHERE ? zero() : all(x->constants[op[1]]);
    return (cell){product.re - offset.re, product.im - offset.im};
}

static const uint32_t *combine(const run *x, const uint32_t *op) {
    const uint32_t count = *op++;
    for (uint32_t n = 0; n < count; n++, op += 3 + 2 * (size_t)op[2])
        for (uint32_t k = 0; k < x->groups * ANB__VECTORS; k++)
            put(element(x, n) + k / ANB__VECTORS * x->out_stride + k % ANB__VECTORS * ANB__WIDTH,
                combination(x, op, step_of(k).at));
    return op;
}

#include "solve/kernels_dense.h"

/* ---- the whole plan --------------------------------------------------------------------------- */

static const uint32_t *one_operation(const run *x, const uint32_t *op) {
    switch ((anb__operation)*op++) {
    case ANB__OP_CLEAR:
        return clear(x, op);
    case ANB__OP_ELIMINATE:
        return eliminate(x, op);
    case ANB__OP_PANEL:
        return panel(x, op);
    case ANB__OP_INVERT:
        return invert_block(x, op);
    case ANB__OP_SWEEP:
        return sweep(x, op);
    case ANB__OP_SCALE:
        return scale(x, op);
    case ANB__OP_INVERSE:
        return inverse_row(x, op);
    case ANB__OP_COPY:
        return copy(x, op);
    case ANB__OP_COMBINE:
        return combine(x, op);
    case ANB__OP_END:
    case ANB__OP_COUNT:
        break;
    }
    return NULL;
}

static void set_suspects(const run *x, double limit, uint8_t *suspect) {
    for (uint32_t g = 0; g < x->groups; g++) {
        unsigned bits = 0;
        for (int v = 0; v < ANB__VECTORS; v++) {
            anb__vec growth = anb__load(x->growth + (size_t)g * ANB__LANES + v * ANB__WIDTH);
            bits |= anb__bits(~(growth <= limit)) << v * ANB__WIDTH;
        }
        suspect[g] = (uint8_t)bits;
    }
}

void ANB__KERNEL(plan_run)(const anb__plan *plan, double *slots, uint32_t groups, double *out,
                           uint8_t *suspect) {
    run x = {.slots = slots,
             .stride = (size_t)groups * ANB__GROUP,
             .groups = groups,
             .out = out,
             .out_stride = (size_t)plan->element_count * ANB__GROUP,
             .constants = plan->constants,
             .symmetric = plan->symmetric};
    x.histories = slot(&x, plan->history_slot);
    x.growth = history(&x, ANB__GROWTH_HISTORY);
    x.scratch = slot(&x, plan->scratch_slot);
    memset(slot(&x, plan->zero_slot), 0, x.stride * sizeof(double));
    memset(x.histories, 0, plan->history_count * (x.stride / 2) * sizeof(double));
    for (const uint32_t *op = plan->code; op;) op = one_operation(&x, op);
    set_suspects(&x, plan->growth_limit, suspect);
}
