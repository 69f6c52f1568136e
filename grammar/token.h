/* The tokens of the language, as the lexer finds them (grammar/netlist.re). */
#ifndef ANB_GRAMMAR_TOKEN_H
#define ANB_GRAMMAR_TOKEN_H

#include <stdbool.h>
#include <stdint.h>

typedef enum anb__token_kind {
    ANB__TOKEN_END,
    ANB__TOKEN_LINE,    /* a line end that ends a statement: made by the reader, not the lexer */
    ANB__TOKEN_COMMENT, /* seen by the formatter only */
    ANB__TOKEN_NUMBER,
    ANB__TOKEN_WORD, /* names, reserved words, units */
    ANB__TOKEN_STRING,
    ANB__TOKEN_DASHES,    /* -- */
    ANB__TOKEN_BARS,      /* || */
    ANB__TOKEN_DOTS,      /* .. */
    ANB__TOKEN_TOLERANCE, /* +/- or the sign for it */
    ANB__TOKEN_LESS_EQUAL,
    ANB__TOKEN_GREATER_EQUAL,
    ANB__TOKEN_EQUAL,
    ANB__TOKEN_NOT_EQUAL,
    ANB__TOKEN_LESS,
    ANB__TOKEN_GREATER,
    ANB__TOKEN_IS, /* = */
    ANB__TOKEN_COLON,
    ANB__TOKEN_SEMICOLON,
    ANB__TOKEN_COMMA,
    ANB__TOKEN_LEFT_PARENTHESIS,
    ANB__TOKEN_RIGHT_PARENTHESIS,
    ANB__TOKEN_LEFT_BRACKET,
    ANB__TOKEN_RIGHT_BRACKET,
    ANB__TOKEN_LEFT_BRACE,
    ANB__TOKEN_RIGHT_BRACE,
    ANB__TOKEN_PLUS,
    ANB__TOKEN_MINUS,
    ANB__TOKEN_STAR,
    ANB__TOKEN_SLASH,
    ANB__TOKEN_CARET,
    ANB__TOKEN_AT,
    ANB__TOKEN_DOT,
    ANB__TOKEN_OPEN_STRING,       /* a string without an end on its line */
    ANB__TOKEN_TYPOGRAPHIC_MINUS, /* U+2212 */
    ANB__TOKEN_NUL,
    ANB__TOKEN_OTHER, /* a character that means nothing */
    ANB__TOKEN_BROKEN /* no UTF-8 */
} anb__token_kind;

typedef struct anb__token {
    anb__token_kind kind;
    uint32_t start, end; /* bytes */
    uint32_t lines;      /* line ends since the token before */
} anb__token;

/* The next token of text[0 .. length-1] from byte `at` on. Comments are passed over unless `comments` is set.
 */
anb__token anb__lex(const char *text, uint32_t length, uint32_t at, bool comments);

#endif
