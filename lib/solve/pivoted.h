/* The pivoted way: a system of one pattern solved at single points, with pivoting and one step of
 * iterative refinement. Dense elimination for small systems, KLU (T. A. Davis and E. Palamadai Natarajan
 * 2010) for large ones. It is the reference for the compiled plan.
 */
#ifndef ANB_SOLVE_PIVOTED_H
#define ANB_SOLVE_PIVOTED_H

#include "solve/sparse.h"

typedef struct anb__pivoted anb__pivoted;

/* For a pattern of `entry_count` places, equal ones added. One object serves one thread. */
anb_status anb__pivoted_new(uint32_t size, const uint32_t *rows, const uint32_t *columns,
                            uint32_t entry_count, const anb__probe *probes, uint32_t probe_count,
                            anb__pivoted **out);
void anb__pivoted_free(anb__pivoted *pivoted);

/* Solves for the values of one point. out[k * probes + l] is the unknown of probe k for the source of probe
 * l. ANB__UNDETERMINED says that the matrix is singular, or so nearly that rounding decides: then
 * anb__solve_limit is to be asked. */
anb__solved anb__pivoted_solve(anb__pivoted *pivoted, const anb__complex *values, anb__complex *out);

#endif
