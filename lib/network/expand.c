/* The way from the tree to the network. */
#include "network/expand.h"

#include <string.h>

#include "language/parse.h"
#include "network/expander.h"

/* ---- limits and growing arrays ------------------------------------------------------------ */

void *anb__room(anb__arena *arena, void *items, uint32_t count, uint32_t *capacity, size_t size) {
    if (count < *capacity) return items;
    uint32_t larger = *capacity ? 2 * *capacity : 4;
    items = anb__arena_grow(arena, items, *capacity * size, larger * size);
    *capacity = larger;
    return items;
}

void anb__report_limit(anb__expander *x, anb__span span, const char *what, const char *limit) {
    if (!x->halted) anb__error(x->report, span, "limit", "more than %s %s: this is the limit", limit, what);
    x->halted = true;
}

bool anb__count_round(anb__expander *x, anb__span span) {
    if (x->halted) return false;
    if (++x->rounds <= ANB__LIMIT_ROUNDS) return true;
    anb__report_limit(x, span, "rounds of loops and expansions", "10 000 000");
    return false;
}

bool anb__enter(anb__expander *x, anb__span span) {
    if (x->calls < ANB__LIMIT_CALLS) {
        x->calls++;
        return true;
    }
    anb__report_limit(x, span, "levels of nesting", "200");
    return false;
}

/* A network that meets the limit inside itself would go on for ever. */
bool anb__nest(anb__expander *x, anb__span span) {
    const anb__definition *definition = x->region->definition;
    if (x->nesting < ANB__LIMIT_NESTING) {
        x->nesting++;
        return true;
    }
    if (!definition || definition->active < 2) {
        anb__report_limit(x, span, "levels of nesting", "200");
        return false;
    }
    if (!x->halted) {
        anb__diagnostic *d = anb__error(x->report, span, "recursion",
                                        "the network `%s` places itself without end", definition->name->text);
        anb__add_note(x->report, d, definition->tree->name_span, "it is defined here");
        anb__add_hint(x->report, d, "networks may stand in one another %d deep", ANB__LIMIT_NESTING);
    }
    x->halted = true;
    return false;
}

/* ---- the steps ---------------------------------------------------------------------------------- */

/* Networks may come later than their use. */
static void hoist_networks(anb__expander *x, const anb__tree *parent) {
    for (const anb__tree *tree = parent->first; tree; tree = tree->next) {
        if (tree->kind == ANB__TREE_NETWORK && !anb__is_defined(x, tree))
            anb__define_shape(x, tree, ANB__SYMBOL_NETWORK);
        if (tree->kind == ANB__TREE_INCLUDE || tree->kind == ANB__TREE_FILE) hoist_networks(x, tree);
    }
}

static bool is_replaceable(const anb__symbol *symbol, const void *user) {
    (void)user;
    return symbol->kind == ANB__SYMBOL_VALUE && symbol->live;
}

static void check_replaced(anb__expander *x) {
    for (uint32_t i = 0; x->replacements && i < x->replacements->set_count; i++) {
        const anb__replacement *r = &x->replacements->set[i];
        if (x->replaced[i]) continue;
        anb__diagnostic *d = anb__error(x->report, r->span, "undefined-name",
                                        "the netlist has no value `%s` at its top level", r->name->text);
        anb__hint_nearest(x, d, r->name->text, anb__near(x, 0, r->name->text, is_replaceable, NULL));
    }
}

static void prepare(anb__expander *x) {
    x->top_space.reachable = true;
    x->top.space = &x->top_space;
    x->region = &x->top;
    x->labels = &x->top_space;
    x->symbols.arena = &x->scratch;
    x->texts.arena = &x->network->arena;
    x->definitions_end = &x->definitions;
    x->references_end = &x->references;
    x->far_nodes_end = &x->far_nodes;
    x->combinations = 1;
    x->lost = x->report->errors > 0;
    x->network->title = "";
    anb__new_node(x); /* ground */
    if (x->replacements)
        x->replaced = anb__arena_take(&x->scratch, x->replacements->set_count * sizeof *x->replaced);
}

static void expand(anb__expander *x) {
    prepare(x);
    hoist_networks(x, x->root);
    if (x->replacements && x->replacements->sweep) anb__sweep_statement(x, x->replacements->sweep, true);
    anb__statements(x, x->root);
    if (x->halted) return;
    check_replaced(x);
    anb__resolve_far_nodes(x);
    anb__resolve_references(x);
    anb__check_unused(x);
    anb__settle_nodes(x);
    anb__check_ports(x);
    if (x->halted || x->report->errors) return;
    anb__check_nodes(x);
    anb__finish(x);
}

static bool stands_before(anb__span a, anb__span b) {
    return a.source != b.source ? a.source < b.source : a.start < b.start;
}

/* The parser's messages and ours, in the order of the text. There are few. */
static void sort_messages(anb__report *report) {
    anb__diagnostic *rest = report->first;
    report->first = report->last = NULL;
    while (rest) {
        anb__diagnostic *d = rest, **at = &report->first;
        rest = rest->next;
        while (*at && !stands_before(d->span, (*at)->span)) at = &(*at)->next;
        d->next = *at;
        *at = d;
        if (!d->next) report->last = d;
    }
}

/* Everything that is allocated on the way jumps here when memory is gone. */
static anb_status expand_guarded(anb__expander *x) {
    jmp_buf escape;
    anb_status status = ANB_OK;
    x->scratch.escape = x->report->arena->escape = x->names->arena->escape = x->network->arena.escape =
        &escape;
    if (setjmp(escape)) status = ANB_MEMORY;
    else {
        expand(x);
        sort_messages(x->report);
    }
    if (status == ANB_OK && x->report->errors) status = ANB_INVALID;
    return status;
}

anb_status anb__expand(anb__report *report, anb__names *names, const anb__tree *file,
                       const anb__replacements *replacements, anb__network *out) {
    anb__expander x = {
        .report = report, .names = names, .root = file, .replacements = replacements, .network = out};
    jmp_buf *of_report = report->arena->escape, *of_names = names->arena->escape, *of_out = out->arena.escape;
    anb_status status = expand_guarded(&x);
    report->arena->escape = of_report;
    names->arena->escape = of_names;
    out->arena.escape = of_out;
    anb__arena_free(&x.scratch);
    return status;
}

bool anb__require_sweep(anb__report *report, const anb__tree *file, const anb__network *network) {
    if (network->sweep_count) return true;
    anb__span start = {file->span.source, 0, 0};
    anb__diagnostic *d = anb__error(report, start, "no-sweep", "the netlist has no sweep");
    anb__add_hint(report, d, "say at which frequencies, e.g. `sweep 500 MHz .. 1500 MHz points 401`");
    return false;
}

/* ---- replacements ---------------------------------------------------------------------------------- */

void anb__read_replacements(anb__report *report, anb__names *names, anb__arena *arena,
                            const anb_overrides *overrides, anb__replacements *out) {
    *out = (anb__replacements){0};
    if (!overrides) return;
    anb__replacement *set = anb__arena_take(arena, overrides->set_count * sizeof *set);
    out->set = set;
    for (size_t i = 0; i < overrides->set_count; i++) {
        const char *text = overrides->set[i];
        uint32_t source = anb__add_source(report, "--set", text, (uint32_t)strlen(text));
        const anb__tree *tree = anb__parse_override(report, names, arena, source);
        if (tree->kind != ANB__TREE_DEFINE || !tree->name || !tree->first) continue;
        set[out->set_count++] = (anb__replacement){tree->name, tree->first, tree->name_span};
    }
    if (!overrides->sweep) return;
    uint32_t source = anb__add_source(report, "--sweep", overrides->sweep,
                                      (uint32_t)strlen(overrides->sweep));
    const anb__tree *tree = anb__parse_sweep_override(report, names, arena, source);
    if (tree->kind == ANB__TREE_SWEEP) out->sweep = tree;
}
