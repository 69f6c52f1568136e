/* `format`: netlists in their standard layout, printed, written anew, or only looked at. */
#include <stdlib.h>
#include <string.h>

#include "command.h"
#include "input.h"
#include "load.h"
#include "message.h"
#include "output.h"
#include "status.h"

typedef struct file_layout {
    char *before, *after; /* `after` belongs to the library */
    size_t before_length, after_length;
} file_layout;

/* Reads a file and lays it out. Returns the exit status, having said what is wrong. */
static int lay_out(anb_context *context, const char *path, file_layout *out) {
    *out = (file_layout){NULL, NULL, 0, 0};
    int status = input_read(path, &out->before, &out->before_length);
    if (status != STATUS_OK) return status;
    anb_status result =
        anb_format(context, path, out->before, out->before_length, &out->after, &out->after_length);
    return message_finish(context, result, path);
}

static void release(file_layout *layout) {
    free(layout->before);
    anb_text_free(layout->after);
}

static bool is_laid_out(const file_layout *layout) {
    return layout->before_length == layout->after_length &&
           !memcmp(layout->before, layout->after, layout->after_length);
}

static int write_to(const char *path, const file_layout *layout) {
    cli_output out;
    int status = output_open(&out, path);
    if (status != STATUS_OK) return status;
    output_write(&out, layout->after, layout->after_length);
    return output_finish(&out, STATUS_OK);
}

/* What is done with each file. `list` takes the names of those in another layout. */
static int do_file(anb_context *context, const cli_settings *settings, const char *path, cli_output *list) {
    file_layout layout;
    int status = lay_out(context, path, &layout);
    if (status == STATUS_OK && settings->check) {
        if (!is_laid_out(&layout)) {
            output_text(list, path);
            output_char(list, '\n');
            status = STATUS_UNMET;
        }
    } else if (status == STATUS_OK && settings->write) {
        if (!is_laid_out(&layout)) status = write_to(path, &layout);
    } else if (status == STATUS_OK) {
        status = write_to(settings->output, &layout);
    }
    release(&layout);
    return status;
}

/* The worst of two exit statuses: they rise with it. */
static int worse(int a, int b) { return a > b ? a : b; }

static int do_files(const cli_settings *settings) {
    cli_output list;
    anb_context *context = load_context();
    if (!context) return STATUS_MACHINE;
    int status = settings->check ? output_open(&list, NULL) : STATUS_OK, listed = STATUS_OK;
    bool open = settings->check && status == STATUS_OK;
    if (status == STATUS_OK)
        for (size_t i = 0; i < settings->file_count; i++)
            status = worse(status, do_file(context, settings, settings->files[i], &list));
    if (open) listed = output_finish(&list, STATUS_OK);
    anb_context_free(context);
    return worse(status, listed);
}

static int check_call(const cli_settings *settings) {
    if (settings->check && settings->write)
        return message_wrong(NULL, "`--check` and `--write` exclude each other");
    if (settings->output && (settings->check || settings->write))
        return message_wrong(NULL, "`--output` is for the layout itself, not with `--%s`",
                             settings->check ? "check" : "write");
    if (settings->file_count > 1 && !settings->check && !settings->write)
        return message_wrong("--write, or --check", "several files can be checked or written, not printed");
    for (size_t i = 0; i < settings->file_count && settings->write; i++)
        if (!strcmp(settings->files[i], "-"))
            return message_wrong(NULL, "standard input cannot be written anew");
    return STATUS_OK;
}

int format_run(const cli_settings *settings) {
    int status = check_call(settings);
    return status == STATUS_OK ? do_files(settings) : status;
}
