#include "sweep/tableau.h"

#include <stdlib.h>

enum { NONE = UINT32_MAX };

/* Receives the entries one by one, always in the same order. */
typedef struct writer {
    uint32_t count;
    uint32_t *rows, *columns;   /* for the pattern, or NULL */
    anb__complex *values;       /* for the values at a frequency, or NULL */
    anb__series_entry *entries; /* for series, or NULL */
} writer;

/* NaN at a pole, which only series can deal with. */
static anb__complex limit_of(const anb__series *value) {
    anb__complex limit;
    return anb__series_limit(value, &limit) ? limit : anb__cx(NAN, NAN);
}

static void put(writer *w, uint32_t row, uint32_t column, const anb__series *value, double sign) {
    if (row == NONE || column == NONE) return;
    uint32_t k = w->count++;
    if (w->rows) {
        w->rows[k] = row;
        w->columns[k] = column;
    }
    if (w->values) w->values[k] = anb__cscale(limit_of(value), sign);
    if (w->entries)
        w->entries[k] = (anb__series_entry){row, column, anb__series_scale(value, anb__cx(sign, 0))};
}

static uint32_t unknown_of(const anb__tableau *t, uint32_t node) {
    return t->node_unknown[t->nodes->same_as[node]];
}

/* The current's law: `current` leaves at plus and enters at minus. */
static void put_current(const anb__tableau *t, const anb__branch *branch, uint32_t current, double sign,
                        writer *w) {
    anb__series unity = anb__series_real(1);
    put(w, unknown_of(t, branch->plus), current, &unity, sign);
    put(w, unknown_of(t, branch->minus), current, &unity, -sign);
}

static void put_voltage(const anb__tableau *t, uint32_t row, const anb__branch *branch,
                        const anb__series *factor, writer *w) {
    put(w, row, unknown_of(t, branch->plus), factor, 1);
    put(w, row, unknown_of(t, branch->minus), factor, -1);
}

static void put_part(const anb__tableau *t, const anb__placed *part, anb__equations *e, writer *w) {
    const anb__branch *branches = t->network->branches + part->first_branch;
    uint32_t current = t->first_branch + part->first_branch;
    int m = part->branch_count;
    for (int row = 0; row < m; row++) {
        put_current(t, &branches[row], current + (uint32_t)row, 1, w);
        for (int k = 0; k < m; k++) {
            put_voltage(t, current + (uint32_t)row, &branches[k], anb__a(e, row, k), w);
            put(w, current + (uint32_t)row, current + (uint32_t)k, anb__b(e, row, k), 1 / t->unit_ohm);
        }
    }
}

/* v(plus) - v(minus) + z i = source, with i into the network at plus. */
static void put_port(const anb__tableau *t, uint32_t k, writer *w) {
    const anb__port *port = &t->network->ports[k];
    anb__branch branch = {port->plus, port->minus};
    anb__series unity = anb__series_real(1), z = anb__series_constant(port->z);
    put_current(t, &branch, t->first_port + k, -1, w);
    put_voltage(t, t->first_port + k, &branch, &unity, w);
    put(w, t->first_port + k, t->first_port + k, &z, 1 / t->unit_ohm);
}

/* A branch of a part that is a wire, or nothing, carries no current of its own. */
static void put_idle(const anb__tableau *t, const anb__placed *part, writer *w) {
    anb__series unity = anb__series_real(1);
    for (uint32_t k = 0; k < part->branch_count; k++) {
        uint32_t current = t->first_branch + part->first_branch + k;
        put(w, current, current, &unity, 1);
    }
}

/* All entries. For the pattern alone, `point` is NULL. */
static bool write_all(const anb__tableau *t, const anb__point *point, writer *w, uint32_t *where) {
    anb__equations e = {0};
    for (uint32_t i = 0; i < t->network->part_count; i++) {
        const anb__placed *part = &t->network->parts[i];
        if (anb__connection_of(t->network, part) != ANB__CONNECTS_BY_EQUATIONS) {
            put_idle(t, part, w);
            continue;
        }
        if (!point)
            anb__equations_clear(&e, part->branch_count);
        else if (!anb__part_equations(part, point, &e)) {
            *where = i;
            return false;
        }
        put_part(t, part, &e, w);
    }
    for (uint32_t k = 0; k < t->network->port_count; k++) put_port(t, k, w);
    return true;
}

static void number(const anb__network *network, const anb__nodes *nodes, anb__tableau *t) {
    for (uint32_t n = 0; n < network->node_count; n++) {
        bool own = nodes->same_as[n] == n && !nodes->grounded[n];
        t->node_unknown[n] = own ? t->size++ : NONE;
    }
    t->first_branch = t->size;
    t->first_port = t->first_branch + network->branch_count;
    t->size = t->first_port + network->port_count;
    for (uint32_t k = 0; k < network->port_count; k++)
        t->probes[k] = (anb__probe){t->first_port + k, 1, t->first_port + k};
}

anb_status anb__tableau_new(const anb__network *network, const anb__nodes *nodes, anb__tableau *out) {
    *out = (anb__tableau){.network = network, .nodes = nodes, .unit_ohm = anb__cabs(network->ports[0].z)};
    out->node_unknown = malloc(network->node_count * sizeof *out->node_unknown);
    out->probes = malloc((network->port_count + 1) * sizeof *out->probes);
    if (!out->node_unknown || !out->probes) return ANB_MEMORY;
    number(network, nodes, out);
    writer counter = {0};
    write_all(out, NULL, &counter, NULL);
    out->entry_count = counter.count;
    out->rows = malloc(((size_t)counter.count + 1) * sizeof *out->rows);
    out->columns = malloc(((size_t)counter.count + 1) * sizeof *out->columns);
    if (!out->rows || !out->columns) return ANB_MEMORY;
    writer pattern = {.rows = out->rows, .columns = out->columns};
    write_all(out, NULL, &pattern, NULL);
    return ANB_OK;
}

void anb__tableau_clear(anb__tableau *tableau) {
    free(tableau->rows);
    free(tableau->columns);
    free(tableau->node_unknown);
    free(tableau->probes);
    *tableau = (anb__tableau){0};
}

bool anb__tableau_values(const anb__tableau *tableau, double hz, anb__complex *values, uint32_t *part) {
    anb__point point;
    anb__point_at(hz, &point);
    writer w = {.values = values};
    return write_all(tableau, &point, &w, part);
}

bool anb__tableau_series(const anb__tableau *tableau, double hz, anb__series_entry *entries, uint32_t *part) {
    anb__point point;
    anb__point_at(hz, &point);
    writer w = {.entries = entries};
    return write_all(tableau, &point, &w, part);
}

/* S = 1 - 2 sqrt(R) I sqrt(R) with I the currents for unit sources (docs/theory.md, eq. 3). */
void anb__tableau_scattering(const anb__tableau *tableau, const anb__complex *currents, anb__complex *s) {
    const anb__port *ports = tableau->network->ports;
    uint32_t count = tableau->network->port_count;
    for (uint32_t k = 0; k < count; k++)
        for (uint32_t l = 0; l < count; l++) {
            double scale = -2 * sqrt(ports[k].z.re * ports[l].z.re) / tableau->unit_ohm;
            anb__complex *to = &s[(size_t)k * count + l];
            *to = anb__cscale(currents[(size_t)k * count + l], scale);
            if (k == l) to->re += 1;
        }
}
