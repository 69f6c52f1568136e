/* Interned names: equal text is the same pointer. */
#ifndef ANB_BASE_NAMES_H
#define ANB_BASE_NAMES_H

#include <stdint.h>

#include "base/arena.h"

typedef struct anb__name {
    uint32_t hash;
    uint32_t length; /* bytes of `text`, without its NUL */
    char text[];
} anb__name;

typedef struct anb__names {
    anb__arena *arena;
    const anb__name **table; /* open addressing; `capacity` is a power of two */
    uint32_t capacity;
    uint32_t count;
} anb__names;

/* The one name with this text. Follows the arena's way when memory is gone. */
const anb__name *anb__name_of(anb__names *names, const char *text, uint32_t length);

/* Edit distance between two texts (insertions, deletions, replacements, swaps of
 * neighbours count 1 each), or `limit + 1` where it is more than `limit`. */
unsigned anb__edit_distance(const char *a, const char *b, unsigned limit);

/* The entry of `known[0 .. count-1]` nearest to `text` within a distance that
 * suits its length (1 up to 4 letters, else 2), the first of several; NULL where none is.
 * Letter case alone counts as distance 0. */
const char *anb__nearest(const char *text, const char *const *known, unsigned count);

#endif
