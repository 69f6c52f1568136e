#include "solve/limit.h"

#include <stdlib.h>
#include <string.h>

#define NOISE 1e-12      /* what a cancelled coefficient may be of its parts */
#define THRESHOLD 0.1    /* a pivot is at least this share of its row's largest leading term */
#define INDEPENDENT 1e-9 /* a wanted unknown may depend on a free one by this much, relatively */

typedef struct cell {
    uint32_t column; /* probes' sources have the columns size, size + 1, ... */
    anb__series value;
} cell;

typedef struct row {
    cell *cells; /* by column */
    uint32_t count, capacity;
    uint32_t unknowns;       /* cells whose column is an unknown; they come first */
    uint32_t previous, next; /* in the list of rows with as many unknowns */
    bool done;
} row;

typedef struct column {
    uint32_t *rows; /* that have had a cell here: some no longer do */
    uint32_t count, capacity;
    bool done;
} column;

typedef struct elimination {
    uint32_t size;
    row *rows;
    column *columns;
    uint32_t *lists;                    /* first row with k unknowns, k = 0 .. size; NONE */
    uint32_t *pivot_row, *pivot_column; /* in the order of elimination */
    uint32_t pivots;
    row spare;
} elimination;

enum { NONE = UINT32_MAX };

/* ---- rows by their length ------------------------------------------------------------- */

static void unlink_row(elimination *e, uint32_t r) {
    row *here = &e->rows[r];
    if (here->previous == NONE)
        e->lists[here->unknowns] = here->next;
    else
        e->rows[here->previous].next = here->next;
    if (here->next != NONE) e->rows[here->next].previous = here->previous;
}

static void link_row(elimination *e, uint32_t r) {
    row *here = &e->rows[r];
    here->previous = NONE;
    here->next = e->lists[here->unknowns];
    if (here->next != NONE) e->rows[here->next].previous = r;
    e->lists[here->unknowns] = r;
}

/* ---- storage ----------------------------------------------------------------------------- */

static bool reserve(row *r, uint32_t count) {
    if (count <= r->capacity) return true;
    uint32_t capacity = count + count / 2 + 4;
    cell *cells = realloc(r->cells, capacity * sizeof *cells);
    if (!cells) return false;
    r->cells = cells;
    r->capacity = capacity;
    return true;
}

static bool note_in_column(elimination *e, uint32_t c, uint32_t r) {
    if (c >= e->size) return true;
    column *at = &e->columns[c];
    if (at->count == at->capacity) {
        uint32_t capacity = at->capacity ? 2 * at->capacity : 4;
        uint32_t *rows = realloc(at->rows, capacity * sizeof *rows);
        if (!rows) return false;
        at->rows = rows;
        at->capacity = capacity;
    }
    at->rows[at->count++] = r;
    return true;
}

static void release(elimination *e) {
    for (uint32_t i = 0; e->rows && i < e->size; i++) free(e->rows[i].cells);
    for (uint32_t i = 0; e->columns && i < e->size; i++) free(e->columns[i].rows);
    free(e->rows);
    free(e->columns);
    free(e->lists);
    free(e->pivot_row);
    free(e->pivot_column);
    free(e->spare.cells);
}

static bool create(elimination *e, uint32_t size) {
    *e = (elimination){.size = size};
    e->rows = calloc(size + 1, sizeof *e->rows);
    e->columns = calloc(size + 1, sizeof *e->columns);
    e->lists = malloc((size + 1) * sizeof *e->lists);
    e->pivot_row = malloc((size + 1) * sizeof *e->pivot_row);
    e->pivot_column = malloc((size + 1) * sizeof *e->pivot_column);
    if (!e->rows || !e->columns || !e->lists || !e->pivot_row || !e->pivot_column) return false;
    for (uint32_t i = 0; i <= size; i++) e->lists[i] = NONE;
    return true;
}

/* ---- one row ------------------------------------------------------------------------------ */

static double leading_size(const anb__series *s) { return fabs(s->c[0].re) + fabs(s->c[0].im); }

/* Drops zeros, divides by the least power of u among the unknowns' cells, and scales so that the largest
 * leading term of that order is about 1. */
static void tidy(elimination *e, row *r) {
    uint32_t kept = 0;
    int order = INT32_MAX;
    double largest = 0;
    r->unknowns = 0;
    for (uint32_t i = 0; i < r->count; i++) {
        if (r->cells[i].value.zero) continue;
        if (kept != i) r->cells[kept] = r->cells[i];
        const cell *here = &r->cells[kept++];
        if (here->column >= e->size) continue;
        r->unknowns++;
        if (here->value.order < order) {
            order = here->value.order;
            largest = 0;
        }
        if (here->value.order == order && leading_size(&here->value) > largest)
            largest = leading_size(&here->value);
    }
    r->count = kept;
    if (!r->unknowns) return;
    int exponent;
    frexp(largest, &exponent);
    anb__complex scale = anb__cx(ldexp(1, -exponent), 0);
    for (uint32_t i = 0; i < kept; i++) {
        r->cells[i].value = anb__series_scale(&r->cells[i].value, scale);
        r->cells[i].value.order -= order;
    }
}

static const cell *find(const row *r, uint32_t c) {
    uint32_t low = 0, high = r->count;
    while (low < high) {
        uint32_t middle = (low + high) / 2;
        if (r->cells[middle].column < c)
            low = middle + 1;
        else
            high = middle;
    }
    return low < r->count && r->cells[low].column == c ? &r->cells[low] : NULL;
}

/* target -= factor * pivot, without the column that vanishes by it. */
static bool subtract(elimination *e, uint32_t target, const row *pivot, const anb__series *factor,
                     uint32_t gone) {
    row *to = &e->rows[target], *out = &e->spare;
    static const anb__series nothing = {.zero = true, .terms = ANB__SERIES_TERMS};
    if (!reserve(out, to->count + pivot->count)) return false;
    out->count = 0;
    for (uint32_t i = 0, k = 0; i < to->count || k < pivot->count;) {
        uint32_t a = i < to->count ? to->cells[i].column : NONE,
                 b = k < pivot->count ? pivot->cells[k].column : NONE;
        uint32_t c = a < b ? a : b;
        const anb__series *old = a == c ? &to->cells[i++].value : &nothing;
        const anb__series *by = b == c ? &pivot->cells[k++].value : NULL;
        if (c == gone) continue;
        cell *here = &out->cells[out->count++];
        here->column = c;
        here->value = by ? anb__series_eliminate(old, factor, by, NOISE) : *old;
        if (a != c && !here->value.zero && !note_in_column(e, c, target)) return false;
    }
    row swap = *to;
    to->cells = out->cells;
    to->count = out->count;
    to->capacity = out->capacity;
    out->cells = swap.cells;
    out->capacity = swap.capacity;
    return true;
}

/* ---- elimination ------------------------------------------------------------------------------ */

/* Among the leading terms of a row that are large enough, the one in the shortest column. */
static const cell *choose_pivot(const elimination *e, const row *r) {
    const cell *best = NULL;
    double largest = 0;
    for (uint32_t i = 0; i < r->unknowns; i++)
        if (r->cells[i].value.order == 0) largest = fmax(largest, leading_size(&r->cells[i].value));
    for (uint32_t i = 0; i < r->unknowns; i++) {
        const cell *here = &r->cells[i];
        if (here->value.order || leading_size(&here->value) < THRESHOLD * largest) continue;
        if (!best || e->columns[here->column].count < e->columns[best->column].count) best = here;
    }
    return best;
}

static bool eliminate(elimination *e, uint32_t pivot, uint32_t c) {
    const row *by = &e->rows[pivot];
    const column *at = &e->columns[c];
    for (uint32_t i = 0; i < at->count; i++) {
        uint32_t target = at->rows[i];
        row *to = &e->rows[target];
        const cell *here = to->done ? NULL : find(to, c);
        if (!here) continue;
        anb__series factor;
        if (!anb__series_div(&here->value, &find(by, c)->value, &factor)) return false;
        unlink_row(e, target);
        if (!subtract(e, target, by, &factor, c)) return false;
        tidy(e, to);
        link_row(e, target);
    }
    return true;
}

/* Rows with the fewest unknowns go first. Rows without any stay. */
static bool eliminate_all(elimination *e) {
    for (uint32_t least = 1; least <= e->size;) {
        uint32_t r = e->lists[least];
        if (r == NONE) {
            least++;
            continue;
        }
        const cell *pivot = choose_pivot(e, &e->rows[r]);
        uint32_t c = pivot->column;
        unlink_row(e, r);
        e->rows[r].done = true;
        e->columns[c].done = true;
        e->pivot_row[e->pivots] = r;
        e->pivot_column[e->pivots++] = c;
        if (!eliminate(e, r, c)) return false;
        for (least = 1; least <= e->size && e->lists[least] == NONE;) least++;
    }
    return true;
}

/* ---- the way back -------------------------------------------------------------------------------- */

/* Solves for one source (a column beyond the unknowns) or one free unknown set to 1. */
static bool back_substitute(const elimination *e, uint32_t source, anb__series *x) {
    for (uint32_t i = 0; i < e->size; i++) x[i] = anb__series_zero();
    if (source < e->size) x[source] = anb__series_constant(anb__cx(1, 0));
    for (uint32_t k = e->pivots; k-- > 0;) {
        const row *r = &e->rows[e->pivot_row[k]];
        anb__series sum = anb__series_zero();
        const anb__series *pivot = NULL;
        for (uint32_t i = 0; i < r->count; i++) {
            const cell *here = &r->cells[i];
            if (here->column == e->pivot_column[k])
                pivot = &here->value;
            else if (here->column == source && source >= e->size)
                sum = anb__series_add(&sum, &here->value);
            else if (here->column < e->size && !x[here->column].zero)
                sum = anb__series_eliminate(&sum, &here->value, &x[here->column], NOISE);
        }
        if (!pivot || !anb__series_div(&sum, pivot, &x[e->pivot_column[k]])) return false;
    }
    return true;
}

/* A row without unknowns but with a source: no solution. Its first source's probe is to blame. */
static bool contradiction(const elimination *e, const anb__probe *probes, uint32_t *where) {
    for (uint32_t i = 0; i < e->size; i++) {
        const row *r = &e->rows[i];
        if (r->done || r->unknowns || !r->count) continue;
        *where = probes[r->cells[0].column - e->size].unknown;
        return true;
    }
    return false;
}

static double largest_of(const anb__series *x, uint32_t size) {
    double largest = 0;
    for (uint32_t i = 0; i < size; i++)
        if (!x[i].zero) largest = fmax(largest, leading_size(&x[i]));
    return largest;
}

/* Whether a wanted unknown depends on one that nothing determines. */
static bool depends_on_free(const elimination *e, const anb__probe *probes, uint32_t probe_count,
                            anb__series *x, uint32_t *where) {
    for (uint32_t c = 0; c < e->size; c++) {
        if (e->columns[c].done || !back_substitute(e, c, x)) continue;
        double largest = largest_of(x, e->size);
        *where = c;
        for (uint32_t k = 0; k < probe_count; k++) {
            const anb__series *wanted = &x[probes[k].unknown];
            if (!wanted->zero && leading_size(wanted) > INDEPENDENT * largest) return true;
        }
    }
    return false;
}

static anb__solved solutions(const elimination *e, const anb__probe *probes, uint32_t probe_count,
                             anb__series *x, anb__complex *out, uint32_t *where) {
    if (contradiction(e, probes, where) || depends_on_free(e, probes, probe_count, x, where))
        return ANB__UNDETERMINED;
    for (uint32_t l = 0; l < probe_count; l++) {
        if (!back_substitute(e, e->size + l, x)) return ANB__UNDETERMINED;
        for (uint32_t k = 0; k < probe_count; k++) {
            *where = probes[k].unknown;
            anb__complex *to = &out[(size_t)k * probe_count + l];
            if (!anb__series_limit(&x[probes[k].unknown], to) || !anb__cis_finite(*to))
                return ANB__UNDETERMINED;
        }
    }
    return ANB__SOLVED;
}

/* ---- filling ------------------------------------------------------------------------------------------ */

static int by_column(const void *a, const void *b) {
    const cell *x = a, *y = b;
    return x->column < y->column ? -1 : x->column > y->column;
}

static void add_equal_places(row *r) {
    uint32_t kept = 0;
    qsort(r->cells, r->count, sizeof *r->cells, by_column);
    for (uint32_t i = 0; i < r->count; i++) {
        if (kept && r->cells[kept - 1].column == r->cells[i].column)
            r->cells[kept - 1].value = anb__series_add(&r->cells[kept - 1].value, &r->cells[i].value);
        else
            r->cells[kept++] = r->cells[i];
    }
    r->count = kept;
}

static bool fill(elimination *e, const anb__series_entry *entries, uint32_t entry_count,
                 const anb__probe *probes, uint32_t probe_count) {
    for (uint32_t i = 0; i < entry_count + probe_count; i++) {
        bool is_entry = i < entry_count;
        row *r = &e->rows[is_entry ? entries[i].row : probes[i - entry_count].row];
        if (!reserve(r, r->count + 1)) return false;
        cell *here = &r->cells[r->count++];
        here->column = is_entry ? entries[i].column : e->size + (i - entry_count);
        here->value = is_entry ? entries[i].value : anb__series_real(probes[i - entry_count].value);
    }
    for (uint32_t i = 0; i < e->size; i++) {
        row *r = &e->rows[i];
        add_equal_places(r);
        tidy(e, r);
        link_row(e, i);
        for (uint32_t k = 0; k < r->unknowns; k++)
            if (!note_in_column(e, r->cells[k].column, i)) return false;
    }
    return true;
}

anb__solved anb__solve_limit(uint32_t size, const anb__series_entry *entries, uint32_t entry_count,
                             const anb__probe *probes, uint32_t probe_count, anb__complex *out,
                             uint32_t *where) {
    elimination e;
    anb__solved solved = ANB__NO_MEMORY;
    anb__series *x = NULL;
    bool done = create(&e, size) && fill(&e, entries, entry_count, probes, probe_count) && eliminate_all(&e);
    if (done) x = malloc((size + 1) * sizeof *x);
    if (x) solved = solutions(&e, probes, probe_count, x, out, where);
    free(x);
    release(&e);
    return solved;
}
