/* Tokens as the parser sees them: with the line ends that end a statement, and no others. */
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include "language/parser.h"
#include "language/reader.h"

static const char *const statement_words[] = {"title",  "include", "network", "port",    "join",
                                              "for",    "if",      "sweep",   "require", "tune",
                                              "shared", "assume",  "cases",   "drive",   NULL};
static const char *const other_reserved[] = {"else", "shunt", "and", "or", "not", NULL};
/* Reserved words that are whole values or nodes: a line may end after them. */
static const char *const value_words[] = {"ground", "open", "short", "pi", "j", "c0", "frequency", NULL};

static bool is_text(const char *text, anb__token token, const char *word) {
    size_t length = token.end - token.start;
    return token.kind == ANB__TOKEN_WORD && strlen(word) == length &&
           !memcmp(text + token.start, word, length);
}

static bool is_one_of(const char *text, anb__token token, const char *const *words) {
    for (; *words; words++)
        if (is_text(text, token, *words)) return true;
    return false;
}

static bool is_reserved(const char *text, anb__token token) {
    return is_one_of(text, token, statement_words) || is_one_of(text, token, other_reserved) ||
           is_one_of(text, token, value_words);
}

bool anb__is_word(const anb__parser *p, const char *word) { return is_text(p->text, p->now, word); }

bool anb__is_reserved(const anb__parser *p, anb__token token) { return is_reserved(p->text, token); }

bool anb__is_statement_word(const anb__parser *p) { return is_one_of(p->text, p->now, statement_words); }

bool anb__is_name(const anb__parser *p) {
    unsigned char first = (unsigned char)p->text[p->now.start];
    if (p->now.kind != ANB__TOKEN_WORD || anb__is_reserved(p, p->now)) return false;
    for (uint32_t i = p->now.start; i < p->now.end; i++)
        if ((unsigned char)p->text[i] >= 0x80) return false;
    return first != '%';
}

bool anb__may_end(const char *text, anb__token token) {
    switch (token.kind) {
    case ANB__TOKEN_NUMBER:
    case ANB__TOKEN_STRING:
    case ANB__TOKEN_RIGHT_PARENTHESIS:
    case ANB__TOKEN_RIGHT_BRACKET:
    case ANB__TOKEN_RIGHT_BRACE:
        return true;
    case ANB__TOKEN_WORD:
        return !is_reserved(text, token) || is_one_of(text, token, value_words);
    default: /* what means nothing ends with its line, so that the next one is still read */
        return token.kind >= ANB__TOKEN_OPEN_STRING;
    }
}

bool anb__goes_on(const char *text, anb__token token) {
    return token.kind == ANB__TOKEN_DASHES || token.kind == ANB__TOKEN_BARS ||
           token.kind == ANB__TOKEN_LEFT_BRACE || is_text(text, token, "else");
}

/* A statement's word begins a line while a bracket is open: the bracket is what is wrong. */
static void report_open_bracket(anb__parser *p) {
    uint32_t at = p->open[p->open_count - 1];
    bool round = p->text[at] == '(';
    p->failed = false;
    anb__diagnostic *d = anb__mistake(p, anb__span_at(p, at, at + 1), "open-bracket",
                                      "this `%c` is still open where the next statement begins", p->text[at]);
    anb__hint(p, d, "close it with `%c`", round ? ')' : ']');
}

static void put_line_end(anb__parser *p, anb__token next, uint32_t at) {
    p->held = next;
    p->has_held = true;
    p->now = (anb__token){ANB__TOKEN_LINE, at, at, 0};
}

static void count_brackets(anb__parser *p) {
    bool opens = p->now.kind == ANB__TOKEN_LEFT_PARENTHESIS || p->now.kind == ANB__TOKEN_LEFT_BRACKET;
    bool closes = p->now.kind == ANB__TOKEN_RIGHT_PARENTHESIS || p->now.kind == ANB__TOKEN_RIGHT_BRACKET;
    if (opens && p->open_count <= ANB__MOST_NESTING) p->open[p->open_count++] = p->now.start;
    if (closes && p->open_count) p->open_count--;
}

void anb__advance(anb__parser *p) {
    anb__token before = p->now;
    p->end_before = before.end;
    if (p->has_held) {
        p->has_held = false;
        p->now = p->held;
        count_brackets(p);
        return;
    }
    anb__token next = anb__lex(p->text, p->length, p->read_to, false);
    p->read_to = next.end;
    if (next.lines && p->open_count && is_one_of(p->text, next, statement_words)) {
        report_open_bracket(p);
        p->open_count = 0;
        put_line_end(p, next, before.end);
        return;
    }
    if (next.lines && !p->open_count && anb__may_end(p->text, before) && !anb__goes_on(p->text, next) &&
        next.kind != ANB__TOKEN_END) {
        put_line_end(p, next, before.end);
        return;
    }
    p->now = next;
    count_brackets(p);
}

anb__token_kind anb__peek(const anb__parser *p) {
    if (p->has_held) return p->held.kind;
    anb__token next = anb__lex(p->text, p->length, p->read_to, false);
    bool ends = next.lines && !p->open_count && anb__may_end(p->text, p->now) && !anb__goes_on(p->text, next);
    return ends ? ANB__TOKEN_LINE : next.kind;
}

void anb__reader_start(anb__parser *p, uint32_t at) {
    bool mark = !at && p->length >= 3 && !memcmp(p->text, "\xEF\xBB\xBF", 3);
    p->read_to = mark ? 3 : at;
    p->now = (anb__token){ANB__TOKEN_SEMICOLON, p->read_to, p->read_to, 0};
    anb__advance(p);
}

void anb__close_all(anb__parser *p) { p->open_count = 0; }

/* ---- trees ----------------------------------------------------------------------------------- */

anb__tree *anb__new_tree(anb__parser *p, anb__tree_kind kind, uint32_t start) {
    anb__tree *tree = anb__arena_take(p->arena, sizeof *tree);
    tree->kind = (uint8_t)kind;
    tree->span = anb__span_at(p, start, start);
    return tree;
}

anb__tree *anb__end_tree(anb__parser *p, anb__tree *tree) {
    if (p->end_before > tree->span.start) tree->span.end = p->end_before;
    return tree;
}

void anb__add_child(anb__tree *parent, anb__tree *child) {
    if (parent->last)
        parent->last->next = child;
    else
        parent->first = child;
    parent->last = child;
}

void anb__set_name(anb__parser *p, anb__tree *tree, anb__token word) {
    tree->name = anb__name_of(p->names, p->text + word.start, word.end - word.start);
    tree->name_span = anb__span_of(p, word);
}

/* ---- mistakes ------------------------------------------------------------------------------------- */

anb__diagnostic *anb__mistake(anb__parser *p, anb__span span, const char *code, const char *format, ...) {
    char text[400];
    va_list arguments;
    if (p->failed) return NULL;
    va_start(arguments, format);
    vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    p->failed = true;
    return anb__error(p->report, span, code, "%s", text);
}

void anb__hint(anb__parser *p, anb__diagnostic *mistake, const char *format, ...) {
    char text[400];
    va_list arguments;
    if (!mistake) return;
    va_start(arguments, format);
    vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    anb__add_hint(p->report, mistake, "%s", text);
}

static void report_character(anb__parser *p) {
    anb__span span = anb__span_of(p, p->now);
    int length = (int)(p->now.end - p->now.start);
    const char *at = p->text + p->now.start;
    switch (p->now.kind) {
    case ANB__TOKEN_TYPOGRAPHIC_MINUS:
        anb__hint(p, anb__mistake(p, span, "typographic-minus", "this is the typographic minus, U+2212"),
                  "write `-`, the hyphen of the keyboard");
        break;
    case ANB__TOKEN_OPEN_STRING:
        anb__hint(p, anb__mistake(p, span, "open-string", "this string has no end on its line"),
                  "end it with `\"`; inside, `\\\"` and `\\\\` are the only escapes");
        break;
    case ANB__TOKEN_NUL:
        anb__mistake(p, span, "nul", "a byte of value 0 may not stand in a netlist");
        break;
    case ANB__TOKEN_BROKEN:
        anb__mistake(p, span, "encoding", "this is not UTF-8");
        break;
    default:
        anb__mistake(p, span, "character", "`%.*s` means nothing in this language", length, at);
    }
}

static void report_expected(anb__parser *p, const char *expected) {
    anb__span span = anb__span_of(p, p->now);
    switch (p->now.kind) {
    case ANB__TOKEN_LINE:
    case ANB__TOKEN_END:
    case ANB__TOKEN_SEMICOLON:
        span = anb__span_at(p, p->end_before, p->end_before);
        anb__mistake(p, span, "expected", "%s is expected here, at the end", expected);
        break;
    default:
        anb__mistake(p, span, "expected", "%s is expected here, not `%.*s`", expected,
                     (int)(span.end - span.start), p->text + span.start);
    }
}

anb__tree *anb__expected(anb__parser *p, const char *expected) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ERROR, p->now.start);
    tree->span.end = p->now.end;
    if (p->now.kind >= ANB__TOKEN_OPEN_STRING)
        report_character(p);
    else
        report_expected(p, expected);
    return tree;
}

bool anb__deepen(anb__parser *p, uint32_t start) {
    if (p->nesting++ < ANB__MOST_NESTING) return true;
    anb__mistake(p, anb__span_at(p, start, start + 1), "nesting",
                 "this is nested more than 200 deep, the limit");
    return false;
}

void anb__rise(anb__parser *p) { p->nesting--; }

void anb__close(anb__parser *p, anb__token_kind kind, uint32_t open) {
    bool round = kind == ANB__TOKEN_RIGHT_PARENTHESIS;
    if (p->now.kind == kind) {
        anb__advance(p);
        return;
    }
    bool over = p->now.kind == ANB__TOKEN_LINE || p->now.kind == ANB__TOKEN_END ||
                p->now.kind == ANB__TOKEN_SEMICOLON || p->now.kind == ANB__TOKEN_RIGHT_BRACE ||
                p->now.kind == ANB__TOKEN_LEFT_BRACE;
    if (over)
        anb__hint(p,
                  anb__mistake(p, anb__span_at(p, open, open + 1), "open-bracket", "this `%c` is not closed",
                               p->text[open]),
                  "close it with `%c`", round ? ')' : ']');
    else
        anb__expected(p, round ? "`,` or `)`" : "`,` or `]`");
}
