/* Parts as a person would write them: their values in the language's syntax, with prefixes. */
#include <stdlib.h>
#include <string.h>

#include "context.h"
#include "network/quantity.h"

size_t anb_netlist_port_node(const anb_netlist *netlist, size_t port, unsigned side) {
    const anb__port *p = &netlist->network.ports[port];
    return side ? p->minus : p->plus;
}

/* ---- where a part stands ------------------------------------------------------------------- */

/* Whether all of a part's branches end in ground, as those of a two-port in a chain do. */
static bool is_grounded(const anb__network *network, const anb__placed *part) {
    for (uint32_t k = 0; k < part->branch_count; k++)
        if (network->branches[part->first_branch + k].minus) return false;
    return part->branch_count > 1;
}

static const anb__layout *layout_of(const anb__network *network, const anb__placed *part) {
    const anb__part_entry *entry = &anb__parts[part->kind];
    if (!entry->on) return entry->chain;
    if (!entry->chain) return entry->on;
    return is_grounded(network, part) || part->branch_count == 1 ? entry->chain : entry->on;
}

void anb_netlist_part_get(const anb_netlist *netlist, size_t index, anb_part_info *out) {
    const anb__network *network = &netlist->network;
    const anb__placed *part = &network->parts[index];
    uint32_t line, column;
    *out = (anb_part_info){.kind = anb__parts[part->kind].name, .label = part->label ? part->label : "",
                           .node_count = layout_of(network, part)->terminal_count, .path = ""};
    if (part->span.source >= netlist->report.sources.count) return;
    const anb__source *source = &netlist->report.sources.list[part->span.source];
    anb__place(source, part->span.start, &line, &column);
    out->line = line;
    out->path = source->path;
}

size_t anb_netlist_part_node(const anb_netlist *netlist, size_t index, size_t terminal) {
    const anb__network *network = &netlist->network;
    const anb__placed *part = &network->parts[index];
    const anb__layout *layout = layout_of(network, part);
    for (uint32_t k = 0; k < layout->branch_count; k++) {
        const anb__branch *branch = &network->branches[part->first_branch + k];
        if (layout->branches[k][0] == terminal) return branch->plus;
        if (layout->branches[k][1] == terminal) return branch->minus;
    }
    return 0;
}

/* ---- text, as far as there is room for it ------------------------------------------------------- */

typedef struct sink {
    char *to;
    size_t size, length; /* `length` counts what did not fit as well */
} sink;

static void put_bytes(sink *s, const char *bytes, size_t count) {
    for (size_t i = 0; i < count; i++, s->length++)
        if (s->length + 1 < s->size) s->to[s->length] = bytes[i];
}

static void put(sink *s, const char *text) { put_bytes(s, text, strlen(text)); }

static void put_number(sink *s, double value) {
    char text[32];
    put_bytes(s, text, anb_number_write(value, text));
}

/* ---- numbers with prefixes ------------------------------------------------------------------------ */

/* The significant digits of a number's shortest text, and the power of ten of the first: d.ddd * 10^power. */
typedef struct digits {
    char list[32];
    int count, power;
    bool negative;
} digits;

static digits digits_of(double value) {
    char text[32];
    size_t length = anb_number_write(value, text), i;
    text[length] = '\0';
    digits d = {.negative = text[0] == '-'};
    int before_point = 0, leading = 0;
    bool point = false;
    for (i = d.negative; i < length && text[i] != 'e'; i++) {
        if (text[i] == '.') point = true;
        else if (d.count || text[i] != '0') {
            d.list[d.count++] = text[i];
            before_point += !point;
        } else {
            leading += point;
        }
    }
    d.power = before_point ? before_point - 1 : -leading - 1;
    if (i < length) d.power += atoi(text + i + 1);
    while (d.count > 1 && d.list[d.count - 1] == '0') d.count--;
    return d;
}

enum { LEAST_STEP = -5, MOST_STEP = 4 }; /* femto and tera, in steps of a thousand */

/* A value with the prefix that leaves 1 to 999 before the point. The digits are those of the value in base
 * units, so that the text reads back to the same double. */
static void put_with_prefix(sink *s, double value, const char *unit) {
    static const char *const prefixes[] = {"f", "p", "n", "u", "m", "", "k", "M", "G", "T"};
    digits d = digits_of(value);
    int step = d.count ? (d.power >= 0 ? d.power / 3 : -((2 - d.power) / 3)) : 0;
    if (step < LEAST_STEP) step = LEAST_STEP;
    if (step > MOST_STEP) step = MOST_STEP;
    int point = d.power - 3 * step + 1; /* digits before the point */
    if (d.negative) put(s, "-");
    if (point <= 0) put(s, "0.");
    for (int k = point; k < 0; k++) put(s, "0");
    for (int k = 0; k < d.count || k < point; k++) {
        if (k && k == point) put(s, ".");
        put_bytes(s, k < d.count ? &d.list[k] : "0", 1);
    }
    if (!d.count) put(s, "0");
    put(s, " ");
    put(s, prefixes[step - LEAST_STEP]);
    put(s, unit);
}

/* ---- values ------------------------------------------------------------------------------------------- */

static const struct {
    anb__dimension dimension;
    const char *unit;
    bool prefixed;
    double per_unit; /* units in one base unit */
} units[] = {
    {ANB__OHM, "ohm", true, 1},          {ANB__SIEMENS, "S", true, 1},
    {ANB__HENRY, "H", true, 1},          {ANB__FARAD, "F", true, 1},
    {ANB__HERTZ, "Hz", true, 1},         {ANB__SECOND, "s", true, 1},
    {ANB__METRE, "m", true, 1},          {ANB__WATT, "W", true, 1},
    {ANB__ANGLE, "deg", false, 360},     {ANB__LEVEL, "dB", false, 1},
    {ANB__LEVEL_PER_METRE, "dB/m", false, 1}, {ANB__OHM_PER_METRE, "ohm/m", false, 1},
    {ANB__HENRY_PER_METRE, "H/m", false, 1},  {ANB__SIEMENS_PER_METRE, "S/m", false, 1},
    {ANB__FARAD_PER_METRE, "F/m", false, 1},
};

static void put_real(sink *s, double value, anb__dimension dimension) {
    for (size_t i = 0; i < sizeof units / sizeof *units; i++) {
        if (!anb__same_dimension(units[i].dimension, dimension)) continue;
        if (units[i].prefixed) {
            put_with_prefix(s, value, units[i].unit);
            return;
        }
        put_number(s, value * units[i].per_unit);
        put(s, " ");
        put(s, units[i].unit);
        return;
    }
    put_number(s, value);
}

static void put_value(sink *s, const anb__argument *argument) {
    if (argument->program) {
        put(s, "f(frequency)");
        return;
    }
    anb__complex v = argument->value;
    if (v.re != 0 || v.im == 0) put_real(s, v.re, argument->dimension);
    if (v.im != 0) {
        put(s, v.im < 0 ? v.re != 0 ? " - j*" : "-j*" : v.re != 0 ? " + j*" : "j*");
        put_real(s, fabs(v.im), argument->dimension);
    }
    if (!argument->has_at) return;
    put(s, " @ ");
    put_real(s, argument->at_hz, (anb__dimension)ANB__HERTZ);
}

static const anb__argument_entry *entry_of(const anb__part_entry *part, uint8_t name) {
    for (unsigned i = 0; i < part->argument_count; i++)
        if (part->arguments[i].name == name) return &part->arguments[i];
    return NULL;
}

/* Arguments that go by their place stand first and bare. */
static void put_arguments(sink *s, const anb__placed *part, bool by_place) {
    const anb__part_entry *entry = &anb__parts[part->kind];
    for (unsigned i = 0; i < part->argument_count; i++) {
        const anb__argument_entry *argument = entry_of(entry, part->arguments[i].name);
        bool bare = argument && argument->rules & ANB__NEEDED && argument->rules & ANB__BY_PLACE;
        if (bare != by_place) continue;
        if (s->length) put(s, ", ");
        if (!bare && argument) {
            put(s, argument->key);
            put(s, " = ");
        }
        put_value(s, &part->arguments[i]);
    }
}

size_t anb_netlist_part_values(const anb_netlist *netlist, size_t index, char *buffer, size_t size) {
    const anb__placed *part = &netlist->network.parts[index];
    sink s = {buffer, size, 0};
    put_arguments(&s, part, true);
    put_arguments(&s, part, false);
    if (size) buffer[s.length < size ? s.length : size - 1] = '\0';
    return s.length;
}
