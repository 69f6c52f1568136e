/* The collector of stamps: entries, values and shares while they grow (parts/stamp.c, assembly.c). */
#ifndef ANB_PARTS_STAMPER_H
#define ANB_PARTS_STAMPER_H

#include "parts/assembly.h"

/* A growing array; `failed` in the stamper tells that one could not. */
typedef struct anb__list {
    void *items;
    uint32_t count, capacity;
} anb__list;

/* A share before they are sorted by their entries. */
typedef struct anb__loose_share {
    uint32_t entry;
    anb__share share;
} anb__loose_share;

/* Open addressing over indices into a list. */
typedef struct anb__index {
    uint32_t *table; /* index + 1, 0 for none */
    uint32_t capacity, count;
} anb__index;

struct anb__stamper {
    const anb__numbering *numbering;
    bool symmetric; /* of the whole matrix */
    bool failed;    /* memory is gone */
    uint32_t unknown_count;
    /* the part that is stamping */
    const anb__placed *part;
    const anb__branch *branches;
    bool mirrored;       /* its stamps of the lower triangle stand for both */
    uint32_t first_unknown; /* of its own */
    /* what has been collected */
    anb__list places;    /* anb__place_of_entry */
    anb__list base;      /* anb__base_terms, beside `places` */
    anb__list shares;    /* anb__loose_share */
    anb__list waves, series, lines, generics;
    anb__index entry_index, wave_index, series_index, line_index;
    uint32_t value_count;
};

typedef struct anb__place_of_entry {
    uint32_t row, column;
} anb__place_of_entry;

/* Lets a part stamp; one with values that depend on the frequency becomes a generic one. */
void anb__stamp_part(anb__stamper *stamper, const anb__placed *part, const anb__branch *branches);
/* A constant admittance between two nodes. */
void anb__stamp_shunt(anb__stamper *stamper, const anb__shunt *shunt);
void anb__stamper_clear(anb__stamper *stamper);

#endif
