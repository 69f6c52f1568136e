#include "network/symbols.h"

static uint32_t hash_of(uint32_t space, const anb__name *name) {
    uint32_t hash = (name->hash ^ space * 2654435769u) * 2246822519u;
    return hash ^ hash >> 15;
}

/* Names of two tables may be spelt alike, so the pointer alone tells them apart. */
static anb__symbol_slot *slot_of(const anb__symbols *symbols, uint32_t space, const anb__name *name,
                                 uint32_t hash) {
    uint32_t mask = symbols->capacity - 1, at = hash & mask;
    for (;; at = (at + 1) & mask) {
        anb__symbol_slot *here = &symbols->table[at];
        if (!here->symbol || (here->name == name && here->space == space)) return here;
    }
}

static void enlarge(anb__symbols *symbols) {
    anb__symbol_slot *old = symbols->table;
    uint32_t old_capacity = symbols->capacity;
    symbols->capacity = old_capacity ? 2 * old_capacity : 256;
    symbols->table = anb__arena_take(symbols->arena, symbols->capacity * sizeof *symbols->table);
    for (uint32_t i = 0; i < old_capacity; i++)
        if (old[i].symbol) *slot_of(symbols, old[i].space, old[i].name, old[i].hash) = old[i];
}

anb__symbol *anb__symbol_find(const anb__symbols *symbols, uint32_t space, const anb__name *name) {
    return symbols->capacity ? slot_of(symbols, space, name, hash_of(space, name))->symbol : NULL;
}

static anb__symbol *new_symbol(anb__symbols *symbols) {
    anb__symbol *symbol = symbols->free;
    if (!symbol) return anb__arena_take(symbols->arena, sizeof *symbol);
    symbols->free = symbol->older;
    *symbol = (anb__symbol){0};
    return symbol;
}

anb__symbol *anb__symbol_get(anb__symbols *symbols, uint32_t space, const anb__name *name) {
    if (3 * (uint64_t)symbols->count >= 2 * (uint64_t)symbols->capacity) enlarge(symbols);
    uint32_t hash = hash_of(space, name);
    anb__symbol_slot *slot = slot_of(symbols, space, name, hash);
    if (slot->symbol) return slot->symbol;
    anb__symbol *symbol = new_symbol(symbols);
    symbol->space = space;
    symbol->name = name;
    symbol->older = symbols->newest;
    symbols->newest = symbol;
    symbols->count++;
    *slot = (anb__symbol_slot){name, symbol, space, hash};
    return symbol;
}

/* Takes a slot out and moves up those behind it that would not be found any more. */
static void empty_slot(anb__symbols *symbols, anb__symbol_slot *slot) {
    uint32_t mask = symbols->capacity - 1, hole = (uint32_t)(slot - symbols->table);
    for (uint32_t at = (hole + 1) & mask; symbols->table[at].symbol; at = (at + 1) & mask) {
        uint32_t home = symbols->table[at].hash & mask;
        if (((at - home) & mask) < ((at - hole) & mask)) continue;
        symbols->table[hole] = symbols->table[at];
        hole = at;
    }
    symbols->table[hole] = (anb__symbol_slot){0};
}

void anb__symbols_forget(anb__symbols *symbols, anb__symbol *before) {
    while (symbols->newest != before) {
        anb__symbol *symbol = symbols->newest;
        symbols->newest = symbol->older;
        empty_slot(symbols,
                   slot_of(symbols, symbol->space, symbol->name, hash_of(symbol->space, symbol->name)));
        symbols->count--;
        symbol->older = symbols->free;
        symbols->free = symbol;
    }
}

enum { MOST_COMPARED = 4096 }; /* a hint is not worth more */

const char *anb__symbol_nearest(const anb__symbols *symbols, uint32_t space, const char *name,
                                bool (*wanted)(const anb__symbol *symbol, const void *user),
                                const void *user) {
    const char *best = NULL;
    unsigned compared = 0;
    for (uint32_t i = 0; i < symbols->capacity && compared < MOST_COMPARED; i++) {
        const anb__symbol *symbol = symbols->table[i].symbol;
        if (!symbol || symbol->space != space || !wanted(symbol, user)) continue;
        const char *pair[] = {best, symbol->name->text};
        compared++;
        best = best ? anb__nearest(name, pair, 2) : anb__nearest(name, &pair[1], 1);
    }
    return best;
}
