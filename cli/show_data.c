/* `show` for programs: JSON and CSV. */
#include "json.h"
#include "show.h"

static void json_node(cli_output *out, const anb_netlist *netlist, size_t node) {
    char room[SHOW_NODE_SIZE];
    json_text(out, show_node(netlist, node, room));
}

static void json_impedance(cli_output *out, const double z[2]) {
    output_char(out, '[');
    json_number(out, z[0]);
    output_text(out, ", ");
    json_number(out, z[1]);
    output_char(out, ']');
}

/* ---- the members of the object ----------------------------------------------------- */

static void json_port(cli_output *out, const anb_netlist *netlist, size_t port) {
    double z[2];
    anb_netlist_port_reference(netlist, port, z);
    output_text(out, "{\"name\": ");
    json_text(out, anb_netlist_port_name(netlist, port));
    output_text(out, ", \"reference_ohm\": ");
    json_impedance(out, z);
    output_text(out, ", \"nodes\": [");
    json_node(out, netlist, anb_netlist_port_node(netlist, port, 0));
    output_text(out, ", ");
    json_node(out, netlist, anb_netlist_port_node(netlist, port, 1));
    output_text(out, "]}");
}

static void json_part(cli_output *out, show_subject *subject, size_t part) {
    anb_part_info info;
    anb_netlist_part_get(subject->netlist, part, &info);
    output_text(out, "{\"label\": ");
    json_text(out, info.label);
    output_text(out, ", \"kind\": ");
    json_text(out, info.kind);
    output_text(out, ", \"nodes\": [");
    for (size_t k = 0; k < info.node_count; k++) {
        if (k) output_text(out, ", ");
        json_node(out, subject->netlist, anb_netlist_part_node(subject->netlist, part, k));
    }
    output_text(out, "], \"values\": ");
    show_values(out, subject, part, json_text);
    output_text(out, ", \"file\": ");
    json_text(out, info.path);
    output_format(out, ", \"line\": %u}", info.line);
}

/* Between the members of a list, each on a line of its own. */
static void json_next(cli_output *out, size_t index) { output_text(out, index ? ",\n    " : "\n    "); }

static void json_lists(cli_output *out, show_subject *subject) {
    const anb_netlist *netlist = subject->netlist;
    output_text(out, ",\n  \"ports\": [");
    for (size_t i = 0; i < anb_netlist_port_count(netlist); i++) {
        json_next(out, i);
        json_port(out, netlist, i);
    }
    output_text(out, "\n  ],\n  \"nodes\": [");
    for (size_t i = 0; i < anb_netlist_node_count(netlist); i++) {
        if (i) output_text(out, ", ");
        json_node(out, netlist, i);
    }
    output_text(out, "],\n  \"parts\": [");
    for (size_t i = 0; i < anb_netlist_part_count(netlist); i++) {
        json_next(out, i);
        json_part(out, subject, i);
    }
    output_text(out, "\n  ]");
}

static void json_kinds(cli_output *out, const show_subject *subject) {
    output_text(out, ",\n  \"kinds\": {");
    for (size_t i = 0; i < subject->kind_count; i++) {
        if (i) output_text(out, ", ");
        json_text(out, subject->kinds[i].kind);
        output_format(out, ": %zu", subject->kinds[i].count);
    }
    output_char(out, '}');
}

static void json_case(cli_output *out, const anb_netlist *netlist, size_t index) {
    output_text(out, "{\"name\": ");
    json_text(out, anb_netlist_case_name(netlist, index));
    output_text(out, ", \"values\": [");
    for (size_t k = 0; k < anb_netlist_case_value_count(netlist, index); k++) {
        if (k) output_text(out, ", ");
        json_text(out, anb_netlist_case_value(netlist, index, k));
    }
    output_text(out, "]}");
}

static void json_cases(cli_output *out, const anb_netlist *netlist) {
    output_text(out, ",\n  \"cases\": [");
    for (size_t i = 0; i < anb_netlist_case_count(netlist); i++) {
        if (i) output_text(out, ", ");
        json_case(out, netlist, i);
    }
    output_char(out, ']');
}

static void json_frequencies(cli_output *out, const anb_netlist *netlist) {
    output_text(out, ",\n  \"frequencies_hz\": [");
    for (size_t i = 0; i < anb_netlist_frequency_count(netlist); i++) {
        if (i) output_text(out, ", ");
        json_number(out, anb_netlist_frequency(netlist, i));
    }
    output_char(out, ']');
}

static void json_statistics(cli_output *out, const anb_statistics *statistics) {
    if (!statistics) return;
    output_text(out, ",\n  \"statistics\": {\"compile_seconds\": ");
    json_number(out, statistics->compile_seconds);
    output_format(out,
                  ", \"unknowns\": %zu, \"slots\": %zu, \"operations\": %zu, \"points\": %zu, "
                  "\"pivoted_points\": %zu, \"kernel\": ",
                  statistics->unknowns, statistics->slots, statistics->operations, statistics->points,
                  statistics->pivoted_points);
    json_text(out, statistics->kernel);
    output_char(out, '}');
}

void show_json(cli_output *out, show_subject *subject) {
    output_text(out, "{\n  \"title\": ");
    json_text(out, anb_netlist_title(subject->netlist));
    json_lists(out, subject);
    json_kinds(out, subject);
    json_cases(out, subject->netlist);
    json_frequencies(out, subject->netlist);
    json_statistics(out, subject->statistics);
    output_text(out, "\n}\n");
}

/* ---- the table ----------------------------------------------------------------------- */

void show_csv(cli_output *out, show_subject *subject) {
    anb_part_info info;
    output_text(out, "label,kind,nodes,values,file,line\n");
    for (size_t i = 0; i < anb_netlist_part_count(subject->netlist); i++) {
        anb_netlist_part_get(subject->netlist, i, &info);
        csv_text(out, info.label);
        output_char(out, ',');
        csv_text(out, info.kind);
        output_char(out, ',');
        show_part_nodes(out, subject->netlist, i, info.node_count);
        output_char(out, ',');
        show_values(out, subject, i, csv_text);
        output_char(out, ',');
        csv_text(out, info.path);
        output_format(out, ",%u\n", info.line);
    }
}
