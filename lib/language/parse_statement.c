/* Statements: one function for each, by its first word. */
#include "language/parser.h"

/* ---- pieces ------------------------------------------------------------------------------------ */

/* A word of the grammar and what follows it, as a tree of its own. */
static anb__tree *after_word(anb__parser *p, anb__tree_kind kind, anb__tree *(*rule)(anb__parser *p)) {
    anb__tree *tree = anb__new_tree(p, kind, p->now.start);
    anb__advance(p);
    anb__add_child(tree, rule(p));
    return anb__end_tree(p, tree);
}

static bool take(anb__parser *p, anb__token_kind kind, const char *what) {
    if (p->now.kind == kind) {
        anb__advance(p);
        return true;
    }
    anb__expected(p, what);
    return false;
}

/* The name that a statement gives to something. */
static bool take_name(anb__parser *p, anb__tree *tree) {
    if (!anb__is_name(p)) {
        bool reserved = p->now.kind == ANB__TOKEN_WORD && anb__is_reserved(p, p->now);
        if (reserved)
            anb__mistake(p, anb__span_of(p, p->now), "reserved",
                         "`%.*s` is a word of the language and cannot be a name",
                         (int)(p->now.end - p->now.start), p->text + p->now.start);
        else
            anb__expected(p, "a name");
        return false;
    }
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    return true;
}

/* Names or nodes with commas between them. */
static void take_names(anb__parser *p, anb__tree *tree) {
    for (;;) {
        anb__add_child(tree, anb__parse_name_or_node(p));
        if (p->failed || p->now.kind != ANB__TOKEN_COMMA) return;
        anb__advance(p);
    }
}

static anb__tree *block(anb__parser *p) {
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_BLOCK, open);
    if (p->now.kind != ANB__TOKEN_LEFT_BRACE) {
        anb__expected(p, "`{`");
        return tree;
    }
    if (anb__deepen(p, open)) {
        anb__advance(p);
        while (p->now.kind != ANB__TOKEN_RIGHT_BRACE && p->now.kind != ANB__TOKEN_END) {
            if (p->now.kind == ANB__TOKEN_LINE || p->now.kind == ANB__TOKEN_SEMICOLON)
                anb__advance(p);
            else
                anb__add_child(tree, anb__parse_statement(p));
        }
        if (p->now.kind == ANB__TOKEN_RIGHT_BRACE)
            anb__advance(p);
        else
            anb__hint(
                p, anb__mistake(p, anb__span_at(p, open, open + 1), "open-brace", "this `{` is not closed"),
                "close it with `}`");
    }
    anb__rise(p);
    return anb__end_tree(p, tree);
}

/* (a, b = value) of a network or an own kind of part. */
static anb__tree *parameters(anb__parser *p) {
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_PARAMETERS, open);
    if (!take(p, ANB__TOKEN_LEFT_PARENTHESIS, "`(`")) return tree;
    while (!p->failed && p->now.kind != ANB__TOKEN_RIGHT_PARENTHESIS) {
        anb__tree *parameter = anb__new_tree(p, ANB__TREE_PARAMETER, p->now.start);
        if (!take_name(p, parameter)) break;
        if (p->now.kind == ANB__TOKEN_IS) {
            anb__advance(p);
            anb__add_child(parameter, anb__parse_chain(p));
        }
        anb__add_child(tree, anb__end_tree(p, parameter));
        if (p->now.kind != ANB__TOKEN_COMMA) break;
        anb__advance(p);
    }
    anb__close(p, ANB__TOKEN_RIGHT_PARENTHESIS, open);
    return anb__end_tree(p, tree);
}

/* ---- definitions ---------------------------------------------------------------------------------- */

/* name = value */
static anb__tree *define(anb__parser *p, anb__tree *tree) {
    if (!take_name(p, tree) || !take(p, ANB__TOKEN_IS, "`=`")) return tree;
    anb__add_child(tree, anb__parse_chain(p));
    return anb__end_tree(p, tree);
}

static anb__tree *shared(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_DEFINE, start);
    tree->flags = ANB__TREE_SHARED;
    anb__advance(p);
    return define(p, tree);
}

/* name(parameters) = value */
static anb__tree *own_kind(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_KIND, start);
    take_name(p, tree);
    anb__add_child(tree, parameters(p));
    if (p->failed || !take(p, ANB__TOKEN_IS, "`=`")) return tree;
    anb__add_child(tree, anb__parse_chain(p));
    return anb__end_tree(p, tree);
}

/* Whether `name(...) =` stands here and not a part. */
static bool is_own_kind(const anb__parser *p) {
    anb__parser look = *p;
    int depth = 0;
    if (!anb__is_name(p) || anb__peek(p) != ANB__TOKEN_LEFT_PARENTHESIS) return false;
    for (uint32_t at = look.read_to;;) {
        anb__token token = anb__lex(look.text, look.length, at, false);
        at = token.end;
        if (token.kind == ANB__TOKEN_LEFT_PARENTHESIS) depth++;
        if (token.kind == ANB__TOKEN_RIGHT_PARENTHESIS) depth--;
        if (token.kind == ANB__TOKEN_END || token.kind == ANB__TOKEN_DASHES ||
            token.kind == ANB__TOKEN_SEMICOLON || token.kind == ANB__TOKEN_LEFT_BRACE)
            return false;
        if (depth) continue;
        token = anb__lex(look.text, look.length, at, false);
        return token.kind == ANB__TOKEN_IS && !token.lines;
    }
}

static anb__tree *assume(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ASSUME, start);
    do {
        anb__advance(p);
        anb__tree *part = anb__parse_primary(p);
        anb__add_child(tree, part);
        if (!p->failed && part->kind != ANB__TREE_CALL) {
            anb__diagnostic *d = anb__mistake(p, part->span, "assume", "`assume` takes parts with options");
            anb__hint(p, d, "`assume inductor(q = 40 @ 100 MHz)`");
        }
        for (anb__tree *a = part->first; part->kind == ANB__TREE_CALL && a && !p->failed; a = a->next)
            if (a->kind != ANB__TREE_ARGUMENT && a->kind != ANB__TREE_ERROR)
                anb__mistake(p, a->span, "assume", "`assume` takes options with their names only");
    } while (!p->failed && p->now.kind == ANB__TOKEN_COMMA);
    return anb__end_tree(p, tree);
}

static anb__tree *tune(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_TUNE, start);
    anb__advance(p);
    if (!take_name(p, tree) || !take(p, ANB__TOKEN_IS, "`=`")) return tree;
    anb__add_child(tree, anb__parse_sum(p));
    while (!p->failed) {
        if (anb__is_word(p, "within"))
            anb__add_child(tree, after_word(p, ANB__TREE_TUNE_WITHIN, anb__parse_range));
        else if (anb__is_word(p, "series"))
            anb__add_child(tree, after_word(p, ANB__TREE_TUNE_SERIES, anb__parse_name_or_node));
        else if (anb__is_word(p, "from"))
            anb__add_child(tree, after_word(p, ANB__TREE_TUNE_FROM, anb__parse_primary));
        else
            break;
    }
    return anb__end_tree(p, tree);
}

static anb__tree *cases(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_CASES, start);
    anb__advance(p);
    if (!take_name(p, tree) || !take(p, ANB__TOKEN_IS, "`=`")) return tree;
    anb__add_child(tree, anb__parse_range(p));
    if (anb__is_word(p, "points")) anb__add_child(tree, after_word(p, ANB__TREE_POINTS, anb__parse_sum));
    return anb__end_tree(p, tree);
}

/* ---- the network ------------------------------------------------------------------------------------- */

static anb__tree *port(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_PORT, start);
    anb__advance(p);
    anb__tree *names = anb__new_tree(p, ANB__TREE_PORT_NAMES, p->now.start);
    take_names(p, names);
    anb__add_child(tree, anb__end_tree(p, names));
    if (!p->failed && p->now.kind == ANB__TOKEN_COLON) {
        anb__advance(p);
        tree->flags |= ANB__TREE_HAS_IMPEDANCE;
        anb__add_child(tree, anb__parse_at_value(p));
    }
    if (!p->failed && anb__is_word(p, "at")) {
        anb__tree *at = anb__new_tree(p, ANB__TREE_AT_NODES, p->now.start);
        anb__advance(p);
        take_names(p, at);
        anb__add_child(tree, anb__end_tree(p, at));
        tree->flags |= ANB__TREE_HAS_NODES;
    }
    return anb__end_tree(p, tree);
}

static anb__tree *join(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_JOIN, start);
    anb__advance(p);
    take_names(p, tree);
    return anb__end_tree(p, tree);
}

static anb__tree *network(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_NETWORK, start);
    anb__advance(p);
    if (!take_name(p, tree)) return tree;
    anb__add_child(tree, parameters(p));
    if (!p->failed) anb__add_child(tree, block(p));
    return anb__end_tree(p, tree);
}

static anb__tree *terminal(anb__parser *p) {
    if (!anb__is_name(p) || anb__peek(p) != ANB__TOKEN_IS) return anb__parse_name_or_node(p);
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ARGUMENT, p->now.start);
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    anb__advance(p);
    anb__add_child(tree, anb__parse_name_or_node(p));
    return anb__end_tree(p, tree);
}

/* on (n1, terminal = n2, ...) */
static anb__tree *terminals(anb__parser *p) {
    anb__advance(p);
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_TERMINALS, open);
    if (!take(p, ANB__TOKEN_LEFT_PARENTHESIS, "`(` and the nodes")) return tree;
    while (!p->failed && p->now.kind != ANB__TOKEN_RIGHT_PARENTHESIS) {
        anb__add_child(tree, terminal(p));
        if (p->now.kind != ANB__TOKEN_COMMA) break;
        anb__advance(p);
    }
    anb__close(p, ANB__TOKEN_RIGHT_PARENTHESIS, open);
    return anb__end_tree(p, tree);
}

/* [label:] part on (...), whose part has been read. */
static anb__tree *place(anb__parser *p, anb__tree *part) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_PLACE, part->span.start);
    if (part->kind == ANB__TREE_LABELLED) {
        anb__tree *label = part->first, *item = label->next;
        label->next = NULL;
        tree->flags |= ANB__TREE_HAS_LABEL;
        anb__add_child(tree, label);
        part = item;
    }
    anb__add_child(tree, part);
    anb__add_child(tree, terminals(p));
    return anb__end_tree(p, tree);
}

/* A chain, or a part with `on`. */
static anb__tree *path_or_place(anb__parser *p, uint32_t start) {
    anb__tree *first = anb__parse_item(p);
    if (!p->failed && anb__is_word(p, "on") && first->kind != ANB__TREE_SHUNT) return place(p, first);
    anb__tree *path = anb__new_tree(p, ANB__TREE_PATH, start), *chain = anb__parse_chain_from(p, first);
    if (chain->kind != ANB__TREE_CHAIN) {
        chain = anb__new_tree(p, ANB__TREE_CHAIN, start);
        anb__add_child(chain, first);
        anb__end_tree(p, chain);
    }
    anb__add_child(path, chain);
    return anb__end_tree(p, path);
}

/* ---- for, if ------------------------------------------------------------------------------------------- */

static anb__tree *for_loop(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_FOR, start);
    anb__advance(p);
    if (!take_name(p, tree)) return tree;
    if (!anb__is_word(p, "in")) {
        anb__expected(p, "`in`");
        return tree;
    }
    anb__advance(p);
    anb__add_child(tree, anb__parse_range(p));
    if (!p->failed) anb__add_child(tree, block(p));
    return anb__end_tree(p, tree);
}

static anb__tree *if_else(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_IF, start);
    anb__advance(p);
    anb__add_child(tree, anb__parse_condition(p));
    if (!p->failed) anb__add_child(tree, block(p));
    if (p->failed || !anb__is_word(p, "else")) return anb__end_tree(p, tree);
    anb__advance(p);
    if (!anb__is_word(p, "if")) {
        anb__add_child(tree, block(p));
        return anb__end_tree(p, tree);
    }
    if (anb__deepen(p, p->now.start)) anb__add_child(tree, if_else(p, p->now.start));
    anb__rise(p);
    return anb__end_tree(p, tree);
}

/* ---- sweeps and what is asked of the result --------------------------------------------------- */

static anb__tree *sweep_at(anb__parser *p) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_SWEEP_AT, p->now.start);
    do {
        anb__advance(p);
        anb__add_child(tree, anb__parse_at_value(p));
    } while (!p->failed && p->now.kind == ANB__TOKEN_COMMA);
    return anb__end_tree(p, tree);
}

static anb__tree *per_decade(anb__parser *p) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_PER_DECADE, p->now.start);
    anb__advance(p);
    if (!anb__is_word(p, "decade")) return anb__expected(p, "`decade`");
    anb__advance(p);
    anb__add_child(tree, anb__parse_sum(p));
    return anb__end_tree(p, tree);
}

anb__tree *anb__parse_sweep_of(anb__parser *p, anb__tree *sweep) {
    if (anb__is_word(p, "at")) {
        anb__add_child(sweep, sweep_at(p));
        return anb__end_tree(p, sweep);
    }
    anb__add_child(sweep, anb__parse_range(p));
    if (p->failed) return sweep;
    if (anb__is_word(p, "points"))
        anb__add_child(sweep, after_word(p, ANB__TREE_POINTS, anb__parse_sum));
    else if (anb__is_word(p, "step"))
        anb__add_child(sweep, after_word(p, ANB__TREE_STEP, anb__parse_sum));
    else if (anb__is_word(p, "per"))
        anb__add_child(sweep, per_decade(p));
    else
        anb__expected(p, "`points`, `step` or `per decade`");
    return anb__end_tree(p, sweep);
}

static anb__tree *sweep(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_SWEEP, start);
    anb__advance(p);
    return anb__parse_sweep_of(p, tree);
}

static void require_limit(anb__parser *p, anb__tree *tree) {
    if (p->now.kind == ANB__TOKEN_GREATER_EQUAL)
        anb__add_child(tree, after_word(p, ANB__TREE_AT_LEAST, anb__parse_sum));
    else if (p->now.kind == ANB__TOKEN_LESS_EQUAL)
        anb__add_child(tree, after_word(p, ANB__TREE_AT_MOST, anb__parse_sum));
    else if (anb__is_word(p, "within"))
        anb__add_child(tree, after_word(p, ANB__TREE_WITHIN, anb__parse_range));
    else
        anb__expected(p, "`>=`, `<=` or `within`");
}

static anb__tree *require(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_REQUIRE, start);
    anb__advance(p);
    anb__add_child(tree, anb__parse_sum(p));
    if (!p->failed) require_limit(p, tree);
    if (!p->failed && anb__is_word(p, "over"))
        anb__add_child(tree, after_word(p, ANB__TREE_OVER, anb__parse_range));
    else if (!p->failed && anb__is_word(p, "at"))
        anb__add_child(tree, after_word(p, ANB__TREE_AT_FREQUENCY, anb__parse_sum));
    if (!p->failed && anb__is_word(p, "weight"))
        anb__add_child(tree, after_word(p, ANB__TREE_WEIGHT, anb__parse_sum));
    return anb__end_tree(p, tree);
}

static anb__tree *drive(anb__parser *p, uint32_t start) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_DRIVE, start);
    anb__advance(p);
    anb__add_child(tree, anb__parse_name_or_node(p));
    if (p->failed || !take(p, ANB__TOKEN_COLON, "`:` and a power")) return tree;
    anb__add_child(tree, anb__parse_sum(p));
    if (!p->failed && p->now.kind == ANB__TOKEN_COMMA) {
        anb__advance(p);
        anb__add_child(tree, anb__parse_sum(p));
    }
    return anb__end_tree(p, tree);
}

/* ---- by the first word ------------------------------------------------------------------------ */

static anb__tree *quoted(anb__parser *p, anb__tree_kind kind, uint32_t start, const char *what) {
    anb__tree *tree = anb__new_tree(p, kind, start);
    anb__advance(p);
    if (p->now.kind != ANB__TOKEN_STRING) {
        anb__expected(p, what);
        return tree;
    }
    anb__add_child(tree, anb__parse_primary(p));
    return anb__end_tree(p, tree);
}

static anb__tree *title(anb__parser *p, uint32_t start) {
    return quoted(p, ANB__TREE_TITLE, start, "a title in quotes");
}
static anb__tree *include(anb__parser *p, uint32_t start) {
    return quoted(p, ANB__TREE_INCLUDE, start, "a file's name in quotes");
}

static anb__tree *any_statement(anb__parser *p) {
    static const struct {
        const char *word;
        anb__tree *(*rule)(anb__parser *p, uint32_t start);
    } rules[] = {{"title", title},     {"include", include}, {"network", network}, {"port", port},
                 {"join", join},       {"for", for_loop},    {"if", if_else},      {"sweep", sweep},
                 {"require", require}, {"tune", tune},       {"shared", shared},   {"assume", assume},
                 {"cases", cases},     {"drive", drive}};
    uint32_t start = p->now.start;
    for (size_t i = 0; i < sizeof rules / sizeof *rules; i++)
        if (anb__is_word(p, rules[i].word)) return rules[i].rule(p, start);
    if (anb__is_word(p, "else")) {
        anb__mistake(p, anb__span_of(p, p->now), "lonely-else", "this `else` belongs to no `if`");
        return anb__new_tree(p, ANB__TREE_ERROR, start);
    }
    if (anb__is_name(p) && anb__peek(p) == ANB__TOKEN_IS)
        return define(p, anb__new_tree(p, ANB__TREE_DEFINE, start));
    return is_own_kind(p) ? own_kind(p, start) : path_or_place(p, start);
}

/* ---- recovery --------------------------------------------------------------------------------- */

static bool at_end(const anb__parser *p) {
    return p->now.kind == ANB__TOKEN_LINE || p->now.kind == ANB__TOKEN_SEMICOLON ||
           p->now.kind == ANB__TOKEN_END || p->now.kind == ANB__TOKEN_RIGHT_BRACE;
}

/* To the end of the statement: its line, or the block that it has begun; at the latest to a line that
 * begins with a statement's word. */
static void skip_statement(anb__parser *p) {
    unsigned depth = 0;
    anb__close_all(p);
    while (p->now.kind != ANB__TOKEN_END) {
        if (p->now.kind == ANB__TOKEN_RIGHT_BRACE && !depth) break;
        if (!depth && (p->now.kind == ANB__TOKEN_LINE || p->now.kind == ANB__TOKEN_SEMICOLON)) break;
        if (!depth && p->now.lines && anb__is_statement_word(p)) break;
        depth += p->now.kind == ANB__TOKEN_LEFT_BRACE;
        depth -= p->now.kind == ANB__TOKEN_RIGHT_BRACE;
        anb__advance(p);
        anb__close_all(p);
    }
}

/* What a broken statement is still good for: the names that it defines. */
static bool keeps_its_name(const anb__tree *tree) {
    switch (tree->kind) {
    case ANB__TREE_DEFINE:
    case ANB__TREE_KIND:
    case ANB__TREE_TUNE:
    case ANB__TREE_CASES:
    case ANB__TREE_NETWORK:
        return tree->name != NULL;
    default:
        return false;
    }
}

/* A definition without its value gets an ERROR for one. */
static void complete(anb__parser *p, anb__tree *tree) {
    if (tree->kind == ANB__TREE_DEFINE || tree->kind == ANB__TREE_TUNE || tree->kind == ANB__TREE_CASES) {
        tree->first = tree->last = NULL;
        anb__add_child(tree, anb__new_tree(p, ANB__TREE_ERROR, tree->span.start));
    }
    if (tree->kind == ANB__TREE_KIND || tree->kind == ANB__TREE_NETWORK) {
        anb__tree_kind body = tree->kind == ANB__TREE_KIND ? ANB__TREE_ERROR : ANB__TREE_BLOCK;
        if (!tree->first) anb__add_child(tree, anb__new_tree(p, ANB__TREE_PARAMETERS, tree->span.start));
        if (!tree->first->next) anb__add_child(tree, anb__new_tree(p, body, tree->span.start));
    }
}

anb__tree *anb__parse_statement(anb__parser *p) {
    uint32_t start = p->now.start;
    bool failed_before = p->failed;
    p->failed = false;
    anb__tree *tree = any_statement(p);
    if (!p->failed && !at_end(p)) anb__expected(p, "the end of the statement");
    if (p->failed) {
        skip_statement(p);
        if (keeps_its_name(tree))
            complete(p, tree);
        else
            tree->kind = ANB__TREE_ERROR;
    }
    if (p->now.start == start && p->now.kind != ANB__TOKEN_END && p->now.kind != ANB__TOKEN_RIGHT_BRACE)
        anb__advance(p);
    p->failed = failed_before;
    return tree;
}
