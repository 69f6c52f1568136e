/* The network's parts as a program that fills the plan's matrix, many points at a time.
 *
 * Everything that does not depend on the frequency has been summed beforehand: an entry of the
 * matrix is  a + b s + c/s  and a sum of factors times *values*. Values are what has to be
 * evaluated at each frequency: functions of travelling waves, admittances of branches with several
 * parts in series, and whatever the user wrote as an expression of `frequency`. Equal ones
 * are evaluated once (docs/performance.md).
 */
#ifndef ANB_PARTS_ASSEMBLY_H
#define ANB_PARTS_ASSEMBLY_H

#include <stddef.h>

#include "anabranch.h"
#include "base/group.h"
#include "parts/stamp.h"

/* Nodes as sums of unknowns: node n has the terms first[n] .. first[n+1]-1; ground and nodes that
 * are always at zero volts have none. */
typedef struct anb__numbering {
    uint32_t unknown_count;
    const uint32_t *first;
    const struct anb__node_term {
        uint32_t unknown;
        double sign;
    } * terms;
} anb__numbering;

/* The part of an entry that is a + b s + c/s. */
typedef struct anb__base_terms {
    anb__complex a, b, c;
} anb__base_terms;

/* An entry's share of a value. */
typedef struct anb__share {
    uint32_t value;
    bool imaginary; /* the value has no real part */
    double factor;
} anb__share;

enum { ANB__NO_VALUE = UINT32_MAX };

typedef struct anb__wave_values {
    anb__wave wave;
    bool lossless;
    uint32_t value[ANB__WAVE_FUNCTIONS]; /* or ANB__NO_VALUE */
} anb__wave_values;

typedef struct anb__branch_value {
    anb__series_branch branch;
    uint32_t value;
} anb__branch_value;

typedef struct anb__line_values {
    anb__line_model model;
    uint32_t value; /* Y0 coth x; the next one is Y0 csch x */
} anb__line_values;

/* A part that is evaluated point by point: its admittances row by row, `value` the first. */
typedef struct anb__generic_values {
    const anb__placed *part;
    uint32_t value;
} anb__generic_values;

typedef struct anb__assembly {
    bool symmetric;
    uint32_t unknown_count;
    uint32_t entry_count;
    uint32_t *rows, *columns; /* of the entries; symmetric: row >= column */
    anb__base_terms *base;    /* of the entries */
    uint32_t *first_share;    /* [entry_count + 1] */
    anb__share *shares;
    uint32_t value_count;
    anb__wave_values *waves;
    uint32_t wave_count;
    anb__branch_value *branches;
    uint32_t branch_count;
    anb__line_values *lines;
    uint32_t line_count;
    anb__generic_values *generics;
    uint32_t generic_count;
} anb__assembly;

/* The assembly of a network's parts but its wires. `shunts` are further constant admittances between
 * nodes (the ports' terminations). ANB_OK or ANB_MEMORY; `out` is to be cleared
 * with anb__assembly_clear in any case. */
typedef struct anb__shunt {
    anb__branch branch;
    anb__complex admittance;
} anb__shunt;
anb_status anb__assemble(const anb__network *network, const anb__numbering *numbering,
                         const anb__shunt *shunts, uint32_t shunt_count, anb__assembly *out);
void anb__assembly_clear(anb__assembly *assembly);

/* Doubles of scratch that filling `groups` groups needs. */
size_t anb__assembly_scratch(const anb__assembly *assembly, uint32_t groups);

/* Fills slots[slot_of[entry]] of all entries, [slot][groups][ANB__GROUP], at the frequencies hz[groups *
 * ANB__LANES], all above 0. `scratch` is 64-byte aligned. Where a value is not defined it is NaN. */
typedef void anb__assembly_fill(const anb__assembly *assembly, const uint32_t *slot_of, const double *hz,
                                uint32_t groups, double *scratch, double *slots);

/* The filling of that kernel ("plain", "avx2", "avx512"); the best for NULL, NULL where there is none. */
anb__assembly_fill *anb__assembly_kernel(const char *name);

/* The admittances of a part at each lane of a group, row by row, from its equations; NaN where it has none.
 */
void anb__evaluate_generic(const anb__placed *part, const double *hz, double *out, size_t stride);

#endif
