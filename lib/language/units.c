#include "language/units.h"

#include <stdio.h>
#include <string.h>

#include "base/names.h"

/* Dimensions: ohm, second, metre, kelvin, volt, angle, scale. */
#define OHM                                                                                                  \
    { 6, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN }
#define METRE                                                                                                \
    { 0, 0, 6, 0, 0, 0, ANB__SCALE_PLAIN }
#define ANGLE                                                                                                \
    { 0, 0, 0, 0, 0, 6, ANB__SCALE_PLAIN }
#define PLAIN                                                                                                \
    { 0, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN }
#define LEVEL                                                                                                \
    { 0, 0, 0, 0, 0, 0, ANB__SCALE_LEVEL }

/* A unit is 10^decimal * factor / divisor base units. */
static const struct {
    const char *name, *written; /* as it may be spelt; as the formatter writes it */
    anb__dimension dimension;
    int decimal;
    double factor, divisor;
    bool prefixed;
} units[] = {
    {"ohm", "ohm", OHM, 0, 1, 1, true},
    {"\u03a9", "ohm", OHM, 0, 1, 1, true},
    {"\u2126", "ohm", OHM, 0, 1, 1, true},
    {"S", "S", {-6, 0, 0, 0, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"H", "H", {6, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"F", "F", {-6, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"Hz", "Hz", {0, -6, 0, 0, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"s", "s", {0, 6, 0, 0, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"m", "m", METRE, 0, 1, 1, true},
    {"V", "V", {0, 0, 0, 0, 6, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"A", "A", {-6, 0, 0, 0, 6, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"W", "W", {-6, 0, 0, 0, 12, 0, ANB__SCALE_PLAIN}, 0, 1, 1, true},
    {"cm", "cm", METRE, -2, 1, 1, false},
    {"wave", "wave", ANGLE, 0, 1, 1, false},
    {"deg", "deg", ANGLE, 0, 1, 360, false},
    {"\u00b0", "deg", ANGLE, 0, 1, 360, false},
    {"rad", "rad", ANGLE, 0, 1, 6.283185307179586476925, false},
    {"dB", "dB", LEVEL, 0, 1, 1, false},
    {"Np", "Np", LEVEL, 0, 8.685889638065036553, 1, false}, /* 20/ln(10) */
    {"dBm", "dBm", {0, 0, 0, 0, 0, 0, ANB__SCALE_DBM}, 0, 1, 1, false},
    {"%", "%", PLAIN, -2, 1, 1, false},
    {"ppm", "ppm", PLAIN, -6, 1, 1, false},
    {"mil", "mil", METRE, -7, 254, 1, false},
    {"inch", "inch", METRE, -4, 254, 1, false},
    {"ft", "ft", METRE, -4, 3048, 1, false},
    {"K", "K", {0, 0, 0, 6, 0, 0, ANB__SCALE_PLAIN}, 0, 1, 1, false},
};
enum { UNITS = sizeof units / sizeof *units };

static const struct {
    const char *spelt, *written;
    int decimal;
} prefixes[] = {{"", "", 0},    {"f", "f", -15},     {"p", "p", -12},     {"n", "n", -9},
                {"u", "u", -6}, {"\u00b5", "u", -6}, {"\u03bc", "u", -6}, {"m", "m", -3},
                {"k", "k", 3},  {"M", "M", 6},       {"G", "G", 9},       {"T", "T", 12}};
enum { PREFIXES = sizeof prefixes / sizeof *prefixes };

/* One unit, prefix and all. */
static bool find_simple(const char *text, size_t length, anb__unit *out) {
    for (int u = 0; u < UNITS; u++) {
        size_t name = strlen(units[u].name);
        if (length < name || memcmp(text + length - name, units[u].name, name)) continue;
        for (int p = 0; p < (units[u].prefixed ? PREFIXES : 1); p++) {
            if (strlen(prefixes[p].spelt) != length - name || memcmp(text, prefixes[p].spelt, length - name))
                continue;
            *out = (anb__unit){.dimension = units[u].dimension,
                               .decimal = units[u].decimal + prefixes[p].decimal,
                               .factor = units[u].factor,
                               .divisor = units[u].divisor};
            snprintf(out->name, sizeof out->name, "%s%s", prefixes[p].written, units[u].written);
            return true;
        }
    }
    return false;
}

static void divide(anb__unit *out, const anb__unit *by) {
    char name[sizeof out->name];
    anb__dimension *a = &out->dimension;
    const anb__dimension *b = &by->dimension;
    a->ohm = (int8_t)(a->ohm - b->ohm);
    a->second = (int8_t)(a->second - b->second);
    a->metre = (int8_t)(a->metre - b->metre);
    a->kelvin = (int8_t)(a->kelvin - b->kelvin);
    a->volt = (int8_t)(a->volt - b->volt);
    a->angle = (int8_t)(a->angle - b->angle);
    out->decimal -= by->decimal;
    out->factor *= by->divisor;
    out->divisor *= by->factor;
    snprintf(name, sizeof name, "%.14s/%.14s", out->name, by->name);
    memcpy(out->name, name, sizeof name);
}

bool anb__unit_find(const char *text, size_t length, anb__unit *out) {
    const char *slash = memchr(text, '/', length);
    anb__unit below;
    if (!slash) return find_simple(text, length, out);
    size_t above = (size_t)(slash - text);
    if (!find_simple(text, above, out) || !find_simple(slash + 1, length - above - 1, &below)) return false;
    if (below.dimension.scale != ANB__SCALE_PLAIN || out->dimension.scale == ANB__SCALE_DBM) return false;
    divide(out, &below);
    return true;
}

const char *anb__unit_nearest(const char *word) {
    static const char *const usual[] = {
        "ohm", "kohm", "Mohm", "mohm", "S",   "mS",  "H",   "mH",  "uH",  "nH",   "pH", "F",
        "uF",  "nF",   "pF",   "fF",   "Hz",  "kHz", "MHz", "GHz", "THz", "s",    "ms", "us",
        "ns",  "ps",   "m",    "mm",   "um",  "cm",  "V",   "mV",  "A",   "mA",   "W",  "mW",
        "deg", "rad",  "wave", "dB",   "dBm", "Np",  "%",   "ppm", "mil", "inch", "ft", "dB/m"};
    if (!strcmp(word, "in")) return "inch";
    if (strlen(word) == 1 && !strchr("hfvaws", word[0])) return NULL; /* a name rather than a unit */
    return anb__nearest(word, usual, sizeof usual / sizeof *usual);
}

/* ---- names of dimensions ----------------------------------------------------------------------- */

static void put_power(char *buffer, size_t size, const char *name, int sixths) {
    size_t length = strlen(buffer);
    const char *times = length ? "*" : "";
    if (!sixths) return;
    if (sixths == 6)
        snprintf(buffer + length, size - length, "%s%s", times, name);
    else if (sixths % 6 == 0)
        snprintf(buffer + length, size - length, "%s%s^%d", times, name, sixths / 6);
    else if (sixths % 3 == 0)
        snprintf(buffer + length, size - length, "%s%s^(%d/2)", times, name, sixths / 3);
    else
        snprintf(buffer + length, size - length, "%s%s^(%d/6)", times, name, sixths);
}

const char *anb__dimension_name(anb__dimension d, char *buffer, size_t size) {
    static const anb__dimension plain = PLAIN;
    if (anb__same_dimension(d, plain)) return "a plain number";
    for (int u = 0; u < UNITS; u++)
        if (!units[u].decimal && anb__same_dimension(d, units[u].dimension)) {
            bool angle = d.angle == 6;
            snprintf(buffer, size, "%s", angle ? "deg" : units[u].written);
            return buffer;
        }
    buffer[0] = '\0';
    if (d.scale == ANB__SCALE_LEVEL) snprintf(buffer, size, "dB");
    if (d.scale == ANB__SCALE_LEVEL && d.metre == -6) {
        snprintf(buffer, size, "dB/m");
        return buffer;
    }
    put_power(buffer, size, "V", d.volt);
    put_power(buffer, size, "ohm", d.ohm);
    put_power(buffer, size, "s", d.second);
    put_power(buffer, size, "m", d.metre);
    put_power(buffer, size, "K", d.kelvin);
    put_power(buffer, size, "deg", d.angle);
    return buffer;
}
