#include "solve/order.h"

#include <amd.h>
#include <string.h>

/* ---- the graph ------------------------------------------------------------------------- */

static void count_neighbours(const anb__system *system, uint32_t *start) {
    for (uint32_t e = 0; e < system->entry_count; e++) {
        const anb__entry *entry = &system->entries[e];
        if (entry->row == entry->column) continue;
        start[entry->row + 1]++;
        start[entry->column + 1]++;
    }
    for (uint32_t i = 0; i < system->size; i++) start[i + 1] += start[i];
}

/* Where both (i, j) and (j, i) are entries, each of the two vertices is named twice. */
static void drop_twins(anb__arena *work, anb__graph *graph) {
    uint32_t *seen = anb__arena_take(work, ((size_t)graph->size + 1) * sizeof *seen);
    uint32_t kept = 0, from = 0;
    for (uint32_t i = 0; i < graph->size; i++) {
        uint32_t end = graph->start[i + 1];
        graph->start[i] = kept;
        for (; from < end; from++) {
            uint32_t j = graph->neighbour[from];
            if (seen[j] != i + 1) graph->neighbour[kept++] = j;
            seen[j] = i + 1;
        }
    }
    graph->start[graph->size] = kept;
}

void anb__graph_of(anb__arena *work, const anb__system *system, anb__graph *out) {
    uint32_t n = system->size;
    out->size = n;
    out->start = anb__arena_take(work, ((size_t)n + 2) * sizeof *out->start);
    count_neighbours(system, out->start);
    out->neighbour = anb__arena_take(work, ((size_t)out->start[n] + 1) * sizeof *out->neighbour);
    uint32_t *next = anb__arena_take(work, ((size_t)n + 1) * sizeof *next);
    memcpy(next, out->start, n * sizeof *next);
    for (uint32_t e = 0; e < system->entry_count; e++) {
        const anb__entry *entry = &system->entries[e];
        if (entry->row == entry->column) continue;
        out->neighbour[next[entry->row]++] = entry->column;
        out->neighbour[next[entry->column]++] = entry->row;
    }
    if (!system->symmetric) drop_twins(work, out);
}

/* ---- large systems ------------------------------------------------------------------------ */

enum { WEAK = 1000 }; /* a diagonal element this much smaller than one beside it is no pivot yet */

static void note_magnitude(double *most, uint32_t i, anb__complex value) {
    double size = value.re * value.re + value.im * value.im;
    if (size > most[i]) most[i] = size;
}

/* Unknowns whose diagonal elements vanish beside their neighbours', at the first sample. Elimination of a
 * neighbour makes them regular. */
static bool *find_weak(anb__arena *work, const anb__system *system) {
    uint32_t n = system->size;
    bool *weak = anb__arena_take(work, n + 1);
    double *own = anb__arena_take(work, ((size_t)n + 1) * sizeof *own);
    double *beside = anb__arena_take(work, ((size_t)n + 1) * sizeof *beside);
    if (!system->sample_count) return weak;
    for (uint32_t e = 0; e < system->entry_count; e++) {
        const anb__entry *entry = &system->entries[e];
        note_magnitude(entry->row == entry->column ? own : beside, entry->row, system->samples[e]);
        if (entry->row != entry->column) note_magnitude(beside, entry->column, system->samples[e]);
    }
    for (uint32_t i = 0; i < n; i++) weak[i] = !(own[i] * WEAK * WEAK > beside[i]);
    return weak;
}

typedef struct queue {
    const anb__graph *graph;
    bool *weak, *placed, *ready; /* ready: a neighbour has been placed */
    bool *passed;                /* weak ones that the order has come to */
    uint32_t *order, count;
} queue;

/* Places an unknown, and at once the weak neighbours that waited for it. */
static void place(queue *q, uint32_t unknown) {
    uint32_t done = q->count;
    q->order[q->count++] = unknown;
    q->placed[unknown] = true;
    for (; done < q->count; done++) {
        uint32_t u = q->order[done];
        for (uint32_t k = q->graph->start[u]; k < q->graph->start[u + 1]; k++) {
            uint32_t v = q->graph->neighbour[k];
            q->ready[v] = true;
            if (!q->passed[v] || q->placed[v]) continue;
            q->order[q->count++] = v;
            q->placed[v] = true;
        }
    }
}

/* Puts weak unknowns behind the first of their neighbours; those without one keep their places at the end. */
static void delay_weak(anb__arena *work, const anb__graph *graph, bool *weak, const uint32_t *wish,
                       uint32_t *order) {
    uint32_t n = graph->size;
    queue q = {.graph = graph, .weak = weak, .order = order};
    q.placed = anb__arena_take(work, n + 1);
    q.ready = anb__arena_take(work, n + 1);
    q.passed = anb__arena_take(work, n + 1);
    for (uint32_t k = 0; k < n; k++) {
        uint32_t u = wish[k];
        if (q.placed[u]) continue;
        if (weak[u] && !q.ready[u])
            q.passed[u] = true;
        else
            place(&q, u);
    }
    for (uint32_t k = 0; k < n; k++)
        if (!q.placed[wish[k]]) order[q.count++] = wish[k];
}

static void move_ports_last(anb__arena *work, const bool *is_port, uint32_t n, uint32_t *order) {
    uint32_t *ports = anb__arena_take(work, ((size_t)n + 1) * sizeof *ports), inner = 0, count = 0;
    for (uint32_t k = 0; k < n; k++) {
        if (is_port[order[k]])
            ports[count++] = order[k];
        else
            order[inner++] = order[k];
    }
    memcpy(order + inner, ports, count * sizeof *ports);
}

/* Approximate minimum degree (P. Amestoy, T. A. Davis and I. S. Duff 2004). */
void anb__order_large(anb__arena *work, const anb__system *system, const anb__graph *graph,
                      const bool *is_port, anb__order_rule rule, uint32_t *order) {
    uint32_t n = graph->size;
    int32_t *wish = anb__arena_take(work, ((size_t)n + 1) * sizeof *wish);
    double control[AMD_CONTROL];
    amd_defaults(control);
    int status = n > INT32_MAX || graph->start[n] > INT32_MAX
                     ? AMD_OUT_OF_MEMORY
                     : amd_order((int32_t)n, (const int32_t *)graph->start, (const int32_t *)graph->neighbour,
                                 wish, control, NULL);
    if (status != AMD_OK && status != AMD_OK_BUT_JUMBLED) longjmp(*work->escape, 1);
    if (rule == ANB__PORTS_LAST) move_ports_last(work, is_port, n, (uint32_t *)wish);
    delay_weak(work, graph, find_weak(work, system), (const uint32_t *)wish, order);
}

void anb__order_of(anb__arena *work, const anb__system *system, const anb__graph *graph, const bool *is_port,
                   anb__order_rule rule, uint32_t *order) {
    if (graph->size <= ANB__ORDER_SMALL)
        anb__order_small(work, system, graph, is_port, rule, order);
    else
        anb__order_large(work, system, graph, is_port, rule, order);
}
