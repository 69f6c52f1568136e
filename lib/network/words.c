/* The words of messages. */
#include <ctype.h>
#include <string.h>

#include "network/expander.h"

enum { LONGEST_QUOTE = 48 };

const char *anb__quote(anb__expander *x, anb__span span) {
    const anb__source *source = &x->report->sources.list[span.source];
    uint32_t length = span.end - span.start;
    const char *text = source->text + span.start;
    const char *line_end = memchr(text, '\n', length);
    bool whole = length <= LONGEST_QUOTE && !line_end;
    if (whole) return anb__arena_text(&x->scratch, text, length);
    if (line_end && line_end - text < LONGEST_QUOTE) length = (uint32_t)(line_end - text);
    else length = LONGEST_QUOTE - 4;
    while (length && ((unsigned char)text[length] & 0xC0) == 0x80) length--;
    while (length && isspace((unsigned char)text[length - 1])) length--;
    char *out = anb__arena_take(&x->scratch, length + 5);
    memcpy(out, text, length);
    memcpy(out + length, " ...", 5);
    return out;
}

static const char *item_phrase(const anb__item *item) {
    switch (item->kind) {
    case ANB__ITEM_NETWORK: return "a network";
    case ANB__ITEM_CHAIN:
    case ANB__ITEM_PARALLEL: return "a chain of parts";
    case ANB__ITEM_SHUNT: return "a shunt";
    default: return "a part";
    }
}

const char *anb__value_phrase(anb__expander *x, const anb__value *value) {
    switch (value->kind) {
    case ANB__VALUE_TEXT: return "a text";
    case ANB__VALUE_LIST: return "a list";
    case ANB__VALUE_RANGE: return "a range";
    case ANB__VALUE_ITEM: return item_phrase(value->item);
    case ANB__VALUE_QUANTITY:
        return anb__dimension_phrase(value->quantity.dimension, anb__arena_take(&x->scratch, 96), 96);
    default: return "nothing";
    }
}

const char *anb__near(const anb__expander *x, uint32_t space, const char *name,
                      bool (*wanted)(const anb__symbol *symbol, const void *user), const void *user) {
    return anb__is_tired(x) ? NULL : anb__symbol_nearest(&x->symbols, space, name, wanted, user);
}

void anb__hint_nearest(anb__expander *x, anb__diagnostic *d, const char *name, const char *nearest) {
    if (nearest && strlen(name) > 1) anb__add_hint(x->report, d, "did you mean `%s`?", nearest);
}

enum { MOST_USES = 3 };

void anb__add_uses(anb__expander *x, const anb__diagnostic *last, const anb__name *name, const char *how,
                   anb__span span) {
    anb__diagnostic *d = last ? last->next : x->report->first;
    for (; d; d = d->next) {
        unsigned notes = 0;
        for (const anb__note *note = d->notes; note; note = note->next) notes++;
        bool same = d->span.source == span.source && d->span.start == span.start;
        if (notes < MOST_USES && !same && d->severity == ANB_ERROR)
            anb__add_note(x->report, d, span, "in `%s`, %s here", name->text, how);
    }
}

/* ---- names in what could not be read --------------------------------------------- */

static bool is_letter(char c) { return isalnum((unsigned char)c) || c == '_'; }

static bool is_blank(char c) { return c == ' ' || c == '\t'; }

/* The word before a place, or "". */
static void word_before(const anb__source *source, uint32_t start, uint32_t at, char word[8]) {
    uint32_t end = at;
    while (end > start && is_blank(source->text[end - 1])) end--;
    uint32_t begin = end;
    while (begin > start && is_letter(source->text[begin - 1])) begin--;
    uint32_t length = end - begin < 8 ? end - begin : 0;
    memcpy(word, source->text + begin, length);
    word[length < 8 ? length : 7] = 0;
}

/* `name =`, `name(`, `for name` and `network name` give a name its meaning. */
static bool gives_meaning(const anb__source *source, uint32_t start, uint32_t at, uint32_t length) {
    char word[8];
    uint32_t after = at + length;
    while (is_blank(source->text[after])) after++;
    if (source->text[after] == '(') return true;
    if (source->text[after] == '=' && source->text[after + 1] != '=') return true;
    word_before(source, start, at, word);
    return !strcmp(word, "for") || !strcmp(word, "network");
}

static bool holds_name(const anb__source *source, anb__span span, const anb__name *name) {
    uint32_t end = span.end;
    while (end < source->length && source->text[end] != '\n') end++;
    for (uint32_t at = span.start; at + name->length <= end; at++) {
        const char *here = source->text + at;
        if (memcmp(here, name->text, name->length) || is_letter(here[name->length])) continue;
        bool begins = at == 0 || !is_letter(here[-1]);
        if (begins && gives_meaning(source, span.start, at, name->length)) return true;
    }
    return false;
}

static bool lost_in(const anb__expander *x, const anb__tree *parent, const anb__name *name) {
    for (const anb__tree *child = parent->first; child; child = child->next) {
        const anb__source *source = &x->report->sources.list[child->span.source];
        if (child->kind == ANB__TREE_ERROR && holds_name(source, child->span, name)) return true;
        bool holds_statements = child->kind == ANB__TREE_INCLUDE || child->kind == ANB__TREE_FILE ||
                                child->kind == ANB__TREE_IF || child->kind == ANB__TREE_FOR ||
                                child->kind == ANB__TREE_BLOCK || child->kind == ANB__TREE_NETWORK;
        if (holds_statements && lost_in(x, child, name)) return true;
    }
    return false;
}

bool anb__maybe_defined(const anb__expander *x, const anb__name *name) {
    return x->lost && (anb__is_tired(x) || lost_in(x, x->root, name));
}
