/* Elimination in series: the exact limit at 0 Hz, and systems that are singular.
 *
 * Every entry is a series in u (base/series.h). A row whose leading terms have cancelled is divided
 * by the power of u that it is left with, which is how the laws of floating nodes (their summed
 * currents) and of loops of wires (their summed voltages) come to bear; after four powers of the
 * frequency the series end. Pivots are leading terms of their rows. Unknowns that
 * nothing determines are no error as long as the wanted ones do not depend on them.
 */
#ifndef ANB_SOLVE_LIMIT_H
#define ANB_SOLVE_LIMIT_H

#include "solve/sparse.h"

typedef struct anb__series_entry {
    uint32_t row, column;
    anb__series value;
} anb__series_entry;

/* Solves; out[k * probes + l] is the limit of the unknown of probe k for the source of probe l. */
anb__solved anb__solve_limit(uint32_t size, const anb__series_entry *entries, uint32_t entry_count,
                             const anb__probe *probes, uint32_t probe_count, anb__complex *out,
                             uint32_t *where);

#endif
