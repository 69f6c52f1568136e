/* Work on all the points of a grid, in blocks, on several threads.
 *
 * Blocks are processed by any thread and delivered on the calling one in rising order. Which thread does
 * which block changes no result, since a point's result does not depend on its neighbours.
 */
#ifndef ANB_SWEEP_RUN_H
#define ANB_SWEEP_RUN_H

#include <stdatomic.h>

#include "sweep/engine.h"

/* One block of points. */
typedef struct anb__block {
    uint64_t first, count;
    double *hz;    /* [count] */
    void *payload; /* the job's own, made once for each place in the ring */
    anb_status status;
    double failed_hz; /* as in anb__bench, after ANB_INVALID */
    uint32_t failed_unknown, failed_part;
} anb__block;

typedef struct anb__job {
    void *user;
    uint64_t block_points;             /* a multiple of ANB__LANES */
    void *(*make_payload)(void *user); /* NULL when memory is gone */
    void (*free_payload)(void *user, void *payload);
    anb_status (*process)(void *user, anb__bench *bench, anb__block *block); /* on any thread */
    anb_status (*deliver)(void *user, anb__block *block); /* on the calling thread, in order */
} anb__job;

typedef struct anb__outcome {
    uint64_t pivoted_points;
    double failed_hz;
    uint32_t failed_unknown, failed_part;
} anb__outcome;

/* `threads` 0 is one for each processor. Stops early with ANB_CANCELLED when *cancelled becomes true.
 * The first failure in the order of the points is what is returned. */
anb_status anb__run(const anb__engine *engine, const anb__grid *grid, unsigned threads, const anb__job *job,
                    const atomic_bool *cancelled, anb__outcome *outcome);

#endif
