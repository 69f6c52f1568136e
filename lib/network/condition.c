/* Conditions of `if`. */
#include "network/expander.h"

static bool is_comparison(const anb__tree *tree) {
    return tree->kind >= ANB__TREE_LESS && tree->kind <= ANB__TREE_NOT_EQUAL;
}

static bool holds(anb__tree_kind kind, anb__complex a, anb__complex b) {
    switch (kind) {
    case ANB__TREE_LESS: return a.re < b.re;
    case ANB__TREE_LESS_EQUAL: return a.re <= b.re;
    case ANB__TREE_GREATER: return a.re > b.re;
    case ANB__TREE_GREATER_EQUAL: return a.re >= b.re;
    case ANB__TREE_EQUAL: return a.re == b.re && a.im == b.im;
    default: return a.re != b.re || a.im != b.im;
    }
}

static bool side(anb__expander *x, const anb__tree *tree, bool ordered, anb__quantity *q) {
    unsigned refused = ANB__NO_TOLERANCE | ANB__NO_TUNE | ANB__NO_FREQUENCY |
                       (ordered ? ANB__NO_COMPLEX : 0u);
    return anb__operand(x, tree, q) && anb__check_wanted(x, tree, "a condition", q->dimension, refused, q);
}

static anb__truth compare(anb__expander *x, const anb__tree *tree) {
    anb__quantity a, b;
    char left[96], right[96];
    bool ordered = tree->kind != ANB__TREE_EQUAL && tree->kind != ANB__TREE_NOT_EQUAL;
    bool first = side(x, tree->first, ordered, &a), second = side(x, tree->first->next, ordered, &b);
    if (!first || !second) return ANB__UNKNOWN;
    if (anb__same_dimension(a.dimension, b.dimension)) return holds(tree->kind, a.value, b.value);
    anb__error(x->report, tree->span, "unequal-dimensions",
               "`%s` is %s and `%s` is %s: they cannot be compared", anb__quote(x, tree->first->span),
               anb__dimension_phrase(a.dimension, left, sizeof left), anb__quote(x, tree->first->next->span),
               anb__dimension_phrase(b.dimension, right, sizeof right));
    return ANB__UNKNOWN;
}

static anb__truth negation(anb__truth truth) {
    return truth == ANB__UNKNOWN ? truth : truth == ANB__TRUE ? ANB__FALSE : ANB__TRUE;
}

/* `a and b and ...` leans to the left and is walked without recursion, up to what decides: `n > 0 and
 * 1/n > x` is fine for n = 0. */
static anb__truth connect(anb__expander *x, const anb__tree *tree) {
    uint32_t count = 0;
    anb__tree_kind kind = tree->kind;
    for (const anb__tree *t = tree; t->kind == kind; t = t->first) count++;
    const anb__tree **spine = anb__arena_take(&x->scratch, count * sizeof *spine);
    uint32_t at = count;
    for (const anb__tree *t = tree; t->kind == kind; t = t->first) spine[--at] = t;
    anb__truth decisive = kind == ANB__TREE_AND ? ANB__FALSE : ANB__TRUE;
    anb__truth truth = anb__condition(x, spine[0]->first);
    for (uint32_t i = 0; i < count && truth != decisive; i++) {
        anb__truth next = anb__condition(x, spine[i]->first->next);
        if (next == decisive || truth != ANB__UNKNOWN) truth = next;
    }
    return truth;
}

anb__truth anb__condition(anb__expander *x, const anb__tree *tree) {
    if (tree->kind == ANB__TREE_ERROR || x->halted || !anb__enter(x, tree->span)) return ANB__UNKNOWN;
    anb__truth truth = ANB__UNKNOWN;
    if (tree->kind == ANB__TREE_GROUP) truth = anb__condition(x, tree->first);
    else if (tree->kind == ANB__TREE_NOT) truth = negation(anb__condition(x, tree->first));
    else if (tree->kind == ANB__TREE_AND || tree->kind == ANB__TREE_OR) truth = connect(x, tree);
    else if (is_comparison(tree)) truth = compare(x, tree);
    else
        anb__error(x->report, tree->span, "condition", "`%s` is no condition: compare it, as in `k == 1`",
                   anb__quote(x, tree->span));
    anb__leave(x);
    return truth;
}
