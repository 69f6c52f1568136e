#include "solve/plan_emit.h"

#include <string.h>

/* ---- the emitter -------------------------------------------------------------------------------- */

typedef struct emitter {
    anb__arena *work;
    const anb__system *system;
    const anb__layout *layout;
    anb__store store;
    anb__words code;
    anb__plan *plan;
    bool as_sums;
    uint32_t *port_at;   /* [size]: the port of a position, or ANB__NOWHERE; not for sums */
    anb__complex *scale; /* [size]: S = scale_i scale_j Z_ij - d */
    anb__complex *constants;
    size_t constant_count, constant_capacity;
    size_t scratch_cells; /* of ANB__GROUP doubles */
} emitter;

static void put(emitter *e, uint32_t word) { anb__words_add(e->work, &e->code, word); }

static uint32_t constant(emitter *e, anb__complex value) {
    if (e->constant_count == e->constant_capacity) {
        size_t capacity = e->constant_capacity ? 2 * e->constant_capacity : 16;
        e->constants =
            anb__arena_grow(e->work, e->constants, e->constant_count * sizeof value, capacity * sizeof value);
        e->constant_capacity = capacity;
    }
    e->constants[e->constant_count] = value;
    return (uint32_t)e->constant_count++;
}

static bool same(anb__complex a, anb__complex b) { return a.re == b.re && a.im == b.im; }

static void need_scratch(emitter *e, size_t cells) {
    if (cells > e->scratch_cells) e->scratch_cells = cells;
}

static bool is_needed(const emitter *e, uint32_t position) {
    const anb__need *need = &e->layout->need;
    uint32_t i = need->index[position];
    if (i == ANB__NOWHERE) return false;
    return need->targets[i] || anb__has(need->wanted + (size_t)i * need->words, i) ||
           anb__has(need->needed + (size_t)i * need->words, i);
}

/* ---- elimination ------------------------------------------------------------------------------------ */

/* Where an element is read and where it is written: fill is read from the slot that is zero. */
static void put_target(emitter *e, uint32_t row, uint32_t column) {
    if (row >= e->layout->block && column >= e->layout->block) {
        uint32_t slot = anb__store_block(&e->store, row, column);
        put(e, slot);
        put(e, slot);
        return;
    }
    uint32_t *place = anb__store_place(&e->store, row, column);
    put(e, *place == ANB__NOWHERE ? ANB__ZERO_SLOT : *place);
    if (*place == ANB__NOWHERE) *place = anb__store_new(&e->store);
    put(e, *place);
}

static void release_column(emitter *e, uint32_t i) {
    const anb__pattern *pattern = &e->layout->pattern;
    anb__store_release(&e->store, e->store.diagonal[i]);
    for (size_t k = pattern->start[i]; k < pattern->start[i + 1]; k++) {
        anb__store_release(&e->store, e->store.lower[k]);
        if (!e->store.symmetric) anb__store_release(&e->store, e->store.upper[k]);
    }
}

static void emit_eliminate(emitter *e, uint32_t i) {
    const anb__pattern *pattern = &e->layout->pattern;
    size_t start = pattern->start[i], end = pattern->start[i + 1];
    const uint32_t *row = pattern->row;
    bool keep = is_needed(e, i), symmetric = e->store.symmetric;
    if (start == end && !keep) return;
    put(e, ANB__OP_ELIMINATE);
    put(e, (uint32_t)(end - start));
    put(e, keep);
    put(e, e->store.diagonal[i]);
    put(e, e->store.history[i]);
    for (size_t k = start; k < end; k++) put(e, e->store.lower[k]);
    for (size_t k = start; k < end && !symmetric; k++) put(e, e->store.upper[k]);
    for (size_t k = start; k < end; k++) put(e, anb__store_history(&e->store, row[k]));
    for (size_t a = start; a < end; a++)
        for (size_t b = start; b < (symmetric ? a + 1 : end); b++) put_target(e, row[a], row[b]);
    if (!keep) release_column(e, i);
}

/* The slot of an element that a panel updates. Fill is cleared when the plan starts. */
static uint32_t panel_target(emitter *e, uint32_t row, uint32_t column) {
    if (row >= e->layout->block && column >= e->layout->block)
        return anb__store_block(&e->store, row, column);
    uint32_t *place = anb__store_place(&e->store, row, column);
    if (*place == ANB__NOWHERE) *place = anb__store_new_cleared(&e->store);
    return *place;
}

static void emit_panel(emitter *e, uint32_t first, uint32_t width) {
    const anb__pattern *pattern = &e->layout->pattern;
    uint32_t last = first + width - 1, rest = anb__height(pattern, last);
    const uint32_t *row = pattern->row + pattern->start[last];
    bool keep = false;
    for (uint32_t i = first; i <= last; i++) keep = keep || is_needed(e, i);
    size_t first_of_upper = e->store.upper[pattern->start[first]];
    put(e, ANB__OP_PANEL);
    put(e, width);
    put(e, rest);
    put(e, keep);
    put(e, e->store.diagonal[first]);
    put(e, (uint32_t)first_of_upper - 1);
    for (uint32_t i = first; i <= last; i++) put(e, anb__store_history(&e->store, i));
    for (uint32_t k = 0; k < rest; k++) put(e, anb__store_history(&e->store, row[k]));
    for (uint32_t c = 0; c < rest; c++)
        for (uint32_t r = c; r < rest; r++) put(e, panel_target(e, row[r], row[c]));
    for (uint32_t c = 0; c < rest && !e->store.symmetric; c++)
        for (uint32_t r = c; r < rest; r++) put(e, panel_target(e, row[c], row[r]));
    need_scratch(e, (size_t)2 * (width + rest) * ANB__PANEL_DEPTH);
}

static void emit_elimination(emitter *e) {
    for (uint32_t i = 0, width; i < e->layout->block; i += width ? width : 1) {
        width = anb__panel_width(e->layout, i);
        if (width)
            emit_panel(e, i, width);
        else
            emit_eliminate(e, i);
    }
}

/* ---- scales ------------------------------------------------------------------------------------------- */

/* With Z'_ij = s_i s_j Z_ij the recurrence stays what it is, if L_ki is multiplied by s_i/s_k and 1/D_i by
 * s_i^2. Where all s are equal only the latter is left. */
static void emit_scale_of_row(emitter *e, uint32_t i, anb__words *list) {
    const anb__pattern *pattern = &e->layout->pattern;
    for (size_t k = pattern->start[i]; k < pattern->start[i + 1]; k++) {
        anb__complex to = e->scale[pattern->row[k]];
        if (same(to, e->scale[i])) continue;
        uint32_t factor = constant(e, anb__cdiv(e->scale[i], to));
        anb__words_add(e->work, list, e->store.lower[k]);
        anb__words_add(e->work, list, factor);
        if (e->store.symmetric) continue;
        anb__words_add(e->work, list, e->store.upper[k]);
        anb__words_add(e->work, list, factor);
    }
}

static bool block_has_one_scale(const emitter *e) {
    for (uint32_t i = e->layout->block; i < e->layout->pattern.size; i++)
        if (!same(e->scale[i], e->scale[e->layout->block])) return false;
    return true;
}

/* The block is divided by s_i s_j before it is inverted. */
static void emit_scale_of_block(emitter *e, anb__words *list) {
    for (uint32_t c = e->layout->block; c < e->layout->pattern.size; c++)
        for (uint32_t r = c; r < e->layout->pattern.size; r++) {
            anb__complex product = anb__cmul(e->scale[r], e->scale[c]);
            if (same(product, anb__cx(1, 0))) continue;
            uint32_t factor = constant(e, anb__cdiv(anb__cx(1, 0), product));
            anb__words_add(e->work, list, anb__store_block(&e->store, r, c));
            anb__words_add(e->work, list, factor);
            if (e->store.symmetric || r == c) continue;
            anb__words_add(e->work, list, anb__store_block(&e->store, c, r));
            anb__words_add(e->work, list, factor);
        }
}

static void emit_scales(emitter *e) {
    anb__words list = {0};
    for (uint32_t i = 0; i < e->layout->block; i++)
        if (is_needed(e, i)) emit_scale_of_row(e, i, &list);
    if (!block_has_one_scale(e)) emit_scale_of_block(e, &list);
    if (!list.count) return;
    put(e, ANB__OP_SCALE);
    put(e, (uint32_t)(list.count / 2));
    for (size_t k = 0; k < list.count; k++) put(e, list.word[k]);
}

/* ---- the block ------------------------------------------------------------------------------------------
 */

/* The element of the result at a pair of positions, or nowhere. */
static uint32_t element_at(const emitter *e, uint32_t row, uint32_t column) {
    if (e->as_sums) return ANB__NOWHERE;
    uint32_t to = e->port_at[row], from = e->port_at[column];
    if (to == ANB__NOWHERE || from == ANB__NOWHERE) return ANB__NOWHERE;
    if (!e->system->symmetric) return to * e->system->port_count + from;
    uint32_t low = to < from ? to : from, high = to < from ? from : to;
    return (uint32_t)((uint64_t)high * (high + 1) / 2 + low);
}

static uint32_t offset_of(emitter *e, uint32_t position) {
    uint32_t port = e->as_sums ? ANB__NOWHERE : e->port_at[position];
    return port == ANB__NOWHERE ? ANB__NOWHERE : constant(e, e->system->offset[port]);
}

static bool block_is_all_result(const emitter *e) {
    uint32_t n = e->layout->pattern.size, block = e->layout->block;
    if (e->as_sums || n - block != e->system->port_count) return false;
    for (uint32_t i = block; i < n; i++)
        if (e->port_at[i] == ANB__NOWHERE) return false;
    return true;
}

static void put_block_elements(emitter *e) {
    uint32_t n = e->layout->pattern.size, block = e->layout->block;
    for (uint32_t c = block; c < n; c++)
        for (uint32_t r = c; r < n; r++) put(e, element_at(e, r, c));
    for (uint32_t c = block; c < n && !e->store.symmetric; c++)
        for (uint32_t r = c; r < n; r++) put(e, element_at(e, c, r));
    for (uint32_t i = block; i < n; i++) put(e, offset_of(e, i));
}

static void emit_block(emitter *e) {
    uint32_t n = e->layout->pattern.size, block = e->layout->block, size = n - block;
    if (!size) return;
    bool only_result = block_is_all_result(e);
    anb__complex scale = block_has_one_scale(e) ? anb__cmul(e->scale[block], e->scale[block]) : anb__cx(1, 0);
    put(e, size <= ANB__FIXED ? ANB__OP_INVERT : ANB__OP_SWEEP);
    put(e, size);
    put(e, only_result);
    put(e, constant(e, scale));
    put(e, e->store.block_lower);
    put(e, e->store.block_upper);
    for (uint32_t i = block; i < n; i++) put(e, anb__store_history(&e->store, i));
    put_block_elements(e);
    uint32_t depth = anb__sweep_depth(size);
    if (size > ANB__FIXED) need_scratch(e, (size_t)4 * size * depth + 3 * (size_t)depth * depth);
}

/* ---- rows of the inverse ---------------------------------------------------------------------------------
 */

/* The elements (i, j) of row i that are only results, or that are kept in slots. */
static bool is_target(const emitter *e, uint32_t i, uint32_t j, bool in_slot) {
    const anb__need *need = &e->layout->need;
    bool needed = anb__has(need->needed + (size_t)i * need->words, j);
    return in_slot ? needed : !needed && anb__has(need->wanted + (size_t)i * need->words, j);
}

static uint32_t count_targets(const emitter *e, uint32_t i, bool in_slot) {
    uint32_t count = 0;
    for (uint32_t j = i + 1; j < e->layout->need.count; j++) count += is_target(e, i, j, in_slot);
    return count;
}

/* Targets of row i (or column i, `across` false), each followed by what it is computed from. */
static void put_targets(emitter *e, uint32_t i, bool across, bool in_slot) {
    const anb__pattern *pattern = &e->layout->pattern;
    const anb__need *need = &e->layout->need;
    uint32_t at = need->active[i];
    for (uint32_t j = i + 1; j < need->count; j++) {
        if (!is_target(e, i, j, in_slot)) continue;
        uint32_t other = need->active[j], row = across ? at : other, column = across ? other : at;
        put(e, in_slot ? anb__store_inverse(&e->store, row, column) : element_at(e, row, column));
        for (size_t k = pattern->start[at]; k < pattern->start[at + 1]; k++)
            put(e, across ? anb__store_inverse(&e->store, pattern->row[k], other)
                          : anb__store_inverse(&e->store, other, pattern->row[k]));
    }
}

/* The diagonal element: its slot, its element of the result and its sources. */
static void put_diagonal(emitter *e, uint32_t i) {
    const anb__pattern *pattern = &e->layout->pattern;
    uint32_t at = e->layout->need.active[i];
    bool wanted = is_target(e, i, i, false), needed = is_target(e, i, i, true);
    put(e, wanted || needed ? e->store.diagonal[at] : ANB__NOWHERE);
    if (!wanted && !needed) return;
    put(e, constant(e, anb__cmul(e->scale[at], e->scale[at])));
    put(e, needed ? anb__store_inverse(&e->store, at, at) : ANB__NOWHERE);
    put(e, wanted ? element_at(e, at, at) : ANB__NOWHERE);
    put(e, wanted ? offset_of(e, at) : ANB__NOWHERE);
    for (size_t k = pattern->start[at]; k < pattern->start[at + 1]; k++)
        put(e, anb__store_inverse(&e->store, pattern->row[k], at));
}

static void emit_inverse(emitter *e, uint32_t i, bool across, bool with_diagonal) {
    const anb__pattern *pattern = &e->layout->pattern;
    uint32_t at = e->layout->need.active[i];
    const uint32_t *factors = across ? e->store.upper : e->store.lower;
    put(e, ANB__OP_INVERSE);
    put(e, anb__height(pattern, at));
    put(e, count_targets(e, i, true));
    put(e, count_targets(e, i, false));
    for (size_t k = pattern->start[at]; k < pattern->start[at + 1]; k++) put(e, factors[k]);
    put_targets(e, i, across, true);
    put_targets(e, i, across, false);
    if (with_diagonal)
        put_diagonal(e, i);
    else
        put(e, ANB__NOWHERE);
}

/* The lower half of an unsymmetric inverse comes first, since the diagonal follows from it. */
static void emit_rows(emitter *e) {
    const anb__need *need = &e->layout->need;
    for (uint32_t i = need->count; i-- > 0;) {
        if (need->active[i] >= e->layout->block || !is_needed(e, need->active[i])) continue;
        if (!e->store.symmetric) emit_inverse(e, i, false, false);
        emit_inverse(e, i, true, true);
    }
}

/* ---- results that stand in slots -------------------------------------------------------------- */

static void put_copy(emitter *e, uint32_t row, uint32_t column, uint32_t *count) {
    put(e, element_at(e, row, column));
    put(e, anb__store_inverse(&e->store, row, column));
    put(e, row == column ? offset_of(e, row) : ANB__NOWHERE);
    ++*count;
}

/* Elements of the result that only their slots have: those that others needed too, and those of a small block
 * that went into the slots. */
static bool is_to_copy(const emitter *e, uint32_t i, uint32_t j, bool block_in_slots) {
    const anb__need *need = &e->layout->need;
    if (!anb__has(need->wanted + (size_t)i * need->words, j)) return false;
    if (need->active[i] >= e->layout->block) return block_in_slots;
    return anb__has(need->needed + (size_t)i * need->words, j);
}

static void emit_copies(emitter *e) {
    const anb__need *need = &e->layout->need;
    bool block_in_slots = e->layout->pattern.size - e->layout->block <= ANB__FIXED && !block_is_all_result(e);
    put(e, ANB__OP_COPY);
    put(e, 0);
    size_t head = e->code.count - 1;
    uint32_t count = 0;
    for (uint32_t i = 0; i < need->count; i++)
        for (uint32_t j = i; j < need->count; j++) {
            if (!is_to_copy(e, i, j, block_in_slots)) continue;
            put_copy(e, need->active[i], need->active[j], &count);
            if (!e->store.symmetric && i != j) put_copy(e, need->active[j], need->active[i], &count);
        }
    e->code.word[head] = count;
    if (!count) e->code.count -= 2;
}

static uint32_t terms_of(const anb__system *system, uint32_t port, const anb__term **terms) {
    *terms = system->terms + system->first_term[port];
    return system->first_term[port + 1] - system->first_term[port];
}

static void put_sum(emitter *e, uint32_t to, uint32_t from) {
    const anb__term *a, *b;
    uint32_t m = terms_of(e->system, to, &a), n = terms_of(e->system, from, &b);
    const uint32_t *position = e->layout->pattern.position;
    put(e, constant(e, anb__cmul(e->system->scale[to], e->system->scale[from])));
    put(e, to == from ? constant(e, e->system->offset[to]) : ANB__NOWHERE);
    put(e, m * n);
    for (uint32_t i = 0; i < m; i++)
        for (uint32_t k = 0; k < n; k++) {
            put(e, anb__store_inverse(&e->store, position[a[i].unknown], position[b[k].unknown]));
            put(e, a[i].sign * b[k].sign < 0);
        }
}

static void emit_sums(emitter *e) {
    put(e, ANB__OP_COMBINE);
    put(e, e->plan->element_count);
    for (uint32_t to = 0; to < e->system->port_count; to++)
        for (uint32_t from = 0; from < (e->system->symmetric ? to + 1 : e->system->port_count); from++)
            put_sum(e, to, from);
}

/* ---- all of it -------------------------------------------------------------------------------- */

static void find_ports(emitter *e) {
    uint32_t n = e->layout->pattern.size;
    const anb__system *system = e->system;
    e->port_at = anb__arena_take(e->work, ((size_t)n + 1) * sizeof *e->port_at);
    e->scale = anb__arena_take(e->work, ((size_t)n + 1) * sizeof *e->scale);
    memset(e->port_at, 0xff, ((size_t)n + 1) * sizeof *e->port_at);
    bool scaled = !e->as_sums && system->port_count;
    for (uint32_t i = 0; i < n; i++) e->scale[i] = scaled ? system->scale[0] : anb__cx(1, 0);
    for (uint32_t k = 0; scaled && k < system->port_count; k++) {
        const anb__term *term = &system->terms[system->first_term[k]];
        uint32_t at = e->layout->pattern.position[term->unknown];
        e->port_at[at] = k;
        e->scale[at] = anb__cscale(system->scale[k], term->sign);
    }
}

static uint32_t *copy_words(anb__arena *arena, const anb__words *first, const anb__words *then) {
    uint32_t *out = anb__arena_take(arena, (first->count + then->count + 1) * sizeof *out);
    if (first->count) memcpy(out, first->word, first->count * sizeof *out);
    memcpy(out + first->count, then->word, then->count * sizeof *out);
    return out;
}

/* The clearing of slots is known last and comes first. */
static void finish(emitter *e) {
    anb__plan *plan = e->plan;
    anb__words head = {0};
    if (e->store.cleared.count) {
        anb__words_add(e->work, &head, ANB__OP_CLEAR);
        anb__words_add(e->work, &head, (uint32_t)(e->store.cleared.count / 2));
        for (size_t k = 0; k < e->store.cleared.count; k++)
            anb__words_add(e->work, &head, e->store.cleared.word[k]);
    }
    put(e, ANB__OP_END);
    plan->code = copy_words(&plan->arena, &head, &e->code);
    anb__complex *constants = anb__arena_take(&plan->arena, (e->constant_count + 1) * sizeof *constants);
    if (e->constant_count) memcpy(constants, e->constants, e->constant_count * sizeof *constants);
    plan->constants = constants;
    plan->zero_slot = ANB__ZERO_SLOT;
    plan->history_slot = e->store.next;
    plan->history_count = e->store.history_count;
    plan->scratch_slot = plan->history_slot + (plan->history_count + 1) / 2;
    plan->slot_count = plan->scratch_slot + (uint32_t)e->scratch_cells;
}

void anb__emit(anb__arena *work, const anb__system *system, const anb__layout *layout, bool as_sums,
               anb__plan *plan) {
    emitter e = {.work = work, .system = system, .layout = layout, .plan = plan, .as_sums = as_sums};
    uint32_t *slot_of = anb__arena_take(&plan->arena, ((size_t)system->entry_count + 1) * sizeof *slot_of);
    plan->slot_of = slot_of;
    find_ports(&e);
    anb__store_start(&e.store, work, system, layout, slot_of);
    emit_elimination(&e);
    emit_scales(&e);
    emit_block(&e);
    emit_rows(&e);
    emit_copies(&e);
    if (as_sums) emit_sums(&e);
    finish(&e);
}
