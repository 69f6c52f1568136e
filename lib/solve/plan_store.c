#include <string.h>

#include "solve/plan_emit.h"

void anb__words_add(anb__arena *work, anb__words *words, uint32_t word) {
    if (words->count == words->capacity) {
        size_t capacity = words->capacity ? 2 * words->capacity : 256;
        words->word = anb__arena_grow(work, words->word, words->count * sizeof *words->word,
                                      capacity * sizeof *words->word);
        words->capacity = capacity;
    }
    words->word[words->count++] = word;
}

/* ---- slots --------------------------------------------------------------------------------- */

uint32_t anb__store_new(anb__store *store) {
    return store->idle_count ? store->idle[--store->idle_count] : store->next++;
}

static void clear_at_start(anb__store *store, uint32_t slot) {
    anb__words *words = &store->cleared;
    if (words->count && words->word[words->count - 2] + words->word[words->count - 1] == slot) {
        words->word[words->count - 1]++;
        return;
    }
    anb__words_add(store->work, words, slot);
    anb__words_add(store->work, words, 1);
}

/* Never one that was in use before: the plan clears it before all else. */
uint32_t anb__store_new_cleared(anb__store *store) {
    clear_at_start(store, store->next);
    return store->next++;
}

void anb__store_release(anb__store *store, uint32_t slot) {
    if (store->idle_count == store->idle_capacity) {
        size_t capacity = store->idle_capacity ? 2 * store->idle_capacity : 64;
        store->idle = anb__arena_grow(store->work, store->idle, store->idle_count * sizeof *store->idle,
                                      capacity * sizeof *store->idle);
        store->idle_capacity = capacity;
    }
    store->idle[store->idle_count++] = slot;
}

uint32_t anb__store_history(anb__store *store, uint32_t position) {
    if (!store->history[position]) store->history[position] = store->history_count++;
    return store->history[position];
}

/* ---- elements of the matrix and its factors ---------------------------------------------------- */

static size_t find_row(const anb__pattern *pattern, uint32_t row, uint32_t column) {
    size_t low = pattern->start[column], high = pattern->start[column + 1];
    while (high - low > 1) {
        size_t middle = low + (high - low) / 2;
        if (pattern->row[middle] <= row)
            low = middle;
        else
            high = middle;
    }
    return low;
}

uint32_t *anb__store_place(anb__store *store, uint32_t row, uint32_t column) {
    if (row == column) return &store->diagonal[row];
    if (row > column) return &store->lower[find_row(&store->layout->pattern, row, column)];
    return &store->upper[find_row(&store->layout->pattern, column, row)];
}

uint32_t anb__store_block(const anb__store *store, uint32_t row, uint32_t column) {
    uint32_t first = store->layout->block, size = store->layout->pattern.size - first;
    uint32_t low = (row < column ? row : column) - first, high = (row < column ? column : row) - first;
    uint32_t base = row < column ? store->block_upper : store->block_lower;
    return base + (uint32_t)anb__packed(size, low) + high - low;
}

/* Columns of one structure: each one's rows are the next one and the next one's rows. */
uint32_t anb__panel_width(const anb__layout *layout, uint32_t i) {
    const anb__pattern *pattern = &layout->pattern;
    uint32_t width = 1;
    if (anb__height(pattern, i) <= ANB__FIXED) return 0;
    while (i + width < layout->block && pattern->row[pattern->start[i + width - 1]] == i + width &&
           anb__height(pattern, i + width - 1) == anb__height(pattern, i + width) + 1)
        width++;
    return width;
}

/* A panel's columns are packed, one behind the other. The rows of U beside it likewise, with unused places
 * for the diagonal. */
static void place_panel(anb__store *store, uint32_t first, uint32_t width) {
    const anb__pattern *pattern = &store->layout->pattern;
    for (int half = 0; half < (store->symmetric ? 1 : 2); half++)
        for (uint32_t i = first; i < first + width; i++) {
            if (!half) store->diagonal[i] = store->next;
            store->next++;
            uint32_t *list = half ? store->upper : store->lower;
            for (size_t k = pattern->start[i]; k < pattern->start[i + 1]; k++) list[k] = store->next++;
        }
}

static void place_panels(anb__store *store) {
    uint32_t n = store->layout->pattern.size, block = store->layout->block, size = n - block;
    for (uint32_t i = 0, width; i < block; i += width ? width : 1) {
        width = anb__panel_width(store->layout, i);
        if (width) place_panel(store, i, width);
    }
    store->block_lower = store->next;
    store->next += (uint32_t)anb__packed(size, size);
    store->block_upper = store->symmetric ? store->block_lower : store->next;
    if (!store->symmetric) store->next += (uint32_t)anb__packed(size, size);
}

static uint32_t place_entry(anb__store *store, uint32_t row, uint32_t column) {
    uint32_t block = store->layout->block;
    if (row >= block && column >= block) return anb__store_block(store, row, column);
    uint32_t *place = anb__store_place(store, row, column);
    if (*place == ANB__NOWHERE) *place = store->next++;
    return *place;
}

/* Diagonal elements that are no entries, and partners that entries of an unsymmetric matrix do not have. */
static void complete(anb__store *store, const anb__system *system) {
    for (uint32_t i = 0; i < store->layout->block; i++)
        if (store->diagonal[i] == ANB__NOWHERE) store->diagonal[i] = anb__store_new_cleared(store);
    for (uint32_t e = 0; !store->symmetric && e < system->entry_count; e++) {
        uint32_t row = store->layout->pattern.position[system->entries[e].row];
        uint32_t column = store->layout->pattern.position[system->entries[e].column];
        if (row >= store->layout->block && column >= store->layout->block) continue;
        uint32_t *place = anb__store_place(store, column, row);
        if (*place == ANB__NOWHERE) *place = anb__store_new_cleared(store);
    }
}

static void take_lists(anb__store *store) {
    const anb__layout *layout = store->layout;
    uint32_t n = layout->pattern.size;
    size_t total = layout->pattern.start[n];
    store->diagonal = anb__arena_take(store->work, ((size_t)n + 1) * sizeof *store->diagonal);
    store->history = anb__arena_take(store->work, ((size_t)n + 1) * sizeof *store->history);
    store->lower = anb__arena_take(store->work, (total + 1) * sizeof *store->lower);
    store->upper = store->lower;
    if (!store->symmetric) store->upper = anb__arena_take(store->work, (total + 1) * sizeof *store->upper);
    memset(store->diagonal, 0xff, n * sizeof *store->diagonal);
    memset(store->lower, 0xff, total * sizeof *store->lower);
    memset(store->upper, 0xff, total * sizeof *store->upper);
}

/* The numbers of the slots of the inverse; the slots are taken when they are first asked for. */
static void take_inverse(anb__store *store) {
    const anb__need *need = &store->layout->need;
    store->first_inverse =
        anb__arena_take(store->work, ((size_t)need->count + 1) * sizeof *store->first_inverse);
    size_t total = 0;
    for (uint32_t i = 0; i < need->count; i++) {
        store->first_inverse[i] = total;
        if (need->active[i] >= store->layout->block) continue;
        for (uint32_t w = 0; w < need->words; w++)
            total += (size_t)__builtin_popcountll(need->needed[(size_t)i * need->words + w]);
    }
    store->inverse_upper = anb__arena_take(store->work, (total + 1) * sizeof *store->inverse_upper);
    store->inverse_lower = store->inverse_upper;
    if (!store->symmetric)
        store->inverse_lower = anb__arena_take(store->work, (total + 1) * sizeof *store->inverse_lower);
    memset(store->inverse_upper, 0xff, total * sizeof *store->inverse_upper);
    memset(store->inverse_lower, 0xff, total * sizeof *store->inverse_lower);
}

void anb__store_start(anb__store *store, anb__arena *work, const anb__system *system,
                      const anb__layout *layout, uint32_t *slot_of) {
    *store = (anb__store){.work = work,
                          .layout = layout,
                          .symmetric = system->symmetric,
                          .next = ANB__ZERO_SLOT + 1,
                          .history_count = ANB__FIRST_HISTORY};
    take_lists(store);
    place_panels(store);
    uint32_t fixed = store->next;
    store->written = anb__arena_take(work, (size_t)fixed + 1);
    for (uint32_t e = 0; e < system->entry_count; e++) {
        const anb__entry *entry = &system->entries[e];
        slot_of[e] =
            place_entry(store, layout->pattern.position[entry->row], layout->pattern.position[entry->column]);
        if (slot_of[e] < fixed) store->written[slot_of[e]] = true;
    }
    for (uint32_t slot = ANB__ZERO_SLOT + 1; slot < fixed; slot++)
        if (!store->written[slot]) clear_at_start(store, slot);
    complete(store, system);
    take_inverse(store);
}

/* ---- elements of the inverse ----------------------------------------------------------------------- */

static size_t rank_of(const anb__need *need, uint32_t i, uint32_t j) {
    const uint64_t *set = need->needed + (size_t)i * need->words;
    size_t rank = 0;
    for (uint32_t w = i / 64; w < j / 64; w++) rank += (size_t)__builtin_popcountll(set[w]);
    return rank + (size_t)__builtin_popcountll(set[j / 64] & (((uint64_t)1 << j % 64) - 1));
}

uint32_t anb__store_inverse(anb__store *store, uint32_t row, uint32_t column) {
    const anb__layout *layout = store->layout;
    if (row >= layout->block && column >= layout->block) return anb__store_block(store, row, column);
    uint32_t i = layout->need.index[row], j = layout->need.index[column];
    uint32_t low = i < j ? i : j, high = i < j ? j : i;
    uint32_t *list = i <= j ? store->inverse_upper : store->inverse_lower;
    uint32_t *place = &list[store->first_inverse[low] + rank_of(&layout->need, low, high)];
    if (*place == ANB__NOWHERE) *place = anb__store_new(store);
    return *place;
}
