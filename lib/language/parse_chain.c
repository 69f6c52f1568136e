/* Chains and their items. */
#include "language/parser.h"

static anb__tree *labelled(anb__parser *p) {
    anb__tree *value = anb__parse_range(p);
    bool is_label = value->kind == ANB__TREE_NAME || value->kind == ANB__TREE_INDEX;
    if (p->failed || p->now.kind != ANB__TOKEN_COLON || !is_label) return value;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_LABELLED, value->span.start);
    anb__advance(p);
    anb__add_child(tree, value);
    if (anb__is_word(p, "shunt")) {
        anb__diagnostic *d =
            anb__mistake(p, anb__span_at(p, value->span.start, p->now.end), "label-before-shunt",
                         "a label stands behind `shunt`, not before it");
        anb__hint(p, d, "`shunt %.*s: ...`", (int)(value->span.end - value->span.start),
                  p->text + value->span.start);
        return anb__end_tree(p, tree);
    }
    anb__add_child(tree, anb__parse_range(p));
    return anb__end_tree(p, tree);
}

static anb__tree *parallel(anb__parser *p) {
    anb__tree *first = labelled(p);
    if (p->failed || p->now.kind != ANB__TOKEN_BARS) return first;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_PARALLEL, first->span.start);
    anb__add_child(tree, first);
    while (!p->failed && p->now.kind == ANB__TOKEN_BARS) {
        anb__advance(p);
        if (anb__is_word(p, "shunt")) {
            anb__mistake(p, anb__span_of(p, p->now), "shunt-in-parallel", "`shunt` may not stand under `||`");
            break;
        }
        anb__add_child(tree, labelled(p));
    }
    return anb__end_tree(p, tree);
}

anb__tree *anb__parse_item(anb__parser *p) {
    if (!anb__is_word(p, "shunt")) return parallel(p);
    anb__tree *tree = anb__new_tree(p, ANB__TREE_SHUNT, p->now.start);
    anb__advance(p);
    anb__add_child(tree, parallel(p));
    return anb__end_tree(p, tree);
}

anb__tree *anb__parse_chain_from(anb__parser *p, anb__tree *first) {
    if (p->failed || p->now.kind != ANB__TOKEN_DASHES) return first;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_CHAIN, first->span.start);
    anb__add_child(tree, first);
    while (!p->failed && p->now.kind == ANB__TOKEN_DASHES) {
        anb__advance(p);
        anb__add_child(tree, anb__parse_item(p));
    }
    return anb__end_tree(p, tree);
}

anb__tree *anb__parse_chain(anb__parser *p) { return anb__parse_chain_from(p, anb__parse_item(p)); }
