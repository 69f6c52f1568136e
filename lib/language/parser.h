/* The parser's inside. Its functions carry the names of the rules in grammar/netlist.ebnf. */
#ifndef ANB_LANGUAGE_PARSER_H
#define ANB_LANGUAGE_PARSER_H

#include "language/parse.h"
#include "token.h"

enum { ANB__MOST_NESTING = 200 };

typedef struct anb__parser {
    anb__report *report;
    anb__names *names;
    anb__arena *arena;
    const char *text;
    uint32_t length, source;
    /* the reader */
    anb__token now;   /* what is looked at */
    uint32_t read_to; /* bytes that the lexer has passed */
    anb__token held;  /* comes after `now`, where `now` is a line end */
    bool has_held;
    uint32_t end_before;                  /* of the token before `now` */
    uint32_t open[ANB__MOST_NESTING + 2]; /* starts of the ( and [ that are open */
    unsigned open_count;
    /* the parser */
    unsigned nesting;
    bool failed; /* the statement holds a mistake: nothing more is said of it */
} anb__parser;

/* ---- the reader ---------------------------------------------------------------------------- */

void anb__reader_start(anb__parser *p, uint32_t at);
void anb__advance(anb__parser *p);
/* The kind of the token after `now`. */
anb__token_kind anb__peek(const anb__parser *p);
bool anb__is_word(const anb__parser *p, const char *word);
/* A word that a user may give to something. */
bool anb__is_name(const anb__parser *p);
bool anb__is_reserved(const anb__parser *p, anb__token token);
/* A word that begins a statement and nothing else. */
bool anb__is_statement_word(const anb__parser *p);
/* Forgets open brackets: after a mistake. */
void anb__close_all(anb__parser *p);

/* ---- trees and mistakes -------------------------------------------------------------------------- */

static inline anb__span anb__span_at(const anb__parser *p, uint32_t start, uint32_t end) {
    return (anb__span){p->source, start, end};
}
static inline anb__span anb__span_of(const anb__parser *p, anb__token token) {
    return anb__span_at(p, token.start, token.end);
}
anb__tree *anb__new_tree(anb__parser *p, anb__tree_kind kind, uint32_t start);
/* Ends a tree where the last token ended. */
anb__tree *anb__end_tree(anb__parser *p, anb__tree *tree);
void anb__add_child(anb__tree *parent, anb__tree *child);
void anb__set_name(anb__parser *p, anb__tree *tree, anb__token word);
/* The one mistake of a statement; later ones are not told. */
anb__diagnostic *anb__mistake(anb__parser *p, anb__span span, const char *code, const char *format, ...)
    __attribute__((format(printf, 4, 5)));
void anb__hint(anb__parser *p, anb__diagnostic *mistake, const char *format, ...)
    __attribute__((format(printf, 3, 4)));
/* `expected` is missing at the token that is looked at, or that token can stand nowhere. Returns an ERROR. */
anb__tree *anb__expected(anb__parser *p, const char *expected);
/* One level deeper; false, told, beyond the limit. */
bool anb__deepen(anb__parser *p, uint32_t start);
void anb__rise(anb__parser *p);
/* The bracket that closes one opened at `open`. */
void anb__close(anb__parser *p, anb__token_kind kind, uint32_t open);

/* ---- rules ------------------------------------------------------------------------------------------ */

anb__tree *anb__parse_number(anb__parser *p);
anb__tree *anb__parse_sum(anb__parser *p);
anb__tree *anb__parse_at_value(anb__parser *p);
anb__tree *anb__parse_range(anb__parser *p); /* or a value */
anb__tree *anb__parse_primary(anb__parser *p);
anb__tree *anb__parse_condition(anb__parser *p);
anb__tree *anb__parse_item(anb__parser *p);
anb__tree *anb__parse_chain(anb__parser *p); /* or an item */
anb__tree *anb__parse_chain_from(anb__parser *p, anb__tree *first);
anb__tree *anb__parse_name_or_node(anb__parser *p); /* a name, perhaps with an index or members; `ground` */
anb__tree *anb__parse_statement(anb__parser *p);
anb__tree *anb__parse_sweep_of(anb__parser *p, anb__tree *sweep);

#endif
