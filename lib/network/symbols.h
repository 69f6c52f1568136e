/* Names and what they stand for, in the top level and in every placed network. */
#ifndef ANB_NETWORK_SYMBOLS_H
#define ANB_NETWORK_SYMBOLS_H

#include "network/value.h"

/* A set of names: the top level (id 0), a placed network, or the inside of a labelled composite. */
typedef struct anb__space anb__space;
struct anb__space {
    uint32_t id;
    bool reachable;         /* every label on the way down to it has a name */
    anb__space *parent;     /* NULL for the top level */
    const anb__name *label; /* its name in the parent; NULL for a placement without one */
};

typedef enum anb__symbol_kind {
    ANB__SYMBOL_NONE,
    ANB__SYMBOL_VALUE,
    ANB__SYMBOL_NODE,
    ANB__SYMBOL_LABEL,
    ANB__SYMBOL_NETWORK,
    ANB__SYMBOL_OWN_PART /* an own kind of part */
} anb__symbol_kind;

typedef struct anb__symbol {
    uint32_t space;
    uint32_t order;  /* VALUE, OWN_PART: counts the definitions */
    uint8_t kind;    /* anb__symbol_kind */
    bool live;       /* has a meaning now; a name keeps its kind after its block has ended */
    bool told;       /* that it is not defined: said once is enough */
    anb__span span;  /* where it first got its meaning */
    const anb__name *name;
    union {
        uint32_t node;
        uint32_t label;              /* index in anb__network.labels */
        anb__value *value;
        anb__definition *definition; /* NETWORK, OWN_PART */
    };
    struct anb__symbol *older; /* of the same owner, or of those that are free */
} anb__symbol;

/* The name and the space stand beside the pointer, so that looking up seldom leaves the table. */
typedef struct anb__symbol_slot {
    const anb__name *name;
    anb__symbol *symbol; /* NULL: free */
    uint32_t space, hash;
} anb__symbol_slot;

typedef struct anb__symbols {
    anb__arena *arena;
    anb__symbol *newest; /* of the space that is being filled */
    anb__symbol *free;
    anb__symbol_slot *table; /* open addressing; `capacity` is a power of two */
    uint32_t capacity, count;
} anb__symbols;

/* The symbol, or NULL. */
anb__symbol *anb__symbol_find(const anb__symbols *symbols, uint32_t space, const anb__name *name);
/* The symbol; a new one has the kind NONE. */
anb__symbol *anb__symbol_get(anb__symbols *symbols, uint32_t space, const anb__name *name);

/* Forgets the symbols since `newest` was `before`, of a space that nobody will look into again. */
void anb__symbols_forget(anb__symbols *symbols, anb__symbol *before);

/* The name in the space that is nearest to `name` and for which `wanted` is true, or NULL. */
const char *anb__symbol_nearest(const anb__symbols *symbols, uint32_t space, const char *name,
                                bool (*wanted)(const anb__symbol *symbol, const void *user),
                                const void *user);

#endif
