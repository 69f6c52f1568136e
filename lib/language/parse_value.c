/* Values and conditions, from tightest to loosest. */
#include "language/parser.h"

/* ---- what stands alone ------------------------------------------------------------------------ */

static anb__tree *string(anb__parser *p) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_STRING, p->now.start);
    char *to = anb__arena_take(p->arena, p->now.end - p->now.start);
    tree->text = to;
    for (uint32_t i = p->now.start + 1; i + 1 < p->now.end; i++) {
        if (p->text[i] == '\\') i++;
        *to++ = p->text[i];
    }
    anb__advance(p);
    return anb__end_tree(p, tree);
}

static anb__tree *group(anb__parser *p) {
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_GROUP, open);
    if (anb__deepen(p, open)) {
        anb__advance(p);
        anb__add_child(tree, anb__parse_chain(p));
        anb__close(p, ANB__TOKEN_RIGHT_PARENTHESIS, open);
    }
    anb__rise(p);
    return anb__end_tree(p, tree);
}

static anb__tree *list(anb__parser *p) {
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_LIST, open);
    if (anb__deepen(p, open)) {
        anb__advance(p);
        while (!p->failed && p->now.kind != ANB__TOKEN_RIGHT_BRACKET) {
            anb__add_child(tree, anb__parse_chain(p));
            if (p->now.kind != ANB__TOKEN_COMMA) break;
            anb__advance(p);
        }
        anb__close(p, ANB__TOKEN_RIGHT_BRACKET, open);
    }
    anb__rise(p);
    return anb__end_tree(p, tree);
}

/* `key = value`, or a value by its place. */
static anb__tree *argument(anb__parser *p) {
    if (!anb__is_name(p) || anb__peek(p) != ANB__TOKEN_IS) return anb__parse_chain(p);
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ARGUMENT, p->now.start);
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    anb__advance(p);
    anb__add_child(tree, anb__parse_chain(p));
    return anb__end_tree(p, tree);
}

static anb__tree *call(anb__parser *p, anb__tree *tree) {
    uint32_t open = p->now.start;
    tree->kind = ANB__TREE_CALL;
    if (anb__deepen(p, open)) {
        anb__advance(p);
        while (!p->failed && p->now.kind != ANB__TOKEN_RIGHT_PARENTHESIS) {
            anb__add_child(tree, argument(p));
            if (p->now.kind != ANB__TOKEN_COMMA) break;
            anb__advance(p);
        }
        anb__close(p, ANB__TOKEN_RIGHT_PARENTHESIS, open);
    }
    anb__rise(p);
    return anb__end_tree(p, tree);
}

static anb__tree *name_or_call(anb__parser *p) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_NAME, p->now.start);
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    if (p->now.kind == ANB__TOKEN_LEFT_PARENTHESIS) return call(p, tree);
    return anb__end_tree(p, tree);
}

static anb__tree *word_value(anb__parser *p) {
    static const struct {
        const char *word;
        anb__tree_kind kind;
    } words[] = {{"pi", ANB__TREE_PI},         {"j", ANB__TREE_J},
                 {"c0", ANB__TREE_C0},         {"frequency", ANB__TREE_FREQUENCY},
                 {"ground", ANB__TREE_GROUND}, {"open", ANB__TREE_OPEN},
                 {"short", ANB__TREE_SHORT}};
    for (size_t i = 0; i < sizeof words / sizeof *words; i++) {
        if (!anb__is_word(p, words[i].word)) continue;
        anb__tree *tree = anb__new_tree(p, words[i].kind, p->now.start);
        anb__advance(p);
        return anb__end_tree(p, tree);
    }
    return anb__is_name(p) ? name_or_call(p) : anb__expected(p, "a value or a part");
}

anb__tree *anb__parse_primary(anb__parser *p) {
    switch (p->now.kind) {
    case ANB__TOKEN_NUMBER:
        return anb__parse_number(p);
    case ANB__TOKEN_STRING:
        return string(p);
    case ANB__TOKEN_LEFT_PARENTHESIS:
        return group(p);
    case ANB__TOKEN_LEFT_BRACKET:
        return list(p);
    case ANB__TOKEN_WORD:
        return word_value(p);
    default:
        return anb__expected(p, "a value or a part");
    }
}

static anb__tree *index_of(anb__parser *p, anb__tree *base) {
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_INDEX, base->span.start);
    anb__advance(p);
    anb__add_child(tree, base);
    anb__add_child(tree, anb__parse_sum(p));
    anb__close(p, ANB__TOKEN_RIGHT_BRACKET, open);
    return anb__end_tree(p, tree);
}

static anb__tree *member(anb__parser *p, anb__tree *base) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_MEMBER, base->span.start);
    anb__advance(p);
    anb__add_child(tree, base);
    if (!anb__is_name(p)) return anb__expected(p, "a name");
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    return anb__end_tree(p, tree);
}

/* An index or a member belongs to what stands right before it; on a new line it does not. */
static anb__tree *postfix(anb__parser *p, anb__tree *base) {
    while (!p->failed) {
        if (p->now.kind == ANB__TOKEN_LEFT_BRACKET && !p->now.lines)
            base = index_of(p, base);
        else if (p->now.kind == ANB__TOKEN_DOT)
            base = member(p, base);
        else
            break;
    }
    return base;
}

anb__tree *anb__parse_name_or_node(anb__parser *p) {
    if (anb__is_word(p, "ground")) return word_value(p);
    if (!anb__is_name(p)) return anb__expected(p, "a name");
    anb__tree *tree = anb__new_tree(p, ANB__TREE_NAME, p->now.start);
    anb__set_name(p, tree, p->now);
    anb__advance(p);
    return postfix(p, anb__end_tree(p, tree));
}

/* ---- operators ----------------------------------------------------------------------------------------- */

typedef anb__tree *rule(anb__parser *p);

static anb__tree *binary(anb__parser *p, anb__tree *left, anb__tree_kind kind, rule *right) {
    anb__tree *tree = anb__new_tree(p, kind, left->span.start);
    anb__advance(p);
    anb__add_child(tree, left);
    anb__add_child(tree, right(p));
    return anb__end_tree(p, tree);
}

static anb__tree *sign(anb__parser *p);

static bool has_unit(const anb__tree *tree) { return tree->kind == ANB__TREE_NUMBER && tree->unit; }
static bool is_plain(const anb__tree *tree) { return tree->kind == ANB__TREE_NUMBER && !tree->unit; }
static int length_of(const anb__tree *tree) { return (int)(tree->span.end - tree->span.start); }

static anb__tree *power(anb__parser *p) {
    anb__tree *base = postfix(p, anb__parse_primary(p));
    if (p->failed || p->now.kind != ANB__TOKEN_CARET) return base;
    if (has_unit(base)) {
        const char *text = p->text + base->span.start;
        anb__diagnostic *d = anb__mistake(p, anb__span_at(p, base->span.start, p->now.end), "power-of-unit",
                                          "`^` straight after a unit: is the unit meant, or the value?");
        anb__hint(p, d, "`(%.*s)^...` is a power of the value", length_of(base), text);
        return base;
    }
    return binary(p, base, ANB__TREE_POWER, sign);
}

static anb__tree *sign(anb__parser *p) {
    if (p->now.kind != ANB__TOKEN_MINUS) return power(p);
    anb__tree *tree = anb__new_tree(p, ANB__TREE_MINUS, p->now.start);
    if (anb__deepen(p, p->now.start)) {
        anb__advance(p);
        anb__add_child(tree, sign(p));
    }
    anb__rise(p);
    return anb__end_tree(p, tree);
}

/* `1/2 ohm`: half an ohm, or half a siemens? */
static void check_quotient(anb__parser *p, const anb__tree *quotient, const anb__tree *left,
                           const anb__tree *right) {
    if (p->failed || !is_plain(left) || !has_unit(right)) return;
    const char *l = p->text + left->span.start, *r = p->text + right->span.start;
    anb__token number = anb__lex(p->text, right->span.end, right->span.start, false);
    anb__diagnostic *d =
        anb__mistake(p, quotient->span, "two-readings", "`%.*s` has two readings", length_of(quotient), l);
    anb__hint(p, d, "`(%.*s/%.*s)*1 %s`, or `%.*s/(%.*s)`", length_of(left), l,
              (int)(number.end - number.start), r, right->unit->name, length_of(left), l, length_of(right),
              r);
}

static anb__tree *product(anb__parser *p) {
    anb__tree *left = sign(p);
    while (!p->failed && (p->now.kind == ANB__TOKEN_STAR || p->now.kind == ANB__TOKEN_SLASH)) {
        bool divides = p->now.kind == ANB__TOKEN_SLASH;
        anb__tree *tree = binary(p, left, divides ? ANB__TREE_DIVIDE : ANB__TREE_MULTIPLY, sign);
        if (divides) check_quotient(p, tree, left, tree->last);
        left = tree;
    }
    return left;
}

anb__tree *anb__parse_sum(anb__parser *p) {
    anb__tree *left = product(p);
    while (!p->failed && (p->now.kind == ANB__TOKEN_PLUS || p->now.kind == ANB__TOKEN_MINUS))
        left = binary(p, left, p->now.kind == ANB__TOKEN_PLUS ? ANB__TREE_ADD : ANB__TREE_SUBTRACT, product);
    return left;
}

static anb__tree *tolerance(anb__parser *p) {
    anb__tree *value = anb__parse_sum(p);
    if (p->failed || p->now.kind != ANB__TOKEN_TOLERANCE) return value;
    anb__tree *tree = binary(p, value, ANB__TREE_TOLERANCE, anb__parse_sum);
    if (anb__is_word(p, "normal")) {
        tree->flags |= ANB__TREE_NORMAL;
        anb__advance(p);
        anb__end_tree(p, tree);
    }
    return tree;
}

anb__tree *anb__parse_at_value(anb__parser *p) {
    anb__tree *value = tolerance(p);
    if (p->failed || p->now.kind != ANB__TOKEN_AT) return value;
    return binary(p, value, ANB__TREE_AT, anb__parse_sum);
}

anb__tree *anb__parse_range(anb__parser *p) {
    anb__tree *low = anb__parse_at_value(p);
    if (p->failed || p->now.kind != ANB__TOKEN_DOTS) return low;
    return binary(p, low, ANB__TREE_RANGE, anb__parse_at_value);
}

/* ---- conditions ------------------------------------------------------------------------------- */

static bool is_condition(const anb__tree *tree) {
    return (tree->kind >= ANB__TREE_LESS && tree->kind <= ANB__TREE_NOT) ||
           (tree->kind == ANB__TREE_GROUP && tree->first && is_condition(tree->first));
}

static anb__tree *compare(anb__parser *p, anb__tree *left) {
    static const anb__tree_kind kinds[] = {
        [ANB__TOKEN_LESS] = ANB__TREE_LESS,       [ANB__TOKEN_LESS_EQUAL] = ANB__TREE_LESS_EQUAL,
        [ANB__TOKEN_GREATER] = ANB__TREE_GREATER, [ANB__TOKEN_GREATER_EQUAL] = ANB__TREE_GREATER_EQUAL,
        [ANB__TOKEN_EQUAL] = ANB__TREE_EQUAL,     [ANB__TOKEN_NOT_EQUAL] = ANB__TREE_NOT_EQUAL};
    if (p->failed || p->now.kind < ANB__TOKEN_LESS_EQUAL || p->now.kind > ANB__TOKEN_GREATER) return left;
    return binary(p, left, kinds[p->now.kind], anb__parse_sum);
}

/* A condition in parentheses, or arithmetic that begins with some: tried as the former, taken back if it is
 * none. */
static anb__tree *parenthesised(anb__parser *p) {
    anb__parser before = *p;
    unsigned errors = p->report->errors;
    uint32_t open = p->now.start;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_GROUP, open);
    if (!anb__deepen(p, open)) {
        anb__rise(p);
        return tree;
    }
    anb__advance(p);
    anb__tree *inner = anb__parse_condition(p);
    if (is_condition(inner) || p->report->errors > errors) {
        anb__add_child(tree, inner);
        anb__close(p, ANB__TOKEN_RIGHT_PARENTHESIS, open);
        anb__rise(p);
        return anb__end_tree(p, tree);
    }
    *p = before;
    return compare(p, anb__parse_sum(p));
}

static anb__tree *comparison(anb__parser *p) {
    if (anb__is_word(p, "not")) {
        anb__tree *tree = anb__new_tree(p, ANB__TREE_NOT, p->now.start);
        if (anb__deepen(p, p->now.start)) {
            anb__advance(p);
            anb__add_child(tree, comparison(p));
        }
        anb__rise(p);
        return anb__end_tree(p, tree);
    }
    if (p->now.kind == ANB__TOKEN_LEFT_PARENTHESIS) return parenthesised(p);
    return compare(p, anb__parse_sum(p));
}

static anb__tree *conjunction(anb__parser *p) {
    anb__tree *left = comparison(p);
    while (!p->failed && anb__is_word(p, "and")) left = binary(p, left, ANB__TREE_AND, comparison);
    return left;
}

anb__tree *anb__parse_condition(anb__parser *p) {
    anb__tree *left = conjunction(p);
    while (!p->failed && anb__is_word(p, "or")) left = binary(p, left, ANB__TREE_OR, conjunction);
    return left;
}
