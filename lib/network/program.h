/* A value that depends on the frequency: what is left of an expression after everything
 * else in it has been calculated. Units are gone: numbers are in base units. */
#ifndef ANB_NETWORK_PROGRAM_H
#define ANB_NETWORK_PROGRAM_H

#include "base/series.h"

typedef struct anb__program anb__program;

/* The value at a frequency in hertz. False where it is not defined or not finite. */
bool anb__program_value(const anb__program *program, double frequency_hz, anb__complex *out);

/* The value as a series in sqrt(frequency) around 0 Hz. False where it has none. */
bool anb__program_series(const anb__program *program, anb__series *out);

#endif
