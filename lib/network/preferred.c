/* Preferred values: the E series of IEC 60063. */
#include <stdlib.h>
#include <string.h>

#include "network/quantity.h"

/* E24 and the series within it do not follow their formula everywhere, so they stand here. */
static const int e24[] = {10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30,
                          33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91};

static const struct series {
    const char *name;
    int per_decade;
} known[] = {{"E3", 3}, {"E6", 6}, {"E12", 12}, {"E24", 24}, {"E48", 48}, {"E96", 96}, {"E192", 192}};

bool anb__preferred_series(const char *series, int *per_decade) {
    for (size_t i = 0; i < sizeof known / sizeof *known; i++)
        if (!strcmp(known[i].name, series)) {
            *per_decade = known[i].per_decade;
            return true;
        }
    return false;
}

/* The k-th value of a decade as a whole number of hundredths; k = per_decade is the next decade's first. */
static int hundredths(int k, int per_decade) {
    if (k == per_decade) return 1000;
    if (per_decade <= 24) return 10 * e24[k * (24 / per_decade)];
    int value = (int)floor(100 * pow(10, (double)k / per_decade) + 0.5);
    return value == 919 ? 920 : value; /* the one exception of E192 */
}

/* hundredths * 10^exponent, rounded once for the usual exponents */
static double scaled(int value, int exponent) {
    double power = pow(10, abs(exponent));
    return exponent < 0 ? value / power : value * power;
}

double anb__preferred_value(double value, int per_decade) {
    int decade = (int)floor(log10(value)) - 2;
    double best = 0, least = HUGE_VAL;
    for (int shift = -1; shift <= 1; shift++)
        for (int k = 0; k < per_decade; k++) {
            double candidate = scaled(hundredths(k, per_decade), decade + shift);
            double ratio = fabs(log(candidate / value));
            if (ratio < least) {
                least = ratio;
                best = candidate;
            }
        }
    return best;
}
