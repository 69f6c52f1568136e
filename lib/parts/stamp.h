/* How a family tells the plan what it adds to the matrix.
 *
 * Rows and columns are the part's branches 0 .. m-1, and beyond them unknown currents of its own
 * (m, m+1, ...) for parts that have no admittance. A stamp at branches (r, c) goes to the four
 * places of their nodes with the signs that belong there. Families that are `reciprocal` stamp
 * row >= column only.
 */
#ifndef ANB_PARTS_STAMP_H
#define ANB_PARTS_STAMP_H

#include "parts/part.h"

/* y = a + b s + c / s, with s = j 2 pi frequency. */
void anb__stamp_terms(anb__stamper *stamper, int row, int column, anb__complex a, anb__complex b,
                      anb__complex c);

/* A travelling wave's exponent x = constant + root*sqrt(f) + linear*f + j 2 pi turns, in nepers, with
 * turns = (turns_hi + turns_lo) * f. Equal waves are evaluated once. */
typedef struct anb__wave {
    double turns_hi, turns_lo; /* per hertz */
    double constant, root, linear;
} anb__wave;

typedef enum anb__wave_function { ANB__COTH, ANB__CSCH, ANB__TANH, ANB__WAVE_FUNCTIONS } anb__wave_function;

/* y = factor * function(x). */
void anb__stamp_wave(anb__stamper *stamper, int row, int column, const anb__wave *wave,
                     anb__wave_function function, double factor);

/* An impedance z = resistance + root*sqrt(f) + s inductance + elastance/s: y = 1/z at row 0, column 0. */
typedef struct anb__series_branch {
    double resistance;       /* ohm */
    double root;             /* ohm per sqrt(Hz) */
    anb__complex inductance; /* H; l (1 - j/q) for a Q that is the same everywhere */
    anb__complex elastance;  /* 1/F */
} anb__series_branch;
void anb__stamp_branch(anb__stamper *stamper, const anb__series_branch *branch);

/* A line of constants per length: x = sqrt(z y), z = r + s l, y = g + s c for the whole length. */
typedef struct anb__line_model {
    double r, l, g, c; /* of the whole length */
} anb__line_model;
void anb__stamp_line_constants(anb__stamper *stamper, const anb__line_model *model);

/* A new unknown current of the part; returns its index for rows and columns. */
int anb__stamp_unknown(anb__stamper *stamper);

#endif
