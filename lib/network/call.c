/* Everything that is written as a call: who is meant, and calls of what the user has defined. */
#include <string.h>

#include "network/expander.h"

/* ---- networks and own kinds of parts ------------------------------------------------ */

static const anb__tree *parameter_at(const anb__definition *definition, uint32_t index) {
    const anb__tree *p = definition->parameters->first;
    while (p && index--) p = p->next;
    return p;
}

static uint32_t parameter_index(const anb__definition *definition, const anb__name *name) {
    uint32_t i = 0;
    for (const anb__tree *p = definition->parameters->first; p && p->name != name; p = p->next) i++;
    return i;
}

static void report_parameter(anb__expander *x, const anb__definition *definition, const anb__tree *argument) {
    const char *known[ANB__MOST_NAMES];
    unsigned count = 0;
    for (const anb__tree *p = definition->parameters->first; p && count < ANB__MOST_NAMES; p = p->next)
        known[count++] = p->name->text;
    anb__diagnostic *d = anb__error(x->report, argument->name_span, "unknown-option",
                                    "`%s` has no parameter `%s`", definition->name->text,
                                    argument->name->text);
    anb__add_note(x->report, d, definition->tree->name_span, "`%s` is defined here", definition->name->text);
    anb__hint_nearest(x, d, argument->name->text, anb__nearest(argument->name->text, known, count));
}

static bool take_value(anb__expander *x, const anb__definition *definition, const anb__tree *argument,
                       uint32_t index, anb__value *values) {
    bool keyed = argument->kind == ANB__TREE_ARGUMENT;
    anb__value value = anb__evaluate(x, keyed ? argument->first : argument);
    if (index >= definition->parameter_count) {
        if (keyed) {
            report_parameter(x, definition, argument);
        } else {
            anb__diagnostic *d = anb__error(x->report, argument->span, "argument-count",
                                            "`%s` takes %u argument%s", definition->name->text,
                                            (unsigned)definition->parameter_count,
                                            definition->parameter_count == 1 ? "" : "s");
            anb__add_note(x->report, d, definition->tree->name_span, "it is defined here");
        }
        return false;
    }
    if (values[index].kind != ANB__VALUE_ABSENT) {
        anb__error(x->report, argument->span, "given-twice", "`%s` of `%s` is given twice",
                   parameter_at(definition, index)->name->text, definition->name->text);
        return false;
    }
    values[index] = value;
    return true;
}

static bool check_given(anb__expander *x, const anb__tree *call, const anb__definition *definition,
                        const anb__value *values) {
    uint32_t i = 0;
    for (const anb__tree *p = definition->parameters->first; p; p = p->next, i++) {
        if (values[i].kind != ANB__VALUE_ABSENT || p->first) continue;
        anb__diagnostic *d = anb__error(x->report, call->span, "missing-argument", "`%s` needs `%s`",
                                        definition->name->text, p->name->text);
        anb__add_note(x->report, d, p->span, "it is a parameter here");
        return false;
    }
    return true;
}

/* The values of a call, one for each parameter; NULL, reported, where they do not fit. */
static anb__value *bind(anb__expander *x, const anb__tree *call, const anb__definition *definition) {
    anb__value *values = anb__arena_take(&x->scratch, definition->parameter_count * sizeof *values);
    uint32_t place = 0;
    bool right = true;
    for (uint32_t i = 0; i < definition->parameter_count; i++) values[i].kind = ANB__VALUE_ABSENT;
    for (const anb__tree *a = call->first; a; a = a->next) {
        bool keyed = a->kind == ANB__TREE_ARGUMENT;
        right &= take_value(x, definition, a, keyed ? parameter_index(definition, a->name) : place++, values);
    }
    return right && check_given(x, call, definition, values) ? values : NULL;
}

/* The body of an own kind, in the names of the place where it is defined. */
static anb__value evaluate_body(anb__expander *x, anb__definition *definition, anb__value *values) {
    anb__frame frame = {definition, values, 0};
    const anb__frame *outer = x->frame;
    anb__region *region = x->region;
    const anb__assumed *assumed = x->top.assumed;
    x->frame = &frame;
    x->region = &x->top;
    x->top.assumed = definition->assumed;
    for (const anb__tree *p = definition->parameters->first; p; p = p->next, frame.count++)
        if (values[frame.count].kind == ANB__VALUE_ABSENT)
            values[frame.count] = p->first ? anb__evaluate(x, p->first) : anb__poison();
    anb__value value = anb__evaluate(x, definition->body);
    x->top.assumed = assumed;
    x->region = region;
    x->frame = outer;
    return value;
}

anb__value anb__own_body(anb__expander *x, anb__span span, anb__definition *definition, anb__value *values) {
    if (definition->active) {
        anb__diagnostic *d = anb__error(x->report, span, "recursion", "`%s` is made of itself",
                                        definition->name->text);
        anb__add_note(x->report, d, definition->tree->name_span, "it is defined here");
        return anb__poison();
    }
    if (!anb__count_round(x, span) || !anb__nest(x, span)) return anb__poison();
    const anb__diagnostic *last = x->report->last;
    definition->active++;
    anb__value value = evaluate_body(x, definition, values);
    definition->active--;
    x->nesting--;
    if (span.start != definition->tree->name_span.start)
        anb__add_uses(x, last, definition->name, "used", span);
    return value;
}

anb__value anb__own_call(anb__expander *x, const anb__tree *tree, anb__definition *definition) {
    definition->used = true;
    if (definition->broken) {
        x->incomplete = true;
        return anb__poison();
    }
    anb__value *values = bind(x, tree, definition);
    if (!values) return anb__poison();
    if (definition->tree->kind == ANB__TREE_KIND) return anb__own_body(x, tree->span, definition, values);
    anb__item item = {
        .kind = ANB__ITEM_NETWORK, .span = tree->span, .values = values, .definition = definition};
    return anb__item_value(x, &item);
}

/* ---- names that nobody has ------------------------------------------------------------- */

static unsigned add_definitions(const anb__expander *x, const char **names, unsigned count) {
    for (const anb__definition *d = x->definitions; d && count < 3 * ANB__MOST_NAMES; d = d->next)
        names[count++] = d->name->text;
    return count;
}

/* Where the text defines the name further down, or NULL. */
static const anb__tree *later_shape(const anb__tree *parent, const anb__name *name) {
    for (const anb__tree *s = parent->first; s; s = s->next) {
        if ((s->kind == ANB__TREE_KIND || s->kind == ANB__TREE_NETWORK) && s->name == name) return s;
        const anb__tree *inside = NULL;
        if (s->kind == ANB__TREE_INCLUDE || s->kind == ANB__TREE_FILE || s->kind == ANB__TREE_IF ||
            s->kind == ANB__TREE_BLOCK)
            inside = later_shape(s, name);
        if (inside) return inside;
    }
    return NULL;
}

static anb__value report_unknown(anb__expander *x, const anb__tree *tree) {
    const char *names[4 * ANB__MOST_NAMES], *name = tree->name->text;
    for (const anb__tree *a = tree->first; a; a = a->next)
        if (a->kind != ANB__TREE_ARGUMENT && a->kind != ANB__TREE_NAME) anb__evaluate(x, a);
    if (anb__maybe_defined(x, tree->name)) return anb__poison();
    const anb__tree *later = anb__is_tired(x) ? NULL : later_shape(x->root, tree->name);
    if (later) {
        anb__diagnostic *d = anb__error(x->report, tree->name_span, "undefined-name",
                                        "`%s` is used before it is defined", name);
        anb__add_note(x->report, d, later->name_span, "it is defined here: move it above its first use");
        return anb__poison();
    }
    unsigned count = x->measuring ? anb__measure_names(names) : add_definitions(x, names, 0);
    if (!x->measuring) count += anb__part_names(names + count);
    count += anb__function_names(names + count);
    const anb__value *value = anb__find_value(x, tree->name);
    anb__diagnostic *d;
    if (value)
        d = anb__error(x->report, tree->name_span, "unknown-part", "`%s` is %s: it has no arguments", name,
                       anb__value_phrase(x, value));
    else
        d = anb__error(x->report, tree->name_span, x->measuring ? "unknown-measure" : "unknown-part",
                       x->measuring ? "there is no measure or function `%s`"
                                    : "there is no part, network or function `%s`",
                       name);
    if (!value) anb__hint_nearest(x, d, name, anb__nearest(name, names, count));
    return anb__poison();
}

static anb__value report_later(anb__expander *x, const anb__tree *tree) {
    anb__error(x->report, tree->span, "not-yet", "`%s(...)` is not available in this version",
               tree->name->text);
    return anb__poison();
}

static anb__value report_measure(anb__expander *x, const anb__tree *tree) {
    anb__error(x->report, tree->span, "measure-here", "`%s` is a measure: it stands in `require` only",
               tree->name->text);
    return anb__poison();
}

anb__value anb__call(anb__expander *x, const anb__tree *tree) {
    const char *name = tree->name->text;
    anb__part_kind kind;
    anb__definition *definition = anb__find_definition(x, tree->name);
    if (definition) return anb__own_call(x, tree, definition);
    const anb__measure_entry *measure = anb__find_measure(name);
    if (measure && x->measuring) return anb__measure_call(x, tree, measure);
    if (anb__find_part(name, &kind)) return anb__part_call(x, tree, kind);
    const anb__function_entry *function = anb__find_function(name);
    if (function) return anb__function_call(x, tree, function);
    if (!strcmp(name, "touchstone")) return anb__data_call(x, tree);
    if (anb__is_composing(name)) return anb__composing_call(x, tree);
    if (anb__is_later_part(name)) return report_later(x, tree);
    return measure ? report_measure(x, tree) : report_unknown(x, tree);
}
