/* Which nodes are one, which are at zero volts, and which unknowns stand for the rest. */
#ifndef ANB_SWEEP_NUMBERING_H
#define ANB_SWEEP_NUMBERING_H

#include "parts/assembly.h"
#include "solve/plan.h"

typedef struct anb__nodes {
    uint32_t *same_as;  /* [node_count]: the lowest node that wires make one with this one */
    bool *grounded;     /* [node_count]: at zero volts: ground, or the reference of an island that floats */
    anb__numbering numbering;   /* for the plan's matrix */
    uint32_t *first_port_term;  /* [port_count + 1] */
    anb__term *port_terms;
    uint32_t *first;                 /* what `numbering` points to */
    struct anb__node_term *terms;
} anb__nodes;

/* ANB_OK or ANB_MEMORY; to be cleared in any case. */
anb_status anb__number_nodes(const anb__network *network, anb__nodes *out);
void anb__nodes_clear(anb__nodes *nodes);

#endif
