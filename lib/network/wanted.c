/* What a place asks of a value: its dimension, and what it may depend on. */
#include <stdio.h>

#include "network/expander.h"

anb__quantity anb__dbm_to_watt(const anb__quantity *q) {
    anb__quantity out = *q;
    out.dimension = anb__watt;
    out.value.re = 1e-3 * pow(10, q->value.re / 10);
    return out;
}

/* "an impedance in ohm", "an angle in deg @ f, a time in s or a length in m" */
static void write_forms(const anb__argument_form *forms, unsigned count, char *text, size_t size) {
    size_t at = 0;
    *text = 0;
    for (unsigned i = 0; i < count && at < size; i++) {
        char phrase[96];
        const char *between = i == 0 ? "" : i + 1 == count ? " or " : ", ";
        at += (size_t)snprintf(text + at, size - at, "%s%s%s", between,
                               anb__dimension_phrase(forms[i].dimension, phrase, sizeof phrase),
                               forms[i].at == ANB__AT_MUST ? " at a frequency" : "");
    }
}

void anb__report_dimension(anb__expander *x, const anb__tree *tree, const anb__quantity *q, const char *what,
                           const anb__argument_form *forms, unsigned form_count) {
    char expected[320], given[96], unit[96];
    write_forms(forms, form_count, expected, sizeof expected);
    const char *quote = anb__quote(x, tree->span);
    if (!anb__same_dimension(q->dimension, anb__plain)) {
        anb__error(x->report, tree->span, "wrong-unit", "`%s` is %s, but %s is %s", quote,
                   anb__dimension_phrase(q->dimension, given, sizeof given), what, expected);
        return;
    }
    anb__diagnostic *d = anb__error(x->report, tree->span, "missing-unit", "`%s` has no unit: %s is %s",
                                    quote, what, expected);
    const char *name = anb__dimension_name(forms[0].dimension, unit, sizeof unit);
    if (tree->kind == ANB__TREE_NUMBER)
        anb__add_hint(x->report, d, "write `%s %s%s`", quote, name,
                      forms[0].at == ANB__AT_MUST ? " @ 1 GHz" : "");
}

/* Why a value may not stand in a place: the first reason that the place names. */
static const struct reason {
    unsigned refused;
    const char *code, *property, *rule;
} reasons[] = {
    {ANB__NO_FREQUENCY, "frequency-here", "depends on `frequency`", "may not"},
    {ANB__NO_TOLERANCE, "tolerance-here", "has a tolerance", "may have none"},
    {ANB__NO_TUNE, "tune-here", "depends on a `tune` name", "may not"},
    {ANB__NO_COMPLEX, "complex-here", "is complex", "has to be real"},
};

static unsigned properties_of(const anb__quantity *q) {
    return (q->term ? ANB__NO_FREQUENCY : 0u) | (q->marks & ANB__HAS_TOLERANCE ? ANB__NO_TOLERANCE : 0u) |
           (q->marks & ANB__FROM_TUNE ? ANB__NO_TUNE : 0u) |
           (!q->term && q->value.im != 0 ? ANB__NO_COMPLEX : 0u);
}

bool anb__check_wanted(anb__expander *x, const anb__tree *tree, const char *what, anb__dimension dimension,
                       unsigned refused, anb__quantity *q) {
    if (anb__same_dimension(dimension, anb__watt) && q->dimension.scale == ANB__SCALE_DBM && !q->term)
        *q = anb__dbm_to_watt(q);
    if (!anb__same_dimension(q->dimension, dimension)) {
        anb__argument_form form = {dimension, ANB__AT_NEVER};
        anb__report_dimension(x, tree, q, what, &form, 1);
        return false;
    }
    unsigned found = refused & properties_of(q);
    for (size_t i = 0; found && i < sizeof reasons / sizeof *reasons; i++) {
        if (!(found & reasons[i].refused)) continue;
        anb__error(x->report, tree->span, reasons[i].code, "`%s` %s: %s %s", anb__quote(x, tree->span),
                   reasons[i].property, what, reasons[i].rule);
        return false;
    }
    return true;
}

bool anb__wanted(anb__expander *x, const anb__tree *tree, const char *what, anb__dimension dimension,
                 unsigned refused, anb__quantity *out) {
    return anb__operand(x, tree, out) && anb__check_wanted(x, tree, what, dimension, refused, out);
}

bool anb__wanted_whole(anb__expander *x, const anb__tree *tree, const char *what, double least, double *out) {
    anb__quantity q;
    if (!anb__wanted(x, tree, what, anb__plain, ANB__FIXED, &q)) return false;
    *out = q.value.re;
    if (*out != rint(*out) || fabs(*out) > 1e9) {
        anb__error(x->report, tree->span, "not-whole", "%s is a whole number, which `%s` is not", what,
                   anb__quote(x, tree->span));
        return false;
    }
    if (*out >= least) return true;
    anb__error(x->report, tree->span, "too-few", "%s is at least %ld, not %ld", what, (long)least,
               (long)*out);
    return false;
}

bool anb__wanted_range(anb__expander *x, const anb__tree *tree, const char *what, anb__dimension dimension,
                       unsigned refused, anb__quantity bounds[2]) {
    anb__value value = anb__evaluate(x, tree);
    if (value.kind == ANB__VALUE_POISON) return false;
    if (value.kind != ANB__VALUE_RANGE) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "not-a-range", "%s is a range; `%s` is %s",
                                        what, anb__quote(x, tree->span), anb__value_phrase(x, &value));
        anb__add_hint(x->report, d, "a range is written `low .. high`");
        return false;
    }
    bool written = tree->kind == ANB__TREE_RANGE;
    for (int i = 0; i < 2; i++) {
        const anb__tree *end = !written ? tree : i ? tree->first->next : tree->first;
        bounds[i] = value.bounds[i];
        if (!anb__check_wanted(x, end, what, dimension, refused | ANB__FIXED, &bounds[i])) return false;
    }
    return true;
}
