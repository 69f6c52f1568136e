/* From the tree to the network: names, values with their dimensions, parts, nodes, checks. */
#ifndef ANB_NETWORK_EXPAND_H
#define ANB_NETWORK_EXPAND_H

#include "language/tree.h"
#include "network/network.h"

/* `name = value` in place of a definition of the top level. */
typedef struct anb__replacement {
    const anb__name *name;
    const anb__tree *value;
    anb__span span;
} anb__replacement;

typedef struct anb__replacements {
    const anb__replacement *set;
    uint32_t set_count;
    const anb__tree *sweep; /* SWEEP in place of all of the netlist's, or NULL */
} anb__replacements;

/* Reads the texts of `overrides`; their mistakes go into the report. */
void anb__read_replacements(anb__report *report, anb__names *names, anb__arena *arena,
                            const anb_overrides *overrides, anb__replacements *out);

/* Expands a FILE whose includes have been read (network/include.h) into `out`, which the caller has
 * set to zero but for its arena. `replacements` may be NULL. ANB_INVALID where the
 * report holds an error, ANB_MEMORY where memory is gone; `out` is then good for nothing but
 * being freed. */
anb_status anb__expand(anb__report *report, anb__names *names, const anb__tree *file,
                       const anb__replacements *replacements, anb__network *out);

/* For the commands that need frequencies: false, reported, where the network has no sweep. */
bool anb__require_sweep(anb__report *report, const anb__tree *file, const anb__network *network);

#endif
