/* Values: from expressions, with their dimensions. */
#include <string.h>

#include "network/expander.h"

typedef anb__value evaluate_function(anb__expander *x, const anb__tree *tree);

anb__value anb__poison(void) { return (anb__value){.kind = ANB__VALUE_POISON}; }

anb__value anb__quantity_value(const anb__quantity *q) {
    return (anb__value){.kind = ANB__VALUE_QUANTITY, .quantity = *q};
}

anb__value anb__plain_value(double value) {
    return (anb__value){.kind = ANB__VALUE_QUANTITY, .quantity = {.value = {value, 0}}};
}

/* ---- operations --------------------------------------------------------------------- */

static void report_trouble(anb__expander *x, const anb__tree *tree, anb__trouble trouble) {
    static const char *const texts[][2] = {
        [ANB__BY_ZERO] = {"division-by-zero", "divides by zero"},
        [ANB__NEGATIVE_ROOT] = {"negative-root", "is the root of a negative number"},
        [ANB__NEGATIVE_LOGARITHM] = {"negative-logarithm", "is the logarithm of a negative number"},
        [ANB__LOGARITHM_OF_ZERO] = {"logarithm-of-zero", "is the logarithm of zero"},
        [ANB__OUTSIDE_ONE] = {"outside-domain", "takes numbers from -1 to 1 only"},
        [ANB__NOT_REAL] = {"not-real", "takes real numbers only"},
        [ANB__NOT_FINITE] = {"not-finite", "is not finite"},
    };
    anb__error(x->report, tree->span, texts[trouble][0], "`%s` %s", anb__quote(x, tree->span),
               texts[trouble][1]);
}

static anb__term *term_of(anb__expander *x, const anb__quantity *q) {
    return q->term ? q->term : anb__term_constant(&x->scratch, q->value);
}

/* Constants are calculated at once; what depends on the frequency becomes a term, what is measured
 * keeps its dimension only. */
anb__value anb__compute(anb__expander *x, const anb__tree *tree, anb__operation operation,
                        const anb__quantity *a, const anb__quantity *b, anb__dimension dimension) {
    anb__quantity out = {.dimension = dimension};
    out.marks = (uint8_t)((a->marks | (b ? b->marks : 0)) & ~(ANB__HAS_AT | ANB__IS_SHARE));
    if (out.marks & ANB__IS_MEASURED) return anb__quantity_value(&out);
    if (a->term || (b && b->term)) {
        out.term = anb__term_operation(&x->scratch, operation, term_of(x, a), b ? term_of(x, b) : NULL);
        return anb__quantity_value(&out);
    }
    anb__trouble trouble = anb__operate(operation, a->value, b ? b->value : anb__cx(0, 0), &out.value);
    if (trouble == ANB__FINE) return anb__quantity_value(&out);
    report_trouble(x, tree, trouble);
    return anb__poison();
}

bool anb__operand(anb__expander *x, const anb__tree *tree, anb__quantity *out) {
    anb__value value = anb__evaluate(x, tree);
    if (value.kind == ANB__VALUE_POISON) return false;
    if (value.kind != ANB__VALUE_QUANTITY) {
        anb__error(x->report, tree->span, "not-a-number", "`%s` is %s, not a number to calculate with",
                   anb__quote(x, tree->span), anb__value_phrase(x, &value));
        return false;
    }
    if (value.quantity.marks & ANB__HAS_AT) {
        anb__error(x->report, tree->span, "at-in-arithmetic",
                   "`%s` holds at one frequency: it is passed on to a part, never calculated with",
                   anb__quote(x, tree->span));
        return false;
    }
    *out = value.quantity;
    return true;
}

/* ---- sums ------------------------------------------------------------------------------- */

/* dBm is a scale of its own: with dB it stays one, and a difference of two is in dB. */
static bool sum_dimension(const anb__quantity *a, const anb__quantity *b, bool minus, anb__dimension *out) {
    bool dbm_a = a->dimension.scale == ANB__SCALE_DBM, dbm_b = b->dimension.scale == ANB__SCALE_DBM;
    *out = a->dimension;
    if (dbm_a && dbm_b) {
        *out = anb__level;
        return minus;
    }
    if (dbm_a) return anb__same_dimension(b->dimension, anb__level);
    if (dbm_b) {
        *out = anb__dbm;
        return !minus && anb__same_dimension(a->dimension, anb__level);
    }
    return anb__same_dimension(a->dimension, b->dimension);
}

static bool is_plain(const anb__quantity *q) { return anb__same_dimension(q->dimension, anb__plain); }

/* Shared by sums and comparisons. */
static void report_unequal(anb__expander *x, const anb__tree *tree, const anb__quantity *a,
                           const anb__quantity *b, const char *verb) {
    char left[96], right[96], unit[96];
    const char *quote_a = anb__quote(x, tree->first->span), *quote_b = anb__quote(x, tree->first->next->span);
    anb__diagnostic *d = anb__error(x->report, tree->span, "unequal-dimensions",
                                    "`%s` is %s and `%s` is %s: they cannot be %s", quote_a,
                                    anb__dimension_phrase(a->dimension, left, sizeof left), quote_b,
                                    anb__dimension_phrase(b->dimension, right, sizeof right), verb);
    const anb__quantity *other = is_plain(a) ? b : a;
    const anb__tree *bare = is_plain(a) ? tree->first : tree->first->next;
    if (is_plain(a) != is_plain(b) && bare->kind == ANB__TREE_NUMBER)
        anb__add_hint(x->report, d, "`%s` has no unit: write `%s %s`", anb__quote(x, bare->span),
                      anb__quote(x, bare->span), anb__dimension_name(other->dimension, unit, sizeof unit));
    else if (a->dimension.scale == ANB__SCALE_DBM && b->dimension.scale == ANB__SCALE_DBM)
        anb__add_hint(x->report, d, "powers add in W; dBm is a logarithmic scale");
}

static anb__value sum(anb__expander *x, const anb__tree *tree, const anb__quantity *a,
                      const anb__quantity *b) {
    bool minus = tree->kind == ANB__TREE_SUBTRACT;
    anb__dimension dimension;
    if (!sum_dimension(a, b, minus, &dimension)) {
        report_unequal(x, tree, a, b, minus ? "subtracted" : "added");
        return anb__poison();
    }
    anb__value out = anb__compute(x, tree, minus ? ANB__SUBTRACT : ANB__ADD, a, b, dimension);
    out.quantity.marks |= a->marks & b->marks & ANB__IS_SHARE;
    return out;
}

/* ---- products ------------------------------------------------------------------------------ */

static anb__value report_scale(anb__expander *x, const anb__tree *tree, const anb__quantity *a,
                               const anb__quantity *b) {
    bool dbm = a->dimension.scale == ANB__SCALE_DBM || b->dimension.scale == ANB__SCALE_DBM;
    bool level = a->dimension.scale == ANB__SCALE_LEVEL || b->dimension.scale == ANB__SCALE_LEVEL;
    const char *why = dbm     ? "dBm is a power on a scale of its own, which has sums with dB only"
                      : level ? "a level in dB is multiplied or divided by plain numbers only"
                              : "no unit has powers that large";
    anb__error(x->report, tree->span, "no-product", "`%s` has no meaning: %s", anb__quote(x, tree->span),
               why);
    return anb__poison();
}

static anb__value product(anb__expander *x, const anb__tree *tree, const anb__quantity *a,
                          const anb__quantity *b) {
    bool divides = tree->kind == ANB__TREE_DIVIDE;
    anb__dimension dimension;
    bool defined = divides ? anb__dimension_quotient(a->dimension, b->dimension, &dimension)
                           : anb__dimension_product(a->dimension, b->dimension, &dimension);
    if (!defined) return report_scale(x, tree, a, b);
    anb__value out = anb__compute(x, tree, divides ? ANB__DIVIDE : ANB__MULTIPLY, a, b, dimension);
    bool share = (a->marks & ANB__IS_SHARE) && is_plain(b) && !(b->marks & ANB__IS_SHARE);
    bool turned = !divides && (b->marks & ANB__IS_SHARE) && is_plain(a) && !(a->marks & ANB__IS_SHARE);
    if (share || turned) out.quantity.marks |= ANB__IS_SHARE;
    return out;
}

static bool is_binary(const anb__tree *tree) {
    return tree->kind == ANB__TREE_ADD || tree->kind == ANB__TREE_SUBTRACT ||
           tree->kind == ANB__TREE_MULTIPLY || tree->kind == ANB__TREE_DIVIDE;
}

/* `a + b + c + ...` leans to the left and may be long, so it is walked without recursion: down to
 * its first operand, then up again. */
static anb__value evaluate_binary(anb__expander *x, const anb__tree *tree) {
    enum { SHORT = 4 };
    const anb__tree *few[SHORT] = {NULL}, **spine = few;
    uint32_t count = 0;
    for (const anb__tree *t = tree; is_binary(t); t = t->first) count++;
    if (count > SHORT) spine = anb__arena_take(&x->scratch, count * sizeof *spine);
    uint32_t at = count;
    for (const anb__tree *t = tree; is_binary(t); t = t->first) spine[--at] = t;
    anb__quantity a, b;
    bool known = anb__operand(x, spine[0]->first, &a);
    for (uint32_t i = 0; i < count; i++) {
        bool right = anb__operand(x, spine[i]->first->next, &b);
        if (!known || !right) {
            known = false;
            continue;
        }
        bool adds = spine[i]->kind == ANB__TREE_ADD || spine[i]->kind == ANB__TREE_SUBTRACT;
        anb__value value = adds ? sum(x, spine[i], &a, &b) : product(x, spine[i], &a, &b);
        known = value.kind == ANB__VALUE_QUANTITY;
        a = value.quantity;
    }
    return known ? anb__quantity_value(&a) : anb__poison();
}

static anb__value evaluate_power(anb__expander *x, const anb__tree *tree) {
    anb__quantity a, b;
    anb__dimension dimension = anb__plain;
    bool left = anb__operand(x, tree->first, &a), right = anb__operand(x, tree->first->next, &b);
    if (!left || !right) return anb__poison();
    char phrase[96];
    if (!is_plain(&b)) {
        anb__error(x->report, tree->first->next->span, "wrong-exponent",
                   "an exponent is a plain number; `%s` is %s", anb__quote(x, tree->first->next->span),
                   anb__dimension_phrase(b.dimension, phrase, sizeof phrase));
        return anb__poison();
    }
    if (is_plain(&a)) return anb__compute(x, tree, ANB__RAISE, &a, &b, dimension);
    bool known = !b.term && b.value.im == 0 && !(b.marks & ANB__IS_MEASURED);
    if (known && anb__dimension_power(a.dimension, b.value.re, &dimension))
        return anb__compute(x, tree, ANB__RAISE, &a, &b, dimension);
    anb__error(x->report, tree->span, "no-power", "`%s` has no unit: this power of %s does not exist",
               anb__quote(x, tree->span), anb__dimension_phrase(a.dimension, phrase, sizeof phrase));
    return anb__poison();
}

static anb__value evaluate_minus(anb__expander *x, const anb__tree *tree) {
    anb__quantity a;
    if (!anb__operand(x, tree->first, &a)) return anb__poison();
    anb__value out = anb__compute(x, tree, ANB__NEGATE, &a, NULL, a.dimension);
    out.quantity.marks |= a.marks & ANB__IS_SHARE;
    return out;
}

/* ---- the smallest pieces ---------------------------------------------------------------------- */

/* `0.2 dB/m` where `m` is a value too: nobody can tell which is meant. */
static bool is_ambiguous(anb__expander *x, const anb__tree *tree) {
    const anb__source *source = &x->report->sources.list[tree->span.source];
    uint32_t at = tree->span.end;
    while (at > tree->span.start && source->text[at - 1] != '/') at--;
    if (at == tree->span.start) return false;
    const char *half = source->text + at;
    const anb__name *name = anb__name_of(x->names, half, tree->span.end - at);
    if (!anb__find_value(x, name)) return false;
    anb__diagnostic *d = anb__error(x->report, tree->span, "ambiguous-unit",
                                    "`%s` could be a unit or a division by the value `%s`",
                                    anb__quote(x, tree->span), name->text);
    anb__add_hint(x->report, d,
                  "write blanks around the `/` to divide; for the unit, give the value another name");
    return true;
}

static anb__value evaluate_number(anb__expander *x, const anb__tree *tree) {
    if (tree->unit && strchr(tree->unit->name, '/') && is_ambiguous(x, tree)) return anb__poison();
    anb__quantity q = {.value = {tree->number, 0}};
    if (tree->unit) {
        q.dimension = tree->unit->dimension;
        if (is_plain(&q)) q.marks = ANB__IS_SHARE; /* % and ppm are the units without a dimension */
    }
    return anb__quantity_value(&q);
}

static anb__value evaluate_string(anb__expander *x, const anb__tree *tree) {
    (void)x;
    return (anb__value){.kind = ANB__VALUE_TEXT, .text = tree->text};
}

static anb__value evaluate_constant(anb__expander *x, const anb__tree *tree) {
    (void)x;
    anb__quantity q = {.value = {0, 0}};
    static const anb__dimension speed = {0, -6, 6, 0, 0, 0, ANB__SCALE_PLAIN};
    if (tree->kind == ANB__TREE_PI) q.value.re = 3.141592653589793238;
    else if (tree->kind == ANB__TREE_J) q.value.im = 1;
    else q = (anb__quantity){.dimension = speed, .value = {299792458, 0}};
    return anb__quantity_value(&q);
}

static anb__value evaluate_frequency(anb__expander *x, const anb__tree *tree) {
    (void)tree;
    anb__quantity q = {.dimension = anb__hertz, .term = anb__term_frequency(&x->scratch)};
    return anb__quantity_value(&q);
}

static anb__value evaluate_name(anb__expander *x, const anb__tree *tree) {
    const anb__value *value = anb__find_value(x, tree->name);
    if (value) return *value;
    anb__report_undefined(x, tree);
    return anb__poison();
}

static anb__value evaluate_member(anb__expander *x, const anb__tree *tree) {
    anb__error(x->report, tree->span, "not-a-value", "`%s` is a node or a part of a placement, not a value",
               anb__quote(x, tree->span));
    return anb__poison();
}

static anb__value evaluate_ground(anb__expander *x, const anb__tree *tree) {
    anb__error(x->report, tree->span, "not-a-value", "`ground` is a node, not a value or a part");
    return anb__poison();
}

static anb__value evaluate_group(anb__expander *x, const anb__tree *tree) {
    return anb__evaluate(x, tree->first);
}

static anb__value evaluate_condition(anb__expander *x, const anb__tree *tree) {
    anb__error(x->report, tree->span, "condition", "`%s` is a condition: it stands after `if` only",
               anb__quote(x, tree->span));
    return anb__poison();
}

static anb__value evaluate_error(anb__expander *x, const anb__tree *tree) {
    (void)x, (void)tree;
    return anb__poison();
}

/* ---- lists and ranges --------------------------------------------------------------------------- */

static anb__value evaluate_list(anb__expander *x, const anb__tree *tree) {
    uint32_t count = 0;
    for (const anb__tree *e = tree->first; e; e = e->next) count++;
    anb__value *elements = anb__arena_take(&x->scratch, count * sizeof *elements);
    uint32_t i = 0;
    for (const anb__tree *e = tree->first; e; e = e->next) elements[i++] = anb__evaluate(x, e);
    return (anb__value){.kind = ANB__VALUE_LIST, .count = count, .elements = elements};
}

static anb__value evaluate_index(anb__expander *x, const anb__tree *tree) {
    const anb__tree *index = tree->first->next;
    anb__value list = anb__evaluate(x, tree->first);
    double at;
    if (!anb__wanted_whole(x, index, "an index", -1e9, &at) || list.kind == ANB__VALUE_POISON)
        return anb__poison();
    if (list.kind != ANB__VALUE_LIST) {
        anb__error(x->report, tree->first->span, "not-a-list", "`%s` is %s, not a list",
                   anb__quote(x, tree->first->span), anb__value_phrase(x, &list));
        return anb__poison();
    }
    if (at >= 1 && at <= list.count) return list.elements[(uint32_t)at - 1];
    anb__diagnostic *d = anb__error(
        x->report, index->span, "no-such-element", "`%s` has %lu element%s, so there is no number %ld",
        anb__quote(x, tree->first->span), (unsigned long)list.count, list.count == 1 ? "" : "s", (long)at);
    if (at == 0) anb__add_hint(x->report, d, "elements count from 1");
    return anb__poison();
}

/* A bound without the unit that the other one has is the one mistake that gets its own words. */
static void report_bounds(anb__expander *x, const anb__tree *tree, const anb__quantity *low,
                          const anb__quantity *high) {
    char unit[96], a[96], b[96];
    bool bare = is_plain(low) != is_plain(high);
    const anb__tree *plain = is_plain(low) ? tree->first : tree->first->next;
    const anb__quantity *other = is_plain(low) ? high : low;
    if (bare) {
        const anb__tree *model = is_plain(low) ? tree->first->next : tree->first;
        const char *name = model->kind == ANB__TREE_NUMBER && model->unit
                               ? model->unit->name
                               : anb__dimension_name(other->dimension, unit, sizeof unit);
        anb__diagnostic *d = anb__error(
            x->report, plain->span, "missing-unit", "`%s` has no unit: the other end of the range is %s",
            anb__quote(x, plain->span), anb__dimension_phrase(other->dimension, a, sizeof a));
        if (plain->kind == ANB__TREE_NUMBER)
            anb__add_hint(x->report, d, "write `%s %s`", anb__quote(x, plain->span), name);
        return;
    }
    anb__error(x->report, tree->span, "unequal-dimensions",
               "a range from %s to %s: both ends need the same dimension",
               anb__dimension_phrase(low->dimension, a, sizeof a),
               anb__dimension_phrase(high->dimension, b, sizeof b));
}

static bool range_end(anb__expander *x, const anb__tree *tree, anb__quantity *q) {
    return anb__operand(x, tree, q) &&
           anb__check_wanted(x, tree, "the end of a range", q->dimension, ANB__FIXED, q);
}

static anb__value evaluate_range(anb__expander *x, const anb__tree *tree) {
    anb__quantity *bounds = anb__arena_take(&x->scratch, 2 * sizeof *bounds);
    bool low = range_end(x, tree->first, &bounds[0]);
    bool high = range_end(x, tree->first->next, &bounds[1]);
    if (!low || !high) return anb__poison();
    if (!anb__same_dimension(bounds[0].dimension, bounds[1].dimension)) {
        report_bounds(x, tree, &bounds[0], &bounds[1]);
        return anb__poison();
    }
    return (anb__value){.kind = ANB__VALUE_RANGE, .bounds = bounds};
}

/* ---- what is attached to values ----------------------------------------------------------------------- */

static anb__value evaluate_at(anb__expander *x, const anb__tree *tree) {
    anb__quantity q, at;
    const anb__tree *frequency = tree->first->next;
    bool known = anb__operand(x, tree->first, &q);
    bool placed = anb__wanted(x, frequency, "the frequency after `@`", anb__hertz, ANB__FIXED, &at);
    if (!known || !placed) return anb__poison();
    if (at.value.re <= 0) {
        anb__error(x->report, frequency->span, "not-positive",
                   "the frequency after `@` has to be above 0 Hz");
        return anb__poison();
    }
    if (q.term) {
        anb__error(x->report, tree->span, "frequency-at",
                   "`%s` depends on `frequency`, so it cannot hold at one frequency",
                   anb__quote(x, tree->first->span));
        return anb__poison();
    }
    q.marks |= ANB__HAS_AT | (at.marks & ANB__FROM_TUNE);
    q.at_hz = at.value.re;
    return anb__quantity_value(&q);
}

static bool check_tolerance(anb__expander *x, const anb__tree *tree, const anb__quantity *q,
                            const anb__quantity *t) {
    char a[96], b[96];
    const anb__tree *spread = tree->first->next;
    bool relative = t->marks & ANB__IS_SHARE;
    if (!relative && !anb__same_dimension(q->dimension, t->dimension)) {
        anb__diagnostic *d = anb__error(
            x->report, spread->span, "wrong-tolerance", "the tolerance `%s` is %s, but the value is %s",
            anb__quote(x, spread->span), anb__dimension_phrase(t->dimension, a, sizeof a),
            anb__dimension_phrase(q->dimension, b, sizeof b));
        anb__add_hint(x->report, d, "a relative tolerance is in %% or ppm");
        return false;
    }
    if (t->value.re >= 0) return true;
    anb__error(x->report, spread->span, "wrong-tolerance", "a tolerance cannot be negative");
    return false;
}

static anb__value evaluate_tolerance(anb__expander *x, const anb__tree *tree) {
    anb__quantity q, t;
    const anb__tree *spread = tree->first->next;
    bool known = anb__operand(x, tree->first, &q);
    bool right = anb__operand(x, spread, &t) &&
                 anb__check_wanted(x, spread, "a tolerance", t.dimension, ANB__FIXED, &t);
    if (!known || !right || !check_tolerance(x, tree, &q, &t)) return anb__poison();
    q.marks |= ANB__HAS_TOLERANCE;
    return anb__quantity_value(&q);
}

/* ---- all of them ------------------------------------------------------------------------------------------
 */

static evaluate_function *const evaluators[ANB__TREE_KIND_COUNT] = {
    [ANB__TREE_ERROR] = evaluate_error,
    [ANB__TREE_NUMBER] = evaluate_number,
    [ANB__TREE_STRING] = evaluate_string,
    [ANB__TREE_NAME] = evaluate_name,
    [ANB__TREE_PI] = evaluate_constant,
    [ANB__TREE_J] = evaluate_constant,
    [ANB__TREE_C0] = evaluate_constant,
    [ANB__TREE_FREQUENCY] = evaluate_frequency,
    [ANB__TREE_LIST] = evaluate_list,
    [ANB__TREE_RANGE] = evaluate_range,
    [ANB__TREE_INDEX] = evaluate_index,
    [ANB__TREE_MEMBER] = evaluate_member,
    [ANB__TREE_CALL] = anb__call,
    [ANB__TREE_MINUS] = evaluate_minus,
    [ANB__TREE_ADD] = evaluate_binary,
    [ANB__TREE_SUBTRACT] = evaluate_binary,
    [ANB__TREE_MULTIPLY] = evaluate_binary,
    [ANB__TREE_DIVIDE] = evaluate_binary,
    [ANB__TREE_POWER] = evaluate_power,
    [ANB__TREE_LESS] = evaluate_condition,
    [ANB__TREE_LESS_EQUAL] = evaluate_condition,
    [ANB__TREE_GREATER] = evaluate_condition,
    [ANB__TREE_GREATER_EQUAL] = evaluate_condition,
    [ANB__TREE_EQUAL] = evaluate_condition,
    [ANB__TREE_NOT_EQUAL] = evaluate_condition,
    [ANB__TREE_AND] = evaluate_condition,
    [ANB__TREE_OR] = evaluate_condition,
    [ANB__TREE_NOT] = evaluate_condition,
    [ANB__TREE_AT] = evaluate_at,
    [ANB__TREE_TOLERANCE] = evaluate_tolerance,
    [ANB__TREE_GROUP] = evaluate_group,
    [ANB__TREE_GROUND] = evaluate_ground,
    [ANB__TREE_OPEN] = anb__composite,
    [ANB__TREE_SHORT] = anb__composite,
    [ANB__TREE_CHAIN] = anb__composite,
    [ANB__TREE_PARALLEL] = anb__composite,
    [ANB__TREE_SHUNT] = anb__composite,
    [ANB__TREE_LABELLED] = anb__composite,
};

anb__value anb__evaluate(anb__expander *x, const anb__tree *tree) {
    evaluate_function *evaluate = tree ? evaluators[tree->kind] : NULL;
    if (!evaluate || x->halted || !anb__enter(x, tree->span)) return anb__poison();
    anb__value value = evaluate(x, tree);
    anb__leave(x);
    return value;
}
