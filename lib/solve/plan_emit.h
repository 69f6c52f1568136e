/* From patterns to operations. */
#ifndef ANB_SOLVE_PLAN_EMIT_H
#define ANB_SOLVE_PLAN_EMIT_H

#include "solve/plan_code.h"
#include "solve/plan_pattern.h"

/* What is to be emitted. Positions from `block` on are inverted as one dense block; those before it are
 * eliminated one after the other, and what is needed of their rows of the inverse follows from the block. */
typedef struct anb__layout {
    anb__pattern pattern;
    anb__need need;
    uint32_t block;
    double cost; /* complex multiply-adds */
} anb__layout;

/* A list of words that grows. */
typedef struct anb__words {
    uint32_t *word;
    size_t count, capacity;
} anb__words;

/* Slots of the matrix, of the factors and of the inverse, and their histories. */
typedef struct anb__store {
    anb__arena *work;
    const anb__layout *layout;
    bool symmetric;
    uint32_t next;  /* first slot never used */
    uint32_t *idle; /* slots whose contents are no longer needed */
    size_t idle_count, idle_capacity;
    uint32_t *diagonal;                /* [size] */
    uint32_t *lower, *upper;           /* [start[size]]; the same list where symmetric */
    uint32_t block_lower, block_upper; /* packed triangles, columns of L and rows of U */
    uint32_t *history;                 /* [size] or 0 */
    uint32_t history_count;
    bool *written;      /* by slot: an entry of the matrix stands there; for the slots of panels and blocks */
    anb__words cleared; /* (first, length) */
    size_t *first_inverse;                   /* [need.count + 1] */
    uint32_t *inverse_upper, *inverse_lower; /* (i, j), (j, i) for the needed elements of row i, in order */
} anb__store;

enum { ANB__ZERO_SLOT = 0 };

/* Gives every entry of the system its slot. */
void anb__store_start(anb__store *store, anb__arena *work, const anb__system *system,
                      const anb__layout *layout, uint32_t *slot_of);

/* How many columns from i on make a panel; 0 if column i is eliminated by itself. */
uint32_t anb__panel_width(const anb__layout *layout, uint32_t i);

uint32_t anb__store_new(anb__store *store);         /* a slot to be written before it is read */
uint32_t anb__store_new_cleared(anb__store *store); /* one that is zero when the plan starts */
void anb__store_release(anb__store *store, uint32_t slot);
uint32_t anb__store_history(anb__store *store, uint32_t position);
uint32_t *anb__store_place(anb__store *store, uint32_t row,
                           uint32_t column); /* of an element before the block */
uint32_t anb__store_block(const anb__store *store, uint32_t row, uint32_t column);
uint32_t anb__store_inverse(anb__store *store, uint32_t row, uint32_t column); /* positions */

void anb__words_add(anb__arena *work, anb__words *words, uint32_t word);

/* Writes the plan's code and everything that goes with it. */
void anb__emit(anb__arena *work, const anb__system *system, const anb__layout *layout, bool as_sums,
               anb__plan *plan);

#endif
