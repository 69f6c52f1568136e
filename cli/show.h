/* What `show` knows about a netlist, and the forms in which it prints that. */
#ifndef CLI_SHOW_H
#define CLI_SHOW_H

#include "anabranch.h"
#include "output.h"

/* How many parts there are of a kind. */
typedef struct kind_count {
    const char *kind;
    size_t count;
} kind_count;

typedef struct show_subject {
    const anb_netlist *netlist;
    const anb_statistics *statistics; /* or NULL */
    kind_count *kinds;                /* in the order of their first parts */
    size_t kind_count;
    char *values; /* room for a part's values */
    size_t values_size;
} show_subject;

enum { SHOW_NODE_SIZE = 32 };

/* A node's name; "#7" for node 7 where it has none. `room` has SHOW_NODE_SIZE bytes. */
const char *show_node(const anb_netlist *netlist, size_t node, char *room);
/* Writes the names of a part's nodes with blanks between. */
void show_part_nodes(cli_output *out, const anb_netlist *netlist, size_t part, size_t count);
/* Writes a part's values through `write`. */
typedef void show_writer(cli_output *out, const char *text);
void show_values(cli_output *out, show_subject *subject, size_t part, show_writer *write);

/* Tables to read. */
void show_text(cli_output *out, show_subject *subject);
/* One object; its members stand in anabranch-show(1). */
void show_json(cli_output *out, show_subject *subject);
/* The parts as a table: label,kind,nodes,values,file,line. */
void show_csv(cli_output *out, show_subject *subject);

#endif
