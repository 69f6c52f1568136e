/* Dense parts of the elimination: panels, and the sweep that inverts a large block. Part of solve/kernels.h.
 *
 * Both work group by group and come down to one thing: a packed triangle of targets minus the product
 * of two thin matrices, t(r, j) -= sum over k of l(r, k) u(j, k), computed in tiles that stay in registers.
 * The thin matrices are copied to the scratch slots, [row][k] of one group.
 */

enum {
    TILE = ANB__WIDTH == 8 ? 3 : 2, /* the tile's accumulators fit into the registers */
    STRIP = 24, /* columns of targets that are passed over together: their u stays cached */
    NARROW = 4  /* columns of a panel that are eliminated one by one */
};

/* A trapezoid of targets: the first `solid` columns stand in packed columns; slots of the others are listed.
 */
typedef struct targets {
    uint32_t height, solid;
    uint32_t base;         /* slot of the first packed element */
    const uint32_t *table; /* packed columns of slots, `height - solid` high */
} targets;

/* Thin matrices: rows of `depth` elements, `pitch` doubles from one row to the next. */
typedef struct thin {
    const double *l, *u;
    size_t pitch;
    uint32_t depth;
} thin;

ALWAYS_INLINE uint32_t target_slot(const targets *t, uint32_t r, uint32_t j) {
    if (j < t->solid) return t->base + (uint32_t)anb__packed(t->height, j) + r - j;
    return t->table[anb__packed(t->height - t->solid, j - t->solid) + r - j];
}

/* Of one group. */
typedef struct bench {
    const run *x;
    size_t group; /* doubles from a slot's start to this group */
    size_t half;  /* the same in a history */
} bench;

ALWAYS_INLINE double *at_slot(const bench *b, uint32_t number) { return slot(b->x, number) + b->group; }
ALWAYS_INLINE double *at_history(const bench *b, uint32_t number) { return history(b->x, number) + b->half; }

/* ---- products ------------------------------------------------------------------------------------- */

ALWAYS_INLINE void tile_part(double *const *to, const double *l, const double *u, size_t pitch,
                             uint32_t depth, const int rows, const int columns) {
    cell sum[TILE][TILE];
    for (int i = 0; i < rows; i++)
        for (int j = 0; j < columns; j++) sum[i][j] = get(to[i * columns + j]);
    for (uint32_t k = 0; k < depth; k++) {
        cell left[TILE];
        for (int i = 0; i < rows; i++) left[i] = get(l + (size_t)i * pitch + (size_t)k * ANB__GROUP);
        for (int j = 0; j < columns; j++) {
            cell right = get(u + (size_t)j * pitch + (size_t)k * ANB__GROUP);
            for (int i = 0; i < rows; i++) sum[i][j] = less(sum[i][j], left[i], right);
        }
    }
    for (int i = 0; i < rows; i++)
        for (int j = 0; j < columns; j++) put(to[i * columns + j], sum[i][j]);
}

ALWAYS_INLINE void tile_by(double *const *to, const thin *p, uint32_t r, uint32_t j, const int rows,
                           const int columns) {
    double *here[TILE * TILE];
    for (int v = 0; v < ANB__LANES; v += ANB__WIDTH) {
        for (int k = 0; k < rows * columns; k++) here[k] = to[k] + v;
        tile_part(here, p->l + r * p->pitch + v, p->u + j * p->pitch + v, p->pitch, p->depth, rows, columns);
    }
}

/* Targets of rows r .. r+rows-1 in columns j .. j+columns-1, all of them in the trapezoid. */
static void tile(const bench *b, const targets *t, const thin *p, uint32_t r, uint32_t j, uint32_t rows,
                 uint32_t columns) {
    double *to[TILE * TILE];
    for (uint32_t i = 0; i < rows; i++)
        for (uint32_t c = 0; c < columns; c++) to[i * columns + c] = at_slot(b, target_slot(t, r + i, j + c));
    if (rows == TILE && columns == TILE)
        tile_by(to, p, r, j, TILE, TILE);
    else if (rows == TILE && columns == 1)
        tile_by(to, p, r, j, TILE, 1);
    else if (rows == 1 && columns == TILE)
        tile_by(to, p, r, j, 1, TILE);
    else
        for (uint32_t i = 0; i < rows; i++)
            for (uint32_t c = 0; c < columns; c++) tile_by(&to[i * columns + c], p, r + i, j + c, 1, 1);
}

/* A full rectangle of targets. */
static void rectangle(const bench *b, const targets *t, const thin *p, uint32_t r0, uint32_t r1, uint32_t j0,
                      uint32_t j1) {
    for (uint32_t strip = j0; strip < j1; strip += STRIP) {
        uint32_t end = strip + STRIP < j1 ? strip + STRIP : j1;
        for (uint32_t r = r0; r < r1; r += TILE)
            for (uint32_t j = strip; j < end; j += TILE)
                tile(b, t, p, r, j, r1 - r < TILE ? r1 - r : TILE, end - j < TILE ? end - j : TILE);
    }
}

/* Columns j0 .. j1-1 with their rows from the diagonal (or, `strictly`, from below it) to `height`. */
static void triangle(const bench *b, const targets *t, const thin *p, uint32_t j0, uint32_t j1,
                     uint32_t height, bool strictly) {
    for (uint32_t strip = j0; strip < j1; strip += STRIP) {
        uint32_t end = strip + STRIP < j1 ? strip + STRIP : j1;
        for (uint32_t j = strip; j < end; j += TILE) {
            uint32_t tip = j + TILE < end ? j + TILE : end;
            for (uint32_t c = j; c < tip; c++)
                for (uint32_t r = c + strictly; r < tip; r++) tile(b, t, p, r, c, 1, 1);
            if (tip < end) rectangle(b, t, p, tip, end, j, tip);
        }
        if (end < height) rectangle(b, t, p, end, height, strip, end);
    }
}

/* Adds what the diagonal elements j0 .. j1-1 are now to their histories, before they are updated. */
static void note_diagonals(const bench *b, const targets *t, const uint32_t *histories, uint32_t j0,
                           uint32_t j1) {
    for (uint32_t j = j0; j < j1; j++) {
        double *past = at_history(b, histories[j]);
        const double *here = at_slot(b, target_slot(t, j, j));
        for (int v = 0; v < ANB__LANES; v += ANB__WIDTH)
            anb__store(past + v, plus_square(anb__load(past + v), get(here + v)));
    }
}

/* ---- panels ---------------------------------------------------------------------------------------------
 */

/* PANEL: width w, rows d below it, keep; first slots of the packed columns of L and of the packed rows of U;
 * histories [w + d]; the slots of the targets outside, packed columns of the lower triangle of d rows (and,
 * where not symmetric, packed rows of the upper one, whose diagonal is not used). L replaces the columns and
 * 1/D the diagonal; U stays unscaled until, if `keep`, the end. */
typedef struct panel_data {
    targets lower, upper;
    const uint32_t *histories;
    double *l, *u; /* [height][ANB__PANEL_DEPTH] */
    bool symmetric, keep;
} panel_data;

enum { PITCH = ANB__PANEL_DEPTH * ANB__GROUP };

/* The column's pivot: factors into L and the scratch, what they multiply into the scratch. */
static void factor_column(const bench *b, const panel_data *p, uint32_t c, uint32_t k) {
    double *diagonal = at_slot(b, target_slot(&p->lower, c, c));
    for (int v = 0; v < ANB__LANES; v += ANB__WIDTH) {
        const reciprocal pivot = invert(get(diagonal + v));
        const anb__vec past = anb__load(at_history(b, p->histories[c]) + v);
        anb__vec squares = past;
        double *column = diagonal + v, *row = at_slot(b, target_slot(&p->upper, c, c)) + v;
        for (uint32_t r = c + 1; r < p->lower.height; r++) {
            column += b->x->stride;
            row += b->x->stride;
            const cell low = get(column), high = p->symmetric ? low : get(row), factor = times(low, pivot.of);
            const anb__vec below = square_of(low), beside = p->symmetric ? below : square_of(high);
            squares += p->symmetric ? below : below + beside;
            double *history = at_history(b, p->histories[r]) + v;
            anb__store(history, handed_on(anb__load(history), past, below, beside, pivot.square));
            put(column, factor);
            put(p->l + r * PITCH + k * ANB__GROUP + v, factor);
            put(p->u + r * PITCH + k * ANB__GROUP + v, high);
        }
        put(diagonal + v, pivot.of);
        add_growth(b->x, (step){0, b->half + (size_t)v}, squares, pivot.square);
    }
}

/* Updates columns j0 .. j1-1 by the columns k0 .. k1-1 of the scratch. */
static void update_columns(const bench *b, const panel_data *p, uint32_t j0, uint32_t j1, uint32_t k0,
                           uint32_t k1) {
    if (j0 >= j1 || k0 >= k1) return;
    thin down = {p->l + k0 * ANB__GROUP, p->u + k0 * ANB__GROUP, PITCH, k1 - k0};
    note_diagonals(b, &p->lower, p->histories, j0, j1);
    triangle(b, &p->lower, &down, j0, j1, p->lower.height, false);
    if (p->symmetric) return;
    thin across = {down.u, down.l, PITCH, k1 - k0};
    triangle(b, &p->upper, &across, j0, j1, p->upper.height, true);
}

/* Columns first .. end-1, at most ANB__PANEL_DEPTH: factored among themselves. */
static void factor_columns(const bench *b, const panel_data *p, uint32_t first, uint32_t end) {
    for (uint32_t c0 = first; c0 < end; c0 += NARROW) {
        uint32_t c1 = c0 + NARROW < end ? c0 + NARROW : end;
        update_columns(b, p, c0, c1, 0, c0 - first);
        for (uint32_t c = c0; c < c1; c++) {
            factor_column(b, p, c, c - first);
            update_columns(b, p, c + 1, c1, c - first, c - first + 1);
        }
    }
}

static void scale_rows(const bench *b, const panel_data *p) {
    for (uint32_t c = 0; c < p->lower.solid; c++)
        for (uint32_t r = c + 1; r < p->lower.height; r++)
            for (int v = 0; v < ANB__LANES; v += ANB__WIDTH) {
                double *to = at_slot(b, target_slot(&p->upper, r, c)) + v;
                put(to, times(get(to), get(at_slot(b, target_slot(&p->lower, c, c)) + v)));
            }
}

static const uint32_t *read_panel(const run *x, const uint32_t *op, panel_data *p) {
    const uint32_t width = op[0], rest = op[1], height = width + rest;
    const size_t outside = (size_t)rest * (rest + 1) / 2;
    *p = (panel_data){.symmetric = x->symmetric, .keep = op[2], .histories = op + 5};
    const uint32_t *table = op + 5 + height;
    p->lower = (targets){height, width, op[3], table};
    p->upper = x->symmetric ? p->lower : (targets){height, width, op[4], table + outside};
    p->l = x->scratch;
    p->u = p->l + (size_t)height * PITCH;
    return table + (x->symmetric ? 1 : 2) * outside;
}

static const uint32_t *panel(const run *x, const uint32_t *op) {
    panel_data p;
    op = read_panel(x, op, &p);
    for (uint32_t g = 0; g < x->groups; g++) {
        bench b = {x, (size_t)g * ANB__GROUP, (size_t)g * ANB__LANES};
        for (uint32_t c = 0; c < p.lower.solid; c += ANB__PANEL_DEPTH) {
            uint32_t end = c + ANB__PANEL_DEPTH < p.lower.solid ? c + ANB__PANEL_DEPTH : p.lower.solid;
            factor_columns(&b, &p, c, end);
            update_columns(&b, &p, end, p.lower.height, 0, end - c);
        }
        if (p.keep && !p.symmetric) scale_rows(&b, &p);
    }
    return op;
}

/* ---- the sweep -------------------------------------------------------------------------------- */

/* SWEEP: as INVERT. Elements go to the result where they have a place there, and to their slots unless all
 * do.
 *
 * Sweeping the columns K of A replaces A_KK by -1/A_KK, A_RK by A_RK/A_KK, A_KR by A_KR after division from
 * the left, and A_RR by A_RR - A_RK 1/A_KK A_KR; when all are swept, -1/A stands there. The same for
 * symmetric matrices with one half of it (A. E. Beaton 1964; blocked here). */
typedef struct sweep_data {
    targets lower, upper;
    const uint32_t *histories;
    uint32_t depth;
    size_t pitch;
    double *column, *row;   /* [size][depth]: A_RK, and A_KR transposed */
    double *left, *right;   /* A_RK / A_KK, and A_KK \ A_KR transposed; all four are two where symmetric */
    double *pivot, *turned; /* [depth][depth]: -1/A_KK, and that transposed */
    double *spare;          /* [depth][depth] */
    bool symmetric;
} sweep_data;

/* The slot of A(r, j). */
ALWAYS_INLINE uint32_t sweep_slot(const sweep_data *s, uint32_t r, uint32_t j) {
    return r >= j ? target_slot(&s->lower, r, j) : target_slot(&s->upper, j, r);
}

ALWAYS_INLINE double *in_thin(const sweep_data *s, double *matrix, uint32_t r, uint32_t k) {
    return matrix + r * s->pitch + (size_t)k * ANB__GROUP;
}

static void copy_cell(double *to, const double *from) { memcpy(to, from, ANB__GROUP * sizeof *to); }

static void copy_columns(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1) {
    for (uint32_t r = 0; r < s->lower.height; r++)
        for (uint32_t k = k0; k < k1; k++) {
            copy_cell(in_thin(s, s->column, r, k - k0), at_slot(b, sweep_slot(s, r, k)));
            if (!s->symmetric) copy_cell(in_thin(s, s->row, r, k - k0), at_slot(b, sweep_slot(s, k, r)));
        }
    for (uint32_t r = k0; r < k1; r++)
        for (uint32_t k = k0; k < k1; k++)
            copy_cell(in_thin(s, s->pivot, r - k0, k - k0), at_slot(b, sweep_slot(s, r, k)));
}

/* The growth of pivot k0 + k, and what its neighbours among the columns get of its history. */
static void note_pivot(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1, uint32_t k, int v,
                       anb__vec inverse_square) {
    const anb__vec past = anb__load(at_history(b, s->histories[k0 + k]) + v);
    anb__vec squares = past;
    for (uint32_t i = k + 1; i < k1 - k0; i++) {
        const anb__vec below = square_of(get(in_thin(s, s->pivot, i, k) + v));
        const anb__vec beside = square_of(get(in_thin(s, s->pivot, k, i) + v));
        squares += s->symmetric ? below : below + beside;
        double *history = at_history(b, s->histories[k0 + i]) + v;
        const anb__vec own = plus_square(anb__load(history), get(in_thin(s, s->pivot, i, i) + v));
        anb__store(history, handed_on(own, past, below, beside, inverse_square));
    }
    add_growth(b->x, (step){0, b->half + (size_t)v}, squares, inverse_square);
}

/* One pivot of the small matrix; its row is kept in `spare`. */
static void sweep_pivot(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1, uint32_t k, int v) {
    const uint32_t m = k1 - k0;
    const reciprocal pivot = invert(get(in_thin(s, s->pivot, k, k) + v));
    note_pivot(b, s, k0, k1, k, v, pivot.square);
    for (uint32_t i = 0; i < m; i++) put(in_thin(s, s->spare, 0, i) + v, get(in_thin(s, s->pivot, k, i) + v));
    for (uint32_t i = 0; i < m; i++) {
        if (i == k) continue;
        const cell factor = times(get(in_thin(s, s->pivot, i, k) + v), pivot.of);
        for (uint32_t j = 0; j < m; j++) {
            double *to = in_thin(s, s->pivot, i, j) + v;
            put(to, less(get(to), factor, get(in_thin(s, s->spare, 0, j) + v)));
        }
        put(in_thin(s, s->pivot, i, k) + v, factor);
    }
    for (uint32_t j = 0; j < m; j++)
        put(in_thin(s, s->pivot, k, j) + v, times(get(in_thin(s, s->spare, 0, j) + v), pivot.of));
    put(in_thin(s, s->pivot, k, k) + v, (cell){-pivot.of.re, -pivot.of.im});
}

static void sweep_pivots(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1) {
    for (int v = 0; v < ANB__LANES; v += ANB__WIDTH)
        for (uint32_t k = 0; k < k1 - k0; k++) sweep_pivot(b, s, k0, k1, k, v);
    for (uint32_t i = 0; i < k1 - k0; i++)
        for (uint32_t j = 0; j < k1 - k0; j++)
            copy_cell(in_thin(s, s->turned, i, j), in_thin(s, s->pivot, j, i));
}

/* product(r, k) = - sum over i of matrix(r, i) pivot(k, i), for the rows outside k0 .. k1-1 */
static void divide_rows(const sweep_data *s, double *product, const double *matrix, const double *pivot,
                        uint32_t k0, uint32_t k1) {
    thin p = {matrix, pivot, s->pitch, k1 - k0};
    double *to[TILE];
    for (uint32_t r = 0; r < s->lower.height; r++) {
        if (r >= k0 && r < k1) continue;
        memset(product + r * s->pitch, 0, (k1 - k0) * ANB__GROUP * sizeof *product);
        for (uint32_t k = 0; k < k1 - k0; k += TILE) {
            uint32_t columns = k1 - k0 - k < TILE ? k1 - k0 - k : TILE;
            for (uint32_t j = 0; j < columns; j++) to[j] = in_thin(s, product, r, k + j);
            if (columns == TILE)
                tile_by(to, &p, r, k, 1, TILE);
            else
                for (uint32_t j = 0; j < columns; j++) tile_by(&to[j], &p, r, k + j, 1, 1);
        }
    }
}

/* Rows not swept yet get the columns' histories by their factors, which count as growth themselves. */
static void note_factors(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1) {
    for (int v = 0; v < ANB__LANES; v += ANB__WIDTH) {
        anb__vec sum = anb__all(0);
        for (uint32_t r = k1; r < s->lower.height; r++) {
            double *history = at_history(b, s->histories[r]) + v;
            anb__vec past = anb__load(history);
            for (uint32_t k = 0; k < k1 - k0; k++) {
                const anb__vec below = square_of(get(in_thin(s, s->left, r, k) + v));
                const anb__vec beside = s->symmetric ? below : square_of(get(in_thin(s, s->right, r, k) + v));
                past = anb__fma(below * beside, anb__load(at_history(b, s->histories[k0 + k]) + v), past);
                sum += s->symmetric ? below : below + beside;
            }
            anb__store(history, past);
        }
        add_growth(b->x, (step){0, b->half + (size_t)v}, sum, anb__all(1));
    }
}

static void update_half(const bench *b, const sweep_data *s, const targets *t, const thin *p, uint32_t k0,
                        uint32_t k1, bool strictly) {
    const uint32_t size = s->lower.height;
    triangle(b, t, p, 0, k0, k0, strictly);
    if (k0 && k1 < size) rectangle(b, t, p, k1, size, 0, k0);
    triangle(b, t, p, k1, size, size, strictly);
}

static void write_columns(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1) {
    for (uint32_t r = 0; r < s->lower.height; r++) {
        const bool inside = r >= k0 && r < k1;
        for (uint32_t k = k0; k < k1; k++) {
            if (s->symmetric && inside && k > r) continue;
            copy_cell(at_slot(b, sweep_slot(s, r, k)),
                      inside ? in_thin(s, s->pivot, r - k0, k - k0) : in_thin(s, s->left, r, k - k0));
            if (!s->symmetric && !inside)
                copy_cell(at_slot(b, sweep_slot(s, k, r)), in_thin(s, s->right, r, k - k0));
        }
    }
}

static void sweep_columns(const bench *b, const sweep_data *s, uint32_t k0, uint32_t k1) {
    thin down = {s->left, s->row, s->pitch, k1 - k0}, across = {s->row, s->left, s->pitch, k1 - k0};
    copy_columns(b, s, k0, k1);
    sweep_pivots(b, s, k0, k1);
    divide_rows(s, s->left, s->column, s->turned, k0, k1);
    if (!s->symmetric) divide_rows(s, s->right, s->row, s->pivot, k0, k1);
    note_factors(b, s, k0, k1);
    note_diagonals(b, &s->lower, s->histories, k1, s->lower.height);
    update_half(b, s, &s->lower, &down, k0, k1, false);
    if (!s->symmetric) update_half(b, s, &s->upper, &across, k0, k1, true);
    write_columns(b, s, k0, k1);
}

/* Turns -1/A into what is asked for: times `scale`, into the slots or the result or both. */
static void finish_half(const bench *b, const targets *t, const uint32_t *elements, const uint32_t *offsets,
                        bool only_result, cell minus_scale, uint32_t group) {
    for (uint32_t c = 0, n = 0; c < t->height; c++)
        for (uint32_t r = c; r < t->height; r++, n++)
            for (int v = 0; v < ANB__LANES; v += ANB__WIDTH) {
                double *here = at_slot(b, t->base + n) + v;
                cell value = times(get(here), minus_scale);
                if (!only_result) put(here, value);
                if (elements[n] == ANB__NOWHERE || (r == c && !offsets)) continue;
                cell offset = r == c ? all(b->x->constants[offsets[c]]) : zero();
                put(element(b->x, elements[n]) + group * b->x->out_stride + v,
                    (cell){value.re - offset.re, value.im - offset.im});
            }
}

static const uint32_t *sweep(const run *x, const uint32_t *op) {
    const uint32_t size = op[0], depth = anb__sweep_depth(size), *elements = op + 5 + size;
    const bool only_result = op[1];
    const size_t packed = (size_t)size * (size + 1) / 2, thin_size = (size_t)size * depth * ANB__GROUP;
    const size_t pivot_size = (size_t)depth * depth * ANB__GROUP;
    const uint32_t *offsets = elements + (x->symmetric ? 1 : 2) * packed;
    sweep_data s = {
        .histories = op + 5, .depth = depth, .pitch = (size_t)depth * ANB__GROUP, .symmetric = x->symmetric};
    s.lower = (targets){size, size, op[3], NULL};
    s.upper = (targets){size, size, op[4], NULL};
    s.column = x->scratch;
    s.left = s.column + thin_size;
    s.row = x->symmetric ? s.column : s.left + thin_size;
    s.right = x->symmetric ? s.left : s.row + thin_size;
    s.pivot = x->scratch + 4 * thin_size;
    s.turned = s.pivot + pivot_size;
    s.spare = s.turned + pivot_size;
    const anb__complex scale = x->constants[op[2]];
    const cell minus_scale = all(anb__cneg(scale));
    for (uint32_t g = 0; g < x->groups; g++) {
        bench b = {x, (size_t)g * ANB__GROUP, (size_t)g * ANB__LANES};
        for (uint32_t k = 0; k < size; k += depth)
            sweep_columns(&b, &s, k, k + depth < size ? k + depth : size);
        finish_half(&b, &s.lower, elements, offsets, only_result, minus_scale, g);
        if (!x->symmetric) finish_half(&b, &s.upper, elements + packed, NULL, only_result, minus_scale, g);
    }
    return offsets + size;
}
