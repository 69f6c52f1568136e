/* Nodes to unknowns (docs/theory.md, section 3).
 *
 * Nodes joined by wires are one. What no branch ties to ground is an island: only differences of
 * its voltages count, and one of its nodes is set to zero. A port between two nodes makes their
 * difference an unknown of its own instead of one node's voltage, so that the port's voltage is not the
 * small difference of two large ones.
 */
#include "sweep/numbering.h"

#include <stdlib.h>
#include <string.h>

enum { NONE = UINT32_MAX, DEEPEST = 8 /* links from a node to the one that it is counted from */ };

/* ---- sets of nodes ------------------------------------------------------------------------ */

static uint32_t find(uint32_t *set, uint32_t node) {
    while (set[node] != node) {
        set[node] = set[set[node]];
        node = set[node];
    }
    return node;
}

/* The lowest node stands for its set, so that ground stands for its own. */
static void unite(uint32_t *set, uint32_t a, uint32_t b) {
    a = find(set, a);
    b = find(set, b);
    if (a < b)
        set[b] = a;
    else
        set[a] = b;
}

static void join_wires(const anb__network *network, uint32_t *set) {
    for (uint32_t i = 0; i < network->part_count; i++) {
        const anb__placed *part = &network->parts[i];
        const anb__branch *branches = network->branches + part->first_branch;
        anb__connection connection = anb__connection_of(network, part);
        if (connection == ANB__CONNECTS_AS_WIRE) unite(set, branches[0].plus, branches[0].minus);
        if (connection == ANB__CONNECTS_AS_THROUGH) unite(set, branches[0].plus, branches[1].plus);
    }
    for (uint32_t n = 0; n < network->node_count; n++) set[n] = find(set, n);
}

static void join_islands(const anb__network *network, uint32_t *set) {
    for (uint32_t i = 0; i < network->part_count; i++) {
        const anb__placed *part = &network->parts[i];
        if (anb__connection_of(network, part) != ANB__CONNECTS_BY_EQUATIONS) continue;
        for (uint32_t b = 0; b < part->branch_count; b++) {
            const anb__branch *branch = &network->branches[part->first_branch + b];
            unite(set, branch->plus, branch->minus);
        }
    }
    for (uint32_t k = 0; k < network->port_count; k++)
        unite(set, network->ports[k].plus, network->ports[k].minus);
}

/* The node of each island that is set to zero: a port's minus node where there is one, else the lowest. */
static bool ground_islands(const anb__network *network, anb__nodes *out) {
    uint32_t count = network->node_count;
    uint32_t *island = malloc(count * sizeof *island), *reference = malloc(count * sizeof *reference);
    bool done = island && reference;
    for (uint32_t n = 0; done && n < count; n++) {
        island[n] = out->same_as[n];
        reference[n] = NONE;
    }
    if (done) {
        join_islands(network, island);
        reference[0] = 0;
        for (uint32_t k = 0; k < network->port_count; k++) {
            uint32_t minus = out->same_as[network->ports[k].minus], of = find(island, minus);
            if (reference[of] == NONE) reference[of] = minus;
        }
        for (uint32_t n = 0; n < count; n++) {
            uint32_t of = find(island, n);
            if (reference[of] == NONE) reference[of] = n;
        }
        for (uint32_t n = 0; n < count; n++) out->grounded[n] = out->same_as[n] == reference[find(island, n)];
    }
    free(island);
    free(reference);
    return done;
}

/* ---- unknowns -------------------------------------------------------------------------------- */

/* A node's voltage is its own unknown, or that one (with `sign`) and the voltage of the node it is
 * counted from. */
typedef struct link {
    uint32_t unknown; /* or NONE */
    uint32_t from;    /* node, or NONE */
    double sign;
} link;

static uint32_t depth_of(const link *links, uint32_t node) {
    uint32_t depth = 0;
    for (; links[node].from != NONE; node = links[node].from) depth++;
    return depth;
}

static uint32_t root_of(const link *links, uint32_t node) {
    while (links[node].from != NONE) node = links[node].from;
    return node;
}

/* Makes the difference of a port's two nodes an unknown, where neither is at zero already. Only a node from
 * which nothing is counted yet may move, or depths would grow behind our back. */
static void link_port(const anb__nodes *nodes, const anb__port *port, link *links, bool *counted_from) {
    uint32_t plus = nodes->same_as[port->plus], minus = nodes->same_as[port->minus];
    if (nodes->grounded[plus] || nodes->grounded[minus] || root_of(links, plus) == root_of(links, minus))
        return;
    bool move_plus = links[plus].from == NONE && !counted_from[plus] && depth_of(links, minus) < DEEPEST;
    bool move_minus = links[minus].from == NONE && !counted_from[minus] && depth_of(links, plus) < DEEPEST;
    if (move_plus) {
        links[plus].from = minus;
        counted_from[minus] = true;
    } else if (move_minus) {
        links[minus].from = plus;
        links[minus].sign = -1;
        counted_from[plus] = true;
    }
}

static bool list_terms(const anb__network *network, const link *links, anb__nodes *out) {
    uint32_t count = network->node_count, total = 0;
    out->first = malloc(((size_t)count + 1) * sizeof *out->first);
    if (!out->first) return false;
    for (uint32_t n = 0; n < count; n++) {
        uint32_t node = out->same_as[n];
        out->first[n] = total;
        if (!out->grounded[node]) total += depth_of(links, node) + 1;
    }
    out->first[count] = total;
    out->terms = malloc(((size_t)total + 1) * sizeof *out->terms);
    if (!out->terms) return false;
    for (uint32_t n = 0; n < count; n++) {
        struct anb__node_term *to = out->terms + out->first[n];
        if (out->grounded[out->same_as[n]]) continue;
        for (uint32_t node = out->same_as[n]; node != NONE; node = links[node].from)
            *to++ = (struct anb__node_term){links[node].unknown, links[node].sign};
    }
    return true;
}

static bool number_unknowns(const anb__network *network, anb__nodes *out) {
    uint32_t count = network->node_count, unknowns = 0;
    link *links = malloc(count * sizeof *links);
    bool *counted_from = calloc(count, sizeof *counted_from);
    bool done = links && counted_from;
    for (uint32_t n = 0; done && n < count; n++) {
        bool own = out->same_as[n] == n && !out->grounded[n];
        links[n] = (link){own ? unknowns : NONE, NONE, 1};
        unknowns += own;
    }
    for (uint32_t k = 0; done && k < network->port_count; k++)
        link_port(out, &network->ports[k], links, counted_from);
    done = done && list_terms(network, links, out);
    out->numbering = (anb__numbering){unknowns, out->first, out->terms};
    free(links);
    free(counted_from);
    return done;
}

/* ---- ports -------------------------------------------------------------------------------------- */

/* Adds the terms of a node, `sign` times, to those of a port; opposite ones cancel. */
static uint32_t add_terms(const anb__nodes *nodes, uint32_t node, double sign, anb__term *terms,
                          uint32_t count) {
    for (uint32_t i = nodes->first[node]; i < nodes->first[node + 1]; i++) {
        uint32_t k = 0;
        while (k < count && terms[k].unknown != nodes->terms[i].unknown) k++;
        if (k < count) {
            terms[k] = terms[--count];
            continue;
        }
        terms[count++] = (anb__term){nodes->terms[i].unknown, sign * nodes->terms[i].sign};
    }
    return count;
}

static bool list_port_terms(const anb__network *network, anb__nodes *out) {
    size_t most = (size_t)network->port_count * 2 * (DEEPEST + 1) + 1;
    out->first_port_term = malloc(((size_t)network->port_count + 1) * sizeof *out->first_port_term);
    out->port_terms = malloc(most * sizeof *out->port_terms);
    if (!out->first_port_term || !out->port_terms) return false;
    uint32_t total = 0;
    for (uint32_t k = 0; k < network->port_count; k++) {
        anb__term *terms = out->port_terms + total;
        out->first_port_term[k] = total;
        uint32_t count = add_terms(out, network->ports[k].plus, 1, terms, 0);
        total += add_terms(out, network->ports[k].minus, -1, terms, count);
    }
    out->first_port_term[network->port_count] = total;
    return true;
}

anb_status anb__number_nodes(const anb__network *network, anb__nodes *out) {
    uint32_t count = network->node_count;
    *out = (anb__nodes){0};
    out->same_as = malloc(count * sizeof *out->same_as);
    out->grounded = calloc(count, sizeof *out->grounded);
    if (!out->same_as || !out->grounded) return ANB_MEMORY;
    for (uint32_t n = 0; n < count; n++) out->same_as[n] = n;
    join_wires(network, out->same_as);
    bool done =
        ground_islands(network, out) && number_unknowns(network, out) && list_port_terms(network, out);
    return done ? ANB_OK : ANB_MEMORY;
}

void anb__nodes_clear(anb__nodes *nodes) {
    free(nodes->same_as);
    free(nodes->grounded);
    free(nodes->first);
    free(nodes->terms);
    free(nodes->first_port_term);
    free(nodes->port_terms);
    *nodes = (anb__nodes){0};
}
