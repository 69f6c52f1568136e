#include "parts/stamper.h"

#include <stdlib.h>
#include <string.h>

/* ---- growing arrays and their index ------------------------------------------------ */

/* Room for one more item; NULL (and `failed`) when memory is gone. */
static void *append(anb__stamper *stamper, anb__list *list, size_t size) {
    if (list->count == list->capacity) {
        uint32_t capacity = list->capacity ? 2 * list->capacity : 16;
        void *items = list->capacity < UINT32_MAX / 2 ? realloc(list->items, capacity * size) : NULL;
        if (!items) {
            stamper->failed = true;
            return NULL;
        }
        list->items = items;
        list->capacity = capacity;
    }
    void *item = (char *)list->items + list->count++ * size;
    memset(item, 0, size);
    return item;
}

static uint64_t hash_of(const void *key, size_t size) {
    uint64_t hash = 0x9E3779B97F4A7C15u, word;
    for (size_t i = 0; i < size; i += sizeof word) {
        memcpy(&word, (const char *)key + i, sizeof word);
        hash = (hash ^ word) * 0xD6E8FEB86659FD93u;
        hash ^= hash >> 32;
    }
    return hash;
}

static bool enlarge(anb__stamper *stamper, anb__index *index, const anb__list *list, size_t size,
                    size_t key_size) {
    uint32_t capacity = index->capacity ? 2 * index->capacity : 64;
    uint32_t *table = calloc(capacity, sizeof *table);
    if (!table) {
        stamper->failed = true;
        return false;
    }
    for (uint32_t i = 0; i < index->count; i++) {
        uint32_t at = (uint32_t)hash_of((char *)list->items + i * size, key_size) & (capacity - 1);
        while (table[at]) at = (at + 1) & (capacity - 1);
        table[at] = i + 1;
    }
    free(index->table);
    index->table = table;
    index->capacity = capacity;
    return true;
}

/* The item whose first `key_size` bytes (a multiple of 8) equal the key's, appended where there is none. */
static void *find_or_append(anb__stamper *stamper, anb__list *list, anb__index *index, size_t size,
                            const void *key, size_t key_size, bool *is_new) {
    *is_new = false;
    if (2 * index->count >= index->capacity && !enlarge(stamper, index, list, size, key_size)) return NULL;
    uint32_t at = (uint32_t)hash_of(key, key_size) & (index->capacity - 1);
    for (; index->table[at]; at = (at + 1) & (index->capacity - 1)) {
        char *item = (char *)list->items + (index->table[at] - 1) * size;
        if (!memcmp(item, key, key_size)) return item;
    }
    void *item = append(stamper, list, size);
    if (!item) return NULL;
    memcpy(item, key, key_size);
    index->table[at] = list->count;
    index->count = list->count;
    *is_new = true;
    return item;
}

/* ---- places ---------------------------------------------------------------------------- */

/* The entry at (row, column); UINT32_MAX when memory is gone. */
static uint32_t entry_at(anb__stamper *stamper, uint32_t row, uint32_t column) {
    anb__place_of_entry place = {row, column}, *found;
    bool is_new;
    found = find_or_append(stamper, &stamper->places, &stamper->entry_index, sizeof place, &place,
                           sizeof place, &is_new);
    if (!found) return UINT32_MAX;
    if (is_new && !append(stamper, &stamper->base, sizeof(anb__base_terms))) return UINT32_MAX;
    return (uint32_t)(found - (anb__place_of_entry *)stamper->places.items);
}

/* What a stamp adds to an entry: base terms, or a share of a value. */
typedef struct addition {
    anb__base_terms base;
    uint32_t value; /* or ANB__NO_VALUE */
    bool imaginary;
    double factor;
} addition;

static void add_terms(anb__complex *to, anb__complex from, double sign) {
    *to = anb__cadd(*to, anb__cscale(from, sign));
}

static void add_to(anb__stamper *stamper, uint32_t row, uint32_t column, const addition *what, double sign) {
    if (stamper->symmetric && row < column) return;
    uint32_t entry = entry_at(stamper, row, column);
    if (entry == UINT32_MAX) return;
    if (what->value == ANB__NO_VALUE) {
        anb__base_terms *base = (anb__base_terms *)stamper->base.items + entry;
        add_terms(&base->a, what->base.a, sign);
        add_terms(&base->b, what->base.b, sign);
        add_terms(&base->c, what->base.c, sign);
        return;
    }
    anb__loose_share *loose = append(stamper, &stamper->shares, sizeof *loose);
    if (loose) *loose = (anb__loose_share){entry, {what->value, what->imaginary, sign * what->factor}};
}

typedef struct anb__node_term node_term;

enum { SIDES = 2 };

/* The unknowns of one of the part's rows: of the nodes of a branch, or an unknown current. */
typedef struct line_of_part {
    const node_term *terms[SIDES];
    uint32_t counts[SIDES];
    double signs[SIDES];
    node_term own;
} line_of_part;

static void nodes_of(const anb__stamper *stamper, int index, line_of_part *out) {
    int branches = stamper->part ? stamper->part->branch_count : 1;
    if (index >= branches) {
        *out = (line_of_part){.counts = {1, 0}, .signs = {1, 0}};
        out->own = (node_term){stamper->first_unknown + (uint32_t)(index - branches), 1};
        out->terms[0] = &out->own;
        return;
    }
    uint32_t nodes[SIDES] = {stamper->branches[index].plus, stamper->branches[index].minus};
    for (int side = 0; side < SIDES; side++) {
        uint32_t first = stamper->numbering->first[nodes[side]];
        out->terms[side] = stamper->numbering->terms + first;
        out->counts[side] = stamper->numbering->first[nodes[side] + 1] - first;
        out->signs[side] = side ? -1 : 1;
    }
}

static void place_product(anb__stamper *stamper, const line_of_part *rows, const line_of_part *columns,
                          const addition *what) {
    for (int r = 0; r < SIDES; r++)
        for (int c = 0; c < SIDES; c++)
            for (uint32_t i = 0; i < rows->counts[r]; i++)
                for (uint32_t k = 0; k < columns->counts[c]; k++) {
                    double sign = rows->signs[r] * columns->signs[c] * rows->terms[r][i].sign *
                                  columns->terms[c][k].sign;
                    add_to(stamper, rows->terms[r][i].unknown, columns->terms[c][k].unknown, what, sign);
                }
}

static void place(anb__stamper *stamper, int row, int column, addition what) {
    line_of_part rows, columns;
    int branches = stamper->part ? stamper->part->branch_count : 1;
    nodes_of(stamper, row, &rows);
    nodes_of(stamper, column, &columns);
    if (stamper->part && stamper->part->negated && row < branches && column < branches) {
        what.factor = -what.factor;
        what.base = (anb__base_terms){anb__cneg(what.base.a), anb__cneg(what.base.b), anb__cneg(what.base.c)};
    }
    place_product(stamper, &rows, &columns, &what);
    if (row != column && stamper->mirrored) place_product(stamper, &columns, &rows, &what);
}

/* ---- what the families call --------------------------------------------------------------- */

void anb__stamp_terms(anb__stamper *stamper, int row, int column, anb__complex a, anb__complex b,
                      anb__complex c) {
    place(stamper, row, column, (addition){.base = {a, b, c}, .value = ANB__NO_VALUE});
}

int anb__stamp_unknown(anb__stamper *stamper) {
    int index = stamper->part->branch_count + (int)(stamper->unknown_count - stamper->first_unknown);
    stamper->unknown_count++;
    return index;
}

void anb__stamp_wave(anb__stamper *stamper, int row, int column, const anb__wave *wave,
                     anb__wave_function function, double factor) {
    bool is_new;
    anb__wave_values *found = find_or_append(stamper, &stamper->waves, &stamper->wave_index, sizeof *found,
                                             wave, sizeof *wave, &is_new);
    if (!found) return;
    if (is_new) {
        found->lossless = wave->constant == 0 && wave->root == 0 && wave->linear == 0;
        for (int k = 0; k < ANB__WAVE_FUNCTIONS; k++) found->value[k] = ANB__NO_VALUE;
    }
    if (found->value[function] == ANB__NO_VALUE) found->value[function] = stamper->value_count++;
    place(stamper, row, column,
          (addition){.value = found->value[function], .imaginary = found->lossless, .factor = factor});
}

void anb__stamp_branch(anb__stamper *stamper, const anb__series_branch *branch) {
    bool is_new;
    anb__branch_value *found = find_or_append(stamper, &stamper->series, &stamper->series_index,
                                              sizeof *found, branch, sizeof *branch, &is_new);
    if (!found) return;
    if (is_new) found->value = stamper->value_count++;
    place(stamper, 0, 0, (addition){.value = found->value, .factor = 1});
}

void anb__stamp_line_constants(anb__stamper *stamper, const anb__line_model *model) {
    bool is_new;
    anb__line_values *found = find_or_append(stamper, &stamper->lines, &stamper->line_index, sizeof *found,
                                             model, sizeof *model, &is_new);
    if (!found) return;
    if (is_new) {
        found->value = stamper->value_count;
        stamper->value_count += 2;
    }
    place(stamper, 0, 0, (addition){.value = found->value, .factor = 1});
    place(stamper, 1, 0, (addition){.value = found->value + 1, .factor = -1});
    place(stamper, 1, 1, (addition){.value = found->value, .factor = 1});
}

/* Its equations already have the sign of `negated`. */
static void stamp_generic(anb__stamper *stamper, const anb__placed *part) {
    anb__generic_values *generic = append(stamper, &stamper->generics, sizeof *generic);
    if (!generic) return;
    int size = part->branch_count;
    *generic = (anb__generic_values){part, stamper->value_count};
    stamper->value_count += (uint32_t)(size * size);
    double sign = part->negated ? -1 : 1;
    for (int row = 0; row < size; row++)
        for (int column = 0; column < (stamper->mirrored ? row + 1 : size); column++)
            place(stamper, row, column,
                  (addition){.value = generic->value + (uint32_t)(row * size + column), .factor = sign});
}

void anb__stamp_part(anb__stamper *stamper, const anb__placed *part, const anb__branch *branches) {
    const anb__family *family = anb__family_of(part);
    stamper->part = part;
    stamper->branches = branches;
    stamper->mirrored = family->reciprocal;
    stamper->first_unknown = stamper->unknown_count;
    if (anb__part_has_program(part))
        stamp_generic(stamper, part);
    else
        family->stamps(part, stamper);
    stamper->part = NULL;
}

void anb__stamp_shunt(anb__stamper *stamper, const anb__shunt *shunt) {
    stamper->part = NULL;
    stamper->branches = &shunt->branch;
    stamper->mirrored = true;
    anb__stamp_terms(stamper, 0, 0, shunt->admittance, anb__cx(0, 0), anb__cx(0, 0));
}

void anb__stamper_clear(anb__stamper *stamper) {
    anb__list *lists[] = {&stamper->places, &stamper->base,  &stamper->shares,  &stamper->waves,
                          &stamper->series, &stamper->lines, &stamper->generics};
    anb__index *indices[] = {&stamper->entry_index, &stamper->wave_index, &stamper->series_index,
                             &stamper->line_index};
    for (size_t i = 0; i < sizeof lists / sizeof *lists; i++) free(lists[i]->items);
    for (size_t i = 0; i < sizeof indices / sizeof *indices; i++) free(indices[i]->table);
}
