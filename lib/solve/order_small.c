/* Minimum degree that looks at the values (H. M. Markowitz 1957, with pivots on the diagonal only).
 *
 * The matrix is eliminated at a few typical points while the order is being found, eight of them side by
 * side. An unknown may go when its pivot is safe at all of them: not small beside its column and not the rest
 * of a cancellation. A zero on the diagonal (a branch current, an ideal transformer) thus waits until fill
 * has made it regular.
 */
#include <math.h>
#include <string.h>

#include "solve/order.h"

enum {
    SAFE = 50,      /* a safe pivot may be this much smaller than its column or its former self */
    CLIQUE = 32,    /* from this size on, an order within a full block is not worth the search */
    BUDGET = 100000 /* updates of values; beyond it, the pattern alone decides */
};

typedef double value[ANB__GROUP]; /* re[8], im[8]: one lane for each sample */

typedef enum fitness { UNKNOWN, SAFE_PIVOT, UNSAFE_PIVOT } fitness;

typedef struct ordering {
    anb__arena *work;
    uint32_t size, left;
    uint32_t words; /* of a set of unknowns */
    bool symmetric;
    uint64_t *neighbours; /* [size][words]: sets, of those that are left */
    uint32_t *degree;
    bool *done;
    /* values; not kept once the budget is spent */
    bool has_values;
    uint32_t *place; /* [row * size + column]: index of a value, plus 1 */
    value *values;
    size_t count, capacity;
    uint32_t budget;
    double (*initial)[ANB__LANES]; /* squared magnitudes of the diagonal as it was assembled */
    unsigned char *fitness;
} ordering;

/* ---- values ------------------------------------------------------------------------------ */

static double *value_at(ordering *o, uint32_t row, uint32_t column) {
    if (o->symmetric && row < column) {
        uint32_t other = row;
        row = column;
        column = other;
    }
    uint32_t *place = &o->place[(size_t)row * o->size + column];
    if (!*place) {
        if (o->count == o->capacity) {
            o->values =
                anb__arena_grow(o->work, o->values, o->count * sizeof(value), 2 * o->count * sizeof(value));
            o->capacity *= 2;
        }
        memset(o->values[o->count], 0, sizeof(value));
        *place = (uint32_t)++o->count;
    }
    return o->values[*place - 1];
}

static void load_values(ordering *o, const anb__system *system) {
    o->place = anb__arena_take(o->work, (size_t)o->size * o->size * sizeof *o->place);
    o->capacity = 3 * (system->entry_count + o->size) + 1;
    o->values = anb__arena_take(o->work, o->capacity * sizeof(value));
    for (uint32_t e = 0; e < system->entry_count; e++) {
        const anb__entry *entry = &system->entries[e];
        value_at(o, entry->column, entry->row); /* so that updates never add a value they only read */
        double *to = value_at(o, entry->row, entry->column);
        for (uint32_t lane = 0; lane < ANB__LANES; lane++) {
            const anb__complex *from =
                &system->samples[(size_t)(lane % system->sample_count) * system->entry_count + e];
            to[lane] = from->re;
            to[ANB__LANES + lane] = from->im;
        }
    }
    o->initial = anb__arena_take(o->work, o->size * sizeof *o->initial);
    for (uint32_t i = 0; i < o->size; i++) {
        const double *d = value_at(o, i, i);
        for (int k = 0; k < ANB__LANES; k++) o->initial[i][k] = d[k] * d[k] + d[k + 8] * d[k + 8];
    }
}

/* The larger of each lane's magnitude and what is there. */
static void raise_to(double *most, const double *v) {
    for (int k = 0; k < ANB__LANES; k++) {
        double size = v[k] * v[k] + v[k + ANB__LANES] * v[k + ANB__LANES];
        most[k] = size > most[k] ? size : most[k];
    }
}

/* How much larger than the pivot its column or its initial value is, squared, at the worst sample. */
static double weakness(ordering *o, uint32_t i) {
    double most[ANB__LANES], worst = 0;
    memcpy(most, o->initial[i], sizeof most);
    for (uint32_t w = 0; w < o->words; w++)
        for (uint64_t set = o->neighbours[(size_t)i * o->words + w]; set; set &= set - 1) {
            uint32_t j = 64 * w + (uint32_t)__builtin_ctzll(set);
            raise_to(most, value_at(o, j, i));
            if (!o->symmetric) raise_to(most, value_at(o, i, j));
        }
    const double *d = value_at(o, i, i);
    for (int k = 0; k < ANB__LANES; k++) {
        double ratio = most[k] / (d[k] * d[k] + d[k + ANB__LANES] * d[k + ANB__LANES]);
        if (most[k] > 0 && !(ratio <= worst)) worst = isnan(ratio) ? INFINITY : ratio;
    }
    return worst;
}

static bool is_safe(ordering *o, uint32_t i) {
    if (!o->has_values) return true;
    if (o->fitness[i] == UNKNOWN)
        o->fitness[i] = weakness(o, i) <= (double)SAFE * SAFE ? SAFE_PIVOT : UNSAFE_PIVOT;
    return o->fitness[i] == SAFE_PIVOT;
}

/* factor = v / pivot; a lane whose pivot is zero is of no further use and gets zeros */
static void divide(const double *v, const double *pivot, double *factor) {
    for (int k = 0; k < ANB__LANES; k++) {
        double size = pivot[k] * pivot[k] + pivot[k + 8] * pivot[k + 8];
        double inverse = size > 0 ? 1 / size : 0;
        factor[k] = (v[k] * pivot[k] + v[k + 8] * pivot[k + 8]) * inverse;
        factor[k + 8] = (v[k + 8] * pivot[k] - v[k] * pivot[k + 8]) * inverse;
    }
}

static void subtract_product(double *to, const double *a, const double *b) {
    for (int k = 0; k < ANB__LANES; k++) {
        to[k] -= a[k] * b[k] - a[k + 8] * b[k + 8];
        to[k + 8] -= a[k] * b[k + 8] + a[k + 8] * b[k];
    }
}

static void eliminate_values(ordering *o, uint32_t pivot, const uint32_t *list, uint32_t count) {
    uint32_t updates = count * count;
    o->has_values = updates <= o->budget;
    if (!o->has_values) return;
    o->budget -= updates;
    for (uint32_t a = 0; a < count; a++) {
        value factor;
        divide(value_at(o, list[a], pivot), value_at(o, pivot, pivot), factor);
        o->fitness[list[a]] = UNKNOWN;
        for (uint32_t b = 0; b < (o->symmetric ? a + 1 : count); b++) {
            double *to = value_at(o, list[a], list[b]); /* may move the values */
            subtract_product(to, factor, value_at(o, pivot, list[b]));
        }
    }
}

/* ---- the pattern --------------------------------------------------------------------------- */

static void load_pattern(ordering *o, const anb__graph *graph) {
    o->words = (o->size + 63) / 64;
    o->neighbours = anb__arena_take(o->work, (size_t)o->size * o->words * sizeof *o->neighbours);
    o->degree = anb__arena_take(o->work, o->size * sizeof *o->degree);
    o->done = anb__arena_take(o->work, o->size);
    o->fitness = anb__arena_take(o->work, o->size);
    for (uint32_t i = 0; i < o->size; i++) {
        o->degree[i] = graph->start[i + 1] - graph->start[i];
        for (uint32_t k = graph->start[i]; k < graph->start[i + 1]; k++) {
            uint32_t j = graph->neighbour[k];
            o->neighbours[(size_t)i * o->words + j / 64] |= (uint64_t)1 << j % 64;
        }
    }
}

static uint32_t list_of(const ordering *o, uint32_t i, uint32_t *list) {
    uint32_t count = 0;
    for (uint32_t w = 0; w < o->words; w++)
        for (uint64_t set = o->neighbours[(size_t)i * o->words + w]; set; set &= set - 1)
            list[count++] = 64 * w + (uint32_t)__builtin_ctzll(set);
    return count;
}

static void eliminate_pattern(ordering *o, uint32_t pivot, const uint32_t *list, uint32_t count) {
    const uint64_t *around = o->neighbours + (size_t)pivot * o->words;
    for (uint32_t a = 0; a < count; a++) {
        uint64_t *set = o->neighbours + (size_t)list[a] * o->words;
        uint32_t degree = 0;
        for (uint32_t w = 0; w < o->words; w++) set[w] |= around[w];
        set[pivot / 64] &= ~((uint64_t)1 << pivot % 64);
        set[list[a] / 64] &= ~((uint64_t)1 << list[a] % 64);
        for (uint32_t w = 0; w < o->words; w++) degree += (uint32_t)__builtin_popcountll(set[w]);
        o->degree[list[a]] = degree;
    }
}

/* ---- the choice ------------------------------------------------------------------------------ */

#define NONE UINT32_MAX

/* The safe unknown of the lowest degree, those of `late` left out; NONE if there is none. */
static uint32_t choose_safe(ordering *o, const bool *late) {
    uint32_t best = NONE, least = UINT32_MAX;
    for (uint32_t i = 0; i < o->size; i++) {
        if (o->done[i] || o->degree[i] >= least || (late && late[i]) || !is_safe(o, i)) continue;
        best = i;
        least = o->degree[i];
    }
    return best;
}

static uint32_t choose_least_unsafe(ordering *o) {
    uint32_t best = NONE;
    double least = INFINITY;
    for (uint32_t i = 0; i < o->size; i++) {
        if (o->done[i]) continue;
        double here = weakness(o, i);
        if (best != NONE && !(here < least)) continue;
        best = i;
        least = here;
    }
    return best;
}

static uint32_t choose(ordering *o, const bool **late) {
    uint32_t i = choose_safe(o, *late);
    if (i == NONE && *late) {
        *late = NULL;
        i = choose_safe(o, NULL);
    }
    return i == NONE ? choose_least_unsafe(o) : i;
}

/* A full block goes as it stands, zeros on the diagonal last. */
static void take_rest(ordering *o, uint32_t *order, uint32_t count) {
    for (int pass = 0; pass < 2; pass++)
        for (uint32_t i = 0; i < o->size; i++) {
            if (o->done[i] || (!pass && o->initial && o->initial[i][0] == 0)) continue;
            o->done[i] = true;
            order[count++] = i;
        }
}

void anb__order_small(anb__arena *work, const anb__system *system, const anb__graph *graph,
                      const bool *is_port, anb__order_rule rule, uint32_t *order) {
    ordering o = {.work = work, .size = graph->size, .symmetric = system->symmetric, .budget = BUDGET};
    o.has_values = system->sample_count > 0;
    load_pattern(&o, graph);
    if (o.has_values) load_values(&o, system);
    uint32_t *list = anb__arena_take(work, ((size_t)o.size + 1) * sizeof *list);
    const bool *late = rule == ANB__PORTS_LAST ? is_port : NULL;
    for (uint32_t k = 0; k < o.size; k++) {
        uint32_t pivot = choose(&o, &late), left = o.size - k;
        if (!late && left > CLIQUE && o.degree[pivot] == left - 1) {
            take_rest(&o, order, k);
            return;
        }
        uint32_t count = list_of(&o, pivot, list);
        if (o.has_values) eliminate_values(&o, pivot, list, count);
        eliminate_pattern(&o, pivot, list, count);
        o.done[pivot] = true;
        order[k] = pivot;
    }
}
