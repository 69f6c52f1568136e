#include "base/names.h"

#include <ctype.h>
#include <string.h>

/* FNV-1a (Fowler, Noll, Vo). */
static uint32_t hash_of(const char *text, uint32_t length) {
    uint32_t hash = 2166136261u;
    for (uint32_t i = 0; i < length; i++) hash = (hash ^ (unsigned char)text[i]) * 16777619u;
    return hash;
}

static const anb__name **slot_of(anb__names *names, uint32_t hash, const char *text, uint32_t length) {
    uint32_t at = hash & (names->capacity - 1);
    for (;; at = (at + 1) & (names->capacity - 1)) {
        const anb__name *here = names->table[at];
        if (!here || (here->hash == hash && here->length == length && !memcmp(here->text, text, length)))
            return &names->table[at];
    }
}

static void enlarge(anb__names *names) {
    const anb__name **old = names->table;
    uint32_t old_capacity = names->capacity;
    uint32_t capacity = old_capacity ? 2 * old_capacity : 64;
    const anb__name **table = anb__arena_take(names->arena, capacity * sizeof *table);
    names->table = table;
    names->capacity = capacity;
    for (uint32_t i = 0; i < old_capacity; i++)
        if (old[i]) *slot_of(names, old[i]->hash, old[i]->text, old[i]->length) = old[i];
}

const anb__name *anb__name_of(anb__names *names, const char *text, uint32_t length) {
    if (2 * names->count >= names->capacity) enlarge(names);
    uint32_t hash = hash_of(text, length);
    const anb__name **slot = slot_of(names, hash, text, length);
    if (!*slot) {
        anb__name *name = anb__arena_take(names->arena, sizeof *name + length + 1);
        name->hash = hash;
        name->length = length;
        memcpy(name->text, text, length);
        *slot = name;
        names->count++;
    }
    return *slot;
}

enum { LONGEST = 64 }; /* longer names are not compared */

unsigned anb__edit_distance(const char *a, const char *b, unsigned limit) {
    size_t m = strlen(a), n = strlen(b);
    if (m > LONGEST || n > LONGEST || m > n + limit || n > m + limit) return limit + 1;
    unsigned rows[3][LONGEST + 1];
    unsigned *before = rows[0], *above = rows[1], *row = rows[2];
    for (size_t j = 0; j <= n; j++) above[j] = (unsigned)j;
    for (size_t i = 1; i <= m; i++) {
        row[0] = (unsigned)i;
        for (size_t j = 1; j <= n; j++) {
            unsigned best = above[j - 1] + (a[i - 1] != b[j - 1]);
            if (above[j] + 1 < best) best = above[j] + 1;
            if (row[j - 1] + 1 < best) best = row[j - 1] + 1;
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] && before[j - 2] + 1 < best)
                best = before[j - 2] + 1;
            row[j] = best;
        }
        unsigned *spare = before;
        before = above;
        above = row;
        row = spare;
    }
    return above[n] > limit ? limit + 1 : above[n];
}

static int same_letters(const char *a, const char *b) {
    while (*a && tolower((unsigned char)*a) == tolower((unsigned char)*b)) a++, b++;
    return !*a && !*b;
}

const char *anb__nearest(const char *text, const char *const *known, unsigned count) {
    unsigned limit = strlen(text) <= 4 ? 1 : 2, least = limit + 1;
    const char *found = NULL;
    for (unsigned i = 0; i < count; i++) {
        unsigned distance = same_letters(text, known[i]) ? 0 : anb__edit_distance(text, known[i], limit);
        if (distance < least) {
            least = distance;
            found = known[i];
        }
    }
    return found;
}
