/* Units and dimensions.
 *
 * A dimension is a product of powers of ohm, second, metre, kelvin, volt and angle, with the exponents in
 * sixths (so that square and cube roots exist), beside two scales that do not mix with any other: level (dB)
 * and absolute level (dBm). Hz = 1/s, S = 1/ohm, H = ohm s, F = s/ohm, A = V/ohm, W = V^2/ohm. The base unit
 * of angle is the turn, so that 90 deg is 0.25 and nothing else.
 */
#ifndef ANB_LANGUAGE_UNITS_H
#define ANB_LANGUAGE_UNITS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

typedef enum anb__scale {
    ANB__SCALE_PLAIN, /* the powers count */
    ANB__SCALE_LEVEL, /* dB; per length where metre is -6 (`0.2 dB/m`) */
    ANB__SCALE_DBM
} anb__scale;

typedef struct anb__dimension {
    int8_t ohm, second, metre, kelvin, volt, angle; /* exponents times 6 */
    uint8_t scale;                                  /* anb__scale */
} anb__dimension;

static inline bool anb__same_dimension(anb__dimension a, anb__dimension b) {
    return a.ohm == b.ohm && a.second == b.second && a.metre == b.metre && a.kelvin == b.kelvin &&
           a.volt == b.volt && a.angle == b.angle && a.scale == b.scale;
}

/* A number with it is number * 10^decimal * factor / divisor in base units. */
typedef struct anb__unit {
    char name[32]; /* "ohm", "MHz", "dB/m" */
    anb__dimension dimension;
    int decimal;
    double factor, divisor; /* 1 where `decimal` says all */
} anb__unit;

/* The unit spelt by `text` (prefixes, both code points of micro and ohm, quotients such as
 * "dB/m"). Fills `out`; false where there is none. */
bool anb__unit_find(const char *text, size_t length, anb__unit *out);

/* The usual unit that a misspelt one is nearest to, letter case aside; NULL where none is near. */
const char *anb__unit_nearest(const char *word);

/* The name of a dimension for messages: "ohm", "Hz", "a plain number", "ohm^2", ... */
const char *anb__dimension_name(anb__dimension dimension, char *buffer, size_t size);

#endif
