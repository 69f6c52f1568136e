#include "language/format.h"

#include <ctype.h>
#include <stdlib.h>
#include <string.h>

#include "language/reader.h"
#include "language/units.h"

enum { WIDTH = 100, INDENT = 4 };

/* A token of the statement under way, and how it stands to the one before it. */
typedef struct piece {
    anb__token token;
    bool blank;     /* a blank before it */
    bool breaks;    /* a line may begin with it */
    bool on_a_line; /* a comment that stands on a line of its own */
} piece;

typedef struct layout {
    const char *text;
    uint32_t length, at; /* `at`: bytes that have been read */
    anb__text *out;
    piece *pieces; /* of the statement under way */
    size_t count, capacity;
    unsigned depth; /* of blocks */
    bool begins;    /* nothing stands in this block or file yet: no blank line goes before what comes */
} layout;

/* ---- reading ---------------------------------------------------------------------------------- */

static bool is_text(const layout *l, anb__token token, const char *word) {
    size_t length = token.end - token.start;
    return token.kind == ANB__TOKEN_WORD && strlen(word) == length &&
           !memcmp(l->text + token.start, word, length);
}

/* Stretches a unit over its quotient, `dB/m`, so that its slash is no division. */
static void take_quotient(const layout *l, anb__token *unit) {
    anb__unit found;
    uint32_t end = unit->end + 1;
    if (unit->end >= l->length || l->text[unit->end] != '/') return;
    while (end < l->length && isalpha((unsigned char)l->text[end])) end++;
    if (end > unit->end + 1 && anb__unit_find(l->text + unit->start, end - unit->start, &found))
        unit->end = end;
}

static const piece *last_piece(const layout *l) {
    for (size_t k = l->count; k-- > 0;)
        if (l->pieces[k].token.kind != ANB__TOKEN_COMMENT) return &l->pieces[k];
    return NULL;
}

static anb__token next_token(layout *l) {
    anb__token token = anb__lex(l->text, l->length, l->at, true);
    const piece *last = last_piece(l);
    if (token.kind == ANB__TOKEN_WORD && last && last->token.kind == ANB__TOKEN_NUMBER && !token.lines)
        take_quotient(l, &token);
    l->at = token.end;
    return token;
}

/* ---- blanks ------------------------------------------------------------------------------------- */

static bool is_opening(anb__token_kind kind) {
    return kind == ANB__TOKEN_LEFT_PARENTHESIS || kind == ANB__TOKEN_LEFT_BRACKET;
}

static bool is_closing(anb__token_kind kind) {
    return kind == ANB__TOKEN_RIGHT_PARENTHESIS || kind == ANB__TOKEN_RIGHT_BRACKET;
}

/* Words that stand between values where the grammar expects them, and names elsewhere. */
static bool is_infix_word(const layout *l, anb__token token) {
    static const char *const words[] = {"at",     "over", "within", "on",     "in",
                                        "points", "step", "per",    "decade", "weight",
                                        "series", "from", "normal", "and",    "or"};
    for (size_t i = 0; i < sizeof words / sizeof *words; i++)
        if (is_text(l, token, words[i])) return true;
    return false;
}

/* Whether a value, name or node ends at a piece: then what follows is an operator, an index or a unit. */
static bool ends_operand(const layout *l, size_t k) {
    while (k && l->pieces[k].token.kind == ANB__TOKEN_COMMENT) k--;
    anb__token token = l->pieces[k].token;
    if (token.kind == ANB__TOKEN_WORD && k && is_infix_word(l, token)) {
        anb__token before = l->pieces[k - 1].token;
        bool is_unit = before.kind == ANB__TOKEN_NUMBER;
        return !is_unit && !ends_operand(l, k - 1);
    }
    return anb__may_end(l->text, token);
}

/* Whether the innermost open bracket before piece k is an index, in which sums stand close. */
static bool in_index(const layout *l, size_t k) {
    unsigned closed = 0;
    while (k-- > 0) {
        anb__token_kind kind = l->pieces[k].token.kind;
        if (is_closing(kind)) closed++;
        if (!is_opening(kind)) continue;
        if (!closed) return kind == ANB__TOKEN_LEFT_BRACKET && k && ends_operand(l, k - 1);
        closed--;
    }
    return false;
}

static bool is_unary(const layout *l, size_t k) {
    return l->pieces[k].token.kind == ANB__TOKEN_MINUS && (!k || !ends_operand(l, k - 1));
}

static bool is_unit(const layout *l, size_t k) {
    anb__unit unit;
    anb__token token = l->pieces[k].token;
    return k && token.kind == ANB__TOKEN_WORD && l->pieces[k - 1].token.kind == ANB__TOKEN_NUMBER &&
           anb__unit_find(l->text + token.start, token.end - token.start, &unit);
}

/* Whether a unit, the slash at k and what follows would together be another unit. */
static bool makes_a_unit(const layout *l, size_t k) {
    char text[80];
    anb__unit unit;
    if (!is_unit(l, k - 1) || k + 1 >= l->count || l->pieces[k + 1].token.kind != ANB__TOKEN_WORD)
        return false;
    anb__token above = l->pieces[k - 1].token, below = l->pieces[k + 1].token;
    size_t first = above.end - above.start, second = below.end - below.start;
    if (first + second + 1 > sizeof text) return false;
    memcpy(text, l->text + above.start, first);
    text[first] = '/';
    memcpy(text + first + 1, l->text + below.start, second);
    return anb__unit_find(text, first + second + 1, &unit);
}

/* Products and powers stand close, but where blanks make a division: `3 dB / m` is not `3 dB/m`. */
static bool is_close(const layout *l, size_t k) {
    anb__token_kind kind = l->pieces[k].token.kind;
    if (kind == ANB__TOKEN_SLASH) return !k || !makes_a_unit(l, k);
    if (kind == ANB__TOKEN_PLUS || kind == ANB__TOKEN_MINUS) return in_index(l, k);
    return kind == ANB__TOKEN_STAR || kind == ANB__TOKEN_CARET || kind == ANB__TOKEN_DOT;
}

/* Signs that stand close to their number, as `5%` and degrees. */
static bool is_close_unit(const layout *l, size_t k) {
    return is_unit(l, k) && !isalpha((unsigned char)l->text[l->pieces[k].token.start]);
}

static bool blank_before(const layout *l, size_t k) {
    if (!k) return false;
    anb__token_kind now = l->pieces[k].token.kind, before = l->pieces[k - 1].token.kind;
    if (is_opening(before) || is_closing(now) || now == ANB__TOKEN_COMMA || now == ANB__TOKEN_COLON)
        return false;
    if (is_close(l, k) || is_close(l, k - 1) || is_unary(l, k - 1) || is_close_unit(l, k)) return false;
    return !is_opening(now) || !ends_operand(l, k - 1);
}

/* A line may begin with a chain's dashes or bars, and after a comma. */
static bool breaks_before(const layout *l, size_t k) {
    anb__token_kind now = l->pieces[k].token.kind;
    if (!k) return false;
    return now == ANB__TOKEN_DASHES || now == ANB__TOKEN_BARS ||
           l->pieces[k - 1].token.kind == ANB__TOKEN_COMMA;
}

/* ---- writing --------------------------------------------------------------------------------------- */

static void put_indent(const layout *l, unsigned levels) {
    for (unsigned i = 0; i < levels * INDENT; i++) anb__text_char(l->out, ' ');
}

static size_t columns_of(const layout *l, anb__token token) {
    size_t columns = 0;
    for (uint32_t i = token.start; i < token.end; i++) columns += ((unsigned char)l->text[i] & 0xC0) != 0x80;
    return columns;
}

static void put_token(const layout *l, anb__token token) {
    uint32_t end = token.end;
    while (token.kind == ANB__TOKEN_COMMENT && end > token.start && strchr(" \t\r", l->text[end - 1])) end--;
    anb__text_bytes(l->out, l->text + token.start, end - token.start);
}

/* Columns from piece k to the next place where a line may be broken. */
static size_t stretch(const layout *l, size_t k) {
    size_t columns = 0;
    for (size_t i = k; i < l->count && (i == k || !l->pieces[i].breaks); i++) {
        if (l->pieces[i].token.kind == ANB__TOKEN_COMMENT) break;
        columns += (i > k && l->pieces[i].blank) + columns_of(l, l->pieces[i].token);
    }
    return columns;
}

static void put_comment(const layout *l, size_t k) {
    if (k) {
        bool own_line = l->pieces[k].on_a_line;
        if (own_line) {
            anb__text_char(l->out, '\n');
            put_indent(l, l->depth + 1);
        } else {
            anb__text_string(l->out, "  ");
        }
    }
    put_token(l, l->pieces[k].token);
}

/* The statement, broken where it is too long and where comments end a line. */
static void put_statement(layout *l) {
    size_t column = l->depth * INDENT;
    bool must_break = false;
    put_indent(l, l->depth);
    for (size_t k = 0; k < l->count; k++) {
        piece *here = &l->pieces[k];
        if (here->token.kind == ANB__TOKEN_COMMENT) {
            put_comment(l, k);
            must_break = true;
            continue;
        }
        here->blank = blank_before(l, k);
        if (must_break || (here->breaks && column + here->blank + stretch(l, k) > WIDTH)) {
            anb__text_char(l->out, '\n');
            put_indent(l, l->depth + 1);
            column = (l->depth + 1) * INDENT;
        } else if (here->blank) {
            anb__text_char(l->out, ' ');
            column++;
        }
        must_break = false;
        put_token(l, here->token);
        column += columns_of(l, here->token);
    }
    l->count = 0;
    l->begins = false;
}

/* One blank line at most before what stands `lines` line ends further on. */
static void put_gap(layout *l, uint32_t lines) {
    if (lines > 1 && !l->begins) anb__text_char(l->out, '\n');
}

/* ---- statements --------------------------------------------------------------------------------------- */

static void add_piece(layout *l, anb__token token) {
    if (l->count == l->capacity) {
        size_t capacity = l->capacity ? 2 * l->capacity : 64;
        piece *pieces = realloc(l->pieces, capacity * sizeof *pieces);
        if (!pieces) {
            l->out->failed = true;
            return;
        }
        l->pieces = pieces;
        l->capacity = capacity;
    }
    l->pieces[l->count] = (piece){.token = token, .on_a_line = token.lines > 0};
    l->count++;
    l->pieces[l->count - 1].breaks = breaks_before(l, l->count - 1);
    l->pieces[l->count - 1].blank = blank_before(l, l->count - 1);
}

/* What comes after `token`, comments aside, and the line ends up to it. */
static anb__token after_comments(const layout *l, uint32_t *lines) {
    uint32_t at = l->at;
    *lines = 0;
    for (;;) {
        anb__token token = anb__lex(l->text, l->length, at, true);
        *lines += token.lines;
        at = token.end;
        if (token.kind != ANB__TOKEN_COMMENT) return token;
    }
}

static bool ends_here(const layout *l, unsigned brackets) {
    uint32_t lines;
    anb__token next = after_comments(l, &lines);
    if (next.kind == ANB__TOKEN_END || next.kind == ANB__TOKEN_SEMICOLON ||
        next.kind == ANB__TOKEN_RIGHT_BRACE)
        return true;
    return lines && !brackets && anb__may_end(l->text, last_piece(l)->token) && !anb__goes_on(l->text, next);
}

/* A comment on the line where a statement ends belongs to it. */
static void take_trailing_comment(layout *l) {
    anb__token token = anb__lex(l->text, l->length, l->at, true);
    if (token.kind != ANB__TOKEN_COMMENT || token.lines) return;
    l->at = token.end;
    add_piece(l, token);
}

/* From its first token to its end, or to the brace that opens its block. True if it opens one. */
static bool take_statement(layout *l, anb__token token) {
    unsigned brackets = 0;
    for (;;) {
        brackets += is_opening(token.kind);
        brackets -= is_closing(token.kind) && brackets;
        add_piece(l, token);
        if (l->out->failed || token.kind == ANB__TOKEN_LEFT_BRACE) return token.kind == ANB__TOKEN_LEFT_BRACE;
        if (token.kind != ANB__TOKEN_COMMENT && ends_here(l, brackets)) return false;
        token = next_token(l);
    }
}

static void close_block(layout *l) {
    uint32_t lines;
    l->depth -= l->depth > 0;
    put_indent(l, l->depth);
    anb__text_char(l->out, '}');
    l->begins = false;
    anb__token next = after_comments(l, &lines);
    if (!is_text(l, next, "else")) {
        take_trailing_comment(l);
        if (l->count) {
            anb__text_string(l->out, "  ");
            put_token(l, l->pieces[0].token);
            l->count = 0;
        }
        anb__text_char(l->out, '\n');
        return;
    }
    anb__text_char(l->out, ' ');
}

static void put_statement_line(layout *l, anb__token first, bool after_brace) {
    unsigned depth = l->depth;
    bool opens = take_statement(l, first);
    take_trailing_comment(l);
    if (after_brace) l->depth = 0; /* `} else`: the indent is there already */
    put_statement(l);
    l->depth = depth + opens;
    l->begins = opens;
    anb__text_char(l->out, '\n');
}

void anb__format(const char *text, uint32_t length, anb__text *out) {
    layout l = {.text = text, .length = length, .out = out, .begins = true};
    bool after_brace = false;
    if (length >= 3 && !memcmp(text, "\xEF\xBB\xBF", 3)) l.at = 3;
    while (!out->failed) {
        anb__token token = next_token(&l);
        if (token.kind == ANB__TOKEN_END) break;
        if (token.kind == ANB__TOKEN_SEMICOLON) continue;
        if (token.kind == ANB__TOKEN_RIGHT_BRACE) {
            close_block(&l);
            after_brace = out->length && out->bytes[out->length - 1] == ' ';
            continue;
        }
        if (!after_brace) put_gap(&l, token.lines);
        if (token.kind == ANB__TOKEN_COMMENT) {
            put_indent(&l, l.depth);
            put_token(&l, token);
            anb__text_char(out, '\n');
            l.begins = false;
        } else {
            put_statement_line(&l, token, after_brace);
            after_brace = false;
        }
    }
    free(l.pieces);
}
