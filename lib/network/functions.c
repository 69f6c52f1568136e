/* Calls of functions: how many arguments, of which dimension, and the dimension of the result. */
#include <string.h>

#include "network/expander.h"

enum { MOST_ARGUMENTS = 64 };

typedef struct arguments {
    const anb__tree **trees;
    anb__quantity *q;
    unsigned count;
} arguments;

typedef anb__value apply_function(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                                  arguments *list);

/* ---- gathering ------------------------------------------------------------------------ */

static bool right_count(anb__expander *x, const anb__tree *call, unsigned least, unsigned most) {
    unsigned given = 0;
    for (const anb__tree *a = call->first; a; a = a->next) {
        given++;
        if (a->kind != ANB__TREE_ARGUMENT) continue;
        anb__error(x->report, a->span, "unknown-option",
                   "`%s` takes its arguments by their order, not by name", call->name->text);
        return false;
    }
    if (given >= least && given <= most) return true;
    const char *more = least == most ? "" : most == MOST_ARGUMENTS ? " or more" : " at most";
    anb__error(x->report, call->span, "argument-count", "`%s` takes %u%s argument%s, not %u",
               call->name->text, least, more, least == 1 && !*more ? "" : "s", given);
    return false;
}

static bool gather(anb__expander *x, const anb__tree *call, unsigned least, unsigned most, arguments *list) {
    unsigned count = 0;
    if (!right_count(x, call, least, most)) return false;
    for (const anb__tree *a = call->first; a; a = a->next) count++;
    list->trees = anb__arena_take(&x->scratch, count * sizeof *list->trees);
    list->q = anb__arena_take(&x->scratch, count * sizeof *list->q);
    list->count = count;
    bool known = true;
    unsigned i = 0;
    for (const anb__tree *a = call->first; a; a = a->next, i++) {
        list->trees[i] = a;
        known &= anb__operand(x, a, &list->q[i]);
    }
    return known;
}

static bool is_of(const anb__quantity *q, anb__dimension dimension) {
    return anb__same_dimension(q->dimension, dimension);
}

/* The argument in one of two dimensions; reported where it is in neither. */
static bool expect(anb__expander *x, const anb__tree *call, const arguments *list, unsigned i,
                   const anb__dimension *dimensions, unsigned count) {
    anb__argument_form forms[2];
    char what[64] = "the argument of `";
    for (unsigned k = 0; k < count; k++) {
        if (is_of(&list->q[i], dimensions[k])) return true;
        forms[k] = (anb__argument_form){dimensions[k], ANB__AT_NEVER};
    }
    strcat(strncat(what, call->name->text, 32), "`");
    anb__report_dimension(x, list->trees[i], &list->q[i], what, forms, count);
    return false;
}

static bool real_only(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                      const arguments *list) {
    for (unsigned i = 0; entry->real_only && i < list->count; i++) {
        const anb__quantity *q = &list->q[i];
        if (anb__is_real(q) && !(q->marks & ANB__MAY_BE_COMPLEX)) continue;
        anb__error(x->report, list->trees[i]->span, "not-real", "`%s` takes real numbers; `%s` is complex",
                   call->name->text, anb__quote(x, list->trees[i]->span));
        return false;
    }
    return true;
}

/* ---- one function for each rule ------------------------------------------------------------ */

static anb__value apply_root(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                             arguments *list) {
    anb__dimension dimension;
    char phrase[96];
    if (anb__dimension_power(list->q[0].dimension, 0.5, &dimension))
        return anb__compute(x, call, entry->operation, &list->q[0], NULL, dimension);
    anb__error(x->report, call->span, "no-power", "the root of %s has no unit",
               anb__dimension_phrase(list->q[0].dimension, phrase, sizeof phrase));
    return anb__poison();
}

static anb__value apply_keep(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                             arguments *list) {
    anb__value out = anb__compute(x, call, entry->operation, &list->q[0], NULL, list->q[0].dimension);
    if (entry->operation != ANB__CONJ) out.quantity.marks &= (uint8_t)~ANB__MAY_BE_COMPLEX;
    return out;
}

static anb__value apply_plain(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                              arguments *list) {
    if (!expect(x, call, list, 0, &anb__plain, 1)) return anb__poison();
    return anb__compute(x, call, entry->operation, &list->q[0], NULL, anb__plain);
}

static anb__value apply_exp(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                            arguments *list) {
    const anb__dimension dimensions[] = {anb__plain, anb__angle};
    const anb__quantity *q = &list->q[0];
    if (!expect(x, call, list, 0, dimensions, 2)) return anb__poison();
    if (is_of(q, anb__plain)) return anb__compute(x, call, entry->operation, q, NULL, anb__plain);
    if (!q->term && q->value.re != 0) {
        anb__diagnostic *d = anb__error(x->report, list->trees[0]->span, "real-angle",
                                        "`exp` takes an angle times `j`, or a plain number");
        anb__add_hint(x->report, d, "write `j*%s`", anb__quote(x, list->trees[0]->span));
        return anb__poison();
    }
    return anb__compute(x, call, entry->of_turns, q, NULL, anb__plain);
}

static anb__value apply_angle(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                              arguments *list) {
    const anb__dimension dimensions[] = {anb__angle, anb__plain};
    if (!expect(x, call, list, 0, dimensions, 2)) return anb__poison();
    bool turns = is_of(&list->q[0], anb__angle);
    return anb__compute(x, call, turns ? entry->of_turns : entry->operation, &list->q[0], NULL, anb__plain);
}

static anb__value apply_to_angle(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                                 arguments *list) {
    if (!expect(x, call, list, 0, &anb__plain, 1)) return anb__poison();
    return anb__compute(x, call, entry->operation, &list->q[0], NULL, anb__angle);
}

static anb__value apply_arg(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                            arguments *list) {
    anb__value out = anb__compute(x, call, entry->operation, &list->q[0], NULL, anb__angle);
    out.quantity.marks &= (uint8_t)~ANB__MAY_BE_COMPLEX;
    return out;
}

static bool all_alike(anb__expander *x, const anb__tree *call, const arguments *list) {
    char first[96], other[96];
    for (unsigned i = 1; i < list->count; i++) {
        if (is_of(&list->q[i], list->q[0].dimension)) continue;
        anb__error(x->report, list->trees[i]->span, "unequal-dimensions",
                   "`%s` is %s, but the first argument of `%s` is %s", anb__quote(x, list->trees[i]->span),
                   anb__dimension_phrase(list->q[i].dimension, other, sizeof other), call->name->text,
                   anb__dimension_phrase(list->q[0].dimension, first, sizeof first));
        return false;
    }
    return true;
}

static anb__value apply_atan2(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                              arguments *list) {
    if (!all_alike(x, call, list)) return anb__poison();
    return anb__compute(x, call, entry->operation, &list->q[0], &list->q[1], anb__angle);
}

static anb__value apply_choose(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                               arguments *list) {
    if (!all_alike(x, call, list)) return anb__poison();
    anb__value out = anb__quantity_value(&list->q[0]);
    for (unsigned i = 1; i < list->count && out.kind == ANB__VALUE_QUANTITY; i++) {
        anb__quantity so_far = out.quantity;
        out = anb__compute(x, call, entry->operation, &so_far, &list->q[i], so_far.dimension);
    }
    return out;
}

static anb__value apply_amplitude(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                                  arguments *list) {
    if (!expect(x, call, list, 0, &anb__level, 1)) return anb__poison();
    return anb__compute(x, call, entry->operation, &list->q[0], NULL, anb__plain);
}

static anb__value apply_decibel(anb__expander *x, const anb__tree *call, const anb__function_entry *entry,
                                arguments *list) {
    if (!expect(x, call, list, 0, &anb__plain, 1)) return anb__poison();
    return anb__compute(x, call, entry->operation, &list->q[0], NULL, anb__level);
}

static const struct rule {
    apply_function *apply;
    unsigned least, most;
} rules[] = {
    [ANB__RULE_ROOT] = {apply_root, 1, 1},
    [ANB__RULE_KEEP] = {apply_keep, 1, 1},
    [ANB__RULE_PLAIN] = {apply_plain, 1, 1},
    [ANB__RULE_EXP] = {apply_exp, 1, 1},
    [ANB__RULE_ANGLE] = {apply_angle, 1, 1},
    [ANB__RULE_TO_ANGLE] = {apply_to_angle, 1, 1},
    [ANB__RULE_ARG] = {apply_arg, 1, 1},
    [ANB__RULE_ATAN2] = {apply_atan2, 2, 2},
    [ANB__RULE_CHOOSE] = {apply_choose, 1, MOST_ARGUMENTS},
    [ANB__RULE_AMPLITUDE] = {apply_amplitude, 1, 1},
    [ANB__RULE_DECIBEL] = {apply_decibel, 1, 1},
};

/* ---- the two that take more than numbers --------------------------------------------------------- */

static anb__value count_of(anb__expander *x, const anb__tree *call) {
    if (!right_count(x, call, 1, 1)) return anb__poison();
    anb__value list = anb__evaluate(x, call->first);
    if (list.kind == ANB__VALUE_POISON) return list;
    if (list.kind == ANB__VALUE_LIST) return anb__plain_value(list.count);
    anb__error(x->report, call->first->span, "not-a-list", "`count` takes a list; `%s` is %s",
               anb__quote(x, call->first->span), anb__value_phrase(x, &list));
    return anb__poison();
}

static bool find_series(anb__expander *x, const anb__tree *tree, int *per_decade) {
    if (tree->kind == ANB__TREE_ERROR) return false;
    if (tree->kind == ANB__TREE_NAME && anb__preferred_series(tree->name->text, per_decade)) return true;
    anb__error(x->report, tree->span, "unknown-series",
               "`%s` is no series of preferred values: there are E3, E6, E12, E24, E48, E96 and E192",
               anb__quote(x, tree->span));
    return false;
}

static anb__value preferred(anb__expander *x, const anb__tree *call) {
    anb__quantity q;
    int per_decade;
    if (!right_count(x, call, 2, 2)) return anb__poison();
    bool known = anb__operand(x, call->first, &q);
    bool found = find_series(x, call->first->next, &per_decade);
    if (!known || !found ||
        !anb__check_wanted(x, call->first, "a preferred value", q.dimension,
                           ANB__NO_FREQUENCY | ANB__NO_COMPLEX, &q))
        return anb__poison();
    if (q.dimension.scale != ANB__SCALE_PLAIN || q.value.re <= 0) {
        anb__error(x->report, call->first->span, "not-positive",
                   "`preferred` takes a positive value, and not one in dB");
        return anb__poison();
    }
    q.value.re = anb__preferred_value(q.value.re, per_decade);
    return anb__quantity_value(&q);
}

anb__value anb__function_call(anb__expander *x, const anb__tree *tree, const anb__function_entry *entry) {
    arguments list;
    if (entry->rule == ANB__RULE_COUNT_OF) return count_of(x, tree);
    if (entry->rule == ANB__RULE_PREFERRED) return preferred(x, tree);
    const struct rule *rule = &rules[entry->rule];
    if (!gather(x, tree, rule->least, rule->most, &list)) return anb__poison();
    if (!real_only(x, tree, entry, &list)) return anb__poison();
    return rule->apply(x, tree, entry, &list);
}
