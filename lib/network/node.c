/* Nodes: how they come into being by being named, and which of them are one. */
#include <stdio.h>
#include <string.h>

#include "network/expander.h"

uint32_t anb__new_node(anb__expander *x) {
    x->nodes = anb__room(&x->scratch, x->nodes, x->node_count, &x->node_capacity, sizeof *x->nodes);
    uint32_t node = x->node_count++;
    x->nodes[node] = (anb__node){.joined = node};
    return node;
}

/* Roots are found with path halving; the lower number becomes the root, so that ground stays 0 and a
 * named node keeps the name that was written first. */
uint32_t anb__root_of(anb__expander *x, uint32_t node) {
    while (x->nodes[node].joined != node) {
        uint32_t above = x->nodes[node].joined;
        x->nodes[node].joined = x->nodes[above].joined;
        node = above;
    }
    return node;
}

void anb__join(anb__expander *x, uint32_t a, uint32_t b) {
    a = anb__root_of(x, a);
    b = anb__root_of(x, b);
    if (a == b) return;
    if (a < b) x->nodes[b].joined = a;
    else x->nodes[a].joined = b;
}

/* Once everything is joined: what touches a node touches its root. */
void anb__settle_nodes(anb__expander *x) {
    for (uint32_t i = 1; i < x->node_count; i++) {
        anb__node *node = &x->nodes[i], *root = &x->nodes[anb__root_of(x, i)];
        if (node == root) continue;
        root->touched += node->touched;
        root->ports += node->ports;
        root->written += node->written;
    }
}

/* ---- by name ---------------------------------------------------------------------------- */

bool anb__names_node(const anb__expander *x, const anb__tree *tree) {
    switch (tree->kind) {
    case ANB__TREE_GROUND:
    case ANB__TREE_MEMBER: return true;
    case ANB__TREE_NAME: return !anb__find_value(x, tree->name);
    case ANB__TREE_INDEX: return anb__names_node(x, tree->first);
    default: return false;
    }
}

static bool named_node(anb__expander *x, const anb__tree *tree, uint32_t *node) {
    const anb__name *base, *full;
    if (!anb__indexed_name(x, tree, &base, &full)) return false;
    anb__space *space = x->region->space;
    anb__symbol *symbol = anb__symbol_get(&x->symbols, space->id, base);
    if (!anb__claim(x, symbol, ANB__SYMBOL_NODE, tree->span)) return false;
    if (full != base) {
        symbol = anb__symbol_get(&x->symbols, space->id, full);
        symbol->kind = ANB__SYMBOL_NODE;
    }
    if (!symbol->live) {
        symbol->live = true;
        symbol->node = anb__new_node(x);
        symbol->span = tree->span;
        anb__node *made = &x->nodes[symbol->node];
        made->name = full;
        made->space = space;
        made->span = tree->span;
    }
    x->nodes[symbol->node].written++;
    *node = symbol->node;
    return true;
}

static bool far_node(anb__expander *x, const anb__tree *tree, uint32_t *node) {
    anb__far_node *far = anb__arena_take(&x->scratch, sizeof *far);
    if (!anb__path_of(x, tree, &far->path, &far->length)) return false;
    *node = far->node = anb__new_node(x);
    far->space = x->region->space->id;
    far->span = tree->span;
    *x->far_nodes_end = far;
    x->far_nodes_end = &far->next;
    return true;
}

static bool is_far(const anb__tree *tree) {
    while (tree->kind == ANB__TREE_INDEX) tree = tree->first;
    return tree->kind == ANB__TREE_MEMBER;
}

bool anb__node_of(anb__expander *x, const anb__tree *tree, uint32_t *node) {
    *node = 0;
    if (tree->kind == ANB__TREE_GROUND) return true;
    if (tree->kind == ANB__TREE_ERROR) return false;
    if (is_far(tree)) return far_node(x, tree, node);
    const anb__tree *base = tree;
    while (base->kind == ANB__TREE_INDEX) base = base->first;
    if (base->kind == ANB__TREE_NAME && anb__find_value(x, base->name)) {
        anb__value value = *anb__find_value(x, base->name);
        if (value.kind != ANB__VALUE_POISON)
            anb__error(x->report, tree->span, "not-a-node", "`%s` is a value, so it cannot be a node",
                       base->name->text);
        return false;
    }
    if (base->kind == ANB__TREE_NAME) return named_node(x, tree, node);
    anb__error(x->report, tree->span, "not-a-node", "`%s` is no node", anb__quote(x, tree->span));
    return false;
}

/* ---- nodes inside labelled placements ------------------------------------------------------ */

enum { MOST_LABELS = 64, LONGEST_NAME = 512 };

static bool add_piece(anb__expander *x, const anb__tree *tree, const anb__tree **inner,
                      const anb__name **piece) {
    const anb__tree *base = tree;
    while (base->kind == ANB__TREE_INDEX) base = base->first;
    if (base->kind == ANB__TREE_NAME) {
        const anb__name *unused;
        *inner = NULL;
        return anb__indexed_name(x, tree, &unused, piece);
    }
    if (base->kind != ANB__TREE_MEMBER) {
        if (base->kind != ANB__TREE_ERROR)
            anb__error(x->report, base->span, "not-a-node", "`%s` is no label", anb__quote(x, base->span));
        return false;
    }
    *inner = base->first;
    *piece = base->name;
    if (base == tree) return true;
    char text[LONGEST_NAME];
    double index;
    if (tree->first != base || base->name->length > LONGEST_NAME / 2) {
        anb__error(x->report, tree->span, "not-a-node", "`%s` is no node", anb__quote(x, tree->span));
        return false;
    }
    if (!anb__wanted_whole(x, tree->first->next, "an index", -1e9, &index)) return false;
    int length = snprintf(text, sizeof text, "%s[%ld]", base->name->text, (long)index);
    *piece = anb__name_of(&x->texts, text, (uint32_t)length);
    return true;
}

bool anb__path_of(anb__expander *x, const anb__tree *tree, const anb__name *const **path, uint32_t *length) {
    const anb__name *pieces[MOST_LABELS];
    uint32_t count = 0;
    for (const anb__tree *t = tree; t; count++) {
        if (count == MOST_LABELS) {
            anb__report_limit(x, tree->span, "labels in one another", "64");
            return false;
        }
        if (!add_piece(x, t, &t, &pieces[count])) return false;
    }
    const anb__name **kept = anb__arena_take(&x->scratch, count * sizeof *kept);
    for (uint32_t i = 0; i < count; i++) kept[i] = pieces[count - 1 - i];
    *path = kept;
    *length = count;
    return true;
}

anb__symbol *anb__follow(const anb__expander *x, uint32_t space, const anb__name *const *path,
                         uint32_t length) {
    for (uint32_t i = 0; i + 1 < length; i++) {
        const anb__symbol *symbol = anb__symbol_find(&x->symbols, space, path[i]);
        if (!symbol || symbol->kind != ANB__SYMBOL_LABEL || !symbol->live) return NULL;
        space = symbol->order; /* of a label: the space inside it, 0 where there is none */
        if (!space) return NULL;
    }
    anb__symbol *symbol = anb__symbol_find(&x->symbols, space, path[length - 1]);
    return symbol && symbol->live ? symbol : NULL;
}

static bool is_label(const anb__symbol *symbol, const void *user) {
    (void)user;
    return symbol->kind == ANB__SYMBOL_LABEL && symbol->live;
}

static bool is_node(const anb__symbol *symbol, const void *user) {
    (void)user;
    return symbol->kind == ANB__SYMBOL_NODE && symbol->live;
}

/* The first piece of the path that is not there. */
static void report_far_node(anb__expander *x, const anb__far_node *far) {
    uint32_t space = far->space;
    for (uint32_t i = 0; i < far->length; i++) {
        bool last = i + 1 == far->length;
        const anb__symbol *symbol = anb__symbol_find(&x->symbols, space, far->path[i]);
        bool found = symbol && symbol->live &&
                     (last ? symbol->kind == ANB__SYMBOL_NODE : symbol->kind == ANB__SYMBOL_LABEL);
        if (found) {
            space = symbol->order;
            continue;
        }
        anb__span before = far->span; /* the labels that are there */
        for (uint32_t k = i; k < far->length; k++) before.end -= far->path[k]->length + 1;
        anb__diagnostic *d = i == 0
                                 ? anb__error(x->report, far->span, "undefined-name",
                                              "there is no placement with the label `%s`", far->path[i]->text)
                                 : anb__error(x->report, far->span, "undefined-name", "`%s` has no %s `%s`",
                                              anb__quote(x, before), last ? "node" : "part",
                                              far->path[i]->text);
        if (space || i == 0)
            anb__hint_nearest(x, d, far->path[i]->text,
                              anb__near(x, space, far->path[i]->text, last ? is_node : is_label, NULL));
        return;
    }
}

void anb__resolve_far_nodes(anb__expander *x) {
    for (anb__far_node *far = x->far_nodes; far; far = far->next) {
        const anb__symbol *symbol = anb__follow(x, far->space, far->path, far->length);
        if (symbol && symbol->kind == ANB__SYMBOL_NODE) anb__join(x, symbol->node, far->node);
        else if (!x->incomplete) report_far_node(x, far);
    }
}

/* ---- checks of the whole --------------------------------------------------------------------- */

enum { MOST_COMPARED = 1000, MOST_SYMBOLS = 10000, SHORTEST = 4 };

static bool is_plain_name(const anb__node *node) {
    return node->name && node->name->text[node->name->length - 1] != ']';
}

/* One letter apart, and not in a digit: `left` and `lefft`, but not `mid1` and `mid2`. */
static bool one_letter_off(const char *a, const char *b) {
    if (anb__edit_distance(a, b, 1) != 1) return false;
    size_t m = strlen(a), n = strlen(b), i = 0;
    while (a[i] && a[i] == b[i]) i++;
    return !(m == n && strchr("0123456789", a[i]) && strchr("0123456789", b[i])) && m >= SHORTEST &&
           n >= SHORTEST && !(m != n && strchr("0123456789", m > n ? a[i] : b[i]));
}

static const anb__node *namesake(const anb__expander *x, uint32_t node, const uint32_t *named,
                                 uint32_t count) {
    for (uint32_t i = 0; i < count; i++) {
        const anb__node *other = &x->nodes[named[i]];
        if (named[i] != node && other->space == x->nodes[node].space &&
            one_letter_off(x->nodes[node].name->text, other->name->text))
            return other;
    }
    return NULL;
}

static bool is_near_value(const anb__symbol *symbol, const void *user) {
    return symbol->kind == ANB__SYMBOL_VALUE && symbol->live && one_letter_off(user, symbol->name->text);
}

/* A name in a chain that nearly is a value's, and stands nowhere else. */
static void check_value_name(anb__expander *x, const anb__node *n) {
    const char *name = n->name->text;
    if (x->symbols.count > MOST_SYMBOLS) return;
    const char *near = anb__near(x, n->space->id, name, is_near_value, name);
    if (!near) return;
    anb__diagnostic *d = anb__warning(x->report, n->span, "near-miss",
                                      "the node `%s` is written once and is one letter off the value `%s`",
                                      name, near);
    anb__hint_nearest(x, d, name, near);
}

static void check_node(anb__expander *x, uint32_t node, const uint32_t *named, uint32_t count) {
    const anb__node *n = &x->nodes[node];
    if (anb__root_of(x, node) != node || n->ports) return;
    bool compared = is_plain_name(n) && count < MOST_COMPARED && n->written == 1;
    const anb__node *other = compared ? namesake(x, node, named, count) : NULL;
    anb__diagnostic *d = NULL;
    if (n->touched == 0)
        d = anb__warning(x->report, n->span, "lonely-node", "nothing touches the node `%s`", n->name->text);
    else if (n->touched == 1)
        d = anb__warning(x->report, n->span, "lonely-node", "only one terminal touches the node `%s`",
                         n->name->text);
    else if (other)
        d = anb__warning(x->report, n->span, "near-miss",
                         "the node `%s` is written once and is one letter off `%s`", n->name->text,
                         other->name->text);
    else if (compared) check_value_name(x, n);
    if (d && other) anb__hint_nearest(x, d, n->name->text, other->name->text);
}

void anb__check_nodes(anb__expander *x) {
    uint32_t *named = anb__arena_take(&x->scratch, MOST_COMPARED * sizeof *named), count = 0;
    for (uint32_t i = 1; i < x->node_count && count < MOST_COMPARED; i++)
        if (is_plain_name(&x->nodes[i])) named[count++] = i;
    for (uint32_t i = 1; i < x->node_count; i++)
        if (x->nodes[i].name) check_node(x, i, named, count);
}

/* ---- the network's numbering --------------------------------------------------------------------- */

/* Nodes without a branch and a port are left out (those at an `open` only); those that are one have one
 * number. */
static uint32_t *number_nodes(anb__expander *x, uint32_t *count) {
    uint32_t *number = anb__arena_take(&x->scratch, x->node_count * sizeof *number);
    *count = 1;
    for (uint32_t i = 0; i < x->branch_count; i++)
        number[anb__root_of(x, x->branches[i].plus)] = number[anb__root_of(x, x->branches[i].minus)] = 1;
    for (uint32_t i = 1; i < x->node_count; i++)
        if (anb__root_of(x, i) == i && (number[i] || x->nodes[i].ports)) number[i] = (*count)++;
    number[0] = 0;
    for (uint32_t i = 1; i < x->node_count; i++) number[i] = number[anb__root_of(x, i)];
    return number;
}

static void name_nodes(anb__expander *x, const uint32_t *number, uint32_t count) {
    const char **names = anb__arena_take(&x->network->arena, count * sizeof *names);
    for (uint32_t i = 0; i < count; i++) names[i] = "";
    names[0] = "ground";
    for (uint32_t i = 1; i < x->node_count; i++) {
        const anb__node *node = &x->nodes[i];
        if (!number[i] || !node->name || *names[number[i]]) continue;
        const char *text = anb__path_text(x, node->space, node->name);
        if (text) names[number[i]] = text;
    }
    x->network->node_names = names;
    x->network->node_count = count;
}

static void *copy_of(anb__expander *x, const void *items, size_t count, size_t size) {
    void *copy = anb__arena_take(&x->network->arena, count * size);
    if (count) memcpy(copy, items, count * size);
    return copy;
}

void anb__finish(anb__expander *x) {
    anb__network *network = x->network;
    uint32_t count;
    const uint32_t *number = number_nodes(x, &count);
    name_nodes(x, number, count);
    network->parts = copy_of(x, x->parts, x->part_count, sizeof *x->parts);
    network->part_count = x->part_count;
    network->branches = copy_of(x, x->branches, x->branch_count, sizeof *x->branches);
    network->branch_count = x->branch_count;
    for (uint32_t i = 0; i < x->branch_count; i++) {
        network->branches[i].plus = number[network->branches[i].plus];
        network->branches[i].minus = number[network->branches[i].minus];
    }
    network->ports = copy_of(x, x->ports, x->port_count, sizeof *x->ports);
    network->port_count = x->port_count;
    for (uint32_t i = 0; i < x->port_count; i++) {
        network->ports[i].plus = number[network->ports[i].plus];
        network->ports[i].minus = number[network->ports[i].minus];
    }
    network->labels = copy_of(x, x->labels_list, x->label_count, sizeof *x->labels_list);
    network->label_count = x->label_count;
    network->sweeps = copy_of(x, x->sweeps, x->sweep_count, sizeof *x->sweeps);
    network->sweep_count = x->sweep_count;
}
