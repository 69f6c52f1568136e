#include "network/program.h"

#include <stddef.h>

#include "network/term.h"

/* Steps in order; each writes one slot from slots that were written before. The last writes
 * the result. */
typedef struct step {
    uint8_t kind; /* anb__term_kind */
    uint8_t operation;
    uint8_t target, a, b;
    anb__complex constant;
} step;

struct anb__program {
    uint32_t count;
    step steps[];
};

anb__term *anb__term_constant(anb__arena *arena, anb__complex value) {
    anb__term *term = anb__arena_take(arena, sizeof *term);
    term->kind = ANB__TERM_CONSTANT;
    term->need = 1;
    term->constant = value;
    return term;
}

anb__term *anb__term_frequency(anb__arena *arena) {
    anb__term *term = anb__arena_take(arena, sizeof *term);
    term->kind = ANB__TERM_FREQUENCY;
    term->need = 1;
    return term;
}

anb__term *anb__term_operation(anb__arena *arena, anb__operation operation, anb__term *a, anb__term *b) {
    anb__term *term = anb__arena_take(arena, sizeof *term);
    term->kind = ANB__TERM_OPERATION;
    term->operation = (uint8_t)operation;
    term->need = a->need;
    if (b && b->need >= a->need) term->need = b->need;
    if (b && b->need == a->need && a->need < UINT8_MAX) term->need++;
    term->a = a;
    term->b = b;
    return term;
}

/* ---- making ------------------------------------------------------------------------ */

typedef struct list {
    anb__term **items;
    uint32_t count, capacity;
} list;

static void push(anb__arena *arena, list *l, anb__term *term) {
    if (l->count == l->capacity) {
        uint32_t capacity = l->capacity ? 2 * l->capacity : 16;
        l->items = anb__arena_grow(arena, l->items, l->capacity * sizeof *l->items,
                                   capacity * sizeof *l->items);
        l->capacity = capacity;
    }
    l->items[l->count++] = term;
}

/* The operand to calculate next: the one that needs more slots comes first. */
static anb__term *next_operand(const anb__term *term, uint32_t making) {
    anb__term *first = term->a, *second = term->b;
    if (second && second->need > first->need) first = term->b, second = term->a;
    if (first && first->visited != making) return first;
    return second && second->visited != making ? second : NULL;
}

/* All the terms that `term` needs, operands first, each once. Expressions may be deep: no recursion. */
static list in_order(anb__arena *scratch, anb__term *term, uint32_t making) {
    list order = {0}, open = {0};
    push(scratch, &open, term);
    while (open.count) {
        anb__term *top = open.items[open.count - 1];
        anb__term *wanted = top->visited == making ? NULL : next_operand(top, making);
        if (wanted) {
            push(scratch, &open, wanted);
            continue;
        }
        if (top->visited != making) push(scratch, &order, top);
        top->visited = making;
        open.count--;
    }
    return order;
}

static void find_last_uses(const list *order) {
    for (uint32_t i = 0; i < order->count; i++) {
        anb__term *term = order->items[i];
        term->last_use = i;
        if (term->a) term->a->last_use = i;
        if (term->b) term->b->last_use = i;
    }
}

/* A free slot; -1 where there is none. */
static int take_slot(uint64_t *taken) {
    for (int slot = 0; slot < ANB__PROGRAM_SLOTS; slot++)
        if (!(*taken >> slot & 1)) {
            *taken |= UINT64_C(1) << slot;
            return slot;
        }
    return -1;
}

static void release_slot(uint64_t *taken, const anb__term *term, uint32_t step_index) {
    if (term && term->last_use == step_index) *taken &= ~(UINT64_C(1) << term->slot);
}

static bool choose_slots(const list *order) {
    uint64_t taken = 0;
    for (uint32_t i = 0; i < order->count; i++) {
        anb__term *term = order->items[i];
        release_slot(&taken, term->a, i);
        release_slot(&taken, term->b, i);
        int slot = take_slot(&taken);
        if (slot < 0) return false;
        term->slot = (uint8_t)slot;
    }
    return true;
}

const anb__program *anb__program_of(anb__arena *arena, anb__arena *scratch, anb__term *term,
                                    uint32_t *making) {
    if (term->program) return term->program;
    list order = in_order(scratch, term, ++*making);
    find_last_uses(&order);
    if (!choose_slots(&order)) return NULL;
    anb__program *program = anb__arena_take(arena, sizeof *program + order.count * sizeof(step));
    program->count = order.count;
    for (uint32_t i = 0; i < order.count; i++) {
        const anb__term *t = order.items[i];
        uint8_t a = t->a ? t->a->slot : 0, b = t->b ? t->b->slot : 0;
        program->steps[i] = (step){t->kind, t->operation, t->slot, a, b, t->constant};
    }
    term->program = program;
    return program;
}

/* ---- running ----------------------------------------------------------------------- */

bool anb__program_value(const anb__program *program, double frequency_hz, anb__complex *out) {
    anb__complex slots[ANB__PROGRAM_SLOTS], result = {0, 0};
    for (uint32_t i = 0; i < program->count; i++) {
        const step *s = &program->steps[i];
        if (s->kind == ANB__TERM_CONSTANT) result = s->constant;
        else if (s->kind == ANB__TERM_FREQUENCY) result = anb__cx(frequency_hz, 0);
        else if (anb__operate(s->operation, slots[s->a], slots[s->b], &result) != ANB__FINE) return false;
        slots[s->target] = result;
    }
    *out = result;
    return true;
}

bool anb__program_series(const anb__program *program, anb__series *out) {
    anb__series slots[ANB__PROGRAM_SLOTS], result = anb__series_zero();
    for (uint32_t i = 0; i < program->count; i++) {
        const step *s = &program->steps[i];
        if (s->kind == ANB__TERM_CONSTANT) result = anb__series_constant(s->constant);
        else if (s->kind == ANB__TERM_FREQUENCY) result = anb__series_power(anb__cx(1, 0), 2);
        else if (!anb__operate_series(s->operation, &slots[s->a], &slots[s->b], &result)) return false;
        slots[s->target] = result;
    }
    for (int k = 0; !result.zero && k < result.terms; k++)
        if (!anb__cis_finite(result.c[k])) return false;
    *out = result;
    return true;
}
