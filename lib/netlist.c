/* The way from text to a network, from top to bottom. */
#include <errno.h>
#include <stdlib.h>
#include <string.h>

#include "context.h"
#include "language/parse.h"
#include "network/expand.h"
#include "network/include.h"

/* A netlist under construction, and where to get its text. */
typedef struct reading {
    const char *path, *text;
    size_t length;
    const anb_overrides *overrides;
    anb_netlist *netlist;
    anb_status status;
} reading;

static anb__span nowhere(void) { return (anb__span){UINT32_MAX, 0, 0}; }

/* The text of the netlist: given, or read from its file. */
static bool find_text(reading *r, const char **text, uint32_t *length) {
    if (r->text) {
        *text = r->text;
        *length = (uint32_t)r->length;
        if (r->length < UINT32_MAX) return true;
        anb__error(&r->netlist->report, nowhere(), "too-long", "a netlist may have 4 GiB at most");
        return false;
    }
    *text = anb__read_text(&r->netlist->arena, r->path, length);
    if (*text) return true;
    anb__error(&r->netlist->report, nowhere(), "unreadable", "`%s` cannot be read: %s", r->path,
               anb__reading_problem(errno));
    return false;
}

/* Text, tokens, tree, network, grid. Leaves by longjmp when memory is gone. */
static anb_status build(reading *r) {
    anb_netlist *n = r->netlist;
    anb__replacements replacements;
    const char *text;
    uint32_t length;
    if (!find_text(r, &text, &length)) return ANB_INVALID;
    n->path = anb__arena_text(&n->arena, r->path, strlen(r->path));
    text = anb__arena_text(&n->arena, text, length);
    uint32_t source = anb__add_source(&n->report, n->path, text, length);
    anb__tree *file = anb__parse(&n->report, &n->names, &n->arena, source);
    anb__read_includes(&n->report, &n->names, &n->arena, file);
    anb__read_replacements(&n->report, &n->names, &n->arena, r->overrides, &replacements);
    anb_status status = anb__expand(&n->report, &n->names, file, &replacements, &n->network);
    n->file = file;
    return status == ANB_OK ? anb__grid_new(&n->network, &n->grid) : status;
}

static anb_status read_netlist(anb_context *context, reading *r, anb_netlist **out) {
    jmp_buf escape;
    anb__context_begin(context);
    *out = NULL;
    anb_netlist *n = r->netlist = calloc(1, sizeof *n);
    if (!n) return ANB_MEMORY;
    n->report.arena = n->names.arena = &n->arena;
    n->arena.escape = n->network.arena.escape = &escape;
    r->status = setjmp(escape) ? ANB_MEMORY : build(r);
    n->arena.escape = n->network.arena.escape = NULL;
    anb_status copied = anb__context_take(context, &n->report);
    if (r->status == ANB_OK) r->status = copied;
    if (r->status == ANB_OK)
        *out = n;
    else
        anb_netlist_free(n);
    return r->status;
}

anb_status anb_netlist_read(anb_context *context, const char *path, const anb_overrides *overrides,
                            anb_netlist **out) {
    return read_netlist(context, &(reading){.path = path, .overrides = overrides}, out);
}

anb_status anb_netlist_parse(anb_context *context, const char *path, const char *text, size_t length,
                             const anb_overrides *overrides, anb_netlist **out) {
    return read_netlist(
        context, &(reading){.path = path, .text = text, .length = length, .overrides = overrides}, out);
}

void anb_netlist_free(anb_netlist *netlist) {
    if (!netlist) return;
    anb__grid_clear(&netlist->grid);
    anb__arena_free(&netlist->network.arena);
    anb__arena_free(&netlist->arena);
    free(netlist);
}

/* ---- what it holds ------------------------------------------------------------------------------ */

const char *anb_netlist_title(const anb_netlist *netlist) { return netlist->network.title; }

size_t anb_netlist_port_count(const anb_netlist *netlist) { return netlist->network.port_count; }

const char *anb_netlist_port_name(const anb_netlist *netlist, size_t port) {
    return netlist->network.ports[port].name;
}

void anb_netlist_port_reference(const anb_netlist *netlist, size_t port, double out[2]) {
    out[0] = netlist->network.ports[port].z.re;
    out[1] = netlist->network.ports[port].z.im;
}

size_t anb_netlist_node_count(const anb_netlist *netlist) { return netlist->network.node_count; }

const char *anb_netlist_node_name(const anb_netlist *netlist, size_t node) {
    return netlist->network.node_names[node];
}

size_t anb_netlist_part_count(const anb_netlist *netlist) { return netlist->network.part_count; }

size_t anb_netlist_frequency_count(const anb_netlist *netlist) { return (size_t)netlist->grid.count; }

double anb_netlist_frequency(const anb_netlist *netlist, size_t point) {
    double hz = NAN;
    anb__grid_fill(&netlist->grid, point, 1, &hz);
    return hz;
}

/* ---- cases --------------------------------------------------------------------------------------- */

size_t anb_netlist_case_count(const anb_netlist *netlist) { return netlist->network.case_count; }

const char *anb_netlist_case_name(const anb_netlist *netlist, size_t index) {
    return netlist->network.case_names[index].name;
}

size_t anb_netlist_case_value_count(const anb_netlist *netlist, size_t index) {
    return netlist->network.case_names[index].count;
}

const char *anb_netlist_case_value(const anb_netlist *netlist, size_t index, size_t value) {
    return netlist->network.case_names[index].values[value];
}
