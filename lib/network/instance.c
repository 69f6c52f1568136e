/* Networks placed: their statements in a space of names of their own. */
#include <stdio.h>

#include "network/expander.h"

/* ---- entering and leaving --------------------------------------------------------------- */

typedef struct outside {
    anb__region *region;
    const anb__frame *frame;
    anb__space *labels;
    unsigned loop_depth;
    uint32_t local_count;
} outside;

static outside go_inside(anb__expander *x, anb__region *region) {
    outside out = {x->region, x->frame, x->labels, x->loop_depth, x->local_count};
    x->region = region;
    x->frame = NULL;
    x->labels = region->space;
    x->loop_depth = 0;
    return out;
}

static void go_outside(anb__expander *x, const outside *out) {
    x->region = out->region;
    x->frame = out->frame;
    x->labels = out->labels;
    x->loop_depth = out->loop_depth;
    x->local_count = out->local_count;
}

/* Defaults are evaluated inside, so that they see the parameters before them. */
static void bind_parameters(anb__expander *x, const anb__definition *definition, const anb__value *values) {
    uint32_t i = 0;
    for (const anb__tree *p = definition->parameters->first; p; p = p->next, i++) {
        anb__value value = values[i];
        if (value.kind == ANB__VALUE_ABSENT) value = p->first ? anb__evaluate(x, p->first) : anb__poison();
        anb__define(x, p->name, p->name_span, &value);
    }
}

/* ---- terminals onto ports --------------------------------------------------------------------- */

enum { MOST_LISTED = 12, LONGEST_LIST = 512 };

/* "top, one, two" */
static const char *list_ports(anb__expander *x, const anb__region *region) {
    char *text = anb__arena_take(&x->scratch, LONGEST_LIST);
    size_t at = 0;
    for (uint32_t i = 0; i < region->port_count && at < LONGEST_LIST; i++) {
        const char *name = i < MOST_LISTED ? region->ports[i].name->text : "...";
        at += (size_t)snprintf(text + at, LONGEST_LIST - at, "%s%s", i ? ", " : "", name);
        if (i == MOST_LISTED) break;
    }
    return text;
}

static void report_count(anb__expander *x, const anb__item *item, const anb__region *region, anb__span span,
                         uint32_t count) {
    const char *name = item->definition->name->text, *ports = list_ports(x, region);
    anb__diagnostic *d;
    if (region->port_count == 1 && count == 2) {
        d = anb__error(x->report, span, "node-count",
                       "the network `%s` has one port, `%s`, so it has no other end", name, ports);
        anb__add_hint(x->report, d, "write `shunt %s(...)`, or place it with `on`", name);
    } else {
        d = anb__error(x->report, span, "node-count",
                       "the network `%s` has %u port%s (%s), but lies on %u node%s", name,
                       (unsigned)region->port_count, region->port_count == 1 ? "" : "s",
                       region->port_count ? ports : "none", (unsigned)count, count == 1 ? "" : "s");
        if (region->port_count > 2) anb__add_hint(x->report, d, "write `%s(...) on (%s)`", name, ports);
    }
    anb__add_note(x->report, d, item->definition->tree->name_span, "it is defined here");
}

static uint32_t port_of_name(const anb__region *region, const anb__name *name) {
    uint32_t i = 0;
    while (i < region->port_count && region->ports[i].name != name) i++;
    return i;
}

static void connect(anb__expander *x, const anb__item *item, const anb__region *region,
                    const anb__terminal *terminals, uint32_t count) {
    bool *taken = anb__arena_take(&x->scratch, region->port_count);
    for (uint32_t i = 0; i < count; i++) {
        uint32_t port = terminals[i].name ? port_of_name(region, terminals[i].name) : i;
        if (port == region->port_count) {
            anb__diagnostic *d = anb__error(x->report, terminals[i].span, "unknown-terminal",
                                            "the network `%s` has no port `%s`", item->definition->name->text,
                                            terminals[i].name->text);
            anb__add_hint(x->report, d, "its ports are %s", list_ports(x, region));
        } else if (taken[port]) {
            anb__error(x->report, terminals[i].span, "given-twice", "the port `%s` gets two nodes",
                       region->ports[port].name->text);
        } else {
            taken[port] = true;
            anb__join(x, region->ports[port].node, terminals[i].node);
        }
    }
}

void anb__touch_all(anb__expander *x, const anb__terminal *terminals, uint32_t count) {
    for (uint32_t i = 0; i < count; i++) anb__touch(x, terminals[i].node);
}

/* ---- placing --------------------------------------------------------------------------------------- */

/* The names inside a placement without a label cannot be reached from anywhere, unless something in
 * there is looked up at the end. */
static void expand_inside(anb__expander *x, const anb__item *item, anb__region *region) {
    anb__definition *definition = (anb__definition *)item->definition;
    anb__symbol *newest = x->symbols.newest;
    anb__far_node **far_end = x->far_nodes_end;
    uint32_t spaces = x->labelled_spaces;
    unsigned errors = x->report->errors;
    outside out = go_inside(x, region);
    definition->active++;
    bind_parameters(x, definition, item->values);
    anb__statements(x, definition->body);
    definition->active--;
    go_outside(x, &out);
    bool closed = !region->space->label && far_end == x->far_nodes_end && spaces == x->labelled_spaces;
    if (closed && errors == x->report->errors) anb__symbols_forget(&x->symbols, newest);
}

void anb__place_network(anb__expander *x, const anb__item *item, anb__span span,
                        const anb__terminal *terminals, uint32_t count, bool to_ground) {
    anb__region region = {.space = x->own, .definition = item->definition};
    unsigned errors = x->report->errors;
    const anb__diagnostic *last = x->report->last;
    if (!region.space) region.space = anb__new_space(x, &x->top_space, NULL);
    x->own = NULL;
    if (!anb__count_round(x, span) || !anb__nest(x, span)) return;
    expand_inside(x, item, &region);
    x->nesting--;
    anb__add_uses(x, last, item->definition->name, "placed", span);
    bool grounded = to_ground && count == 2 && region.port_count == 1;
    if (grounded) count = 1;
    if (region.port_count == count) connect(x, item, &region, terminals, count);
    else if (errors == x->report->errors && !x->halted) report_count(x, item, &region, span, count);
    if (errors != x->report->errors) anb__touch_all(x, terminals, count);
}

/* ---- what nothing uses ------------------------------------------------------------------------------- */

static void check_definition(anb__expander *x, anb__definition *definition) {
    anb__value *values = anb__arena_take(&x->scratch, definition->parameter_count * sizeof *values);
    anb__item item = {.kind = ANB__ITEM_NETWORK,
                      .span = definition->tree->name_span,
                      .values = values,
                      .definition = definition};
    anb__region region = {.space = anb__new_space(x, &x->top_space, NULL), .definition = definition};
    if (definition->tree->kind == ANB__TREE_KIND) anb__own_body(x, item.span, definition, values);
    else expand_inside(x, &item, &region);
}

/* Their bodies are expanded with unknown parameters, and what that has placed is taken back. */
void anb__check_unused(anb__expander *x) {
    bool incomplete = x->incomplete;
    uint32_t parts = x->part_count, branches = x->branch_count, nodes = x->node_count,
             labels = x->label_count;
    anb__far_node **far_end = x->far_nodes_end;
    for (anb__definition *d = x->definitions; d && !x->halted; d = d->next)
        if (!d->used && !d->broken) check_definition(x, d);
    x->part_count = parts;
    x->branch_count = branches;
    x->node_count = nodes;
    x->label_count = labels;
    x->far_nodes_end = far_end;
    *far_end = NULL;
    x->incomplete = incomplete;
}
