#include "network/quantity.h"

#include <stdio.h>

const anb__dimension anb__plain = ANB__PLAIN, anb__ohm = ANB__OHM, anb__siemens = ANB__SIEMENS,
                     anb__henry = ANB__HENRY, anb__farad = ANB__FARAD, anb__hertz = ANB__HERTZ,
                     anb__watt = ANB__WATT, anb__angle = ANB__ANGLE, anb__level = ANB__LEVEL,
                     anb__dbm = ANB__DBM;

/* ---- the algebra of dimensions ------------------------------------------------- */

enum { DIMENSIONS = 6, LARGEST_EXPONENT = 126 };

static void unpack(anb__dimension d, int out[DIMENSIONS]) {
    out[0] = d.ohm, out[1] = d.second, out[2] = d.metre, out[3] = d.kelvin, out[4] = d.volt, out[5] = d.angle;
}

static bool pack(const int e[DIMENSIONS], anb__scale scale, anb__dimension *out) {
    for (int i = 0; i < DIMENSIONS; i++)
        if (e[i] > LARGEST_EXPONENT || e[i] < -LARGEST_EXPONENT) return false;
    *out = (anb__dimension){(int8_t)e[0], (int8_t)e[1], (int8_t)e[2],  (int8_t)e[3],
                            (int8_t)e[4], (int8_t)e[5], (uint8_t)scale};
    return true;
}

static bool combine(anb__dimension a, anb__dimension b, int sign, anb__scale scale, anb__dimension *out) {
    int x[DIMENSIONS], y[DIMENSIONS];
    unpack(a, x);
    unpack(b, y);
    for (int i = 0; i < DIMENSIONS; i++) x[i] += sign * y[i];
    return pack(x, scale, out);
}

bool anb__dimension_product(anb__dimension a, anb__dimension b, anb__dimension *out) {
    if (a.scale == ANB__SCALE_DBM || b.scale == ANB__SCALE_DBM) return false;
    if (a.scale == ANB__SCALE_LEVEL && b.scale == ANB__SCALE_LEVEL) return false;
    bool level = a.scale == ANB__SCALE_LEVEL || b.scale == ANB__SCALE_LEVEL;
    return combine(a, b, 1, level ? ANB__SCALE_LEVEL : ANB__SCALE_PLAIN, out);
}

bool anb__dimension_quotient(anb__dimension a, anb__dimension b, anb__dimension *out) {
    if (a.scale == ANB__SCALE_DBM || b.scale == ANB__SCALE_DBM) return false;
    if (b.scale == ANB__SCALE_LEVEL && a.scale != ANB__SCALE_LEVEL) return false;
    return combine(a, b, -1, a.scale == b.scale ? ANB__SCALE_PLAIN : ANB__SCALE_LEVEL, out);
}

bool anb__dimension_power(anb__dimension a, double exponent, anb__dimension *out) {
    int e[DIMENSIONS];
    if (a.scale != ANB__SCALE_PLAIN) return false;
    unpack(a, e);
    for (int i = 0; i < DIMENSIONS; i++) {
        double scaled = e[i] * exponent, whole = rint(scaled);
        if (!(fabs(scaled - whole) <= 1e-9) || fabs(whole) > LARGEST_EXPONENT) return false;
        e[i] = (int)whole;
    }
    return pack(e, ANB__SCALE_PLAIN, out);
}

/* ---- in words --------------------------------------------------------------------- */

static const struct phrase {
    anb__dimension dimension;
    const char *text;
} phrases[] = {
    {ANB__PLAIN, "a plain number"},
    {ANB__OHM, "an impedance in ohm"},
    {ANB__SIEMENS, "a conductance in S"},
    {ANB__HENRY, "an inductance in H"},
    {ANB__FARAD, "a capacitance in F"},
    {ANB__HERTZ, "a frequency in Hz"},
    {ANB__SECOND, "a time in s"},
    {ANB__METRE, "a length in m"},
    {ANB__VOLT, "a voltage in V"},
    {ANB__AMPERE, "a current in A"},
    {ANB__WATT, "a power in W"},
    {ANB__ANGLE, "an angle in deg"},
    {ANB__LEVEL, "a level in dB"},
    {ANB__LEVEL_PER_METRE, "a loss in dB/m"},
    {ANB__DBM, "a power in dBm"},
    {ANB__OHM_PER_METRE, "a resistance in ohm/m"},
    {ANB__HENRY_PER_METRE, "an inductance in H/m"},
    {ANB__SIEMENS_PER_METRE, "a conductance in S/m"},
    {ANB__FARAD_PER_METRE, "a capacitance in F/m"},
};

const char *anb__dimension_phrase(anb__dimension dimension, char *buffer, size_t size) {
    for (size_t i = 0; i < sizeof phrases / sizeof *phrases; i++)
        if (anb__same_dimension(phrases[i].dimension, dimension)) return phrases[i].text;
    char name[80];
    snprintf(buffer, size, "a value in %s", anb__dimension_name(dimension, name, sizeof name));
    return buffer;
}
