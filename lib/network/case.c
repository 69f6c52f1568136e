/* The values of `cases` as text, for `--set`. */
#include <stdio.h>
#include <string.h>

#include "base/number.h"
#include "network/expander.h"

/* A number in its base unit: "1250000000 Hz". A turn is a `wave`. */
static const char *quantity_text(anb__expander *x, double value, anb__dimension dimension) {
    char number[ANB__NUMBER_SIZE + 1], unit[64], text[ANB__NUMBER_SIZE + 80];
    number[anb__number_write(value, number)] = '\0';
    bool plain = anb__same_dimension(dimension, anb__plain),
         angle = anb__same_dimension(dimension, anb__angle);
    const char *name = plain ? "" : angle ? "wave" : anb__dimension_name(dimension, unit, sizeof unit);
    int length = snprintf(text, sizeof text, "%s%s%s", number, *name ? " " : "", name);
    return anb__arena_text(&x->network->arena, text, (size_t)length);
}

static void range_texts(anb__expander *x, const anb__quantity *bounds, const char **texts, uint32_t count) {
    double low = bounds[0].value.re, high = bounds[1].value.re;
    for (uint32_t k = 0; k < count; k++) {
        double value = k == 0 ? low : k == count - 1 ? high : low + (high - low) * k / (count - 1);
        texts[k] = quantity_text(x, value, bounds[0].dimension);
    }
}

/* A list that is written out: its elements as they stand. One that is named: `name[k]`. */
static void list_texts(anb__expander *x, const anb__tree *tree, const char **texts, uint32_t count) {
    const anb__source *source = &x->report->sources.list[tree->span.source];
    const char *at = source->text + tree->span.start;
    const anb__tree *element = tree->kind == ANB__TREE_LIST ? tree->first : NULL;
    for (uint32_t k = 0; k < count; k++) {
        char text[200];
        int length = (int)(tree->span.end - tree->span.start);
        if (element) {
            texts[k] = anb__arena_text(&x->network->arena, source->text + element->span.start,
                                       element->span.end - element->span.start);
            element = element->next;
            continue;
        }
        length = snprintf(text, sizeof text, "%.*s[%u]", length < 150 ? length : 150, at, k + 1);
        texts[k] = anb__arena_text(&x->network->arena, text, (size_t)length);
    }
}

static anb__case *new_case(anb__network *network) {
    if (network->case_count == network->case_capacity) {
        uint32_t capacity = network->case_capacity ? 2 * network->case_capacity : 4;
        network->case_names = anb__arena_grow(&network->arena, network->case_names,
                                              network->case_count * sizeof *network->case_names,
                                              capacity * sizeof *network->case_names);
        network->case_capacity = capacity;
    }
    return &network->case_names[network->case_count++];
}

void anb__list_case(anb__expander *x, const anb__tree *tree) {
    anb__value value = anb__evaluate(x, tree->first);
    double points = value.count;
    const anb__tree *given = tree->first->next;
    if (value.kind == ANB__VALUE_RANGE &&
        !anb__wanted_whole(x, given->first, "the number of cases", 1, &points))
        return;
    uint32_t count = (uint32_t)points;
    const char **texts = anb__arena_take(&x->network->arena, count * sizeof *texts);
    if (value.kind == ANB__VALUE_RANGE)
        range_texts(x, value.bounds, texts, count);
    else
        list_texts(x, tree->first, texts, count);
    *new_case(x->network) = (anb__case){tree->name->text, texts, count};
}
