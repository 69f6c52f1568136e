/* What parts compute.
 *
 * A part is m branches (1 to 4), each with a voltage v and a current i that flows into the
 * part at the branch's plus node and out of it at its minus node. Every family of parts states
 *
 *   - its equations  A v + B i = 0, with m x m matrices that always exist and are finite
 *     (docs/theory.md, eq. 4 and on), at a frequency or as series around 0 Hz;
 *   - its stamps: what it adds to the matrix of the compiled plan (parts/stamp.h).
 *
 * A property test holds the two against each other.
 */
#ifndef ANB_PARTS_PART_H
#define ANB_PARTS_PART_H

#include "base/series.h"
#include "network/network.h"

enum { ANB__MOST_BRANCHES = 4 };

/* Where equations are taken: a frequency, or the limit at 0 Hz. */
typedef struct anb__point {
    double hz;             /* 0: the limit */
    anb__series frequency; /* in Hz */
    anb__series root;      /* its square root */
    anb__series s;         /* j 2 pi frequency */
} anb__point;

void anb__point_at(double hz, anb__point *out);

/* A and B, row by row, in series. */
typedef struct anb__equations {
    int size; /* m */
    anb__series a[ANB__MOST_BRANCHES * ANB__MOST_BRANCHES];
    anb__series b[ANB__MOST_BRANCHES * ANB__MOST_BRANCHES];
} anb__equations;

typedef struct anb__stamper anb__stamper;

typedef struct anb__family {
    /* False where a value is not defined or not finite at the point. */
    bool (*equations)(const anb__placed *part, const anb__point *point, anb__equations *out);
    /* NULL, or a part whose values do not depend on the frequency to the plan. */
    void (*stamps)(const anb__placed *part, anb__stamper *stamper);
    bool reciprocal; /* Y is symmetric: stamps of the lower triangle say all */
} anb__family;

const anb__family *anb__family_of(const anb__placed *part);

/* The part's equations; `negated` is taken care of. */
bool anb__part_equations(const anb__placed *part, const anb__point *point, anb__equations *out);

typedef enum anb__connection {
    ANB__CONNECTS_BY_EQUATIONS,
    ANB__CONNECTS_AS_WIRE,    /* 0 ohm, 0 H: the two ends of its branch are one node */
    ANB__CONNECTS_AS_THROUGH, /* a line of no length, 0 dB: its two plus nodes are one */
    ANB__CONNECTS_NOTHING     /* 0 F, 0 S */
} anb__connection;

/* What a part is at every frequency, by its constant values alone. */
anb__connection anb__connection_of(const anb__network *network, const anb__placed *part);

/* True where a value depends on the frequency. */
bool anb__part_has_program(const anb__placed *part);

/* ---- for the families ------------------------------------------------------- */

/* The argument's value at the point; `fallback` where it is not given. False where it has none. */
bool anb__argument_series(const anb__placed *part, anb__argument_name name, const anb__point *point,
                          double fallback, anb__series *out);
/* The constant value of an argument, `fallback` where it is not given. */
anb__complex anb__constant(const anb__placed *part, anb__argument_name name, double fallback);
bool anb__has(const anb__placed *part, anb__argument_name name);
/* sqrt(frequency / at_hz) of an argument `value @ at_hz`. */
anb__series anb__root_ratio(const anb__argument *argument, const anb__point *point);

/* All zero, of size m. */
void anb__equations_clear(anb__equations *equations, int size);
static inline anb__series *anb__a(anb__equations *e, int row, int column) {
    return &e->a[row * e->size + column];
}
static inline anb__series *anb__b(anb__equations *e, int row, int column) {
    return &e->b[row * e->size + column];
}

/* The families. */
extern const anb__family anb__family_resistor, anb__family_inductor, anb__family_capacitor,
    anb__family_impedance, anb__family_admittance, anb__family_line, anb__family_open_stub,
    anb__family_shorted_stub, anb__family_line_constants, anb__family_coupled_lines,
    anb__family_coupled_inductors, anb__family_transformer, anb__family_attenuator,
    anb__family_phase_shift, anb__family_isolator, anb__family_circulator, anb__family_gyrator,
    anb__family_transconductance;

#endif
