#include "solve/plan_pattern.h"

#include <stdlib.h>
#include <string.h>

#include "solve/plan_code.h"

/* ---- columns of the factor ------------------------------------------------------------------- */

/* A column is the union of the matrix's own column and the columns of its children in the elimination tree
 * (the columns whose first row it is). */
typedef struct columns {
    anb__arena *work;
    const anb__graph *graph;
    const uint32_t *order, *position;
    size_t *start;
    uint32_t *row;
    size_t capacity;
    uint32_t *child, *sibling; /* lists of children */
    uint32_t *seen, *fresh;
} columns;

static int by_number(const void *a, const void *b) {
    uint32_t x = *(const uint32_t *)a, y = *(const uint32_t *)b;
    return x < y ? -1 : x > y;
}

enum { INSERTION = 24 };

static void sort(uint32_t *list, size_t count) {
    if (count > INSERTION) {
        qsort(list, count, sizeof *list, by_number);
        return;
    }
    for (size_t i = 1; i < count; i++) {
        uint32_t here = list[i];
        size_t k = i;
        for (; k && list[k - 1] > here; k--) list[k] = list[k - 1];
        list[k] = here;
    }
}

/* The child whose column is the longest: the others add little to it. */
static uint32_t longest_child(const columns *c, uint32_t i) {
    uint32_t best = ANB__NOWHERE;
    size_t most = 0;
    for (uint32_t k = c->child[i]; k != ANB__NOWHERE; k = c->sibling[k]) {
        size_t length = c->start[k + 1] - c->start[k];
        if (length > most) best = k;
        if (length > most) most = length;
    }
    return best;
}

static size_t add_fresh(columns *c, uint32_t i, uint32_t row, size_t count) {
    if (row > i && c->seen[row] != i + 1) c->fresh[count++] = row;
    c->seen[row] = i + 1;
    return count;
}

/* Rows of column i that its longest child does not have, sorted. */
static size_t find_fresh(columns *c, uint32_t i, uint32_t longest) {
    size_t count = 0;
    if (longest != ANB__NOWHERE)
        for (size_t k = c->start[longest]; k < c->start[longest + 1]; k++) c->seen[c->row[k]] = i + 1;
    uint32_t unknown = c->order[i];
    for (uint32_t k = c->graph->start[unknown]; k < c->graph->start[unknown + 1]; k++)
        count = add_fresh(c, i, c->position[c->graph->neighbour[k]], count);
    for (uint32_t child = c->child[i]; child != ANB__NOWHERE; child = c->sibling[child])
        for (size_t k = c->start[child]; child != longest && k < c->start[child + 1]; k++)
            count = add_fresh(c, i, c->row[k], count);
    sort(c->fresh, count);
    return count;
}

static void reserve(columns *c, size_t used, size_t more) {
    if (used + more <= c->capacity) return;
    size_t capacity = 2 * c->capacity + more;
    c->row = anb__arena_grow(c->work, c->row, used * sizeof *c->row, capacity * sizeof *c->row);
    c->capacity = capacity;
}

static void make_column(columns *c, uint32_t i) {
    uint32_t longest = longest_child(c, i);
    size_t fresh = find_fresh(c, i, longest), used = c->start[i];
    size_t old = longest == ANB__NOWHERE ? 0 : c->start[longest + 1] - c->start[longest] - 1;
    reserve(c, used, fresh + old);
    const uint32_t *a = c->fresh, *a_end = a + fresh;
    const uint32_t *b = old ? c->row + c->start[longest] + 1 : a, *b_end = b + old; /* without i itself */
    uint32_t *to = c->row + used;
    while (a < a_end || b < b_end) *to++ = b == b_end || (a < a_end && *a < *b) ? *a++ : *b++;
    c->start[i + 1] = used + fresh + old;
    if (fresh + old) {
        uint32_t parent = c->row[used];
        c->sibling[i] = c->child[parent];
        c->child[parent] = i;
    }
}

/* ---- postorder ---------------------------------------------------------------------------------- */

/* Moves the child with the longest column to the end of each list, so that it comes just before its parent.
 */
static void put_longest_first(columns *c, uint32_t i) {
    uint32_t longest = longest_child(c, i), before = ANB__NOWHERE;
    if (longest == ANB__NOWHERE || c->child[i] == longest) return;
    for (uint32_t k = c->child[i]; k != longest; k = c->sibling[k]) before = k;
    c->sibling[before] = c->sibling[longest];
    c->sibling[longest] = c->child[i];
    c->child[i] = longest;
}

/* Numbers from the last to the first: a parent, then its first child's whole tree, and so on. */
static void postorder(columns *c, uint32_t n, uint32_t *rank) {
    uint32_t *stack = anb__arena_take(c->work, ((size_t)n + 1) * sizeof *stack), next = n;
    for (uint32_t root = n; root-- > 0;) {
        if (c->start[root + 1] > c->start[root]) continue;
        uint32_t depth = 0;
        stack[depth++] = root;
        while (depth) {
            uint32_t i = stack[--depth], first = c->child[i];
            rank[i] = --next;
            if (first == ANB__NOWHERE) continue;
            put_longest_first(c, i);
            first = c->child[i];
            for (uint32_t k = c->sibling[first]; k != ANB__NOWHERE; k = c->sibling[k]) stack[depth++] = k;
            stack[depth++] = first;
        }
    }
}

/* The columns in their new places. Along every path to a root the order stays, so the rows stay sorted. */
static void renumber(const columns *c, uint32_t n, const uint32_t *rank, anb__pattern *out) {
    size_t total = c->start[n];
    uint32_t *old = anb__arena_take(c->work, ((size_t)n + 1) * sizeof *old);
    out->start = anb__arena_take(c->work, ((size_t)n + 1) * sizeof *out->start);
    out->row = anb__arena_take(c->work, (total + 1) * sizeof *out->row);
    for (uint32_t i = 0; i < n; i++) old[rank[i]] = i;
    for (uint32_t i = 0, at; i < n; i++) {
        at = old[i];
        size_t length = c->start[at + 1] - c->start[at];
        out->start[i + 1] = out->start[i] + length;
        for (size_t k = 0; k < length; k++) out->row[out->start[i] + k] = rank[c->row[c->start[at] + k]];
        out->position[c->order[at]] = i;
    }
}

void anb__pattern_of(anb__arena *work, const anb__graph *graph, const uint32_t *order, anb__pattern *out) {
    uint32_t n = graph->size;
    size_t size = ((size_t)n + 1) * sizeof(uint32_t);
    columns c = {.work = work, .graph = graph, .order = order};
    out->size = n;
    out->position = anb__arena_take(work, size);
    for (uint32_t i = 0; i < n; i++) out->position[order[i]] = i;
    c.position = out->position;
    c.start = anb__arena_take(work, ((size_t)n + 1) * sizeof *c.start);
    c.child = anb__arena_take(work, size);
    c.sibling = anb__arena_take(work, size);
    c.seen = anb__arena_take(work, size);
    c.fresh = anb__arena_take(work, size);
    memset(c.child, 0xff, size);
    memset(c.sibling, 0xff, size);
    c.capacity = graph->start[n] + n + 1;
    c.row = anb__arena_take(work, c.capacity * sizeof *c.row);
    for (uint32_t i = 0; i < n; i++) make_column(&c, i);
    uint32_t *rank = anb__arena_take(work, size);
    postorder(&c, n, rank);
    renumber(&c, n, rank, out);
}
