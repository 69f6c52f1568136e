/* A number with its dimension, and what the language attaches to it. */
#ifndef ANB_NETWORK_QUANTITY_H
#define ANB_NETWORK_QUANTITY_H

#include "base/complex.h"
#include "language/units.h"
#include "network/term.h"

/* Initializers of the dimensions that have a name: ohm, second, metre, kelvin, volt, angle, scale. */
#define ANB__PLAIN      {0, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__OHM        {6, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__SIEMENS    {-6, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__HENRY      {6, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__FARAD      {-6, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__HERTZ      {0, -6, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__SECOND     {0, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__METRE      {0, 0, 6, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__VOLT       {0, 0, 0, 0, 6, 0, ANB__SCALE_PLAIN}
#define ANB__AMPERE     {-6, 0, 0, 0, 6, 0, ANB__SCALE_PLAIN}
#define ANB__WATT       {-6, 0, 0, 0, 12, 0, ANB__SCALE_PLAIN}
#define ANB__ANGLE      {0, 0, 0, 0, 0, 6, ANB__SCALE_PLAIN}
#define ANB__LEVEL      {0, 0, 0, 0, 0, 0, ANB__SCALE_LEVEL}
#define ANB__LEVEL_PER_METRE {0, 0, -6, 0, 0, 0, ANB__SCALE_LEVEL}
#define ANB__DBM        {0, 0, 0, 0, 0, 0, ANB__SCALE_DBM}
#define ANB__OHM_PER_METRE     {6, 0, -6, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__HENRY_PER_METRE   {6, 6, -6, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__SIEMENS_PER_METRE {-6, 0, -6, 0, 0, 0, ANB__SCALE_PLAIN}
#define ANB__FARAD_PER_METRE   {-6, 6, -6, 0, 0, 0, ANB__SCALE_PLAIN}

extern const anb__dimension anb__plain, anb__ohm, anb__siemens, anb__henry, anb__farad, anb__hertz,
    anb__watt, anb__angle, anb__level, anb__dbm;

/* What a value came from; it decides where the value may stand. */
enum {
    ANB__HAS_AT = 1,       /* `v @ f` */
    ANB__HAS_TOLERANCE = 2,
    ANB__FROM_TUNE = 4,
    ANB__IS_SHARE = 8,     /* written in % or ppm */
    ANB__IS_MEASURED = 16, /* holds a measure: the dimension is known, the value is not */
    ANB__MAY_BE_COMPLEX = 32 /* of what is measured */
};

typedef struct anb__quantity {
    anb__dimension dimension;
    uint8_t marks;
    anb__complex value;
    double at_hz;
    anb__term *term; /* where not NULL: the value as a function of frequency */
} anb__quantity;

static inline bool anb__is_real(const anb__quantity *q) { return q->term || q->value.im == 0; }

/* Dimensions of results. False where the scales of dB and dBm do not allow it. */
bool anb__dimension_product(anb__dimension a, anb__dimension b, anb__dimension *out);
bool anb__dimension_quotient(anb__dimension a, anb__dimension b, anb__dimension *out);
/* False also where an exponent is no multiple of a sixth or is too large. */
bool anb__dimension_power(anb__dimension a, double exponent, anb__dimension *out);

/* For messages: "an impedance in ohm", "a plain number", "a value in ohm^2". */
const char *anb__dimension_phrase(anb__dimension dimension, char *buffer, size_t size);

/* The nearest value of an E series of IEC 60063 to a positive value, by ratio; `series` is one of
 * E3 E6 E12 E24 E48 E96 E192. False where there is no such series. */
bool anb__preferred_series(const char *series, int *per_decade);
double anb__preferred_value(double value, int per_decade);

#endif
