/* `require`, `drive`, `tune` and `cases`: checked in full, kept for the commands that use them. */
#include <string.h>

#include "network/expander.h"

static void keep(anb__expander *x, anb__kept *kept, const anb__tree *tree) {
    kept->list = anb__room(&x->network->arena, kept->list, kept->count, &kept->capacity, sizeof *kept->list);
    kept->list[kept->count++] = tree;
}

/* ---- what measures and drives name -------------------------------------------------------- */

/* Ports, labels and nodes may come later than the statement, so they are looked up at the end. */
static void refer(anb__expander *x, const anb__tree *tree, char shape) {
    anb__reference *reference = anb__arena_take(&x->scratch, sizeof *reference);
    const anb__tree *base = tree;
    while (base->kind == ANB__TREE_INDEX || base->kind == ANB__TREE_MEMBER) base = base->first;
    *reference = (anb__reference){.tree = tree, .shape = shape, .drive = UINT32_MAX};
    if (tree->kind == ANB__TREE_ERROR) return;
    if (base->kind != ANB__TREE_NAME && !(shape == 'p' && tree->kind == ANB__TREE_NUMBER)) {
        anb__error(x->report, tree->span, "wrong-reference", "`%s` is no %s", anb__quote(x, tree->span),
                   shape == 'p'   ? "port: a port is given by its name or number"
                   : shape == 'l' ? "label of a part"
                                  : "node or label");
        return;
    }
    if (base->kind == ANB__TREE_NAME && !anb__path_of(x, tree, &reference->path, &reference->length)) return;
    *x->references_end = reference;
    x->references_end = &reference->next;
}

static bool is_live(const anb__symbol *symbol, const void *user) {
    const char *shape = user;
    bool label = symbol->kind == ANB__SYMBOL_LABEL, node = symbol->kind == ANB__SYMBOL_NODE;
    return symbol->live && (*shape == 'l' ? label : *shape == 'p' ? node : label || node);
}

static void report_reference(anb__expander *x, const anb__reference *r) {
    const char *what = r->shape == 'p' ? "port" : r->shape == 'l' ? "part with the label" : "node or label";
    const char *quote = anb__quote(x, r->tree->span);
    uint32_t space = r->shape == 'p' ? ANB__PORT_SPACE : 0;
    if (x->incomplete) return;
    anb__diagnostic *d = anb__error(x->report, r->tree->span, "undefined-name", "there is no %s `%s`", what,
                                    quote);
    anb__hint_nearest(x, d, quote, anb__near(x, space, quote, is_live, &r->shape));
}

static void resolve_number(anb__expander *x, const anb__reference *r) {
    double number = r->tree->number;
    if (r->tree->unit || number != rint(number) || number < 1 || number > x->port_count) {
        if (!x->incomplete)
            anb__error(x->report, r->tree->span, "undefined-name",
                       "there is no port number `%s`: there are %lu ports, counted from 1",
                       anb__quote(x, r->tree->span), (unsigned long)x->port_count);
    } else if (r->drive != UINT32_MAX) {
        x->network->drives[r->drive].port = (uint32_t)number - 1;
    }
}

void anb__resolve_references(anb__expander *x) {
    for (const anb__reference *r = x->references; r; r = r->next) {
        if (!r->path) {
            resolve_number(x, r);
            continue;
        }
        uint32_t space = r->shape == 'p' ? ANB__PORT_SPACE : 0;
        const anb__symbol *symbol = r->shape == 'p' && r->length > 1
                                        ? NULL
                                        : anb__follow(x, space, r->path, r->length);
        if (!symbol || !is_live(symbol, &r->shape)) report_reference(x, r);
        else if (r->drive != UINT32_MAX) x->network->drives[r->drive].port = symbol->node;
    }
}

/* ---- measures --------------------------------------------------------------------------------- */

static bool check_shape(anb__expander *x, const anb__tree *call, const anb__measure_entry *entry) {
    unsigned wanted = 0, given = 0;
    bool more = false;
    for (const char *c = entry->shape; *c; c++) *c == '+' ? (more = true) : (wanted++, false);
    for (const anb__tree *a = call->first; a; a = a->next) {
        given++;
        if (a->kind != ANB__TREE_ARGUMENT) continue;
        anb__error(x->report, a->span, "unknown-option", "the measure `%s` has no option `%s`", entry->name,
                   a->name->text);
        return false;
    }
    if (given == wanted || (more && given > wanted)) return true;
    anb__error(x->report, call->span, "argument-count", "the measure is written `%s(%s)`", entry->name,
               entry->usage);
    return false;
}

static anb__value measured(anb__dimension dimension, bool complex) {
    anb__quantity q = {.dimension = dimension};
    q.marks = ANB__IS_MEASURED | (complex ? ANB__MAY_BE_COMPLEX : 0);
    return anb__quantity_value(&q);
}

static anb__value spread(anb__expander *x, const anb__tree *call) {
    anb__quantity q;
    if (!anb__operand(x, call->first, &q)) return anb__poison();
    if (q.marks & ANB__IS_MEASURED && !(q.marks & ANB__MAY_BE_COMPLEX)) return measured(q.dimension, false);
    anb__error(x->report, call->first->span, "no-measure", "`spread` takes a real measure; `%s` is none",
               anb__quote(x, call->first->span));
    return anb__poison();
}

anb__value anb__measure_call(anb__expander *x, const anb__tree *tree, const anb__measure_entry *entry) {
    const char *shape = entry->shape;
    if (!check_shape(x, tree, entry)) return anb__poison();
    if (*shape == 'm') return spread(x, tree);
    for (const anb__tree *a = tree->first; a; a = a->next) {
        refer(x, a, *shape);
        if (shape[1] && shape[1] != '+') shape++;
    }
    return measured(entry->dimension, entry->complex);
}

/* ---- require ----------------------------------------------------------------------------------- */

static bool check_measure(anb__expander *x, const anb__tree *tree, anb__quantity *q) {
    x->measuring = true;
    bool known = anb__operand(x, tree, q);
    x->measuring = false;
    if (!known) return false;
    if (!(q->marks & ANB__IS_MEASURED)) {
        anb__error(x->report, tree->span, "no-measure", "`%s` holds no measure to be required",
                   anb__quote(x, tree->span));
        return false;
    }
    if (!(q->marks & ANB__MAY_BE_COMPLEX)) return true;
    anb__diagnostic *d = anb__error(x->report, tree->span, "not-real", "`%s` is complex, so it has no limit",
                                    anb__quote(x, tree->span));
    anb__add_hint(x->report, d, "write `abs(%s)`", anb__quote(x, tree->span));
    return false;
}

static bool in_order(anb__expander *x, const anb__tree *range, const anb__quantity bounds[2]) {
    if (bounds[0].value.re <= bounds[1].value.re) return true;
    anb__error(x->report, range->span, "backwards", "the range ends below its start");
    return false;
}

static void check_limit(anb__expander *x, const anb__tree *limit, const anb__quantity *measure, bool known) {
    anb__quantity q, bounds[2];
    anb__dimension dimension = measure->dimension;
    if (limit->kind == ANB__TREE_WITHIN) {
        if (!known) anb__evaluate(x, limit->first);
        else if (anb__wanted_range(x, limit->first, "this limit", dimension, ANB__NO_TUNE, bounds))
            in_order(x, limit->first, bounds);
    } else if (known) {
        anb__wanted(x, limit->first, "this limit", dimension, ANB__NO_TOLERANCE | ANB__NO_COMPLEX, &q);
    } else {
        anb__evaluate(x, limit->first);
    }
}

static void check_over(anb__expander *x, const anb__tree *over) {
    anb__quantity bounds[2];
    if (!anb__wanted_range(x, over->first, "the range of a `require`", anb__hertz, ANB__NO_TUNE, bounds))
        return;
    if (bounds[0].value.re < 0)
        anb__error(x->report, over->first->span, "negative-frequency", "a frequency cannot be negative");
    else in_order(x, over->first, bounds);
}

static void check_clause(anb__expander *x, const anb__tree *clause, bool *placed) {
    anb__quantity q;
    if (clause->kind == ANB__TREE_OVER) {
        *placed = true;
        check_over(x, clause);
    } else if (clause->kind == ANB__TREE_AT_FREQUENCY) {
        *placed = true;
        if (anb__wanted(x, clause->first, "the frequency of a `require`", anb__hertz,
                        ANB__FIXED | ANB__NO_TUNE, &q) &&
            q.value.re < 0)
            anb__error(x->report, clause->first->span, "negative-frequency",
                       "a frequency cannot be negative");
    } else if (clause->kind == ANB__TREE_WEIGHT) {
        if (anb__wanted(x, clause->first, "a weight", anb__plain, ANB__FIXED, &q) && q.value.re <= 0)
            anb__error(x->report, clause->first->span, "not-positive", "a weight has to be above zero");
    }
}

void anb__require_statement(anb__expander *x, const anb__tree *tree) {
    anb__quantity measure = {0};
    bool placed = false;
    const anb__tree *limit = tree->first ? tree->first->next : NULL;
    if (!limit) return; /* reported by the parser */
    bool known = check_measure(x, tree->first, &measure);
    check_limit(x, limit, &measure, known);
    for (const anb__tree *clause = limit->next; clause; clause = clause->next)
        check_clause(x, clause, &placed);
    if (!placed) x->network->needs_sweep = true;
    keep(x, &x->network->requirements, tree);
}

/* ---- drive --------------------------------------------------------------------------------------- */

void anb__drive_statement(anb__expander *x, const anb__tree *tree) {
    const anb__tree *port = tree->first, *power = port ? port->next : NULL,
                    *phase = power ? power->next : NULL;
    anb__quantity watt = {0}, angle = {0};
    if (!power) return; /* reported by the parser */
    bool known = anb__wanted(x, power, "the power of a `drive`", anb__watt,
                             ANB__NO_FREQUENCY | ANB__NO_COMPLEX, &watt);
    if (known && watt.value.re < 0) {
        anb__error(x->report, power->span, "negative", "the power of a `drive` cannot be negative");
    }
    if (phase)
        anb__wanted(x, phase, "the phase of a `drive`", anb__angle, ANB__NO_FREQUENCY | ANB__NO_COMPLEX,
                    &angle);
    anb__reference **before = x->references_end;
    refer(x, port, 'p');
    if (x->references_end == before) return;
    (*before)->drive = x->network->drive_count;
    x->network->drives = anb__room(&x->network->arena, x->network->drives, x->network->drive_count,
                                   &x->drive_capacity, sizeof *x->network->drives);
    x->network->drives[x->network->drive_count++] = (anb__drive){
        .watt = watt.value.re, .phase_turns = angle.value.re, .span = tree->span};
}

/* ---- tune --------------------------------------------------------------------------------------------- */

static void check_within(anb__expander *x, const anb__tree *rule, const anb__tree *start,
                         const anb__quantity *q) {
    anb__quantity bounds[2];
    if (!anb__wanted_range(x, rule->first, "the range of a `tune`", q->dimension, ANB__NO_TUNE, bounds) ||
        !in_order(x, rule->first, bounds))
        return;
    if (q->value.re < bounds[0].value.re || q->value.re > bounds[1].value.re)
        anb__error(x->report, start->span, "outside-range", "the start `%s` lies outside `%s`",
                   anb__quote(x, start->span), anb__quote(x, rule->first->span));
}

static void check_series(anb__expander *x, const anb__tree *rule, const anb__tree *start,
                         const anb__quantity *q) {
    int per_decade;
    const anb__tree *name = rule->first;
    if (name->kind == ANB__TREE_NAME && !anb__preferred_series(name->name->text, &per_decade))
        anb__error(x->report, name->span, "unknown-series",
                   "`%s` is no series of preferred values: there are E3, E6, E12, E24, E48, E96 and E192",
                   name->name->text);
    if (q->value.re <= 0)
        anb__error(x->report, start->span, "not-positive",
                   "preferred values are above zero, so the start has to be");
}

static void check_from(anb__expander *x, const anb__tree *rule, const anb__quantity *q) {
    anb__value list = anb__evaluate(x, rule->first);
    if (list.kind == ANB__VALUE_POISON) return;
    if (list.kind != ANB__VALUE_LIST || !list.count) {
        anb__error(x->report, rule->first->span, "not-a-list", "`from` takes a list of values; `%s` is none",
                   anb__quote(x, rule->first->span));
        return;
    }
    bool written = rule->first->kind == ANB__TREE_LIST;
    const anb__tree *tree = written ? rule->first->first : rule->first;
    for (uint32_t i = 0; i < list.count; i++) {
        anb__quantity element = list.elements[i].quantity;
        if (list.elements[i].kind == ANB__VALUE_QUANTITY)
            anb__check_wanted(x, tree, "a value of this list", q->dimension, ANB__FIXED | ANB__NO_TUNE,
                              &element);
        else if (list.elements[i].kind != ANB__VALUE_POISON)
            anb__error(x->report, tree->span, "not-a-number", "`from` takes a list of numbers");
        if (written) tree = tree->next;
    }
}

/* A value with the replacement that the command asks for, if any. */
static anb__value start_value(anb__expander *x, const anb__tree *tree, const anb__tree **start) {
    const anb__tree *with = anb__replacement_of(x, tree->name);
    anb__value value = anb__evaluate(x, *start);
    if (!with) return value;
    *start = with;
    return anb__evaluate(x, with);
}

void anb__tune_statement(anb__expander *x, const anb__tree *tree) {
    const anb__tree *start = tree->first;
    anb__quantity q = {0};
    if (!start) return; /* reported by the parser */
    const anb__tree *rules = start->next;
    anb__value value = start_value(x, tree, &start);
    bool known = value.kind == ANB__VALUE_QUANTITY;
    if (known) q = value.quantity;
    else if (value.kind != ANB__VALUE_POISON)
        anb__error(x->report, start->span, "not-a-number", "`tune` changes a number; `%s` is %s",
                   anb__quote(x, start->span), anb__value_phrase(x, &value));
    known = known && anb__check_wanted(x, start, "the start of a `tune`", q.dimension,
                                       ANB__NO_FREQUENCY | ANB__NO_COMPLEX, &q);
    for (const anb__tree *rule = rules; known && rule; rule = rule->next) {
        if (rule->kind == ANB__TREE_TUNE_WITHIN) check_within(x, rule, start, &q);
        else if (rule->kind == ANB__TREE_TUNE_SERIES) check_series(x, rule, start, &q);
        else if (rule->kind == ANB__TREE_TUNE_FROM) check_from(x, rule, &q);
    }
    q.marks |= ANB__FROM_TUNE;
    value = known ? anb__quantity_value(&q) : anb__poison();
    anb__define(x, tree->name, tree->name_span, &value);
    keep(x, &x->network->tunes, tree);
}

/* ---- cases ------------------------------------------------------------------------------------------------
 */

static bool range_cases(anb__expander *x, const anb__tree *range, const anb__value *value, double *count,
                        anb__value *first) {
    const anb__tree *points = range->next;
    if (!points || points->kind != ANB__TREE_POINTS) {
        anb__error(x->report, range->span, "missing-points", "a range of `cases` needs its number of points");
        return false;
    }
    if (!in_order(x, range, value->bounds) ||
        !anb__wanted_whole(x, points->first, "the number of cases", 1, count))
        return false;
    *first = anb__quantity_value(&value->bounds[0]);
    return true;
}

static bool list_cases(anb__expander *x, const anb__tree *tree, const anb__value *value, double *count,
                       anb__value *first) {
    bool written = tree->kind == ANB__TREE_LIST;
    const anb__tree *at = written ? tree->first : tree;
    for (uint32_t i = 0; i < value->count; i++) {
        const anb__value *a = &value->elements[0], *b = &value->elements[i];
        if (a->kind == ANB__VALUE_POISON || b->kind == ANB__VALUE_POISON) return false;
        if (a->kind != b->kind || (a->kind == ANB__VALUE_QUANTITY &&
                                   !anb__same_dimension(a->quantity.dimension, b->quantity.dimension))) {
            anb__error(x->report, at->span, "unequal-dimensions", "the first case is %s, but this one is %s",
                       anb__value_phrase(x, a), anb__value_phrase(x, b));
            return false;
        }
        if (written) at = at->next;
    }
    *count = value->count;
    if (value->count) *first = value->elements[0];
    else anb__error(x->report, tree->span, "too-few", "`cases` needs at least one case");
    return value->count;
}

static anb__value first_case(anb__expander *x, const anb__tree *tree) {
    anb__value value = anb__evaluate(x, tree->first), first = anb__poison();
    double count = 1;
    bool known = false;
    if (value.kind == ANB__VALUE_RANGE) known = range_cases(x, tree->first, &value, &count, &first);
    else if (value.kind == ANB__VALUE_LIST) known = list_cases(x, tree->first, &value, &count, &first);
    else if (value.kind != ANB__VALUE_POISON)
        anb__error(x->report, tree->first->span, "not-a-list", "`cases` takes a list or a range; `%s` is %s",
                   anb__quote(x, tree->first->span), anb__value_phrase(x, &value));
    if (!known) return anb__poison();
    x->combinations *= count;
    if (x->combinations > ANB__LIMIT_CASES) {
        anb__report_limit(x, tree->span, "combinations of cases", "1000");
        return anb__poison();
    }
    return first;
}

void anb__cases_statement(anb__expander *x, const anb__tree *tree) {
    if (!tree->first) return; /* reported by the parser */
    anb__value value = first_case(x, tree);
    const anb__tree *with = anb__replacement_of(x, tree->name);
    if (with) value = anb__evaluate(x, with);
    else if (value.kind != ANB__VALUE_POISON) anb__list_case(x, tree);
    anb__define(x, tree->name, tree->name_span, &value);
    keep(x, &x->network->cases, tree);
}
