/* Chains that are statements: nodes, and items between them. */
#include <string.h>

#include "network/expander.h"

enum { NOWHERE = UINT32_MAX };

/* ---- reading the steps ---------------------------------------------------------------- */

static anb__step step_of(anb__expander *x, const anb__tree *tree) {
    anb__step step = {.tree = tree};
    if (!anb__names_node(x, tree)) {
        step.item = anb__item_of(x, tree);
    } else if (!anb__node_of(x, tree, &step.node)) {
        anb__item poison = {.kind = ANB__ITEM_POISON, .span = tree->span};
        step.item = anb__new_item(x, &poison);
    }
    return step;
}

/* Nodes are named in the order of the text, before anything is placed. */
static uint32_t read_steps(anb__expander *x, const anb__tree *chain) {
    uint32_t first = x->step_count;
    for (const anb__tree *tree = chain->first; tree; tree = tree->next) {
        anb__step step = step_of(x, tree);
        x->steps = anb__room(&x->scratch, x->steps, x->step_count, &x->step_capacity, sizeof *x->steps);
        x->steps[x->step_count++] = step;
    }
    return first;
}

static bool is_node(const anb__expander *x, uint32_t i) { return !x->steps[i].item; }
static bool is_poison(const anb__expander *x, uint32_t i) {
    return x->steps[i].item && x->steps[i].item->kind == ANB__ITEM_POISON;
}
static bool stays(const anb__expander *x, uint32_t i) { return x->steps[i].item && x->steps[i].item->stays; }

/* ---- what is wrong with a chain ---------------------------------------------------------- */

static bool is_live_value(const anb__symbol *symbol, const void *user) {
    (void)user;
    return symbol->kind == ANB__SYMBOL_VALUE && symbol->live;
}

/* A name beside a node may be a value that is misspelt: one that is near a value's and stands nowhere else.
 */
static const char *misspelt(anb__expander *x, const anb__step *step) {
    if (step->tree->kind != ANB__TREE_NAME || x->nodes[step->node].written > 1) return NULL;
    const char *name = step->tree->name->text;
    return strlen(name) < 2 ? NULL : anb__near(x, x->region->space->id, name, is_live_value, NULL);
}

/* In a network: a name of the top level, which it does not see. */
static bool is_outer_value(anb__expander *x, const anb__step *step) {
    if (!x->region->definition || step->tree->kind != ANB__TREE_NAME) return false;
    const anb__symbol *symbol = anb__symbol_find(&x->symbols, 0, step->tree->name);
    if (!symbol || symbol->kind != ANB__SYMBOL_VALUE || x->nodes[step->node].written > 1) return false;
    if (!anb__first_told(x, step->tree->name)) return true;
    anb__diagnostic *d = anb__error(x->report, step->tree->span, "undefined-name",
                                    "`%s` is not defined in `%s`", step->tree->name->text,
                                    x->region->definition->name->text);
    anb__add_note(x->report, d, symbol->span, "it is defined here, outside");
    anb__add_hint(x->report, d, "a network sees its own parameters and names only: make `%s` a parameter",
                  step->tree->name->text);
    return true;
}

/* `a -- isolator -- b`: the parentheses are missing. */
static bool is_bare_part(anb__expander *x, const anb__step *step) {
    anb__part_kind kind;
    if (step->tree->kind != ANB__TREE_NAME || !anb__find_part(step->tree->name->text, &kind)) return false;
    anb__diagnostic *d = anb__error(x->report, step->tree->span, "bare-part",
                                    "`%s` without parentheses is a node, not the part",
                                    step->tree->name->text);
    anb__add_hint(x->report, d, "write `%s(...)`", step->tree->name->text);
    return true;
}

static void report_side_by_side(anb__expander *x, uint32_t a, uint32_t b) {
    const anb__step first = x->steps[a], second = x->steps[b];
    if (is_outer_value(x, &second) || is_bare_part(x, &second) || is_bare_part(x, &first)) return;
    if (first.tree->kind == ANB__TREE_NAME && anb__maybe_defined(x, first.tree->name)) return;
    if (second.tree->kind == ANB__TREE_NAME && anb__maybe_defined(x, second.tree->name)) return;
    const char *meant = misspelt(x, &second);
    anb__span span = anb__span_join(first.tree->span, second.tree->span);
    if (meant) {
        if (!anb__first_told(x, second.tree->name)) return;
        anb__diagnostic *d = anb__error(
            x->report, second.tree->span, "undefined-name",
            "`%s` is not defined, and as a node it has nothing between it and `%s`", second.tree->name->text,
            anb__quote(x, first.tree->span));
        anb__hint_nearest(x, d, second.tree->name->text, meant);
        return;
    }
    const char *left = anb__quote(x, first.tree->span), *right = anb__quote(x, second.tree->span);
    anb__diagnostic *d = anb__error(x->report, span, "two-nodes",
                                    "there is nothing between the nodes `%s` and `%s`", left, right);
    anb__add_hint(x->report, d, "`join %s, %s` makes them one node", left, right);
}

static void report_start(anb__expander *x, const anb__step *step) {
    anb__diagnostic *d = anb__error(x->report, step->tree->span, "chain-start",
                                    "a chain begins with a node, but `%s` is none",
                                    anb__quote(x, step->tree->span));
    anb__add_hint(x->report, d, "write `a -- %s -- b`", anb__quote(x, step->tree->span));
}

static void report_air(anb__expander *x, const anb__step *step) {
    anb__diagnostic *d = anb__error(x->report, step->tree->span, "mid-air",
                                    "the chain ends in mid-air after `%s`", anb__quote(x, step->tree->span));
    anb__add_hint(x->report, d, "end it with a node, e.g. `-- ground`, or write `shunt %s`",
                  anb__quote(x, step->tree->span));
}

static void report_lone(anb__expander *x, const anb__step *step) {
    const char *meant = misspelt(x, step);
    const char *quote = anb__quote(x, step->tree->span);
    if (step->tree->kind == ANB__TREE_NAME && anb__maybe_defined(x, step->tree->name)) return;
    anb__diagnostic *d = anb__error(x->report, step->tree->span, "lone-node",
                                    "`%s` alone says nothing: a chain goes on with `--` and a part", quote);
    anb__hint_nearest(x, d, quote, meant);
}

/* ---- placing -------------------------------------------------------------------------------- */

static void place_step(anb__expander *x, uint32_t i, uint32_t left, uint32_t right) {
    const anb__step step = x->steps[i]; /* the array may move */
    anb__place_item(x, step.item, step.tree->span, left, right, false);
}

typedef struct walk {
    uint32_t first, end; /* steps */
    uint32_t here;       /* the node where we are */
    uint32_t named;      /* the step that named it, or NOWHERE */
    bool told;           /* nodes side by side: reported since the last part */
} walk;

/* So that no port among them counts as untouched. */
static void touch_named(anb__expander *x, uint32_t a, uint32_t b) {
    anb__touch(x, x->steps[a].node);
    anb__touch(x, x->steps[b].node);
}

static void meet_node(anb__expander *x, walk *w, uint32_t i) {
    if (w->named != NOWHERE) {
        if (!w->told) report_side_by_side(x, w->named, i);
        touch_named(x, w->named, i);
        w->told = true;
    }
    w->here = x->steps[i].node;
    w->named = i;
}

/* A part, the shunts that hang at its end, and the node that names this end. Returns the step after. */
static uint32_t meet_part(anb__expander *x, walk *w, uint32_t i) {
    uint32_t next = i + 1;
    while (next < w->end && stays(x, next)) next++;
    bool named = next < w->end && is_node(x, next);
    uint32_t right = named ? x->steps[next].node : anb__new_node(x);
    if (i + 1 == w->end && !is_poison(x, i)) report_air(x, &x->steps[i]);
    place_step(x, i, w->here, right);
    for (uint32_t k = i + 1; k < next; k++) place_step(x, k, right, right);
    w->here = right;
    w->named = named ? next : NOWHERE;
    w->told = false;
    return named ? next + 1 : next;
}

static void start(anb__expander *x, walk *w) {
    w->here = is_node(x, w->first) ? x->steps[w->first].node : anb__new_node(x);
    w->named = is_node(x, w->first) ? w->first : NOWHERE;
    if (w->end == w->first + 1) {
        if (is_node(x, w->first)) report_lone(x, &x->steps[w->first]), anb__touch(x, w->here);
        else if (!is_poison(x, w->first)) report_start(x, &x->steps[w->first]);
    } else if (!is_node(x, w->first) && !is_poison(x, w->first)) {
        report_start(x, &x->steps[w->first]);
    }
}

void anb__place_chain(anb__expander *x, const anb__tree *chain) {
    uint32_t first = read_steps(x, chain);
    walk w = {.first = first, .end = x->step_count};
    if (w.end == first) return;
    start(x, &w);
    bool alone = w.end == first + 1;
    for (uint32_t i = w.named == NOWHERE ? first : first + 1; i < w.end && !x->halted && !alone;) {
        if (is_node(x, i)) meet_node(x, &w, i++);
        else if (stays(x, i)) place_step(x, i, w.here, w.here), i++;
        else i = meet_part(x, &w, i);
    }
    x->step_count = first;
}
