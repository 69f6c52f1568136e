/* Travelling waves: the exponent of a line and its hyperbolic functions. */
#ifndef ANB_PARTS_WAVE_H
#define ANB_PARTS_WAVE_H

#include "parts/stamp.h"

/* Turns per hertz of an electrical length given by the argument `length`: turns at a frequency, a
 * delay, or metres with the part's `permittivity` or `velocity_factor`. Constant arguments only. */
long double anb__turns_per_hertz(const anb__placed *part, anb__argument_name length);

/* The exponent of a part with constant arguments, `scale` times. */
anb__wave anb__wave_of(const anb__placed *part, anb__argument_name length, double scale);

/* sinh(x/2) and cosh(x/2) at a point, both times the same positive factor, which keeps them finite for
 * any loss; x is the exponent of the length. False where an argument has no value. */
bool anb__half_wave(const anb__placed *part, anb__argument_name length, const anb__point *point,
                    anb__series *sinh_half, anb__series *cosh_half);

/* Adds to the equations of a part the two of a line between its branches `first` and `second`,
 *     (v1 + v2) ys - (i1 + i2) c = 0,   (v1 - v2) c - (i1 - i2) zs = 0,
 * with ys = sinh(x/2)/Z, zs = Z sinh(x/2), c = cosh(x/2): finite and independent at every length,
 * half waves and 0 Hz included (docs/theory.md, eq. 10). Rows `row` and row + 1; each voltage and
 * current of branch k counts `weight` times, so that modes can be formed. */
void anb__line_rows(anb__equations *out, int row, int first, int second, double weight, const anb__series *ys,
                    const anb__series *zs, const anb__series *c);

#endif
