/* `show` for reading: ports, nodes, parts in columns. */
#include <stdio.h>
#include <string.h>

#include "quantity.h"
#include "show.h"

enum { LINE = 78, WHERE = 16 };

static void blanks(cli_output *out, size_t count) {
    static const char many[] = "                                                                ";
    for (; count > sizeof many - 1; count -= sizeof many - 1) output_text(out, many);
    output_write(out, many, count);
}

/* A text filled up to a column's width, and two blanks. */
static void column(cli_output *out, const char *text, size_t width) {
    size_t length = strlen(text);
    output_write(out, text, length);
    blanks(out, (width > length ? width - length : 0) + 2);
}

static void keep_longest(size_t *width, size_t length) {
    if (length > *width) *width = length;
}

static size_t digits_of(size_t value) { return value < 10 ? 1 : 1 + digits_of(value / 10); }

/* ---- ports and nodes --------------------------------------------------------------- */

static void write_reference(const anb_netlist *netlist, size_t port, char text[2 * QUANTITY_SIZE]) {
    double z[2];
    anb_netlist_port_reference(netlist, port, z);
    quantity_write_impedance(z, text);
}

static void put_port(cli_output *out, const anb_netlist *netlist, size_t port, size_t name_width,
                     size_t reference_width) {
    char number[32], reference[2 * QUANTITY_SIZE], room[SHOW_NODE_SIZE];
    size_t back = anb_netlist_port_node(netlist, port, 1);
    write_reference(netlist, port, reference);
    snprintf(number, sizeof number, "%4zu", port + 1);
    column(out, number, 4);
    column(out, anb_netlist_port_name(netlist, port), name_width);
    column(out, reference, reference_width);
    output_text(out, "at ");
    output_text(out, show_node(netlist, anb_netlist_port_node(netlist, port, 0), room));
    if (back) {
        output_text(out, ", ");
        output_text(out, show_node(netlist, back, room));
    }
    output_char(out, '\n');
}

static void put_ports(cli_output *out, const anb_netlist *netlist) {
    char reference[2 * QUANTITY_SIZE];
    size_t count = anb_netlist_port_count(netlist), name_width = 0, reference_width = 0;
    for (size_t i = 0; i < count; i++) {
        write_reference(netlist, i, reference);
        keep_longest(&name_width, strlen(anb_netlist_port_name(netlist, i)));
        keep_longest(&reference_width, strlen(reference));
    }
    output_format(out, "ports: %zu\n", count);
    for (size_t i = 0; i < count; i++) put_port(out, netlist, i, name_width, reference_width);
}

/* The named nodes, as many to a line as fit; ground is not counted among the nodes. */
static void put_nodes(cli_output *out, const anb_netlist *netlist) {
    size_t count = anb_netlist_node_count(netlist), named = 0, used = 0;
    for (size_t i = 1; i < count; i++) named += *anb_netlist_node_name(netlist, i) != 0;
    output_format(out, "\nnodes: %zu besides ground", count ? count - 1 : 0);
    if (count && named < count - 1) output_format(out, ", %zu of them without a name", count - 1 - named);
    output_char(out, '\n');
    for (size_t i = 1; i < count; i++) {
        const char *name = anb_netlist_node_name(netlist, i);
        size_t length = strlen(name) + 2;
        if (!*name) continue;
        if (used && used + length > LINE) output_char(out, '\n');
        if (!used || used + length > LINE) used = 2;
        output_text(out, "  ");
        output_text(out, name);
        used += length;
    }
    if (named) output_char(out, '\n');
}

/* ---- parts ---------------------------------------------------------------------------- */

typedef struct widths {
    size_t label, kind, nodes, where;
} widths;

static size_t node_length(const anb_netlist *netlist, size_t node) {
    const char *name = anb_netlist_node_name(netlist, node);
    return *name ? strlen(name) : 1 + digits_of(node);
}

static size_t nodes_length(const anb_netlist *netlist, size_t part, const anb_part_info *info) {
    size_t length = info->node_count ? info->node_count - 1 : 0;
    for (size_t k = 0; k < info->node_count; k++)
        length += node_length(netlist, anb_netlist_part_node(netlist, part, k));
    return length;
}

static size_t where_length(const anb_part_info *info) {
    return strlen(info->path) + 1 + digits_of(info->line);
}

static widths measure(const anb_netlist *netlist) {
    widths out = {1, 0, 0, 0};
    anb_part_info info;
    for (size_t i = 0; i < anb_netlist_part_count(netlist); i++) {
        anb_netlist_part_get(netlist, i, &info);
        keep_longest(&out.label, strlen(info.label));
        keep_longest(&out.kind, strlen(info.kind));
        keep_longest(&out.nodes, nodes_length(netlist, i, &info));
        keep_longest(&out.where, where_length(&info));
    }
    return out;
}

static void put_part(cli_output *out, show_subject *subject, size_t part, const widths *width) {
    anb_part_info info;
    char line[WHERE];
    anb_netlist_part_get(subject->netlist, part, &info);
    output_text(out, "  ");
    column(out, *info.label ? info.label : "-", width->label);
    column(out, info.kind, width->kind);
    show_part_nodes(out, subject->netlist, part, info.node_count);
    blanks(out, width->nodes - nodes_length(subject->netlist, part, &info) + 2);
    output_text(out, info.path);
    snprintf(line, sizeof line, ":%u", info.line);
    output_text(out, line);
    blanks(out, width->where - where_length(&info) + 2);
    show_values(out, subject, part, output_text);
    output_char(out, '\n');
}

static void put_parts(cli_output *out, show_subject *subject) {
    size_t count = anb_netlist_part_count(subject->netlist);
    widths width = measure(subject->netlist);
    output_format(out, "\nparts: %zu", count);
    for (size_t i = 0; i < subject->kind_count; i++)
        output_format(out, "%s%zu %s", i ? ", " : " (", subject->kinds[i].count, subject->kinds[i].kind);
    output_text(out, count ? ")\n" : "\n");
    for (size_t i = 0; i < count; i++) put_part(out, subject, i, &width);
}

/* ---- cases, frequencies, statistics ---------------------------------------------------------- */

static void put_cases(cli_output *out, const anb_netlist *netlist) {
    size_t count = anb_netlist_case_count(netlist);
    if (count) output_text(out, "\ncases, the first of each shown\n");
    for (size_t i = 0; i < count; i++) {
        output_format(out, "  %s =", anb_netlist_case_name(netlist, i));
        for (size_t k = 0; k < anb_netlist_case_value_count(netlist, i); k++)
            output_format(out, "%s %s", k ? "," : "", anb_netlist_case_value(netlist, i, k));
        output_char(out, '\n');
    }
}

static void put_frequencies(cli_output *out, const anb_netlist *netlist) {
    char low[QUANTITY_SIZE], high[QUANTITY_SIZE];
    size_t count = anb_netlist_frequency_count(netlist);
    output_format(out, "\nfrequencies: %zu", count);
    if (count) {
        quantity_write(anb_netlist_frequency(netlist, 0), "Hz", low);
        quantity_write(anb_netlist_frequency(netlist, count - 1), "Hz", high);
        output_format(out, count > 1 ? ", %s .. %s" : ", %s", low, high);
    }
    output_char(out, '\n');
}

static void put_statistics(cli_output *out, const anb_statistics *statistics) {
    if (!statistics) return;
    unsigned long tenths = (unsigned long)(statistics->compile_seconds * 1e7 + 0.5);
    output_format(out,
                  "\nstatistics\n"
                  "  compiled in     %lu.%lu us\n"
                  "  unknowns        %zu\n"
                  "  slots           %zu\n"
                  "  operations      %zu for each point\n"
                  "  points          %zu\n"
                  "  pivoted points  %zu\n"
                  "  kernel          %s\n",
                  tenths / 10, tenths % 10, statistics->unknowns, statistics->slots, statistics->operations,
                  statistics->points, statistics->pivoted_points, statistics->kernel);
}

void show_text(cli_output *out, show_subject *subject) {
    const char *title = anb_netlist_title(subject->netlist);
    if (*title) output_format(out, "%s\n\n", title);
    put_ports(out, subject->netlist);
    put_nodes(out, subject->netlist);
    put_parts(out, subject);
    put_cases(out, subject->netlist);
    put_frequencies(out, subject->netlist);
    put_statistics(out, subject->statistics);
}
