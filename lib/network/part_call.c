/* Calls of the language's parts: arguments into items. */
#include <stdio.h>
#include <string.h>

#include "network/expander.h"

typedef struct collected {
    const anb__part_entry *part;
    anb__part_kind kind;
    anb__argument arguments[ANB__ARG_COUNT];
    const anb__tree *trees[ANB__ARG_COUNT]; /* one for each argument */
    unsigned count;
    uint64_t stated; /* bit for each anb__argument_name that is written, right or wrong */
    bool right;
} collected;

/* ---- collecting -------------------------------------------------------------------- */

static const anb__argument_entry *by_place(const anb__part_entry *part, unsigned place) {
    for (int i = 0; i < part->argument_count; i++)
        if (part->arguments[i].rules & ANB__BY_PLACE && place-- == 0) return &part->arguments[i];
    return NULL;
}

/* "z, length" */
static const char *usage_of(anb__expander *x, const anb__part_entry *part) {
    char *text = anb__arena_take(&x->scratch, 128);
    size_t at = 0;
    for (int i = 0; i < part->argument_count; i++)
        if (part->arguments[i].rules & ANB__NEEDED)
            at += (size_t)snprintf(text + at, 128 - at, "%s%s%s", at ? ", " : "", part->arguments[i].key,
                                   part->arguments[i].rules & ANB__BY_PLACE ? "" : " = ...");
    return text;
}

static void report_surplus(anb__expander *x, const collected *c, const anb__tree *argument) {
    unsigned places = 0;
    while (by_place(c->part, places)) places++;
    anb__diagnostic *d = anb__error(
        x->report, argument->span, "argument-count",
        "`%s` takes %u argument%s by place; further ones are written with their names, `key = value`",
        c->part->name, places, places == 1 ? "" : "s");
    anb__add_hint(x->report, d, "`%s(%s)`", c->part->name, usage_of(x, c->part));
}

static void report_option(anb__expander *x, const collected *c, const anb__tree *argument) {
    const char *keys[ANB__ARG_COUNT];
    for (int i = 0; i < c->part->argument_count; i++) keys[i] = c->part->arguments[i].key;
    anb__diagnostic *d = anb__error(x->report, argument->name_span, "unknown-option",
                                    "`%s` has no option `%s`", c->part->name, argument->name->text);
    const char *nearest = anb__nearest(argument->name->text, keys, c->part->argument_count);
    if (nearest) {
        anb__hint_nearest(x, d, argument->name->text, nearest);
        return;
    }
    char list[256] = "";
    size_t at = 0;
    for (int i = 0; i < c->part->argument_count && at < sizeof list; i++)
        at += (size_t)snprintf(list + at, sizeof list - at, "%s`%s`", i ? ", " : "", keys[i]);
    anb__add_hint(x->report, d, "it has %s", list);
}

static void take_argument(anb__expander *x, collected *c, const anb__argument_entry *entry,
                          const anb__tree *argument, const anb__tree *value_tree) {
    anb__value value = anb__evaluate(x, value_tree);
    if (c->stated >> entry->name & 1) {
        anb__error(x->report, argument->span, "given-twice", "`%s` of `%s` is given twice", entry->key,
                   c->part->name);
        c->right = false;
        return;
    }
    c->stated |= UINT64_C(1) << entry->name;
    if (anb__check_argument(x, value_tree, c->kind, entry, &value, &c->arguments[c->count]))
        c->trees[c->count++] = value_tree;
    else c->right = false;
}

static void collect(anb__expander *x, const anb__tree *call, collected *c) {
    unsigned place = 0;
    for (const anb__tree *a = call->first; a; a = a->next) {
        bool keyed = a->kind == ANB__TREE_ARGUMENT;
        const anb__argument_entry *entry = keyed ? anb__find_argument(c->part, a->name->text)
                                                 : by_place(c->part, place++);
        if (entry) {
            take_argument(x, c, entry, a, keyed ? a->first : a);
            continue;
        }
        if (keyed) report_option(x, c, a);
        else if (a->kind != ANB__TREE_ERROR) report_surplus(x, c, a);
        if (keyed) anb__evaluate(x, a->first);
        c->right = false;
    }
}

/* ---- what belongs together ------------------------------------------------------------ */

static void check_needed(anb__expander *x, const anb__tree *call, collected *c) {
    for (int i = 0; i < c->part->argument_count; i++) {
        const anb__argument_entry *entry = &c->part->arguments[i];
        if (!(entry->rules & ANB__NEEDED) || c->stated >> entry->name & 1) continue;
        anb__diagnostic *d = anb__error(x->report, call->span, "missing-argument", "`%s` needs `%s`",
                                        c->part->name, entry->key);
        anb__add_hint(x->report, d, "`%s(%s)`", c->part->name, usage_of(x, c->part));
        c->right = false;
        return;
    }
}

static const anb__argument *find(const collected *c, anb__argument_name name, const anb__tree **tree) {
    for (unsigned i = 0; i < c->count; i++)
        if (c->arguments[i].name == name) {
            if (tree) *tree = c->trees[i];
            return &c->arguments[i];
        }
    return NULL;
}

static void check_excluded(anb__expander *x, const anb__tree *call, collected *c) {
    const anb__argument_entry *first[4] = {0};
    for (int i = 0; i < c->part->argument_count; i++) {
        const anb__argument_entry *entry = &c->part->arguments[i];
        if (!entry->excludes || !(c->stated >> entry->name & 1)) continue;
        if (first[entry->excludes]) {
            anb__error(x->report, call->span, "contradiction",
                       "`%s` and `%s` of `%s` contradict each other: give one", first[entry->excludes]->key,
                       entry->key, c->part->name);
            c->right = false;
        }
        first[entry->excludes] = entry;
    }
}

static bool in_metres(const anb__argument *length) {
    static const anb__dimension metre = ANB__METRE;
    return anb__same_dimension(length->dimension, metre);
}

static void refuse(anb__expander *x, collected *c, const anb__tree *tree, const char *text) {
    anb__error(x->report, tree->span, "contradiction", "%s", text);
    c->right = false;
}

/* Options of lines that need a length in metres, or a positive one. */
static void check_length(anb__expander *x, collected *c, const anb__argument *length) {
    static const anb__dimension per_metre = ANB__LEVEL_PER_METRE;
    const anb__tree *tree = NULL;
    if (!in_metres(length)) {
        if (find(c, ANB__ARG_PERMITTIVITY, &tree))
            refuse(x, c, tree,
                   "`permittivity` needs a length in metres: an angle or a delay says all by itself");
        if (find(c, ANB__ARG_VELOCITY_FACTOR, &tree))
            refuse(x, c, tree,
                   "`velocity_factor` needs a length in metres: an angle or a delay says all by itself");
        const anb__argument *loss = find(c, ANB__ARG_LOSS, &tree);
        if (loss && anb__same_dimension(loss->dimension, per_metre))
            refuse(x, c, tree, "a `loss` per metre needs a length in metres");
    }
    if (length->value.re >= 0) return;
    const anb__argument *loss = find(c, ANB__ARG_LOSS, &tree);
    if (!loss || anb__cis_zero(loss->value)) loss = find(c, ANB__ARG_LOSS_TANGENT, &tree);
    if (loss && !anb__cis_zero(loss->value)) refuse(x, c, tree, "a line of negative length has no loss");
}

static void check_two_lengths(anb__expander *x, const anb__tree *call, collected *c) {
    bool one = c->stated >> ANB__ARG_LENGTH & 1, even = c->stated >> ANB__ARG_EVEN_LENGTH & 1;
    bool odd = c->stated >> ANB__ARG_ODD_LENGTH & 1;
    const char *text = NULL;
    if (one && (even || odd))
        text = "`coupled_lines` takes `length`, or `even_length` and `odd_length`, not both";
    else if (!one && !(even && odd))
        text = "`coupled_lines` needs `length`, or both `even_length` and `odd_length`";
    if (!text) return;
    anb__error(x->report, call->span, "missing-argument", "%s", text);
    c->right = false;
}

/* A resonance needs something to resonate with. */
static void check_resonance(anb__expander *x, collected *c, anb__argument_name main) {
    const anb__tree *tree = NULL;
    const anb__argument *value = find(c, main, NULL);
    if (value && !value->program && value->value.re <= 0 && find(c, ANB__ARG_SRF, &tree))
        refuse(x, c, tree, "`srf` needs a value above zero to resonate with");
}

static void check_together(anb__expander *x, const anb__tree *call, collected *c) {
    static const anb__argument_name lengths[] = {ANB__ARG_LENGTH, ANB__ARG_EVEN_LENGTH, ANB__ARG_ODD_LENGTH};
    for (int i = 0; i < 3; i++) {
        const anb__argument *length = find(c, lengths[i], NULL);
        if (length) check_length(x, c, length);
    }
    if (c->kind == ANB__PART_COUPLED_LINES) check_two_lengths(x, call, c);
    if (c->kind == ANB__PART_INDUCTOR) check_resonance(x, c, ANB__ARG_L);
    if (c->kind == ANB__PART_CAPACITOR) check_resonance(x, c, ANB__ARG_C);
}

/* ---- the item ------------------------------------------------------------------------------ */

static void sort(anb__argument *arguments, unsigned count) {
    for (unsigned i = 1; i < count; i++)
        for (unsigned k = i; k && arguments[k].name < arguments[k - 1].name; k--) {
            anb__argument other = arguments[k];
            memcpy(&arguments[k], &arguments[k - 1], sizeof other);
            memcpy(&arguments[k - 1], &other, sizeof other);
        }
}

/* Arguments that are equal are one already. */
static bool is_same(const anb__item *a, const anb__item *b) {
    return a->arguments == b->arguments && a->part == b->part && a->argument_count == b->argument_count &&
           a->span.source == b->span.source && a->span.start == b->span.start && a->span.end == b->span.end;
}

anb__value anb__part_item(anb__expander *x, anb__span span, anb__part_kind kind, anb__argument *arguments,
                          unsigned count) {
    if (x->region->assumed) count = anb__add_assumed(x, kind, arguments, count);
    sort(arguments, count);
    anb__item item = {.kind = ANB__ITEM_PART, .part = (uint8_t)kind, .span = span};
    item.argument_count = (uint16_t)count;
    item.arguments = anb__share_arguments(x, arguments, count);
    const anb__item **recent = &x->recent[span.start % ANB__RECENT];
    if (!*recent || !is_same(*recent, &item)) *recent = anb__new_item(x, &item);
    return (anb__value){.kind = ANB__VALUE_ITEM, .item = *recent};
}

anb__value anb__part_call(anb__expander *x, const anb__tree *tree, anb__part_kind kind) {
    collected c = {.part = &anb__parts[kind], .kind = kind, .right = true};
    collect(x, tree, &c);
    check_needed(x, tree, &c);
    check_excluded(x, tree, &c);
    check_together(x, tree, &c);
    if (!c.right) return anb__poison();
    return anb__part_item(x, tree->span, kind, c.arguments, c.count);
}
