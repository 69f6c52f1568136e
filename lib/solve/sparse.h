/* A sparse system as it is collected: entries in any order, equal places added. */
#ifndef ANB_SOLVE_SPARSE_H
#define ANB_SOLVE_SPARSE_H

#include <stdint.h>

#include "anabranch.h"
#include "base/complex.h"
#include "base/series.h"

/* The right-hand sides: column k has `value` at `row` and zeros elsewhere; wanted is the unknown
 * `unknown` of every solution. For a network these are its ports' sources and their currents. */
typedef struct anb__probe {
    uint32_t row;
    double value;
    uint32_t unknown;
} anb__probe;

typedef enum anb__solved {
    ANB__SOLVED,
    ANB__UNDETERMINED, /* the wanted unknowns have no value: *where names an unknown that is to blame */
    ANB__NO_MEMORY
} anb__solved;

#endif
