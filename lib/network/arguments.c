/* One argument of a part against its entry in the catalogue; what `assume` adds; equal sets of
 * arguments kept once. */
#include <stdio.h>
#include <string.h>

#include "network/expander.h"

/* ---- one argument ------------------------------------------------------------------ */

typedef struct subject {
    const anb__tree *tree; /* the value */
    const anb__part_entry *part;
    const anb__argument_entry *entry;
} subject;

/* "`z` of `line`" */
static const char *what(anb__expander *x, const subject *s) {
    char *text = anb__arena_take(&x->scratch, 80);
    snprintf(text, 80, "`%s` of `%s`", s->entry->key, s->part->name);
    return text;
}

static const anb__argument_form *form_of(const subject *s, const anb__quantity *q) {
    for (unsigned i = 0; i < s->entry->form_count; i++)
        if (anb__same_dimension(s->entry->forms[i].dimension, q->dimension)) return &s->entry->forms[i];
    return NULL;
}

static bool check_at(anb__expander *x, const subject *s, const anb__argument_form *form,
                     const anb__quantity *q) {
    bool has_at = q->marks & ANB__HAS_AT;
    if (has_at && form->at == ANB__AT_NEVER) {
        char phrase[96];
        anb__error(x->report, s->tree->span, "at-here", "%s takes no `@` where it is %s", what(x, s),
                   anb__dimension_phrase(q->dimension, phrase, sizeof phrase));
        return false;
    }
    if (has_at || form->at != ANB__AT_MUST) return true;
    anb__diagnostic *d = anb__error(x->report, s->tree->span, "missing-at",
                                    "%s is an angle, so it needs the frequency at which it holds",
                                    what(x, s));
    anb__add_hint(x->report, d, "write `%s @ 1 GHz`", anb__quote(x, s->tree->span));
    return false;
}

static bool report_value(anb__expander *x, const subject *s, const char *code, const char *rule) {
    anb__error(x->report, s->tree->span, code, "%s %s; here it is `%s`", what(x, s), rule,
               anb__quote(x, s->tree->span));
    return false;
}

static void warn_negative(anb__expander *x, const subject *s, anb__dimension dimension) {
    const char *noun = anb__same_dimension(dimension, anb__ohm)       ? "resistance"
                       : anb__same_dimension(dimension, anb__siemens) ? "conductance"
                       : anb__same_dimension(dimension, anb__henry)   ? "inductance"
                       : anb__same_dimension(dimension, anb__farad)   ? "capacitance"
                                                                      : "attenuation";
    anb__warning(x->report, s->tree->span, "negative-value", "`%s` is a negative %s",
                 anb__quote(x, s->tree->span), noun);
}

static bool check_number(anb__expander *x, const subject *s, const anb__quantity *q) {
    unsigned rules = s->entry->rules;
    double value = q->value.re;
    if (q->term) {
        if (!(rules & ANB__CONSTANT)) return true;
        return report_value(x, s, "frequency-here", "may not depend on `frequency`");
    }
    if (q->value.im != 0) return rules & ANB__MAY_COMPLEX || report_value(x, s, "not-real", "has to be real");
    if (rules & ANB__ABOVE_ZERO && value <= 0)
        return report_value(x, s, "not-positive", "has to be above zero");
    if (rules & ANB__NOT_BELOW_ZERO && value < 0)
        return report_value(x, s, "negative", "may not be below zero");
    if (rules & ANB__NOT_ZERO && value == 0) return report_value(x, s, "zero", "may not be zero");
    if (rules & ANB__WITHIN_ONE && fabs(value) > 1)
        return report_value(x, s, "outside-domain", "has to lie from -1 to 1");
    if (rules & ANB__WARN_BELOW_ZERO && value < 0) warn_negative(x, s, q->dimension);
    return true;
}

static bool take_program(anb__expander *x, const subject *s, const anb__quantity *q, anb__argument *out) {
    if (!q->term) return true;
    out->program = anb__program_of(&x->network->arena, &x->scratch, q->term, &x->making);
    if (out->program) return true;
    anb__error(
        x->report, s->tree->span, "limit",
        "`%s` is too large for an expression of `frequency`: it has to keep more than %d values at once",
        anb__quote(x, s->tree->span), ANB__PROGRAM_SLOTS);
    return false;
}

bool anb__check_argument(anb__expander *x, const anb__tree *tree, anb__part_kind kind,
                         const anb__argument_entry *entry, const anb__value *value, anb__argument *out) {
    subject s = {.tree = tree, .part = &anb__parts[kind], .entry = entry};
    if (value->kind == ANB__VALUE_POISON) return false;
    if (value->kind != ANB__VALUE_QUANTITY) {
        anb__error(x->report, tree->span, "not-a-number", "%s is a number; `%s` is %s", what(x, &s),
                   anb__quote(x, tree->span), anb__value_phrase(x, value));
        return false;
    }
    anb__quantity q = value->quantity;
    if (q.dimension.scale == ANB__SCALE_DBM && !q.term &&
        anb__same_dimension(entry->forms[0].dimension, anb__watt))
        q = anb__dbm_to_watt(&q);
    const anb__argument_form *form = form_of(&s, &q);
    if (!form) {
        anb__report_dimension(x, tree, &q, what(x, &s), entry->forms, entry->form_count);
        return false;
    }
    if (!check_at(x, &s, form, &q) || !check_number(x, &s, &q)) return false;
    memset(out, 0, sizeof *out); /* the padding too: equal arguments are found by their bytes */
    out->name = entry->name;
    out->has_at = q.marks & ANB__HAS_AT;
    out->dimension = q.dimension;
    out->value = q.value;
    out->at_hz = out->has_at ? q.at_hz : 0;
    return take_program(x, &s, &q, out);
}

/* ---- assumed options ----------------------------------------------------------------------- */

static const anb__argument *find(const anb__argument *arguments, unsigned count, unsigned name) {
    for (unsigned i = 0; i < count; i++)
        if (arguments[i].name == name) return &arguments[i];
    return NULL;
}

static bool is_excluded(const anb__part_entry *part, const anb__argument *arguments, unsigned count,
                        unsigned group) {
    for (int i = 0; group && i < part->argument_count; i++)
        if (part->arguments[i].excludes == group && find(arguments, count, part->arguments[i].name))
            return true;
    return false;
}

/* Options that speak of a length in metres, on a line whose length is another: they say nothing. */
static bool has_no_sense(const anb__argument *option, const anb__argument *arguments, unsigned count) {
    static const anb__dimension metre = ANB__METRE, per_metre = ANB__LEVEL_PER_METRE;
    const anb__argument *length = find(arguments, count, ANB__ARG_LENGTH);
    if (!length) length = find(arguments, count, ANB__ARG_EVEN_LENGTH);
    if (!length) return false;
    bool loses = option->name == ANB__ARG_LOSS || option->name == ANB__ARG_LOSS_TANGENT;
    if (loses && length->value.re < 0) return true;
    bool of_metres = option->name == ANB__ARG_PERMITTIVITY || option->name == ANB__ARG_VELOCITY_FACTOR ||
                     anb__same_dimension(option->dimension, per_metre);
    return of_metres && !anb__same_dimension(length->dimension, metre);
}

unsigned anb__add_assumed(anb__expander *x, anb__part_kind kind, anb__argument *arguments, unsigned count) {
    const anb__part_entry *part = &anb__parts[kind];
    for (const anb__assumed *a = x->region->assumed; a; a = a->next) {
        if (a->part != kind || find(arguments, count, a->argument.name)) continue;
        unsigned group = 0;
        for (int i = 0; i < part->argument_count; i++)
            if (part->arguments[i].name == a->argument.name) group = part->arguments[i].excludes;
        if (is_excluded(part, arguments, count, group) || has_no_sense(&a->argument, arguments, count))
            continue;
        arguments[count++] = a->argument;
    }
    return count;
}

static void assume_option(anb__expander *x, const anb__tree *call, anb__part_kind kind,
                          const anb__tree *option) {
    const anb__part_entry *part = &anb__parts[kind];
    if (option->kind != ANB__TREE_ARGUMENT) {
        if (option->kind == ANB__TREE_ERROR) return;
        anb__error(x->report, option->span, "option-only",
                   "`assume` takes options by their names, e.g. `inductor(q = 40)`");
        return;
    }
    const anb__argument_entry *entry = anb__find_argument(part, option->name->text);
    if (!entry || entry->rules & ANB__NEEDED) {
        anb__error(x->report, option->name_span, "unknown-option",
                   "`%s` is no option of `%s` that can be assumed", option->name->text, call->name->text);
        return;
    }
    anb__value value = anb__evaluate(x, option->first);
    anb__assumed assumed = {.next = x->region->assumed, .part = kind};
    if (!anb__check_argument(x, option->first, kind, entry, &value, &assumed.argument)) return;
    anb__assumed *kept = anb__arena_take(&x->scratch, sizeof *kept);
    *kept = assumed;
    x->region->assumed = kept;
}

void anb__assume(anb__expander *x, const anb__tree *tree) {
    for (const anb__tree *call = tree->first; call; call = call->next) {
        anb__part_kind kind;
        if (call->kind != ANB__TREE_CALL) continue;
        if (!anb__find_part(call->name->text, &kind)) {
            const char *names[ANB__MOST_NAMES];
            unsigned count = anb__part_names(names);
            anb__diagnostic *d = anb__error(x->report, call->name_span, "unknown-part",
                                            "`%s` is no part of the language", call->name->text);
            anb__hint_nearest(x, d, call->name->text, anb__nearest(call->name->text, names, count));
            continue;
        }
        for (const anb__tree *option = call->first; option; option = option->next)
            assume_option(x, call, kind, option);
    }
}

/* ---- equal sets, kept once --------------------------------------------------------------------- */

struct anb__shared_arguments {
    uint32_t hash, count;
    const anb__argument *arguments;
};

static uint32_t hash_of(const void *data, size_t size) {
    const unsigned char *bytes = data;
    uint64_t hash = 14695981039346656037u;
    for (size_t i = 0; i + 8 <= size; i += 8) { /* the size is a multiple of 8 */
        uint64_t word;
        memcpy(&word, bytes + i, 8);
        hash = (hash ^ word) * 1099511628211u;
        hash ^= hash >> 29;
    }
    return (uint32_t)(hash ^ hash >> 32);
}

static struct anb__shared_arguments *slot_of(const anb__expander *x, uint32_t hash,
                                             const anb__argument *arguments, unsigned count) {
    uint32_t mask = x->shared_capacity - 1, at = hash & mask;
    for (;; at = (at + 1) & mask) {
        struct anb__shared_arguments *here = &x->shared[at];
        if (!here->arguments) return here;
        if (here->hash == hash && here->count == count &&
            !memcmp(here->arguments, arguments, count * sizeof *arguments))
            return here;
    }
}

static void enlarge(anb__expander *x) {
    struct anb__shared_arguments *old = x->shared;
    uint32_t old_capacity = x->shared_capacity;
    x->shared_capacity = old_capacity ? 2 * old_capacity : 64;
    x->shared = anb__arena_take(&x->scratch, x->shared_capacity * sizeof *x->shared);
    for (uint32_t i = 0; i < old_capacity; i++)
        if (old[i].arguments) *slot_of(x, old[i].hash, old[i].arguments, old[i].count) = old[i];
}

const anb__argument *anb__share_arguments(anb__expander *x, const anb__argument *arguments, unsigned count) {
    if (!count) return NULL;
    if (2 * x->shared_count >= x->shared_capacity) enlarge(x);
    size_t size = count * sizeof *arguments;
    uint32_t hash = hash_of(arguments, size);
    struct anb__shared_arguments *slot = slot_of(x, hash, arguments, count);
    if (!slot->arguments) {
        anb__argument *kept = anb__arena_take(&x->network->arena, size);
        memcpy(kept, arguments, size);
        *slot = (struct anb__shared_arguments){hash, count, kept};
        x->shared_count++;
    }
    return slot->arguments;
}
