/* Labels: names of placed parts, and of all that a placement holds. */
#include "network/expander.h"

/* A part alone; what is inside anything else can be reached through the label. */
static bool is_single(const anb__item *item) {
    while (item->kind == ANB__ITEM_REVERSED || item->kind == ANB__ITEM_INVERSE) item = item->children[0];
    return item->kind == ANB__ITEM_PART;
}

static anb__symbol *claim_label(anb__expander *x, const anb__item *label, anb__span span) {
    uint32_t space = x->labels->id;
    anb__symbol *base = anb__symbol_get(&x->symbols, space, label->label_base);
    span.end = span.start + label->label_base->length;
    if (!anb__claim(x, base, ANB__SYMBOL_LABEL, span)) return NULL;
    anb__symbol *symbol = label->label == label->label_base
                              ? base
                              : anb__symbol_get(&x->symbols, space, label->label);
    if (symbol->live) {
        anb__diagnostic *d = anb__error(x->report, span, "defined-twice",
                                        "there are two parts with the label `%s`", label->label->text);
        bool elsewhere = symbol->span.source != span.source || symbol->span.start != span.start;
        if (elsewhere) anb__add_note(x->report, d, symbol->span, "this is the first");
        if (x->loop_depth)
            anb__add_hint(x->report, d, "in a loop a label needs an index: `%s[k]`", label->label_base->text);
        return NULL;
    }
    symbol->kind = ANB__SYMBOL_LABEL;
    symbol->live = true;
    symbol->span = span;
    return symbol;
}

void anb__open_label(anb__expander *x, const anb__item *label, const anb__item *item, anb__label_mark *mark) {
    *mark = (anb__label_mark){item, label->label, x->labels, label->span, x->part_count};
    anb__symbol *symbol = claim_label(x, label, label->span);
    x->own = NULL;
    if (!symbol) mark->name = NULL;
    if (!symbol || is_single(item)) return;
    x->labels = x->own = anb__new_space(x, x->labels, label->label);
    symbol->order = x->own->id;
}

void anb__close_label(anb__expander *x, const anb__label_mark *mark) {
    x->labels = mark->labels;
    if (!mark->name || !mark->labels->reachable) return;
    const char *text = anb__path_text(x, mark->labels, mark->name);
    uint32_t count = x->part_count - mark->first_part;
    if (count == 1 && is_single(mark->item)) x->parts[mark->first_part].label = text;
    x->labels_list = anb__room(&x->scratch, x->labels_list, x->label_count, &x->label_capacity,
                               sizeof *x->labels_list);
    x->labels_list[x->label_count++] = (anb__label){text, mark->first_part, count, mark->span};
}
