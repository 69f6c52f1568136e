/* Ports: of the whole, with their impedances, and of networks. */
#include <string.h>

#include "network/expander.h"

static const anb__tree *nodes_of(const anb__tree *tree) {
    return tree->flags & ANB__TREE_HAS_NODES ? tree->last->first : NULL;
}

static const anb__tree *impedance_of(const anb__tree *tree) {
    return tree->flags & ANB__TREE_HAS_IMPEDANCE ? tree->first->next : NULL;
}

/* ---- of a network ------------------------------------------------------------------------ */

static void add_terminal(anb__expander *x, const anb__tree *tree, const anb__tree *name) {
    anb__region *region = x->region;
    const anb__tree *nodes = nodes_of(tree);
    const anb__name *base, *full;
    uint32_t node;
    if (!anb__node_of(x, nodes ? nodes : name, &node) || !anb__indexed_name(x, name, &base, &full)) return;
    for (uint32_t i = 0; i < region->port_count; i++)
        if (region->ports[i].name == full) {
            anb__add_note(
                x->report,
                anb__error(x->report, name->span, "defined-twice", "there are two ports `%s`", full->text),
                region->ports[i].span, "this is the first");
            return;
        }
    region->ports = anb__room(&x->scratch, region->ports, region->port_count, &region->port_capacity,
                              sizeof *region->ports);
    region->ports[region->port_count++] = (anb__terminal){full, node, name->span};
}

static void network_ports(anb__expander *x, const anb__tree *tree) {
    const anb__tree *impedance = impedance_of(tree), *nodes = nodes_of(tree);
    if (impedance)
        anb__error(x->report, impedance->span, "port-in-network",
                   "a port of a network has no impedance: it is where the network is placed");
    if (nodes && nodes->next)
        anb__error(x->report, nodes->next->span, "port-in-network", "a port of a network is one node");
    for (const anb__tree *name = tree->first->first; name; name = name->next) add_terminal(x, tree, name);
}

/* ---- of the whole ---------------------------------------------------------------------------- */

static bool port_impedance(anb__expander *x, const anb__tree *tree, anb__complex *z) {
    const anb__tree *impedance = impedance_of(tree);
    anb__quantity q;
    *z = anb__cx(50, 0);
    if (!impedance) {
        anb__diagnostic *d = anb__error(x->report, tree->span, "missing-impedance",
                                        "a port needs its impedance");
        anb__add_hint(x->report, d, "write `%s: 50 ohm`", anb__quote(x, tree->span));
        return false;
    }
    if (impedance->kind == ANB__TREE_CALL) {
        anb__value value = anb__evaluate(x, impedance);
        if (value.kind == ANB__VALUE_ITEM && value.item->kind == ANB__ITEM_DATA) {
            anb__refuse_data(x, value.item, impedance->span, 1);
            return false;
        }
        if (value.kind == ANB__VALUE_POISON) return false;
    }
    unsigned refused = ANB__NO_TOLERANCE | ANB__NO_FREQUENCY;
    if (!anb__wanted(x, impedance, "a port's impedance", anb__ohm, refused, &q)) return false;
    if (q.value.re > 0) {
        *z = q.value;
        return true;
    }
    anb__error(x->report, impedance->span, "not-positive",
               "the real part of a port's impedance has to be above zero; that of `%s` is not",
               anb__quote(x, impedance->span));
    return false;
}

/* The two ends; false where they are not known. */
static bool port_ends(anb__expander *x, const anb__tree *tree, const anb__tree *name, uint32_t *plus,
                      uint32_t *minus) {
    const anb__tree *nodes = nodes_of(tree);
    *minus = 0;
    if (!anb__node_of(x, nodes ? nodes : name, plus)) return false;
    return !nodes || !nodes->next || anb__node_of(x, nodes->next, minus);
}

static bool claim_port(anb__expander *x, const anb__tree *name, const anb__name **full) {
    const anb__name *base;
    if (!anb__indexed_name(x, name, &base, full)) return false;
    anb__symbol *symbol = anb__symbol_get(&x->symbols, ANB__PORT_SPACE, *full);
    if (symbol->live) {
        anb__diagnostic *d = anb__error(x->report, name->span, "defined-twice", "there are two ports `%s`",
                                        (*full)->text);
        anb__add_note(x->report, d, symbol->span, "this is the first");
        return false;
    }
    symbol->kind = ANB__SYMBOL_NODE;
    symbol->live = true;
    symbol->span = name->span;
    symbol->node = x->port_count;
    return true;
}

static void add_port(anb__expander *x, const anb__tree *tree, const anb__tree *name, anb__complex z) {
    const anb__name *full;
    uint32_t plus, minus;
    bool known = port_ends(x, tree, name, &plus, &minus);
    if (!claim_port(x, name, &full) || !known) return;
    x->ports = anb__room(&x->scratch, x->ports, x->port_count, &x->port_capacity, sizeof *x->ports);
    anb__port *port = &x->ports[x->port_count++];
    *port = (anb__port){anb__path_text(x, &x->top_space, full), z, plus, minus, name->span};
    x->nodes[plus].ports++;
    x->nodes[minus].ports++;
}

void anb__port_statement(anb__expander *x, const anb__tree *tree) {
    anb__complex z;
    if (x->region->definition) {
        network_ports(x, tree);
        return;
    }
    x->ports_wanted = true;
    port_impedance(x, tree, &z);
    if (!nodes_of(tree) || !tree->first->first || !tree->first->first->next) {
        for (const anb__tree *name = tree->first->first; name; name = name->next)
            if (name->kind != ANB__TREE_ERROR) add_port(x, tree, name, z);
        return;
    }
    anb__error(x->report, tree->first->span, "port-names", "only one port can stand `at` these nodes");
}

/* ---- checks of the whole ------------------------------------------------------------------------- */

static bool is_untouched(anb__expander *x, uint32_t node) {
    const anb__node *root = &x->nodes[anb__root_of(x, node)];
    return root != &x->nodes[0] && root->touched == 0 && root->ports <= 1;
}

enum { MOST_COMPARED = 1000 };

/* A node that hangs on one terminal and is spelt nearly like the port: it is probably meant. */
static void explain_untouched(anb__expander *x, anb__diagnostic *d, const char *name) {
    unsigned compared = 0;
    for (uint32_t i = 1; i < x->node_count && compared < MOST_COMPARED; i++) {
        const anb__node *node = &x->nodes[i];
        if (!node->name || node->touched != 1 || node->ports) continue;
        const char *text = node->name->text;
        compared++;
        if (strlen(text) < 3 || !anb__nearest(name, &text, 1)) continue;
        anb__add_note(x->report, d, node->span, "only one terminal touches the node `%s`", text);
        anb__hint_nearest(x, d, text, name);
        return;
    }
}

static void check_port(anb__expander *x, const anb__port *port) {
    if (anb__root_of(x, port->plus) == anb__root_of(x, port->minus)) {
        anb__error(x->report, port->span, "shorted-port", "both ends of the port `%s` are one node",
                   port->name);
    } else if (is_untouched(x, port->plus) || is_untouched(x, port->minus)) {
        anb__diagnostic *d = anb__error(x->report, port->span, "untouched-port",
                                        "nothing touches the port `%s`", port->name);
        explain_untouched(x, d, port->name);
    }
}

void anb__check_ports(anb__expander *x) {
    if (!x->ports_wanted && !x->incomplete && !x->lost) {
        anb__span start = x->root->span;
        start.end = start.start = 0;
        anb__diagnostic *d = anb__error(x->report, start, "no-port", "the netlist has no port");
        anb__add_hint(x->report, d, "declare its ports, e.g. `port in, out: 50 ohm`");
    }
    for (uint32_t i = 0; !x->incomplete && i < x->port_count; i++) check_port(x, &x->ports[i]);
}
