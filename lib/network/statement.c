/* Statements, one after the other. */
#include <stdio.h>

#include "network/expander.h"

typedef void statement_function(anb__expander *x, const anb__tree *tree);

/* ---- definitions --------------------------------------------------------------------- */

const anb__tree *anb__replacement_of(anb__expander *x, const anb__name *name) {
    const anb__tree *value = NULL;
    if (x->region != &x->top || x->loop_depth || !x->replacements) return NULL;
    for (uint32_t i = 0; i < x->replacements->set_count; i++) {
        if (x->replacements->set[i].name != name) continue;
        x->replaced[i] = true;
        value = x->replacements->set[i].value; /* the last one counts */
    }
    return value;
}

/* A replacement has the dimension of what it replaces: a unit that was left out shows here, and not
 * at every use. */
static anb__value replaced(anb__expander *x, const anb__tree *define, const anb__tree *with,
                           const anb__value *original) {
    anb__value value = anb__evaluate(x, with);
    if (value.kind != ANB__VALUE_QUANTITY || original->kind != ANB__VALUE_QUANTITY ||
        anb__same_dimension(value.quantity.dimension, original->quantity.dimension))
        return value;
    char what[96];
    snprintf(what, sizeof what, "`%.80s`", define->name->text);
    anb__argument_form form = {original->quantity.dimension, ANB__AT_NEVER};
    anb__report_dimension(x, with, &value.quantity, what, &form, 1);
    return anb__poison();
}

static void define(anb__expander *x, const anb__tree *tree) {
    anb__value value = anb__evaluate(x, tree->first);
    const anb__tree *with = anb__replacement_of(x, tree->name);
    if (with) value = replaced(x, tree, with, &value);
    anb__define(x, tree->name, tree->name_span, &value);
}

static void define_kind(anb__expander *x, const anb__tree *tree) {
    anb__define_shape(x, tree, ANB__SYMBOL_OWN_PART);
}

/* Those that stand in no `if` are defined before anything else, see expand.c. */
static void define_network(anb__expander *x, const anb__tree *tree) {
    if (!anb__is_defined(x, tree)) anb__define_shape(x, tree, ANB__SYMBOL_NETWORK);
}

/* ---- placing ----------------------------------------------------------------------------- */

static void path(anb__expander *x, const anb__tree *tree) {
    if (tree->first && tree->first->kind == ANB__TREE_CHAIN) anb__place_chain(x, tree->first);
    else x->incomplete = true;
}

static void join(anb__expander *x, const anb__tree *tree) {
    uint32_t first = 0, node;
    bool known = false;
    for (const anb__tree *t = tree->first; t; t = t->next) {
        if (!anb__node_of(x, t, &node)) continue;
        if (known) anb__join(x, first, node);
        first = known ? first : node;
        known = true;
    }
}

/* ---- loops and conditions ------------------------------------------------------------------ */

static void forget_locals(anb__expander *x, uint32_t count) {
    while (x->local_count > count) x->locals[--x->local_count]->live = false;
}

#define LARGEST_WHOLE 9007199254740992.0 /* 2^53: beyond it, counting by one has no effect */

static bool loop_range(anb__expander *x, const anb__tree *tree, double *low, double *high) {
    anb__quantity bounds[2];
    const anb__tree *range = tree->first;
    if (!anb__wanted_range(x, range, "the range of a loop", anb__plain, ANB__FIXED, bounds)) return false;
    *low = bounds[0].value.re;
    *high = bounds[1].value.re;
    if (*low != rint(*low) || *high != rint(*high) || fabs(*low) > LARGEST_WHOLE) {
        anb__error(x->report, range->span, "not-whole", "a loop counts in whole numbers");
        return false;
    }
    if (*high - *low < ANB__LIMIT_LOOP) return true;
    anb__report_limit(x, range->span, "rounds of one loop", "1 000 000");
    return false;
}

/* A mistake is told once: the rounds after it are left out. */
static void loop(anb__expander *x, const anb__tree *tree) {
    double low, high;
    const anb__tree *body = tree->first->next;
    const anb__assumed *assumed = x->region->assumed;
    bool known = loop_range(x, tree, &low, &high);
    if (!known) low = high = 0, x->incomplete = true;
    x->loop_depth++;
    for (double k = low; k <= high && !x->halted; k++) {
        unsigned errors = x->report->errors;
        uint32_t locals = x->local_count;
        anb__value value = known ? anb__plain_value(k) : anb__poison();
        if (!anb__count_round(x, tree->span)) break;
        x->region->assumed = assumed;
        anb__define(x, tree->name, tree->name_span, &value);
        anb__statements(x, body);
        forget_locals(x, locals);
        if (errors == x->report->errors) continue;
        x->incomplete |= k < high;
        break;
    }
    x->loop_depth--;
}

/* The names that arms of an undecided `if` would define, so that their uses stay silent. */
static void poison_names(anb__expander *x, const anb__tree *parent) {
    anb__value poison = anb__poison();
    for (const anb__tree *s = parent->first; s; s = s->next) {
        bool defines = s->kind == ANB__TREE_DEFINE || s->kind == ANB__TREE_TUNE || s->kind == ANB__TREE_CASES;
        if (defines && !anb__find_value(x, s->name)) anb__define(x, s->name, s->name_span, &poison);
        if (s->kind == ANB__TREE_BLOCK || s->kind == ANB__TREE_IF) poison_names(x, s);
    }
}

static void decide(anb__expander *x, const anb__tree *tree) {
    for (;;) {
        const anb__tree *then = tree->first->next, *otherwise = then ? then->next : NULL;
        anb__truth truth = anb__condition(x, tree->first);
        if (!then) return;
        if (truth == ANB__UNKNOWN) {
            x->incomplete = true;
            poison_names(x, tree);
            return;
        }
        const anb__tree *chosen = truth == ANB__TRUE ? then : otherwise;
        if (!chosen) return;
        if (chosen->kind != ANB__TREE_IF) {
            anb__statements(x, chosen);
            return;
        }
        tree = chosen;
    }
}

/* ---- what concerns the whole file -------------------------------------------------------------- */

static void title(anb__expander *x, const anb__tree *tree) {
    if (!tree->first || tree->first->kind != ANB__TREE_STRING) return;
    if (tree->span.source != x->root->span.source) return; /* an included file's title is its own */
    if (x->has_title) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "defined-twice", "there are two titles");
        anb__add_note(x->report, d, x->title_span, "this is the first");
        return;
    }
    const char *text = tree->first->text;
    size_t length = 0;
    while (text[length]) length++;
    x->network->title = anb__arena_text(&x->network->arena, text, length);
    x->title_span = tree->span;
    x->has_title = true;
}

static void include(anb__expander *x, const anb__tree *tree) {
    const anb__tree *file = tree->first ? tree->first->next : NULL;
    if (!file) {
        x->incomplete = true;
        return;
    }
    for (uint32_t i = 0; i < x->visited_count; i++)
        if (x->visited[i] == file) return;
    x->visited = anb__room(&x->scratch, x->visited, x->visited_count, &x->visited_capacity,
                           sizeof *x->visited);
    x->visited[x->visited_count++] = file;
    anb__statements(x, file);
}

static void sweep(anb__expander *x, const anb__tree *tree) {
    anb__sweep_statement(x, tree, !x->replacements || !x->replacements->sweep);
}

static void lost(anb__expander *x, const anb__tree *tree) {
    (void)tree;
    x->incomplete = true;
}

/* ---- which statement may stand where ------------------------------------------------------------- */

enum { IN_NETWORK = 1, IN_LOOP = 2 };

static const struct statement {
    statement_function *run;
    unsigned where;
    const char *name;
} table[ANB__TREE_KIND_COUNT] = {
    [ANB__TREE_ERROR] = {lost, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_DEFINE] = {define, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_PATH] = {path, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_PLACE] = {anb__place_on, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_JOIN] = {join, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_FOR] = {loop, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_IF] = {decide, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_PORT] = {anb__port_statement, IN_NETWORK | IN_LOOP, NULL},
    [ANB__TREE_ASSUME] = {anb__assume, IN_NETWORK, "`assume`"},
    [ANB__TREE_TITLE] = {title, 0, "`title`"},
    [ANB__TREE_INCLUDE] = {include, 0, "`include`"},
    [ANB__TREE_KIND] = {define_kind, 0, "an own kind of part"},
    [ANB__TREE_TUNE] = {anb__tune_statement, 0, "`tune`"},
    [ANB__TREE_CASES] = {anb__cases_statement, 0, "`cases`"},
    [ANB__TREE_NETWORK] = {define_network, 0, "`network`"},
    [ANB__TREE_SWEEP] = {sweep, 0, "`sweep`"},
    [ANB__TREE_REQUIRE] = {anb__require_statement, 0, "`require`"},
    [ANB__TREE_DRIVE] = {anb__drive_statement, 0, "`drive`"},
};

/* From the first byte of a statement to the end of its first line. */
static anb__span head_of(anb__expander *x, anb__span span) {
    const anb__source *source = &x->report->sources.list[span.source];
    uint32_t end = span.start;
    while (end < span.end && source->text[end] != '\n' && source->text[end] != '{') end++;
    while (end > span.start + 1 && source->text[end - 1] == ' ') end--;
    span.end = end;
    return span;
}

static bool may_stand_here(anb__expander *x, const anb__tree *tree, const struct statement *s) {
    bool shared = tree->kind == ANB__TREE_DEFINE && tree->flags & ANB__TREE_SHARED;
    bool inside = x->region->definition != NULL;
    const char *name = shared ? "`shared`" : s->name, *where = NULL;
    unsigned allowed = shared ? 0 : s->where;
    if (inside && !(allowed & IN_NETWORK)) where = "a network";
    else if (x->loop_depth && !(allowed & IN_LOOP)) where = "a loop";
    if (!where) return true;
    if (x->lost) return false; /* perhaps it is a brace that is missing */
    anb__error(x->report, head_of(x, tree->span), "wrong-place", "%s stands at the top level only, not in %s",
               name, where);
    return false;
}

void anb__statements(anb__expander *x, const anb__tree *parent) {
    if (!anb__enter(x, parent->span)) return;
    for (const anb__tree *tree = parent->first; tree && !x->halted; tree = tree->next) {
        const struct statement *s = &table[tree->kind];
        if (s->run && may_stand_here(x, tree, s)) s->run(x, tree);
    }
    anb__leave(x);
}
