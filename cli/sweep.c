#include "sweep.h"

#include <ctype.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "interrupt.h"
#include "load.h"
#include "message.h"
#include "options.h"
#include "output.h"
#include "quantity.h"
#include "status.h"
#include "template.h"

/* ---- the form of what is written ------------------------------------------------ */

/* JSON and CSV have one form: hertz, real and imaginary part. */
static int check_form(const cli_settings *settings) {
    const char *kind = settings->json ? "json" : "csv";
    if (settings->json && settings->csv)
        return message_wrong(NULL, "`--json` and `--csv` exclude each other");
    if (!settings->json && !settings->csv) return STATUS_OK;
    const char *other = settings->touchstone ? "touchstone"
                        : settings->unit     ? "unit"
                        : settings->format   ? "format"
                                             : NULL;
    if (!other) return STATUS_OK;
    return message_wrong(NULL, "`--%s` says how Touchstone is written; `--%s` has one form only", other,
                         kind);
}

/* Fills the form in; its reference is to be freed. Returns the exit status. */
static int read_form(const cli_settings *settings, double **reference, anb_write_options *form) {
    int status = check_form(settings);
    *form = (anb_write_options){
        .kind = settings->json ? ANB_JSON : settings->csv ? ANB_CSV : ANB_TOUCHSTONE,
        .version = settings->touchstone,
        .unit = settings->unit,
        .format = settings->format ? (anb_format_kind)choice_index("ri|ma|db", settings->format) : ANB_RI,
        .digits = (int)settings->digits,
    };
    if (status == STATUS_OK && settings->reference)
        status = quantity_read_resistances("reference", settings->reference, reference,
                                           &form->reference_count);
    form->reference = *reference;
    return status;
}

/* ---- names of files ---------------------------------------------------------------- */

static const char *ending_of(const char *path) {
    const char *name = strrchr(path, '/'), *dot;
    name = name ? name + 1 : path;
    dot = strrchr(name, '.');
    return dot && dot != name ? dot + 1 : "";
}

static bool is_ending(const char *ending, const char *word) {
    while (*word && tolower((unsigned char)*ending) == *word) ending++, word++;
    return !*word && !*ending;
}

/* The ports that an ending like `s3p` promises, 0 for another ending. */
static size_t promised_ports(const char *ending) {
    if (tolower((unsigned char)*ending) != 's') return 0;
    size_t ports = 0, digits = strspn(ending + 1, "0123456789");
    for (size_t i = 1; i <= digits && digits <= 6; i++) ports = 10 * ports + (size_t)(ending[i] - '0');
    return is_ending(ending + 1 + digits, "p") ? ports : 0;
}

static bool is_version_2(const char *version) { return version && *version == '2'; }

/* Version 1 says the number of ports nowhere but in its name. */
static int check_touchstone_name(const char *path, const cli_settings *settings, size_t ports) {
    char hint[80];
    const char *ending = ending_of(path);
    size_t promised = promised_ports(ending);
    snprintf(hint, sizeof hint, "a name that ends in .s%zup, or --touchstone 2", ports);
    if (promised && promised != ports && !is_version_2(settings->touchstone))
        return message_wrong_file(path, hint, "the name says %zu port%s, the network has %zu", promised,
                                  promised == 1 ? "" : "s", ports);
    if (is_ending(ending, "ts") && settings->touchstone && !is_version_2(settings->touchstone))
        return message_wrong_file(path, hint, "`.ts` is for version 2 of Touchstone");
    bool csv = is_ending(ending, "csv");
    if (csv || is_ending(ending, "json"))
        return message_wrong_file(path, csv ? "--csv" : "--json",
                                  "the name says %s, Touchstone would be in it", csv ? "CSV" : "JSON");
    return STATUS_OK;
}

int sweep_check_name(const char *path, const cli_settings *settings, size_t ports) {
    if (output_same_file(path, settings->files[0]))
        return message_wrong_file(path, NULL, "is the netlist itself");
    if (!settings->json && !settings->csv) return check_touchstone_name(path, settings, ports);
    const char *ending = ending_of(path);
    bool other = is_ending(ending, settings->json ? "csv" : "json");
    if (promised_ports(ending) || is_ending(ending, "ts") || other)
        return message_wrong_file(path, NULL, "the name says %s, %s would be in it",
                                  other ? settings->json ? "CSV" : "JSON" : "Touchstone",
                                  settings->json ? "JSON" : "CSV");
    return STATUS_OK;
}

/* The form for one file: `.ts` is version 2's ending. */
static anb_write_options form_for(const anb_write_options *form, const char *path) {
    anb_write_options out = *form;
    bool ts = path && is_ending(ending_of(path), "ts");
    if (ts && out.kind == ANB_TOUCHSTONE && !out.version) out.version = "2";
    return out;
}

/* ---- sweeping ------------------------------------------------------------------------ */

/* Whether the output's name has `{name}`. */
static bool is_in_template(const cli_settings *settings, const char *name) {
    template_name found;
    const char *at = settings->output;
    while (at && (at = template_next(at, &found)))
        if (template_is(found, name)) return true;
    return false;
}

void sweep_warn_cases(const anb_netlist *netlist, const cli_settings *settings) {
    for (size_t i = 0; i < anb_netlist_case_count(netlist); i++) {
        const char *name = anb_netlist_case_name(netlist, i);
        char hint[200];
        if (is_in_template(settings, name)) continue;
        snprintf(hint, sizeof hint, "--set %.40s=... for another, or -o out_{%.40s}.s%zup for a file of each",
                 name, name, anb_netlist_port_count(netlist));
        message_warn_file(settings->files[0], hint,
                          "only the first of the %zu cases of `%s` is computed: %s",
                          anb_netlist_case_value_count(netlist, i), name,
                          anb_netlist_case_value(netlist, i, 0));
    }
}

int sweep_to(anb_context *context, const anb_netlist *netlist, const cli_settings *settings,
             const anb_write_options *form, const char *path, cli_progress *progress) {
    cli_output out;
    anb_write_options here = form_for(form, path);
    anb_sweep_options how = load_sweep_options(settings);
    how.progress = progress_show;
    how.user = progress;
    int status = output_open(&out, path);
    if (status != STATUS_OK) return status;
    interrupt_begin(context);
    anb_status result = anb_sweep_write(context, netlist, &how, &here, output_write, &out);
    progress_clear(progress);
    /* A failure of the output is told by the output. */
    if (out.status != ANB_OK) result = ANB_OK;
    status = output_finish(&out, message_finish(context, result, settings->files[0]));
    interrupt_end();
    return status;
}

static bool to_standard_output(const cli_settings *settings) {
    return !settings->output || !strcmp(settings->output, "-");
}

static int sweep_one(anb_context *context, const cli_settings *settings, const anb_write_options *form) {
    anb_netlist *netlist;
    bool standard = to_standard_output(settings);
    int status = load_netlist(context, settings, &netlist);
    if (status == STATUS_OK && !standard)
        status = sweep_check_name(settings->output, settings, anb_netlist_port_count(netlist));
    if (status == STATUS_OK) {
        cli_progress bar = progress_start("sweep", standard);
        sweep_warn_cases(netlist, settings);
        status = sweep_to(context, netlist, settings, form, standard ? NULL : settings->output, &bar);
    }
    anb_netlist_free(netlist);
    return status;
}

int sweep_run(const cli_settings *settings) {
    anb_write_options form;
    template_name name;
    double *reference = NULL;
    int status = read_form(settings, &reference, &form);
    anb_context *context = status == STATUS_OK ? load_context() : NULL;
    if (status == STATUS_OK && !context) status = STATUS_MACHINE;
    if (status == STATUS_OK) {
        bool cases = settings->output && template_next(settings->output, &name);
        status = (cases ? sweep_cases : sweep_one)(context, settings, &form);
    }
    anb_context_free(context);
    free(reference);
    return status;
}
