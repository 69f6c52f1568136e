/* Placements with `on`: `[label:] part on (n1, n2, ...)`. */
#include <stdio.h>
#include <string.h>

#include "network/expander.h"

typedef struct placement {
    const anb__tree *tree;
    const anb__tree *terminals_tree;
    anb__terminal *terminals;
    uint32_t count;
    bool right;
} placement;

static void read_terminals(anb__expander *x, placement *p) {
    uint32_t count = 0;
    for (const anb__tree *t = p->terminals_tree->first; t; t = t->next) count++;
    p->terminals = anb__arena_take(&x->scratch, count * sizeof *p->terminals);
    for (const anb__tree *t = p->terminals_tree->first; t; t = t->next) {
        bool keyed = t->kind == ANB__TREE_ARGUMENT;
        anb__terminal *terminal = &p->terminals[p->count];
        p->count++;
        terminal->span = t->span;
        terminal->name = keyed ? t->name : NULL;
        if (!anb__node_of(x, keyed ? t->first : t, &terminal->node)) {
            terminal->node = anb__new_node(x);
            p->right = false;
        }
    }
}

/* "a1, a2, b1, b2" */
static const char *list_terminals(anb__expander *x, const anb__layout *layout) {
    char *text = anb__arena_take(&x->scratch, 128);
    size_t at = 0;
    for (int i = 0; i < layout->terminal_count; i++)
        at += (size_t)snprintf(text + at, 128 - at, "%s%s", i ? ", " : "", layout->terminals[i]);
    return text;
}

static int terminal_of_name(const anb__layout *layout, const char *name) {
    int i = 0;
    while (i < layout->terminal_count && strcmp(layout->terminals[i], name)) i++;
    return i;
}

static bool order_terminals(anb__expander *x, const placement *p, const char *part, const anb__layout *layout,
                            uint32_t nodes[ANB__MOST_TERMINALS]) {
    bool taken[ANB__MOST_TERMINALS] = {false};
    for (uint32_t i = 0; i < p->count; i++) {
        const anb__terminal *t = &p->terminals[i];
        int at = t->name ? terminal_of_name(layout, t->name->text) : (int)i;
        if (at == layout->terminal_count) {
            anb__diagnostic *d = anb__error(x->report, t->span, "unknown-terminal",
                                            "`%s` has no terminal `%s`", part, t->name->text);
            anb__add_hint(x->report, d, "its terminals are %s", list_terminals(x, layout));
            return false;
        }
        if (taken[at]) {
            anb__error(x->report, t->span, "given-twice", "the terminal `%s` gets two nodes",
                       layout->terminals[at]);
            return false;
        }
        taken[at] = true;
        nodes[at] = t->node;
    }
    return true;
}

static void report_count(anb__expander *x, const placement *p, const char *part, const anb__layout *layout) {
    anb__diagnostic *d = anb__error(x->report, p->terminals_tree->span, "node-count",
                                    "`%s` has %d terminals (%s), but lies on %lu node%s", part,
                                    layout->terminal_count, list_terminals(x, layout),
                                    (unsigned long)p->count, p->count == 1 ? "" : "s");
    if (p->count == 2 && layout->terminal_count == 4 && !strcmp(part, "transformer"))
        anb__add_hint(x->report, d, "in a chain, `a -- transformer(n) -- b`, both returns are ground");
    else if (p->count == 2 && layout->terminal_count == 4 && !strcmp(part, "line"))
        anb__add_hint(x->report, d, "in a chain, `a -- line(...) -- b`, both returns are ground");
}

static void put_part(anb__expander *x, const placement *p, const anb__item *item) {
    const anb__part_entry *entry = &anb__parts[item->part];
    uint32_t nodes[ANB__MOST_TERMINALS];
    if (p->count != entry->on->terminal_count) report_count(x, p, entry->name, entry->on);
    else if (p->right && order_terminals(x, p, entry->name, entry->on, nodes)) {
        anb__add_part(x, item, p->tree->span, entry->on, nodes);
        return;
    }
    anb__touch_all(x, p->terminals, p->count);
}

/* Anything with a left and a right end. */
static void put_between(anb__expander *x, const placement *p, const anb__item *item) {
    static const anb__layout ends = {2, 0, {"left", "right"}, {{0}}};
    uint32_t nodes[ANB__MOST_TERMINALS];
    if (item->stays)
        anb__error(x->report, p->tree->span, "shunt-on",
                   "a `shunt` hangs on one node of a chain: it takes no `on`");
    else if (p->count != 2) report_count(x, p, anb__quote(x, item->span), &ends);
    else if (p->right && order_terminals(x, p, anb__quote(x, item->span), &ends, nodes)) {
        anb__place_item(x, item, p->tree->span, nodes[0], nodes[1], false);
        return;
    }
    anb__touch_all(x, p->terminals, p->count);
}

static void put(anb__expander *x, const placement *p, const anb__item *item) {
    anb__label_mark mark;
    switch (item->kind) {
    case ANB__ITEM_POISON: anb__touch_all(x, p->terminals, p->count); break;
    case ANB__ITEM_PART: put_part(x, p, item); break;
    case ANB__ITEM_NETWORK:
        if (p->right) anb__place_network(x, item, p->tree->span, p->terminals, p->count, false);
        else anb__touch_all(x, p->terminals, p->count);
        break;
    case ANB__ITEM_DATA:
        anb__refuse_data(x, item, p->terminals_tree->span, p->count);
        anb__touch_all(x, p->terminals, p->count);
        break;
    case ANB__ITEM_LABELLED:
        anb__open_label(x, item, item->children[0], &mark);
        put(x, p, item->children[0]);
        anb__close_label(x, &mark);
        break;
    default: put_between(x, p, item); break;
    }
}

void anb__place_on(anb__expander *x, const anb__tree *tree) {
    const anb__tree *label = tree->flags & ANB__TREE_HAS_LABEL ? tree->first : NULL;
    const anb__tree *part = label ? label->next : tree->first;
    placement p = {.tree = tree, .terminals_tree = part->next, .right = true};
    anb__item name = {.kind = ANB__ITEM_LABELLED, .count = 1};
    const anb__item *item = anb__item_of(x, part);
    read_terminals(x, &p);
    if (!anb__count_round(x, tree->span)) return;
    if (label && label->kind != ANB__TREE_ERROR &&
        anb__indexed_name(x, label, &name.label_base, &name.label)) {
        name.span = label->span;
        name.children = &item;
        put(x, &p, &name);
    } else {
        put(x, &p, item);
    }
}
