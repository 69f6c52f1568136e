/* The compiled plan: a symmetric or general complex matrix of one pattern, inverted at many points.
 *
 * The matrix M is given by its pattern, once; its values come for a block of points at a time.
 * Wanted is, for "ports" that are signed sums of unknowns (p_k = sum of +-e_u),
 *     S_kl = c_k c_l (p_k^T M^-1 p_l) - d_k [k = l],
 * which goes straight into N-port data. Numbering, elimination order and the elimination
 * itself, as a list of operations on numbered slots, are compiled once (docs/theory.md);
 * running the plan means running the list, all lanes of a block at each operation.
 *
 * The order is fixed, so a pivot may vanish at some point: every lane carries a
 * measure of growth and cancellation, and lanes beyond ANB__GROWTH_LIMIT are named in a mask. Their
 * results are not to be used: they are to be computed the pivoted way (solve/pivoted.h).
 */
#ifndef ANB_SOLVE_PLAN_H
#define ANB_SOLVE_PLAN_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "anabranch.h"
#include "base/complex.h"
#include "base/group.h"

typedef struct anb__entry {
    uint32_t row, column; /* symmetric: row >= column */
} anb__entry;

typedef struct anb__term {
    uint32_t unknown;
    double sign; /* +1 or -1 */
} anb__term;

typedef struct anb__system {
    uint32_t size; /* unknowns */
    bool symmetric;
    uint32_t entry_count;
    const anb__entry *entries; /* each place once; diagonal entries that are missing are zero */
    /* Values of the entries at `sample_count` typical points, [sample][entry]: the order is chosen
     * so that pivots are safe there. May be NULL with sample_count 0. */
    uint32_t sample_count;
    const anb__complex *samples;
    /* Ports: port k has the terms first_term[k] .. first_term[k+1]-1; none means that its
     * voltage is always zero. */
    uint32_t port_count;
    const uint32_t *first_term;
    const anb__term *terms;
    const anb__complex *scale;  /* c_k */
    const anb__complex *offset; /* d_k */
} anb__system;

typedef struct anb__plan anb__plan;

/* Compiles. ANB_OK or ANB_MEMORY. The plan does not keep pointers into `system`. */
anb_status anb__plan_compile(const anb__system *system, anb__plan **out);
void anb__plan_free(anb__plan *plan);

uint32_t anb__plan_slot_of(const anb__plan *plan, uint32_t entry); /* of an entry of the system */
uint32_t anb__plan_slot_count(const anb__plan *plan);              /* fill and scratch included */
uint32_t anb__plan_block_groups(const anb__plan *plan); /* groups of a block that suit the caches */
uint64_t anb__plan_operations(const anb__plan *plan);   /* complex multiply-adds of one point */
bool anb__plan_is_symmetric(const anb__plan *plan);

/* One block. `slots` is [slot][groups][ANB__GROUP] doubles, 64-byte aligned, with the entries'
 * slots filled by the caller (the others need no care; all are overwritten).
 * `out` is [group][element][ANB__GROUP] as in N-port data: packed lower triangle (to >= from, to*(to+1)/2
 * + from) if symmetric, else to*ports + from. `suspect[g]` gets a bit for each lane of group g
 * that the guard refuses (infinities and NaN included). `kernel` is one of anb__kernel_names. */
typedef void anb__plan_run_function(const anb__plan *plan, double *slots, uint32_t groups, double *out,
                                    uint8_t *suspect);
typedef struct anb__plan_kernel {
    const char *name;
    anb__plan_run_function *run;
} anb__plan_kernel;

/* The kernel of that name if this machine has it; the best one for NULL; NULL where there is none. */
const anb__plan_kernel *anb__plan_kernel_find(const char *name);

#endif
