/* The order of elimination. */
#ifndef ANB_SOLVE_ORDER_H
#define ANB_SOLVE_ORDER_H

#include "base/arena.h"
#include "solve/plan.h"

/* The pattern of a matrix, made symmetric, without its diagonal. */
typedef struct anb__graph {
    uint32_t size;
    uint32_t *start;     /* [size + 1] */
    uint32_t *neighbour; /* [start[size]], each neighbour once */
} anb__graph;

typedef enum anb__order_rule {
    ANB__PORTS_LAST, /* every unknown of a port behind all others, unless another one's pivot is unsafe */
    ANB__ALL_ALIKE
} anb__order_rule;

void anb__graph_of(anb__arena *work, const anb__system *system, anb__graph *out);

/* order[k] is the unknown that is eliminated as the k-th. `work` must have its escape set. */
void anb__order_of(anb__arena *work, const anb__system *system, const anb__graph *graph, const bool *is_port,
                   anb__order_rule rule, uint32_t *order);

/* The two ways that anb__order_of chooses from. */
enum { ANB__ORDER_SMALL = 512 }; /* unknowns that are ordered by their values too */
void anb__order_small(anb__arena *work, const anb__system *system, const anb__graph *graph,
                      const bool *is_port, anb__order_rule rule, uint32_t *order);
void anb__order_large(anb__arena *work, const anb__system *system, const anb__graph *graph,
                      const bool *is_port, anb__order_rule rule, uint32_t *order);

#endif
