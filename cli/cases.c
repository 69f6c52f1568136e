/* `sweep -o out_{name}.s3p`: one file for each value of a name with `cases`, or for each
 * combination where several are named. All variants are read and all names looked at before the
 * first file is written. */
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "input.h"
#include "message.h"
#include "nearest.h"
#include "status.h"
#include "sweep.h"
#include "template.h"

enum { AXES = 16 }; /* names in one template; each but a few has two values, and 1000 is the limit of all */

/* A name in the template that takes several values: the `index`th of the netlist's cases. */
typedef struct case_axis {
    size_t index, count, at;
} case_axis;

typedef struct variants {
    anb_context *context;
    const cli_settings *settings;
    const anb_netlist *first; /* the netlist with the first of each; the texts of all values are its */
    const char *text;
    size_t length;
    case_axis axes[AXES];
    size_t axis_count, count;
    char **paths; /* [count] */
} variants;

/* ---- what the template names --------------------------------------------------- */

static size_t find_case(const anb_netlist *netlist, template_name name) {
    size_t count = anb_netlist_case_count(netlist), i = 0;
    while (i < count && !template_is(name, anb_netlist_case_name(netlist, i))) i++;
    return i;
}

/* The length of NAME in an override "NAME=VALUE". */
static size_t set_name_length(const char *set) { return strcspn(set, " \t="); }

/* The value that the call sets the name to, or NULL. */
static const char *find_set(const cli_settings *settings, template_name name) {
    for (size_t i = settings->set_count; i-- > 0;) {
        const char *set = settings->set[i], *value = strchr(set, '=');
        if (value && set_name_length(set) == name.length && !strncmp(set, name.start, name.length))
            return value + 1;
    }
    return NULL;
}

static int unknown_name(const variants *all, template_name name) {
    char wanted[80];
    snprintf(wanted, sizeof wanted, "%.*s", name.length < 80 ? (int)name.length : 79, name.start);
    cli_nearest search = nearest_to(wanted);
    for (size_t i = 0; i < anb_netlist_case_count(all->first); i++)
        nearest_offer(&search, anb_netlist_case_name(all->first, i));
    return message_wrong_file(all->settings->output, search.name, "the netlist has no cases of `%s`", wanted);
}

static int add_axis(variants *all, template_name name) {
    size_t index = find_case(all->first, name);
    if (index == anb_netlist_case_count(all->first))
        return find_set(all->settings, name) ? STATUS_OK : unknown_name(all, name);
    for (size_t i = 0; i < all->axis_count; i++)
        if (all->axes[i].index == index) return STATUS_OK;
    if (all->axis_count == AXES)
        return message_wrong_file(all->settings->output, NULL, "more than %d names in braces", AXES);
    size_t count = anb_netlist_case_value_count(all->first, index);
    all->axes[all->axis_count++] = (case_axis){index, count, 0};
    all->count *= count;
    return STATUS_OK;
}

static int find_axes(variants *all) {
    template_name name;
    int status = STATUS_OK;
    all->count = 1;
    for (const char *at = all->settings->output; status == STATUS_OK && (at = template_next(at, &name));)
        status = add_axis(all, name);
    return status;
}

/* ---- one variant ------------------------------------------------------------------ */

static void go_to(variants *all, size_t variant) {
    for (size_t i = all->axis_count; i-- > 0;) {
        all->axes[i].at = variant % all->axes[i].count;
        variant /= all->axes[i].count;
    }
}

static const char *value_of(const variants *all, const case_axis *axis) {
    return anb_netlist_case_value(all->first, axis->index, axis->at);
}

static const char *fill_value(void *user, template_name name) {
    const variants *all = user;
    for (size_t i = 0; i < all->axis_count; i++)
        if (template_is(name, anb_netlist_case_name(all->first, all->axes[i].index)))
            return value_of(all, &all->axes[i]);
    return find_set(all->settings, name);
}

/* "name=value" for an axis, to be freed. */
static char *set_text(const variants *all, const case_axis *axis) {
    const char *name = anb_netlist_case_name(all->first, axis->index), *value = value_of(all, axis);
    size_t size = strlen(name) + strlen(value) + 2;
    char *text = malloc(size);
    if (text) snprintf(text, size, "%s=%s", name, value);
    return text;
}

/* Reads the netlist with the variant's values. Its warnings are those of the first one. */
static int read_variant(variants *all, anb_netlist **out) {
    const cli_settings *settings = all->settings;
    const char **set = calloc(settings->set_count + AXES, sizeof *set);
    char *own[AXES] = {NULL};
    anb_status status = set ? ANB_OK : ANB_MEMORY;
    for (size_t i = 0; i < settings->set_count && set; i++) set[i] = settings->set[i];
    for (size_t i = 0; i < all->axis_count && set; i++) {
        set[settings->set_count + i] = own[i] = set_text(all, &all->axes[i]);
        if (!own[i]) status = ANB_MEMORY;
    }
    anb_overrides overrides = {set, settings->set_count + all->axis_count, settings->sweep};
    if (status == ANB_OK)
        status = anb_netlist_parse(all->context, settings->files[0], all->text, all->length, &overrides, out);
    if (status == ANB_OK) anb_messages_clear(all->context);
    for (size_t i = 0; i < AXES; i++) free(own[i]);
    free(set);
    return message_finish(all->context, status, settings->files[0]);
}

static bool name_is_new(const variants *all, size_t variant) {
    for (size_t i = 0; i < variant; i++)
        if (!strcmp(all->paths[i], all->paths[variant])) return false;
    return true;
}

static int check_variant(variants *all, size_t variant) {
    anb_netlist *netlist = NULL;
    go_to(all, variant);
    all->paths[variant] = template_fill(all->settings->output, fill_value, all);
    if (!all->paths[variant]) return message_finish(all->context, ANB_MEMORY, all->settings->output);
    if (!name_is_new(all, variant))
        return message_wrong_file(all->paths[variant], NULL, "two cases would be written to this one name");
    int status = read_variant(all, &netlist);
    if (status == STATUS_OK)
        status = sweep_check_name(all->paths[variant], all->settings, anb_netlist_port_count(netlist));
    anb_netlist_free(netlist);
    return status;
}

static int write_variant(variants *all, size_t variant, const anb_write_options *form, cli_progress *bar) {
    anb_netlist *netlist = NULL;
    go_to(all, variant);
    bar->share = 1.0 / (double)all->count;
    bar->base = (double)variant * bar->share;
    int status = read_variant(all, &netlist);
    if (status == STATUS_OK)
        status = sweep_to(all->context, netlist, all->settings, form, all->paths[variant], bar);
    anb_netlist_free(netlist);
    return status;
}

/* ---- all of them -------------------------------------------------------------------- */

static int run_all(variants *all, const anb_write_options *form) {
    int status = STATUS_OK;
    cli_progress bar = progress_start("sweep", false);
    for (size_t i = 0; i < all->count && status == STATUS_OK; i++) status = check_variant(all, i);
    for (size_t i = 0; i < all->count && status == STATUS_OK; i++) status = write_variant(all, i, form, &bar);
    return status;
}

static int run_with_paths(variants *all, const anb_write_options *form) {
    all->paths = calloc(all->count, sizeof *all->paths);
    if (!all->paths) return message_finish(all->context, ANB_MEMORY, all->settings->output);
    int status = run_all(all, form);
    for (size_t i = 0; i < all->count; i++) free(all->paths[i]);
    free(all->paths);
    return status;
}

int sweep_cases(anb_context *context, const cli_settings *settings, const anb_write_options *form) {
    const char *path = settings->files[0];
    anb_overrides overrides = {settings->set, settings->set_count, settings->sweep};
    anb_netlist *first = NULL;
    char *text;
    size_t length;
    int status = input_read(path, &text, &length);
    if (status != STATUS_OK) return status;
    anb_status result = anb_netlist_parse(context, path, text, length, &overrides, &first);
    status = message_finish(context, result, path);
    if (status == STATUS_OK) {
        variants all = {context, settings, .first = first, .text = text, .length = length};
        sweep_warn_cases(first, settings);
        status = find_axes(&all);
        if (status == STATUS_OK) status = run_with_paths(&all, form);
    }
    anb_netlist_free(first);
    free(text);
    return status;
}
