/* Items onto nodes. */
#include "network/expander.h"

typedef struct spot {
    anb__span span;
    uint32_t left, right;
    bool to_ground;
    anb__space *own; /* the space of the label that stands directly before the item, or NULL */
} spot;

typedef void place_function(anb__expander *x, const anb__item *item, const spot *at);

/* ---- one part -------------------------------------------------------------------------- */

void anb__add_part(anb__expander *x, const anb__item *item, anb__span span, const anb__layout *layout,
                   const uint32_t *nodes) {
    if (x->part_count == ANB__LIMIT_PARTS) {
        anb__report_limit(x, span, "parts", "1 000 000");
        return;
    }
    x->parts = anb__room(&x->scratch, x->parts, x->part_count, &x->part_capacity, sizeof *x->parts);
    anb__placed *part = &x->parts[x->part_count++];
    *part = (anb__placed){.kind = item->part, .negated = x->negated, .span = span};
    part->arguments = item->arguments;
    part->argument_count = item->argument_count;
    part->first_branch = x->branch_count;
    part->branch_count = layout->branch_count;
    for (int i = 0; i < layout->branch_count; i++) {
        uint8_t plus = layout->branches[i][0], minus = layout->branches[i][1];
        x->branches = anb__room(&x->scratch, x->branches, x->branch_count, &x->branch_capacity,
                                sizeof *x->branches);
        x->branches[x->branch_count++] = (anb__branch){nodes[plus],
                                                       minus == ANB__TO_GROUND ? 0 : nodes[minus]};
    }
    for (int i = 0; i < layout->terminal_count; i++) anb__touch(x, nodes[i]);
}

static void touch_both(anb__expander *x, const spot *at) {
    anb__touch(x, at->left);
    anb__touch(x, at->right);
}

static void place_poison(anb__expander *x, const anb__item *item, const spot *at) {
    (void)item;
    touch_both(x, at);
}

static void place_part(anb__expander *x, const anb__item *item, const spot *at) {
    const anb__part_entry *entry = &anb__parts[item->part];
    uint32_t nodes[] = {at->left, at->right};
    if (entry->chain) {
        anb__add_part(x, item, at->span, entry->chain, nodes);
        return;
    }
    const anb__layout *on = entry->on;
    anb__diagnostic *d = anb__error(x->report, at->span, "needs-on",
                                    "`%s` has %d terminals: it cannot stand in a chain", entry->name,
                                    on->terminal_count);
    anb__add_hint(x->report, d, "write `%s(...) on (%s, %s, %s%s%s)`", entry->name, on->terminals[0],
                  on->terminals[1], on->terminals[2], on->terminal_count > 3 ? ", " : "",
                  on->terminal_count > 3 ? on->terminals[3] : "");
    touch_both(x, at);
}

void anb__refuse_data(anb__expander *x, const anb__item *item, anb__span span, uint32_t count) {
    if (item->count && count != item->count && count != item->count + 1)
        anb__error(x->report, span, "node-count", "the file has %lu port%s, so it cannot lie on %lu nodes",
                   (unsigned long)item->count, item->count == 1 ? "" : "s", (unsigned long)count);
    else
        anb__error(x->report, item->span, "not-yet",
                   "`touchstone(...)` cannot be read yet: data of files come in a later version");
}

static void place_data(anb__expander *x, const anb__item *item, const spot *at) {
    anb__refuse_data(x, item, at->span, 2);
    touch_both(x, at);
}

static void place_network(anb__expander *x, const anb__item *item, const spot *at) {
    anb__terminal terminals[2] = {{NULL, at->left, at->span}, {NULL, at->right, at->span}};
    x->own = at->own;
    anb__place_network(x, item, at->span, terminals, 2, at->to_ground);
}

/* ---- composites -------------------------------------------------------------------------- */

static void place_child(anb__expander *x, const anb__item *child, uint32_t left, uint32_t right,
                        bool to_ground) {
    anb__place_item(x, child, child->span, left, right, to_ground);
}

static void place_chain(anb__expander *x, const anb__item *item, const spot *at) {
    uint32_t last = item->count, here = at->left;
    while (last && item->children[last - 1]->stays) last--;
    for (uint32_t i = 0; i < item->count && !x->halted; i++) {
        const anb__item *child = item->children[i];
        bool ends = i + 1 == last;
        uint32_t next = child->stays ? here : ends ? at->right : anb__new_node(x);
        place_child(x, child, here, next, at->to_ground && ends);
        here = next;
    }
}

static void place_parallel(anb__expander *x, const anb__item *item, const spot *at) {
    for (uint32_t i = 0; i < item->count && !x->halted; i++)
        place_child(x, item->children[i], at->left, at->right, at->to_ground);
}

static void place_shunt(anb__expander *x, const anb__item *item, const spot *at) {
    place_child(x, item->children[0], at->left, 0, true);
}

static void place_reversed(anb__expander *x, const anb__item *item, const spot *at) {
    x->own = at->own;
    anb__place_item(x, item->children[0], at->span, at->right, at->left, false);
}

/* The chain matrix is inverted by changing the ports and the sign of every current. */
static void place_inverse(anb__expander *x, const anb__item *item, const spot *at) {
    x->negated = !x->negated;
    place_reversed(x, item, at);
    x->negated = !x->negated;
}

static void place_repeat(anb__expander *x, const anb__item *item, const spot *at) {
    const anb__item *child = item->children[0];
    uint32_t here = at->left;
    for (uint32_t i = 0; i < item->count && !x->halted; i++) {
        bool ends = i + 1 == item->count;
        uint32_t next = child->stays ? here : ends ? at->right : anb__new_node(x);
        anb__place_item(x, child, at->span, here, next, at->to_ground && ends);
        here = next;
    }
}

static void place_labelled(anb__expander *x, const anb__item *item, const spot *at) {
    anb__label_mark mark;
    anb__open_label(x, item, item->children[0], &mark);
    anb__place_item(x, item->children[0], at->span, at->left, at->right, at->to_ground);
    anb__close_label(x, &mark);
}

static place_function *const placers[] = {
    [ANB__ITEM_POISON] = place_poison,     [ANB__ITEM_OPEN] = place_poison,
    [ANB__ITEM_PART] = place_part,         [ANB__ITEM_CHAIN] = place_chain,
    [ANB__ITEM_PARALLEL] = place_parallel, [ANB__ITEM_SHUNT] = place_shunt,
    [ANB__ITEM_LABELLED] = place_labelled, [ANB__ITEM_REVERSED] = place_reversed,
    [ANB__ITEM_INVERSE] = place_inverse,   [ANB__ITEM_REPEAT] = place_repeat,
    [ANB__ITEM_NETWORK] = place_network,   [ANB__ITEM_DATA] = place_data,
};

/* Networks count their level themselves. */
static bool is_level(const anb__item *item) {
    return item->kind > ANB__ITEM_PART && item->kind != ANB__ITEM_NETWORK;
}

void anb__place_item(anb__expander *x, const anb__item *item, anb__span span, uint32_t left, uint32_t right,
                     bool to_ground) {
    spot at = {span, left, right, to_ground, x->own};
    x->own = NULL;
    if (x->halted || !anb__count_round(x, span) || !anb__enter(x, span)) return;
    if (!is_level(item)) {
        placers[item->kind](x, item, &at);
    } else if (anb__nest(x, span)) {
        placers[item->kind](x, item, &at);
        x->nesting--;
    }
    anb__leave(x);
}
