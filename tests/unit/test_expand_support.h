/* For the tests of the expansion: a text in, a network and its messages out. */
#ifndef TEST_EXPAND_SUPPORT_H
#define TEST_EXPAND_SUPPORT_H

#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdio.h>
#include <string.h>

#include <cmocka.h>

#include "language/parse.h"
#include "network/expand.h"
#include "network/include.h"

typedef struct expansion {
    anb__arena arena; /* of the tree, the names and the report */
    anb__report report;
    anb__names names;
    anb__tree *file;
    anb__network network;
    anb_status status;
    jmp_buf escape;
} expansion;

static inline void expand_with(expansion *e, const char *path, const char *text,
                               const anb_overrides *overrides) {
    memset(e, 0, sizeof *e);
    if (setjmp(e->escape)) {
        e->status = ANB_MEMORY;
        return;
    }
    e->arena.escape = e->network.arena.escape = &e->escape;
    e->report.arena = e->names.arena = &e->arena;
    anb__replacements replacements;
    uint32_t source = anb__add_source(&e->report, path, text, (uint32_t)strlen(text));
    e->file = anb__parse(&e->report, &e->names, &e->arena, source);
    anb__read_includes(&e->report, &e->names, &e->arena, e->file);
    anb__read_replacements(&e->report, &e->names, &e->arena, overrides, &replacements);
    e->status = anb__expand(&e->report, &e->names, e->file, &replacements, &e->network);
}

static inline void expand_text(expansion *e, const char *text) { expand_with(e, "test.anab", text, NULL); }

static inline void expansion_free(expansion *e) {
    anb__arena_free(&e->network.arena);
    anb__arena_free(&e->arena);
}

/* "2:6-12 error missing-unit: text | hint: ..." and the notes, one message to a line. */
static inline void write_message(const anb__report *report, const anb__diagnostic *d, FILE *to) {
    uint32_t line, column, end_line, end_column;
    const anb__source *source = &report->sources.list[d->span.source];
    anb__place(source, d->span.start, &line, &column);
    anb__place(source, d->span.end, &end_line, &end_column);
    fprintf(to, "%s%s%u:%u-%u: %s: %s [%s]\n", source->path, *source->path ? ":" : "", line, column,
            end_column, d->severity == ANB_ERROR ? "error" : "warning", d->text, d->code);
    for (const anb__note *n = d->notes; n; n = n->next) {
        anb__place(&report->sources.list[n->span.source], n->span.start, &line, &column);
        fprintf(to, "    note %u:%u: %s\n", line, column, n->text);
    }
    if (d->hint) fprintf(to, "    hint: %s\n", d->hint);
}

static inline void write_messages(const expansion *e, FILE *to) {
    for (const anb__diagnostic *d = e->report.first; d; d = d->next) write_message(&e->report, d, to);
}

/* ---- networks in words ---------------------------------------------------------------- */

static inline const char *key_of(const anb__placed *part, unsigned name) {
    const anb__part_entry *entry = &anb__parts[part->kind];
    for (int i = 0; i < entry->argument_count; i++)
        if (entry->arguments[i].name == name) return entry->arguments[i].key;
    return "?";
}

static inline void write_node(const anb__network *network, uint32_t node, FILE *to) {
    if (*network->node_names[node]) fputs(network->node_names[node], to);
    else fprintf(to, "%u", node);
}

static inline void write_part(const anb__network *network, const anb__placed *part, FILE *to) {
    fprintf(to, "%s%s", part->negated ? "inverse " : "", anb__parts[part->kind].name);
    fprintf(to, "%s%s:", part->label ? " " : "", part->label ? part->label : "");
    for (int k = 0; k < part->branch_count; k++) {
        const anb__branch *branch = &network->branches[part->first_branch + (uint32_t)k];
        fputs(k ? ", " : " ", to);
        write_node(network, branch->plus, to);
        fputc(' ', to);
        write_node(network, branch->minus, to);
    }
    for (int k = 0; k < part->argument_count; k++) {
        const anb__argument *a = &part->arguments[k];
        fprintf(to, " %s=", key_of(part, a->name));
        if (a->program) fputs("f", to);
        else fprintf(to, "%.12g", a->value.re);
        if (a->value.im != 0) fprintf(to, "%+.12gj", a->value.im);
        if (a->has_at) fprintf(to, "@%.12g", a->at_hz);
    }
    fputc('\n', to);
}

/* Parts, one to a line: "resistor r: a b r=50"; nodes by name, or number where they have none. */
static inline void write_parts(const anb__network *network, FILE *to) {
    for (uint32_t i = 0; i < network->part_count; i++) write_part(network, &network->parts[i], to);
}

static inline void write_ports(const anb__network *network, FILE *to) {
    for (uint32_t i = 0; i < network->port_count; i++) {
        const anb__port *port = &network->ports[i];
        fprintf(to, "%s: %.12g%+.12gj ", port->name, port->z.re, port->z.im);
        write_node(network, port->plus, to);
        fputc(' ', to);
        write_node(network, port->minus, to);
        fputc('\n', to);
    }
}

#endif
