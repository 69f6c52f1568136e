#include "sweep/grid.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#define SAME 1e-12 /* points closer than this, relatively, are one */

/* ---- one statement ------------------------------------------------------------------------ */

static double point_of(const anb__grid *grid, uint32_t which, uint64_t k) {
    const anb__grid_part *p = &grid->parts[which];
    double n = (double)(p->count - 1), i = (double)k;
    if (p->kind == ANB__GRID_AT) return grid->sorted[which][k];
    if (k == 0) return p->low;
    if (p->kind == ANB__GRID_STEP) return p->low + p->step * i;
    if (k == p->count - 1) return p->high;
    if (p->kind == ANB__GRID_POINTS) return p->low + (p->high - p->low) * i / n;
    return p->low * pow(p->high / p->low, i / n);
}

static int by_size(const void *a, const void *b) {
    double x = *(const double *)a, y = *(const double *)b;
    return x < y ? -1 : x > y;
}

/* ---- all of them ----------------------------------------------------------------------------- */

/* The next point of the union, at a cursor that is moved on; false at the end. Of points that are one, that
 * of `at` counts, else that of the first statement. */
static bool next_point(const anb__grid *grid, uint64_t *cursor, double *hz) {
    double least = INFINITY;
    bool from_list = false, found = false;
    for (uint32_t i = 0; i < grid->part_count; i++)
        if (cursor[i] < grid->parts[i].count) least = fmin(least, point_of(grid, i, cursor[i]));
    if (isinf(least)) return false;
    double limit = least * (1 + SAME);
    for (uint32_t i = 0; i < grid->part_count; i++) {
        bool is_list = grid->parts[i].kind == ANB__GRID_AT;
        for (; cursor[i] < grid->parts[i].count; cursor[i]++) {
            double here = point_of(grid, i, cursor[i]);
            if (here > limit) break;
            if (!found || (is_list && !from_list)) *hz = here;
            found = true;
            from_list = from_list || is_list;
        }
    }
    return true;
}

static bool add_mark(anb__grid *grid, const uint64_t *cursor) {
    size_t size = grid->part_count * sizeof *grid->marks;
    uint64_t *marks = realloc(grid->marks, (grid->mark_count + 1) * size);
    if (!marks) return false;
    grid->marks = marks;
    memcpy(marks + grid->mark_count++ * grid->part_count, cursor, size);
    return true;
}

/* Counts the points by walking through them, leaving marks. */
static bool count_points(anb__grid *grid, uint64_t *cursor) {
    double hz;
    for (;;) {
        if (grid->count % ANB__GRID_MARK == 0 && !add_mark(grid, cursor)) return false;
        if (!next_point(grid, cursor, &hz)) return true;
        grid->count++;
    }
}

static bool sort_lists(anb__grid *grid) {
    for (uint32_t i = 0; i < grid->part_count; i++) {
        const anb__grid_part *p = &grid->parts[i];
        if (p->kind != ANB__GRID_AT) continue;
        grid->sorted[i] = malloc((p->count + 1) * sizeof(double));
        if (!grid->sorted[i]) return false;
        memcpy(grid->sorted[i], p->list, p->count * sizeof(double));
        qsort(grid->sorted[i], p->count, sizeof(double), by_size);
    }
    return true;
}

/* A single statement whose points are clearly apart is its own union: point k is found without walking. */
static bool is_simple(const anb__grid *grid) {
    const anb__grid_part *p = &grid->parts[0];
    double least = 4 * SAME * p->high, steps = (double)(p->count - 1);
    if (grid->part_count != 1) return false;
    if (p->count == 1) return true;
    if (p->kind == ANB__GRID_POINTS) return (p->high - p->low) / steps > least;
    if (p->kind == ANB__GRID_STEP) return p->step > least;
    return p->kind == ANB__GRID_PER_DECADE && log(p->high / p->low) / steps > 4 * SAME;
}

anb_status anb__grid_new(const anb__network *network, anb__grid *out) {
    *out = (anb__grid){.parts = network->sweeps, .part_count = network->sweep_count};
    if (!out->part_count) return ANB_OK;
    uint64_t *cursor = calloc(out->part_count, sizeof *cursor);
    out->sorted = calloc(out->part_count, sizeof *out->sorted);
    bool done = cursor && out->sorted && sort_lists(out);
    out->simple = done && is_simple(out);
    if (out->simple) out->count = out->parts[0].count;
    else done = done && count_points(out, cursor);
    free(cursor);
    return done ? ANB_OK : ANB_MEMORY;
}

void anb__grid_clear(anb__grid *grid) {
    for (uint32_t i = 0; grid->sorted && i < grid->part_count; i++) free(grid->sorted[i]);
    free(grid->sorted);
    free(grid->marks);
    *grid = (anb__grid){0};
}

anb_status anb__grid_fill(const anb__grid *grid, uint64_t first, uint64_t count, double *hz) {
    if (grid->simple) {
        for (uint64_t k = 0; k < count; k++) hz[k] = point_of(grid, 0, first + k);
        return ANB_OK;
    }
    uint64_t *cursor = malloc(grid->part_count * sizeof *cursor), mark = first / ANB__GRID_MARK;
    double skipped;
    if (!cursor) return ANB_MEMORY;
    memcpy(cursor, grid->marks + mark * grid->part_count, grid->part_count * sizeof *cursor);
    for (uint64_t k = mark * ANB__GRID_MARK; k < first; k++) next_point(grid, cursor, &skipped);
    for (uint64_t k = 0; k < count; k++) next_point(grid, cursor, &hz[k]);
    free(cursor);
    return ANB_OK;
}
