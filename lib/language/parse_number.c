/* Numbers and their units, and what is often written instead. */
#include <ctype.h>
#include <stdio.h>
#include <string.h>

#include "base/number.h"
#include "language/parser.h"

/* Words that may stand behind a number because the grammar expects them there. */
static const char *const followers[] = {"at",   "over", "within", "on",     "points",
                                        "step", "per",  "decade", "weight", "normal",
                                        "and",  "or",   "else",   "from",   "series"};

static bool may_follow(const anb__parser *p) {
    for (size_t i = 0; i < sizeof followers / sizeof *followers; i++)
        if (anb__is_word(p, followers[i])) return true;
    return false;
}

static uint32_t letters_from(const anb__parser *p, uint32_t at) {
    while (at < p->length && (isalpha((unsigned char)p->text[at]) || (unsigned char)p->text[at] >= 0x80))
        at++;
    return at;
}

/* The end of the unit that begins with the word that is looked at, a quotient if it is one; 0 where there is
 * none. */
static uint32_t find_unit(anb__parser *p, anb__unit *unit) {
    anb__token word = p->now;
    if (word.kind != ANB__TOKEN_WORD || word.lines) return 0;
    if (word.end < p->length && p->text[word.end] == '/') {
        uint32_t end = letters_from(p, word.end + 1);
        if (end > word.end + 1 && anb__unit_find(p->text + word.start, end - word.start, unit)) return end;
    }
    return anb__unit_find(p->text + word.start, word.end - word.start, unit) ? word.end : 0;
}

/* ---- what is often written instead of a unit --------------------------------------------------- */

static bool is_prefix(char c) { return strchr("fpnumkMGT", c) != NULL; }

/* `100k`, `4k7`, `3j`, `5 in`, `10 mhz`, `2 z0`. */
static void hint_at_unit(anb__parser *p, anb__token number, anb__token word, anb__diagnostic *d) {
    char text[64];
    int digits = (int)(number.end - number.start);
    const char *value = p->text + number.start;
    bool glued = number.end == word.start;
    snprintf(text, sizeof text, "%.*s", (int)(word.end - word.start), p->text + word.start);
    const char *nearest = anb__unit_nearest(text);
    if (!strcmp(text, "j"))
        anb__hint(p, d, "the imaginary unit is a factor: `%.*s*j`", digits, value);
    else if (glued && is_prefix(text[0]) && isdigit((unsigned char)text[1]))
        anb__hint(p, d, "a point and a unit: `%.*s.%s %cohm`", digits, value, text + 1, text[0]);
    else if (glued && is_prefix(text[0]) && !text[1])
        anb__hint(p, d, "a prefix needs its unit: `%.*s %cohm`, `%.*s %cHz`", digits, value, text[0], digits,
                  value, text[0]);
    else if (nearest)
        anb__hint(p, d, "`%.*s %s`", digits, value, nearest);
    else
        anb__hint(p, d, "a product is written with a star: `%.*s*%s`", digits, value, text);
}

static anb__tree *no_unit(anb__parser *p, anb__token number) {
    anb__token word = p->now;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ERROR, number.start);
    bool failed = p->failed;
    anb__diagnostic *d =
        anb__mistake(p, anb__span_at(p, number.start, word.end), "unit", "`%.*s` is not a unit",
                     (int)(word.end - word.start), p->text + word.start);
    hint_at_unit(p, number, word, d);
    p->failed = failed; /* the rest of the statement makes sense */
    anb__advance(p);
    return anb__end_tree(p, tree);
}

/* `3,3 pF` where no list is open. */
static bool is_decimal_comma(const anb__parser *p, anb__token number) {
    return !p->open_count && p->now.kind == ANB__TOKEN_COMMA && p->now.start == number.end &&
           number.end + 1 < p->length && isdigit((unsigned char)p->text[number.end + 1]);
}

static anb__tree *decimal_comma(anb__parser *p, anb__token number) {
    anb__tree *tree = anb__new_tree(p, ANB__TREE_ERROR, number.start);
    bool failed = p->failed;
    anb__advance(p);
    uint32_t rest = p->now.start;
    anb__parse_number(p);
    anb__end_tree(p, tree);
    p->failed = failed;
    anb__diagnostic *d =
        anb__mistake(p, tree->span, "decimal-comma", "a decimal comma? Numbers have a point");
    anb__hint(p, d, "`%.*s.%.*s`", (int)(number.end - number.start), p->text + number.start,
              (int)(tree->span.end - rest), p->text + rest);
    p->failed = failed;
    return tree;
}

/* ---- a number --------------------------------------------------------------------------------------- */

static void set_value(anb__parser *p, anb__tree *tree, anb__token number, const anb__unit *unit) {
    anb__number_read_scaled(p->text + number.start, number.end - number.start, unit ? unit->decimal : 0,
                            &tree->number);
    if (!unit) return;
    if (unit->factor != 1) tree->number *= unit->factor;
    if (unit->divisor != 1) tree->number /= unit->divisor;
    anb__unit *kept = anb__arena_take(p->arena, sizeof *kept);
    *kept = *unit;
    tree->unit = kept;
}

anb__tree *anb__parse_number(anb__parser *p) {
    anb__token number = p->now;
    anb__tree *tree = anb__new_tree(p, ANB__TREE_NUMBER, number.start);
    anb__unit unit;
    anb__advance(p);
    if (p->now.kind == ANB__TOKEN_WORD && !p->now.lines) {
        uint32_t end = find_unit(p, &unit);
        if (!end && !may_follow(p)) return no_unit(p, number);
        if (end) {
            while (p->now.end < end && !p->has_held) anb__advance(p);
            anb__advance(p);
            set_value(p, tree, number, &unit);
            tree->span.end = end;
            return tree;
        }
    } else if (is_decimal_comma(p, number)) {
        return decimal_comma(p, number);
    }
    set_value(p, tree, number, NULL);
    tree->span.end = number.end;
    return tree;
}
