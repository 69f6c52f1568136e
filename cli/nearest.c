#include "nearest.h"

#include <ctype.h>
#include <stdbool.h>
#include <stdint.h>
#include <string.h>

enum { LONGEST = 32 }; /* names beyond are not compared */

cli_nearest nearest_to(const char *wanted) { return (cli_nearest){wanted, NULL, SIZE_MAX}; }

static size_t least(size_t a, size_t b) { return a < b ? a : b; }

/* Letters that differ in their case only are half a change apart; all counts are doubled. */
static size_t change(char a, char b) {
    if (a == b) return 0;
    return tolower((unsigned char)a) == tolower((unsigned char)b) ? 1 : 2;
}

/* The changes from a to b: one letter put in, left out, changed, or swapped with the next
 * (optimal string alignment, Damerau 1964). Each counts 2. */
static size_t distance_between(const char *a, const char *b) {
    size_t m = strlen(a), n = strlen(b), table[LONGEST + 1][LONGEST + 1];
    if (m > LONGEST || n > LONGEST) return SIZE_MAX;
    for (size_t i = 0; i <= m; i++) table[i][0] = 2 * i;
    for (size_t k = 0; k <= n; k++) table[0][k] = 2 * k;
    for (size_t i = 1; i <= m; i++) {
        for (size_t k = 1; k <= n; k++) {
            size_t best = least(table[i - 1][k], table[i][k - 1]) + 2;
            best = least(best, table[i - 1][k - 1] + change(a[i - 1], b[k - 1]));
            if (i > 1 && k > 1 && a[i - 1] == b[k - 2] && a[i - 2] == b[k - 1])
                best = least(best, table[i - 2][k - 2] + 2);
            table[i][k] = best;
        }
    }
    return table[m][n];
}

/* A third of the letters may differ, but not all; the beginning of a name means that name. */
void nearest_offer(cli_nearest *search, const char *name) {
    size_t typed = strlen(search->wanted), letters = strlen(name);
    size_t distance = distance_between(search->wanted, name);
    bool begins = typed >= 2 && !strncmp(search->wanted, name, typed);
    if (begins) distance = 1;
    if (distance >= search->distance || distance > 2 * ((letters + 2) / 3)) return;
    if (distance >= 2 * letters) return;
    search->name = name;
    search->distance = distance;
}
