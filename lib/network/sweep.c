/* Sweeps: their frequencies, and how many there are. */
#include "network/expander.h"

static anb__grid_part *new_grid(anb__expander *x, anb__grid_kind kind) {
    x->sweeps = anb__room(&x->scratch, x->sweeps, x->sweep_count, &x->sweep_capacity, sizeof *x->sweeps);
    anb__grid_part *grid = &x->sweeps[x->sweep_count++];
    *grid = (anb__grid_part){.kind = kind};
    return grid;
}

static bool add_points(anb__expander *x, anb__span span, double count) {
    if ((double)x->points + count > ANB__LIMIT_POINTS) {
        anb__error(x->report, span, "limit", "more than 10 000 000 points of a sweep: this is the limit");
        return false;
    }
    x->points += (uint64_t)count;
    return true;
}

/* ---- ranges ------------------------------------------------------------------------------- */

static const anb__tree *end_of(const anb__tree *range, int i) {
    if (range->kind != ANB__TREE_RANGE) return range;
    return i ? range->first->next : range->first;
}

static bool sweep_range(anb__expander *x, const anb__tree *range, double *low, double *high) {
    anb__quantity bounds[2];
    if (!anb__wanted_range(x, range, "a sweep", anb__hertz, 0, bounds)) return false;
    *low = bounds[0].value.re;
    *high = bounds[1].value.re;
    for (int i = 0; i < 2; i++) {
        if (bounds[i].value.re >= 0) continue;
        anb__error(x->report, end_of(range, i)->span, "negative-frequency", "a frequency cannot be negative");
        return false;
    }
    if (*high >= *low) return true;
    anb__error(x->report, range->span, "backwards", "the sweep ends below its start");
    return false;
}

static void evenly(anb__expander *x, const anb__tree *rule, bool counts, bool known, double low,
                   double high) {
    double count;
    if (!anb__wanted_whole(x, rule->first, "the number of points", 1, &count) || !known) return;
    if (count == 1 && high > low) {
        anb__error(x->report, rule->first->span, "too-few", "one point cannot be both ends of the sweep");
        return;
    }
    if (!counts || !add_points(x, rule->span, count)) return;
    anb__grid_part *grid = new_grid(x, ANB__GRID_POINTS);
    grid->low = low, grid->high = high, grid->count = (uint64_t)count;
}

static void stepwise(anb__expander *x, const anb__tree *rule, bool counts, bool known, double low,
                     double high) {
    anb__quantity step;
    if (!anb__wanted(x, rule->first, "the step of a sweep", anb__hertz, ANB__FIXED, &step)) return;
    if (step.value.re <= 0) {
        anb__error(x->report, rule->first->span, "not-positive", "the step of a sweep has to be above 0 Hz");
        return;
    }
    if (!known || !counts) return;
    double size = step.value.re, count = floor((high * (1 + 1e-12) - low) / size) + 1;
    if (low + size * (count - 1) > high * (1 + 1e-12)) count--;
    if (!add_points(x, rule->span, count)) return;
    anb__grid_part *grid = new_grid(x, ANB__GRID_STEP);
    grid->low = low, grid->high = high, grid->step = size, grid->count = (uint64_t)count;
}

/* ceil(n * decades) steps; a product that is whole but for its rounding counts as whole. */
static void per_decade(anb__expander *x, const anb__tree *rule, const anb__tree *range, bool counts,
                       bool known, double low, double high) {
    anb__quantity n;
    if (!anb__wanted(x, rule->first, "the number of points per decade", anb__plain, ANB__FIXED, &n)) return;
    if (n.value.re <= 0) {
        anb__error(x->report, rule->first->span, "not-positive",
                   "the number of points per decade has to be above 0");
        return;
    }
    if (!known) return;
    if (low <= 0) {
        anb__error(x->report, end_of(range, 0)->span, "not-positive",
                   "decades begin above 0 Hz: 0 has no logarithm");
        return;
    }
    if (!counts) return;
    double steps = n.value.re * log10(high / low), whole = rint(steps);
    double count = (fabs(steps - whole) <= 1e-9 ? whole : ceil(steps)) + 1;
    if (!add_points(x, rule->span, count)) return;
    anb__grid_part *grid = new_grid(x, ANB__GRID_PER_DECADE);
    grid->low = low, grid->high = high, grid->count = (uint64_t)count;
}

/* ---- single frequencies ---------------------------------------------------------------------- */

typedef struct frequencies {
    double *list;
    uint32_t count, capacity;
} frequencies;

static void take_frequency(anb__expander *x, const anb__tree *tree, anb__quantity q, frequencies *f) {
    if (!anb__check_wanted(x, tree, "a frequency of a sweep", anb__hertz, ANB__FIXED, &q)) return;
    if (q.value.re < 0) {
        anb__error(x->report, tree->span, "negative-frequency", "a frequency cannot be negative");
        return;
    }
    f->list = anb__room(&x->network->arena, f->list, f->count, &f->capacity, sizeof *f->list);
    f->list[f->count++] = q.value.re;
}

/* A frequency, or a list of them. */
static void take_frequencies(anb__expander *x, const anb__tree *tree, frequencies *f) {
    anb__value value = anb__evaluate(x, tree);
    if (value.kind == ANB__VALUE_LIST) {
        for (uint32_t i = 0; i < value.count; i++)
            if (value.elements[i].kind == ANB__VALUE_QUANTITY)
                take_frequency(x, tree, value.elements[i].quantity, f);
    } else if (value.kind == ANB__VALUE_QUANTITY) {
        take_frequency(x, tree, value.quantity, f);
    } else if (value.kind != ANB__VALUE_POISON) {
        anb__error(x->report, tree->span, "not-a-number", "a frequency of a sweep is a number; `%s` is %s",
                   anb__quote(x, tree->span), anb__value_phrase(x, &value));
    }
}

static void single(anb__expander *x, const anb__tree *at, bool counts) {
    frequencies f = {0};
    for (const anb__tree *tree = at->first; tree; tree = tree->next) take_frequencies(x, tree, &f);
    if (!counts || !f.count || !add_points(x, at->span, f.count)) return;
    anb__grid_part *grid = new_grid(x, ANB__GRID_AT);
    grid->list = f.list;
    grid->count = f.count;
}

/* ---- the statement ----------------------------------------------------------------------------- */

void anb__sweep_statement(anb__expander *x, const anb__tree *tree, bool counts) {
    const anb__tree *range = tree->first, *rule = range ? range->next : NULL;
    double low = 0, high = 0;
    x->sweep_wanted = true;
    if (range && range->kind == ANB__TREE_SWEEP_AT) {
        single(x, range, counts);
        return;
    }
    if (!range || !rule) return; /* reported by the parser */
    bool known = sweep_range(x, range, &low, &high);
    if (rule->kind == ANB__TREE_POINTS) evenly(x, rule, counts, known, low, high);
    else if (rule->kind == ANB__TREE_STEP) stepwise(x, rule, counts, known, low, high);
    else if (rule->kind == ANB__TREE_PER_DECADE) per_decade(x, rule, range, counts, known, low, high);
}
