/* A network made ready to be computed at any frequency: numbered, assembled, compiled.
 *
 * An engine is read only once it stands, and serves any number of threads, each with a bench of its own.
 */
#ifndef ANB_SWEEP_ENGINE_H
#define ANB_SWEEP_ENGINE_H

#include "sweep/grid.h"
#include "sweep/tableau.h"

typedef struct anb__engine {
    const anb__network *network;
    anb__nodes nodes;
    anb__assembly assembly;
    anb__plan *plan;
    uint32_t *slot_of; /* [assembly.entry_count] */
    const anb__plan_kernel *kernel;
    anb__assembly_fill *fill;
    double compile_seconds;
} anb__engine;

/* Compiles; `grid` gives typical frequencies. `kernel` is a kernel's name or NULL for the best.
 * ANB_OK or ANB_MEMORY; to be cleared in any case. */
anb_status anb__engine_new(const anb__network *network, const anb__grid *grid, const char *kernel,
                           anb__engine *out);
void anb__engine_clear(anb__engine *engine);

/* What one thread works with. */
typedef struct anb__bench {
    const anb__engine *engine;
    uint32_t groups;    /* of a block */
    double *hz;         /* [groups * ANB__LANES] */
    double *slots, *scratch; /* one block's */
    uint8_t *suspect;   /* [groups] */
    anb__tableau tableau;  /* this and `pivoted` are made when the first lane needs them */
    bool has_tableau;
    anb__pivoted *pivoted;
    anb__complex *values, *currents, *s;
    uint64_t pivoted_points;
    /* why a point has no solution, after ANB_INVALID */
    double failed_hz;
    uint32_t failed_unknown, failed_part; /* UINT32_MAX where it is not the one or the other */
} anb__bench;

anb_status anb__bench_new(const anb__engine *engine, anb__bench *out);
void anb__bench_clear(anb__bench *bench);

/* S at `count` frequencies into groups of N-port data from `out` on (see data/data.h): whole groups are
 * written, the last one padded. ANB_INVALID where a point has no solution. */
anb_status anb__compute_points(anb__bench *bench, const double *hz, uint64_t count, double *out);

#endif
