/* The frequencies of a sweep: its statements united, in rising order.
 *
 * They are not kept: a cursor walks through all the statements at once, so that ten million points take
 * no memory.
 */
#ifndef ANB_SWEEP_GRID_H
#define ANB_SWEEP_GRID_H

#include "network/network.h"

typedef struct anb__grid {
    const anb__grid_part *parts;
    uint32_t part_count;
    double **sorted;   /* [part_count]: the list of `at` in rising order, or NULL */
    uint64_t count;    /* points in all */
    bool simple;       /* point k of the union is point k of the one statement */
    uint64_t *marks;   /* [mark][part_count]: cursors at every ANB__GRID_MARK-th point */
    uint64_t mark_count;
} anb__grid;

enum { ANB__GRID_MARK = 4096 };

/* ANB_OK or ANB_MEMORY; to be cleared in any case. The network must outlive it. */
anb_status anb__grid_new(const anb__network *network, anb__grid *out);
void anb__grid_clear(anb__grid *grid);

/* `count` frequencies from point `first` on, in Hz. ANB_OK or ANB_MEMORY. */
anb_status anb__grid_fill(const anb__grid *grid, uint64_t first, uint64_t count, double *hz);

#endif
