#include "show.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "command.h"
#include "interrupt.h"
#include "load.h"
#include "message.h"
#include "progress.h"
#include "status.h"

const char *show_node(const anb_netlist *netlist, size_t node, char *room) {
    const char *name = anb_netlist_node_name(netlist, node);
    if (*name) return name;
    snprintf(room, SHOW_NODE_SIZE, "#%zu", node);
    return room;
}

void show_part_nodes(cli_output *out, const anb_netlist *netlist, size_t part, size_t count) {
    char room[SHOW_NODE_SIZE];
    for (size_t k = 0; k < count; k++) {
        if (k) output_char(out, ' ');
        output_text(out, show_node(netlist, anb_netlist_part_node(netlist, part, k), room));
    }
}

void show_values(cli_output *out, show_subject *subject, size_t part, show_writer *write) {
    size_t needed = anb_netlist_part_values(subject->netlist, part, subject->values, subject->values_size);
    if (needed >= subject->values_size) {
        char *more = realloc(subject->values, 2 * needed + 1);
        if (!more) {
            output_fail(out, ENOMEM);
            return;
        }
        subject->values = more;
        subject->values_size = 2 * needed + 1;
        anb_netlist_part_values(subject->netlist, part, more, subject->values_size);
    }
    write(out, subject->values);
}

/* ---- counting kinds: there are few of them --------------------------------------- */

static kind_count *find_kind(show_subject *subject, const char *kind) {
    for (size_t i = 0; i < subject->kind_count; i++)
        if (!strcmp(subject->kinds[i].kind, kind)) return &subject->kinds[i];
    kind_count *more = realloc(subject->kinds, (subject->kind_count + 1) * sizeof *more);
    if (!more) return NULL;
    subject->kinds = more;
    more[subject->kind_count] = (kind_count){kind, 0};
    return &more[subject->kind_count++];
}

static anb_status count_kinds(show_subject *subject) {
    anb_part_info part;
    for (size_t i = 0; i < anb_netlist_part_count(subject->netlist); i++) {
        anb_netlist_part_get(subject->netlist, i, &part);
        kind_count *kind = find_kind(subject, part.kind);
        if (!kind) return ANB_MEMORY;
        kind->count++;
    }
    return ANB_OK;
}

/* ---- the command -------------------------------------------------------------------- */

static anb_status measure(anb_context *context, const cli_settings *settings, show_subject *subject,
                          anb_statistics *statistics) {
    anb_sweep_options how = load_sweep_options(settings);
    cli_progress bar = progress_start("show", false);
    if (!settings->statistics) return ANB_OK;
    how.progress = progress_show;
    how.user = &bar;
    subject->statistics = statistics;
    interrupt_begin(context);
    anb_status status = anb_sweep_statistics(context, subject->netlist, &how, statistics);
    interrupt_end();
    progress_clear(&bar);
    return status;
}

static int print(anb_context *context, const cli_settings *settings, show_subject *subject) {
    cli_output out;
    int status = output_open(&out, settings->output);
    if (status != STATUS_OK) return status;
    interrupt_begin(context);
    (settings->json ? show_json : settings->csv ? show_csv : show_text)(&out, subject);
    status = output_finish(&out, STATUS_OK);
    interrupt_end();
    return status;
}

static int show_netlist(anb_context *context, const cli_settings *settings, const anb_netlist *netlist) {
    show_subject subject = {.netlist = netlist, .values_size = 256};
    anb_statistics statistics;
    subject.values = malloc(subject.values_size);
    anb_status status = subject.values ? count_kinds(&subject) : ANB_MEMORY;
    if (status == ANB_OK) status = measure(context, settings, &subject, &statistics);
    int exit_status = message_finish(context, status, settings->files[0]);
    if (exit_status == STATUS_OK) exit_status = print(context, settings, &subject);
    free(subject.kinds);
    free(subject.values);
    return exit_status;
}

static int check_call(const cli_settings *settings) {
    if (settings->json && settings->csv)
        return message_wrong(NULL, "`--json` and `--csv` exclude each other");
    if (settings->statistics && settings->csv)
        return message_wrong("--json", "`--csv` is the table of the parts; statistics are not in it");
    if (settings->output && output_same_file(settings->output, settings->files[0]))
        return message_wrong_file(settings->output, NULL, "is the netlist itself");
    return STATUS_OK;
}

int show_run(const cli_settings *settings) {
    anb_netlist *netlist = NULL;
    int status = check_call(settings);
    if (status != STATUS_OK) return status;
    anb_context *context = load_context();
    if (!context) return STATUS_MACHINE;
    status = load_netlist(context, settings, &netlist);
    if (status == STATUS_OK) status = show_netlist(context, settings, netlist);
    anb_netlist_free(netlist);
    anb_context_free(context);
    return status;
}
