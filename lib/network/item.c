/* What stands in a chain: from trees and values to items. */
#include "network/expander.h"

const anb__item *anb__new_item(anb__expander *x, const anb__item *item) {
    anb__item *kept = anb__arena_take(&x->scratch, sizeof *kept);
    *kept = *item;
    return kept;
}

anb__value anb__item_value(anb__expander *x, const anb__item *item) {
    return (anb__value){.kind = ANB__VALUE_ITEM, .item = anb__new_item(x, item)};
}

static const anb__item *poisoned(anb__expander *x, const anb__tree *tree) {
    anb__item item = {.kind = ANB__ITEM_POISON, .span = tree->span};
    return anb__new_item(x, &item);
}

/* ---- a value becomes a part by its dimension ------------------------------------------- */

static bool part_of_dimension(const anb__quantity *q, anb__part_kind *kind) {
    bool simple = anb__is_real(q) && !q->term;
    if (anb__same_dimension(q->dimension, anb__ohm))
        *kind = simple ? ANB__PART_RESISTOR : ANB__PART_IMPEDANCE;
    else if (anb__same_dimension(q->dimension, anb__siemens)) *kind = ANB__PART_ADMITTANCE;
    else if (anb__same_dimension(q->dimension, anb__henry)) *kind = ANB__PART_INDUCTOR;
    else if (anb__same_dimension(q->dimension, anb__farad)) *kind = ANB__PART_CAPACITOR;
    else return false;
    return true;
}

static void report_no_part(anb__expander *x, const anb__tree *tree, const anb__quantity *q) {
    char phrase[96];
    const char *quote = anb__quote(x, tree->span);
    if (anb__same_dimension(q->dimension, anb__plain)) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "missing-unit",
                                        "`%s` has no unit, so it is no part", quote);
        if (tree->kind == ANB__TREE_NUMBER)
            anb__add_hint(x->report, d, "write `%s ohm`, or S, H or F with their prefixes", quote);
        return;
    }
    anb__error(x->report, tree->span, "no-part", "`%s` is %s, which is no part: a chain takes ohm, S, H or F",
               quote, anb__dimension_phrase(q->dimension, phrase, sizeof phrase));
}

static const anb__item *bare_part(anb__expander *x, const anb__tree *tree, const anb__value *value) {
    anb__part_kind kind;
    anb__argument arguments[ANB__ARG_COUNT];
    if (!part_of_dimension(&value->quantity, &kind)) {
        report_no_part(x, tree, &value->quantity);
        return poisoned(x, tree);
    }
    if (!anb__check_argument(x, tree, kind, &anb__parts[kind].arguments[0], value, &arguments[0]))
        return poisoned(x, tree);
    return anb__part_item(x, tree->span, kind, arguments, 1).item;
}

const anb__item *anb__item_of_value(anb__expander *x, const anb__tree *tree, const anb__value *value) {
    if (value->kind == ANB__VALUE_ITEM) return value->item;
    if (value->kind == ANB__VALUE_QUANTITY) return bare_part(x, tree, value);
    if (value->kind != ANB__VALUE_POISON) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "no-part", "`%s` is %s, which is no part",
                                        anb__quote(x, tree->span), anb__value_phrase(x, value));
        if (value->kind == ANB__VALUE_LIST && tree->kind == ANB__TREE_NAME)
            anb__add_hint(x->report, d, "take one of its elements: `%s[1]`", anb__quote(x, tree->span));
    }
    return poisoned(x, tree);
}

/* ---- composites ---------------------------------------------------------------------------- */

static bool is_live_value(const anb__symbol *symbol, const void *user) {
    (void)user;
    return symbol->kind == ANB__SYMBOL_VALUE && symbol->live;
}

static void report_node(anb__expander *x, const anb__tree *tree) {
    static const char place[] =
        "a chain in parentheses, or one that is a value, holds parts and `shunt` items only";
    uint32_t space = x->region->space->id;
    const anb__symbol *symbol = tree->kind == ANB__TREE_NAME
                                    ? anb__symbol_find(&x->symbols, space, tree->name)
                                    : NULL;
    bool unknown = tree->kind == ANB__TREE_NAME && (!symbol || symbol->kind != ANB__SYMBOL_NODE);
    if (unknown && (x->frame || (symbol && symbol->kind != ANB__SYMBOL_NONE))) {
        anb__report_undefined(x, tree);
    } else if (unknown && anb__first_told(x, tree->name)) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "undefined-name", "`%s` is not defined: %s",
                                        tree->name->text, place);
        anb__hint_nearest(x, d, tree->name->text, anb__near(x, space, tree->name->text, is_live_value, NULL));
    } else if (!unknown) {
        anb__error(x->report, tree->span, "node-inside", "`%s` is a node: %s", anb__quote(x, tree->span),
                   place);
    }
}

const anb__item *anb__item_of(anb__expander *x, const anb__tree *tree) {
    if (anb__names_node(x, tree)) {
        report_node(x, tree);
        return poisoned(x, tree);
    }
    anb__value value = anb__evaluate(x, tree);
    return anb__item_of_value(x, tree, &value);
}

static const anb__item *several(anb__expander *x, const anb__tree *tree, anb__item_kind kind) {
    uint32_t count = 0;
    for (const anb__tree *child = tree->first; child; child = child->next) count++;
    const anb__item **children = anb__arena_take(&x->scratch, count * sizeof *children);
    anb__item item = {.kind = (uint8_t)kind, .span = tree->span, .count = count, .children = children};
    item.stays = kind == ANB__ITEM_CHAIN && count;
    uint32_t i = 0;
    for (const anb__tree *child = tree->first; child; child = child->next) {
        children[i] = anb__item_of(x, child);
        if (kind == ANB__ITEM_PARALLEL && children[i]->stays)
            anb__error(x->report, child->span, "shunt-in-parallel",
                       "a `shunt` goes to ground: it cannot stand beside `||`");
        item.stays &= children[i]->stays;
        i++;
    }
    return anb__new_item(x, &item);
}

static const anb__item *single(anb__expander *x, anb__item *item, const anb__item *child) {
    const anb__item **children = anb__arena_take(&x->scratch, sizeof *children);
    *children = child;
    item->children = children;
    return anb__new_item(x, item);
}

static const anb__item *shunt(anb__expander *x, const anb__tree *tree) {
    const anb__item *child = anb__item_of(x, tree->first);
    anb__item item = {.kind = ANB__ITEM_SHUNT, .stays = true, .span = tree->span, .count = 1};
    if (child->stays) {
        anb__error(x->report, tree->first->span, "shunt-in-shunt",
                   "a `shunt` inside a `shunt`: one is enough");
        return poisoned(x, tree);
    }
    return single(x, &item, child);
}

static const anb__item *labelled(anb__expander *x, const anb__tree *tree) {
    const anb__tree *label = tree->first;
    anb__item item = {.kind = ANB__ITEM_LABELLED, .span = tree->span, .count = 1};
    if (label->next->kind == ANB__TREE_SHUNT) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "label-of-shunt",
                                        "a label names a part, not a `shunt`");
        const anb__tree *inner = label->next->first;
        anb__add_hint(x->report, d, "write `shunt %s: %s`", anb__quote(x, label->span),
                      anb__quote(x, inner->span));
        anb__item_of(x, inner);
        return poisoned(x, tree);
    }
    const anb__item *child = anb__item_of(x, label->next);
    if (label->kind == ANB__TREE_ERROR || !anb__indexed_name(x, label, &item.label_base, &item.label))
        return child;
    item.stays = child->stays;
    return single(x, &item, child);
}

/* 0 ohm; `short` has no assumed options. */
static const anb__item *wire(anb__expander *x, const anb__tree *tree) {
    anb__argument zero = {0};
    zero.name = ANB__ARG_R;
    zero.dimension = anb__ohm;
    anb__item item = {
        .kind = ANB__ITEM_PART, .part = ANB__PART_RESISTOR, .span = tree->span, .argument_count = 1};
    item.arguments = anb__share_arguments(x, &zero, 1);
    return anb__new_item(x, &item);
}

static const anb__item *nothing(anb__expander *x, const anb__tree *tree) {
    anb__item item = {.kind = ANB__ITEM_OPEN, .span = tree->span};
    return anb__new_item(x, &item);
}

anb__value anb__composite(anb__expander *x, const anb__tree *tree) {
    anb__value value = {.kind = ANB__VALUE_ITEM};
    switch (tree->kind) {
    case ANB__TREE_CHAIN: value.item = several(x, tree, ANB__ITEM_CHAIN); break;
    case ANB__TREE_PARALLEL: value.item = several(x, tree, ANB__ITEM_PARALLEL); break;
    case ANB__TREE_SHUNT: value.item = shunt(x, tree); break;
    case ANB__TREE_LABELLED: value.item = labelled(x, tree); break;
    case ANB__TREE_SHORT: value.item = wire(x, tree); break;
    default: value.item = nothing(x, tree); break;
    }
    if (value.item->kind == ANB__ITEM_POISON) return anb__poison();
    return value;
}

/* ---- reversed, inverse, repeat --------------------------------------------------------------- */

static anb__value repeat(anb__expander *x, const anb__tree *tree) {
    double copies;
    anb__item item = {.kind = ANB__ITEM_REPEAT, .span = tree->span};
    bool known = anb__wanted_whole(x, tree->first, "the number of copies", 1, &copies);
    const anb__item *child = anb__item_of(x, tree->first->next);
    if (!known || child->kind == ANB__ITEM_POISON) return anb__poison();
    item.count = (uint32_t)copies;
    item.stays = child->stays;
    return (anb__value){.kind = ANB__VALUE_ITEM, .item = single(x, &item, child)};
}

anb__value anb__composing_call(anb__expander *x, const anb__tree *tree) {
    bool repeats = tree->name->text[0] == 'r' && tree->name->text[2] == 'p';
    bool inverts = tree->name->text[0] == 'i';
    unsigned given = 0, wanted = repeats ? 2 : 1;
    for (const anb__tree *a = tree->first; a; a = a->next) {
        given++;
        if (a->kind == ANB__TREE_ARGUMENT) wanted = 0;
    }
    if (given != wanted) {
        anb__error(x->report, tree->span, "argument-count", "`%s` is written `%s`", tree->name->text,
                   repeats   ? "repeat(n, part)"
                   : inverts ? "inverse(part)"
                             : "reversed(part)");
        return anb__poison();
    }
    if (repeats) return repeat(x, tree);
    const anb__item *child = anb__item_of(x, tree->first);
    if (child->kind == ANB__ITEM_POISON) return anb__poison();
    anb__item item = {
        .kind = inverts ? ANB__ITEM_INVERSE : ANB__ITEM_REVERSED, .span = tree->span, .count = 1};
    item.stays = child->stays;
    return (anb__value){.kind = ANB__VALUE_ITEM, .item = single(x, &item, child)};
}
