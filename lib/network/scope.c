/* Names: what they stand for here, and that each has one kind. */
#include <string.h>

#include "network/expander.h"

static const char *const kind_phrases[] = {
    [ANB__SYMBOL_NONE] = "nothing",      [ANB__SYMBOL_VALUE] = "a value",
    [ANB__SYMBOL_NODE] = "a node",       [ANB__SYMBOL_LABEL] = "a label",
    [ANB__SYMBOL_NETWORK] = "a network", [ANB__SYMBOL_OWN_PART] = "a kind of part",
};

/* ---- looking up ------------------------------------------------------------------ */

static const anb__value *parameter_of(const anb__frame *frame, const anb__name *name) {
    const anb__tree *parameter = frame->definition->parameters->first;
    for (uint32_t i = 0; i < frame->count; i++, parameter = parameter->next)
        if (parameter->name == name) return &frame->values[i];
    return NULL;
}

const anb__value *anb__find_value(const anb__expander *x, const anb__name *name) {
    const anb__value *value = x->frame ? parameter_of(x->frame, name) : NULL;
    if (value) return value;
    const anb__symbol *symbol = anb__symbol_find(&x->symbols, x->region->space->id, name);
    if (!symbol || symbol->kind != ANB__SYMBOL_VALUE || !symbol->live) return NULL;
    if (x->frame && symbol->order > x->frame->definition->order) return NULL;
    return symbol->value;
}

anb__definition *anb__find_definition(const anb__expander *x, const anb__name *name) {
    const anb__symbol *symbol = anb__symbol_find(&x->symbols, 0, name);
    if (!symbol || !symbol->live) return NULL;
    bool defines = symbol->kind == ANB__SYMBOL_NETWORK || symbol->kind == ANB__SYMBOL_OWN_PART;
    return defines ? symbol->definition : NULL;
}

/* ---- giving a meaning --------------------------------------------------------------- */

static void report_two_kinds(anb__expander *x, const anb__symbol *symbol, anb__symbol_kind kind,
                             anb__span span) {
    anb__diagnostic *d = anb__error(x->report, span, "two-kinds", "`%s` is %s, so it cannot be %s as well",
                                    symbol->name->text, kind_phrases[symbol->kind], kind_phrases[kind]);
    anb__add_note(x->report, d, symbol->span, "`%s` is %s here", symbol->name->text,
                  kind_phrases[symbol->kind]);
    bool shape = symbol->kind == ANB__SYMBOL_NETWORK || symbol->kind == ANB__SYMBOL_OWN_PART;
    if (shape && kind == ANB__SYMBOL_NODE) anb__add_hint(x->report, d, "write `%s(...)`", symbol->name->text);
}

bool anb__claim(anb__expander *x, anb__symbol *symbol, anb__symbol_kind kind, anb__span span) {
    if (symbol->kind == ANB__SYMBOL_NONE) {
        const anb__symbol *outer = symbol->space ? anb__symbol_find(&x->symbols, 0, symbol->name) : NULL;
        if (outer && (outer->kind == ANB__SYMBOL_NETWORK || outer->kind == ANB__SYMBOL_OWN_PART)) {
            report_two_kinds(x, outer, kind, span);
            return false;
        }
        symbol->kind = (uint8_t)kind;
        symbol->span = span;
    }
    if (symbol->kind == kind) return true;
    report_two_kinds(x, symbol, kind, span);
    return false;
}

static void report_twice(anb__expander *x, const anb__symbol *symbol, anb__span span) {
    anb__diagnostic *d = anb__error(x->report, span, "defined-twice", "`%s` is defined twice",
                                    symbol->name->text);
    anb__add_note(x->report, d, symbol->span, "`%s` is first defined here", symbol->name->text);
}

/* Values of loops live until the round ends. */
static void remember_local(anb__expander *x, anb__symbol *symbol) {
    x->locals = anb__room(&x->scratch, x->locals, x->local_count, &x->local_capacity, sizeof *x->locals);
    x->locals[x->local_count++] = symbol;
}

void anb__define(anb__expander *x, const anb__name *name, anb__span span, const anb__value *value) {
    anb__symbol *symbol = anb__symbol_get(&x->symbols, x->region->space->id, name);
    if (!anb__claim(x, symbol, ANB__SYMBOL_VALUE, span)) return;
    if (symbol->live) {
        report_twice(x, symbol, span);
        return;
    }
    if (!symbol->value) symbol->value = anb__arena_take(&x->scratch, sizeof *symbol->value);
    *symbol->value = *value;
    symbol->live = true;
    symbol->span = span;
    symbol->order = ++x->order;
    if (x->loop_depth) remember_local(x, symbol);
}

static bool is_taken(anb__expander *x, const anb__tree *tree) {
    anb__part_kind part;
    const char *name = tree->name->text, *what = NULL;
    if (anb__find_part(name, &part) || anb__is_composing(name) || anb__is_later_part(name)) what = "part";
    else if (anb__find_function(name)) what = "function";
    else if (anb__find_measure(name)) what = "measure";
    if (!what) return false;
    anb__error(x->report, tree->name_span, "taken-name", "`%s` is a %s of the language: choose another name",
               name, what);
    return true;
}

static void report_shadow(anb__expander *x, const anb__symbol *symbol, const anb__tree *parameter) {
    anb__diagnostic *d = anb__error(
        x->report, parameter->name_span, "defined-twice",
        "the parameter `%s` would hide the value of this name: choose another name", parameter->name->text);
    anb__add_note(x->report, d, symbol->span, "`%s` is defined here", parameter->name->text);
}

/* Nothing shadows: an own kind's parameter may not have the name of a value that it could see. */
static void check_parameters(anb__expander *x, const anb__tree *parameters, bool sees_values) {
    for (const anb__tree *p = parameters->first; p; p = p->next) {
        for (const anb__tree *q = parameters->first; q != p; q = q->next)
            if (q->name == p->name)
                anb__add_note(x->report,
                              anb__error(x->report, p->name_span, "defined-twice",
                                         "there are two parameters `%s`", p->name->text),
                              q->name_span, "this is the first");
        const anb__symbol *symbol = sees_values ? anb__symbol_find(&x->symbols, 0, p->name) : NULL;
        if (symbol && symbol->kind == ANB__SYMBOL_VALUE && symbol->live) report_shadow(x, symbol, p);
    }
}

bool anb__is_defined(const anb__expander *x, const anb__tree *tree) {
    const anb__definition *definition = tree->name ? anb__find_definition(x, tree->name) : NULL;
    return definition && definition->tree == tree;
}

void anb__define_shape(anb__expander *x, const anb__tree *tree, anb__symbol_kind kind) {
    if (!tree->name || !tree->first || is_taken(x, tree)) return;
    anb__symbol *symbol = anb__symbol_get(&x->symbols, 0, tree->name);
    if (symbol->live && symbol->kind == kind) {
        report_twice(x, symbol, tree->name_span);
        return;
    }
    if (!anb__claim(x, symbol, kind, tree->name_span)) return;
    anb__definition *definition = anb__arena_take(&x->scratch, sizeof *definition);
    definition->name = tree->name;
    definition->tree = tree;
    definition->parameters = tree->first;
    definition->body = tree->first->next;
    const anb__tree *body = definition->body; /* an empty one stands for one that could not be read */
    definition->broken = !body || body->kind == ANB__TREE_ERROR || body->span.start == body->span.end;
    for (const anb__tree *p = tree->first->first; p; p = p->next) {
        definition->parameter_count++;
        if (p->kind != ANB__TREE_PARAMETER) definition->broken = true;
    }
    definition->order = ++x->order;
    definition->assumed = x->top.assumed;
    if (!definition->broken) check_parameters(x, tree->first, kind == ANB__SYMBOL_OWN_PART);
    symbol->live = true;
    symbol->definition = definition;
    *x->definitions_end = definition;
    x->definitions_end = &definition->next;
}

/* ---- names that stand for nothing ------------------------------------------------------- */

static bool is_usable_value(const anb__symbol *symbol, const void *user) {
    const anb__expander *x = user;
    return symbol->kind == ANB__SYMBOL_VALUE && symbol->live &&
           (!x->frame || symbol->order <= x->frame->definition->order);
}

static const char *nearest_value(anb__expander *x, const char *name) {
    const char *best = anb__near(x, x->region->space->id, name, is_usable_value, x);
    if (!x->frame) return best;
    const char *known[ANB__MOST_NAMES];
    unsigned count = 0;
    for (const anb__tree *p = x->frame->definition->parameters->first; p && count < ANB__MOST_NAMES - 1;
         p = p->next)
        known[count++] = p->name->text;
    if (best) known[count++] = best;
    return anb__nearest(name, known, count);
}

/* Where the top level defines the name further down, or NULL. */
static const anb__tree *later_definition(const anb__tree *parent, const anb__name *name) {
    for (const anb__tree *s = parent->first; s; s = s->next) {
        bool defines = s->kind == ANB__TREE_DEFINE || s->kind == ANB__TREE_TUNE || s->kind == ANB__TREE_CASES;
        if (defines && s->name == name) return s;
        const anb__tree *inside = NULL;
        if (s->kind == ANB__TREE_INCLUDE || s->kind == ANB__TREE_FILE) inside = later_definition(s, name);
        if (inside) return inside;
    }
    return NULL;
}

static void explain_undefined(anb__expander *x, anb__diagnostic *d, const anb__name *name) {
    if (anb__is_tired(x)) return;
    bool inside = x->region->definition != NULL;
    const anb__symbol *outer = anb__symbol_find(&x->symbols, 0, name);
    const anb__tree *later = inside ? NULL : later_definition(x->root, name);
    if (inside && outer && outer->kind == ANB__SYMBOL_VALUE)
        anb__add_hint(x->report, d, "a network sees its own parameters and names only: make `%s` a parameter",
                      name->text);
    else if (later)
        anb__add_note(x->report, d, later->name_span, "it is defined here: a value stands before its use");
    else anb__hint_nearest(x, d, name->text, nearest_value(x, name->text));
}

bool anb__first_told(anb__expander *x, const anb__name *name) {
    anb__symbol *symbol = anb__symbol_get(&x->symbols, x->region->space->id, name);
    if (symbol->told || anb__maybe_defined(x, name)) return false;
    symbol->told = true;
    return true;
}

void anb__report_undefined(anb__expander *x, const anb__tree *tree) {
    const anb__name *name = tree->name;
    const anb__symbol *symbol = anb__symbol_find(&x->symbols, x->region->space->id, name);
    if (!anb__first_told(x, name)) return;
    if (symbol && symbol->kind == ANB__SYMBOL_VALUE && !symbol->live) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "undefined-name",
                                        "`%s` lives in the block that defines it only", name->text);
        anb__add_note(x->report, d, symbol->span, "it is defined here");
    } else if (symbol && symbol->kind != ANB__SYMBOL_VALUE && symbol->kind != ANB__SYMBOL_NONE) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "undefined-name", "`%s` is %s, not a value",
                                        name->text, kind_phrases[symbol->kind]);
        anb__add_note(x->report, d, symbol->span, "`%s` is %s here", name->text, kind_phrases[symbol->kind]);
    } else {
        explain_undefined(
            x, anb__error(x->report, tree->span, "undefined-name", "`%s` is not defined", name->text), name);
    }
}

/* ---- names with indices, names of places --------------------------------------------------- */

enum { MOST_INDICES = 8, LONGEST_NAME = 1024 };

/* "[12]"; printf would take most of the time of a large network's expansion. */
static size_t write_index(char *text, long value) {
    char digits[24];
    size_t count = 0, at = 0;
    unsigned long rest = value < 0 ? -(unsigned long)value : (unsigned long)value;
    do digits[count++] = (char)('0' + rest % 10);
    while (rest /= 10);
    text[at++] = '[';
    if (value < 0) text[at++] = '-';
    while (count) text[at++] = digits[--count];
    text[at++] = ']';
    return at;
}

static bool add_index(anb__expander *x, const anb__tree *index, char *text, size_t *length) {
    double value;
    if (!anb__wanted_whole(x, index, "an index", -1e9, &value)) return false;
    *length += write_index(text + *length, (long)value);
    return true;
}

bool anb__indexed_name(anb__expander *x, const anb__tree *tree, const anb__name **base,
                       const anb__name **full) {
    const anb__tree *layers[MOST_INDICES];
    int count = 0;
    for (; tree->kind == ANB__TREE_INDEX; tree = tree->first) {
        if (count == MOST_INDICES) {
            anb__report_limit(x, tree->span, "indices of one name", "8");
            return false;
        }
        layers[count++] = tree;
    }
    if (tree->kind != ANB__TREE_NAME) {
        if (tree->kind != ANB__TREE_ERROR)
            anb__error(x->report, tree->span, "not-a-name", "`%s` is no name", anb__quote(x, tree->span));
        return false;
    }
    *base = *full = tree->name;
    if (!count) return true;
    char text[LONGEST_NAME];
    size_t length = tree->name->length;
    if (length > LONGEST_NAME / 2) {
        anb__report_limit(x, tree->span, "characters of a name with an index", "512");
        return false;
    }
    memcpy(text, tree->name->text, length);
    while (count--)
        if (!add_index(x, layers[count]->first->next, text, &length)) return false;
    *full = anb__name_of(&x->texts, text, (uint32_t)length);
    return true;
}

anb__space *anb__new_space(anb__expander *x, anb__space *parent, const anb__name *label) {
    anb__space *space = anb__arena_take(&x->scratch, sizeof *space);
    space->id = ++x->space_count;
    if (label) x->labelled_spaces++;
    space->parent = parent;
    space->label = label;
    space->reachable = parent->reachable && label;
    return space;
}

static bool is_text_of_ours(const anb__name *name) { return name->text[name->length - 1] == ']'; }

const char *anb__path_text(anb__expander *x, const anb__space *space, const anb__name *name) {
    if (!space->reachable) return NULL;
    if (!space->parent && is_text_of_ours(name)) return name->text;
    size_t length = name->length;
    for (const anb__space *s = space; s->parent; s = s->parent) length += s->label->length + 1;
    char *text = anb__arena_take(&x->network->arena, length + 1);
    size_t at = length - name->length;
    memcpy(text + at, name->text, name->length);
    for (const anb__space *s = space; s->parent; s = s->parent) {
        text[--at] = '.';
        at -= s->label->length;
        memcpy(text + at, s->label->text, s->label->length);
    }
    return text;
}
