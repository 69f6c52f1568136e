/* The network as one system of all its equations: the currents' law at every node, every part's own
 * equations, every port's source. It always exists and hides nothing, and is what the pivoted way solves
 * (docs/theory.md, section 2).
 */
#ifndef ANB_SWEEP_TABLEAU_H
#define ANB_SWEEP_TABLEAU_H

#include "solve/limit.h"
#include "solve/pivoted.h"
#include "sweep/numbering.h"

typedef struct anb__tableau {
    const anb__network *network;
    const anb__nodes *nodes;
    double unit_ohm; /* currents are counted in volts per this */
    uint32_t size;   /* unknowns: node voltages, branch currents, port currents */
    uint32_t entry_count;
    uint32_t *rows, *columns;          /* of the entries */
    uint32_t *node_unknown;            /* [node_count]; UINT32_MAX for nodes at zero volts */
    uint32_t first_branch, first_port; /* unknowns */
    anb__probe *probes;                /* [port_count] */
} anb__tableau;

/* ANB_OK or ANB_MEMORY; to be cleared in any case. */
anb_status anb__tableau_new(const anb__network *network, const anb__nodes *nodes, anb__tableau *out);
void anb__tableau_clear(anb__tableau *tableau);

/* The entries' values at a frequency, at 0 Hz their limits; false where a part's value is not defined there:
 * *part names it. */
bool anb__tableau_values(const anb__tableau *tableau, double hz, anb__complex *values, uint32_t *part);
/* The entries as series around 0 Hz, or as single values elsewhere. */
bool anb__tableau_series(const anb__tableau *tableau, double hz, anb__series_entry *entries, uint32_t *part);

/* S [to * ports + from] from the solution's currents [port * ports + source]. */
void anb__tableau_scattering(const anb__tableau *tableau, const anb__complex *currents, anb__complex *s);

#endif
