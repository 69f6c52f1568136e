/* A plan's inside: what the compiler writes and the kernels run.
 *
 * The code is a list of words. Each operation begins with its kind; the words that follow are
 * described with the function in solve/kernels.h that runs it. Numbers of slots stand for
 * [groups][ANB__GROUP] doubles each. A *history* is half a slot, [groups][ANB__LANES] doubles: for each lane
 * the sum of the squared magnitudes that a diagonal element had before each of its updates (see
 * solve/kernels.h).
 */
#ifndef ANB_SOLVE_PLAN_CODE_H
#define ANB_SOLVE_PLAN_CODE_H

#include "base/arena.h"
#include "solve/plan.h"

typedef enum anb__operation {
    ANB__OP_END,
    ANB__OP_CLEAR,     /* fill that is not written before it is read */
    ANB__OP_ELIMINATE, /* one unknown with 1..ANB__FIXED neighbours */
    ANB__OP_PANEL,     /* several unknowns of one structure, or one with many neighbours */
    ANB__OP_INVERT,    /* the last 1..ANB__FIXED unknowns: invert what is left */
    ANB__OP_SWEEP,     /* the same for more unknowns */
    ANB__OP_SCALE,     /* slots by constants */
    ANB__OP_INVERSE,   /* a row of the inverse by Takahashi's recurrence */
    ANB__OP_COPY,      /* elements of the inverse into the result */
    ANB__OP_COMBINE,   /* ports that are sums of unknowns */
    ANB__OP_COUNT
} anb__operation;

enum {
    ANB__FIXED = 4,            /* sizes up to which there is unrolled code */
    ANB__NOWHERE = UINT32_MAX, /* in place of the number of a slot or of an element */
    ANB__ZERO_HISTORY = 0,     /* always zero */
    ANB__GROWTH_HISTORY = 1,   /* not a history: the lane's measure of growth */
    ANB__FIRST_HISTORY = 2,
    ANB__PANEL_DEPTH = 32, /* columns that a panel packs at a time */
    ANB__SWEEP_DEPTH = 8,  /* columns that are swept at a time, in a small block ... */
    ANB__SWEEP_DEEP = 32,  /* ... and in one of ANB__SWEEP_LARGE unknowns or more */
    ANB__SWEEP_LARGE = 320
};

struct anb__plan {
    anb__arena arena; /* of everything below */
    bool symmetric;
    uint32_t port_count, element_count; /* of the result */
    uint32_t entry_count;
    const uint32_t *slot_of; /* [entry_count] */
    uint32_t slot_count, block_groups;
    uint32_t zero_slot;    /* zero at all times */
    uint32_t history_slot; /* where the histories begin; just behind zero_slot */
    uint32_t history_count;
    uint32_t scratch_slot; /* what panels and sweeps work in */
    const uint32_t *code;
    const anb__complex *constants;
    double growth_limit; /* for the lane's measure of growth, see solve/kernels.h */
    uint64_t operations;
};

/* Where column c of a packed lower triangle with `height` rows begins, its diagonal element first. */
static inline size_t anb__packed(size_t height, size_t c) { return c * height - c * (c - 1) / 2; }

/* Elements of the result: of a packed lower triangle, or of a full matrix. */
static inline uint32_t anb__plan_elements(bool symmetric, uint32_t ports) {
    return symmetric ? (uint32_t)((uint64_t)ports * (ports + 1) / 2) : ports * ports;
}

static inline uint32_t anb__sweep_depth(uint32_t size) {
    return size < ANB__SWEEP_LARGE ? ANB__SWEEP_DEPTH : ANB__SWEEP_DEEP;
}

anb__plan_run_function anb__plan_run_plain;
#if defined(__x86_64__)
anb__plan_run_function anb__plan_run_avx2, anb__plan_run_avx512;
#endif

#endif
