#include "message.h"

#include <errno.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <unistd.h>

#include "glyph.h"
#include "interrupt.h"
#include "status.h"

enum {
    TAB = 4,
    GUTTER = 8,       /* "    4 | " */
    PAGE = 110,       /* columns where standard error is no terminal */
    LEAST_ROOM = 30,  /* of a source line, however narrow the terminal */
    TEXT_LIMIT = 2000 /* bytes of a message of our own */
};

static bool on_terminal, in_colour;

void message_start(void) {
    const char *no_color = getenv("NO_COLOR");
    const char *terminal = getenv("TERM");
    on_terminal = isatty(STDERR_FILENO) && terminal && *terminal && strcmp(terminal, "dumb");
    in_colour = on_terminal && !(no_color && *no_color);
}

bool message_on_terminal(void) { return on_terminal; }

/* ---- pieces ---------------------------------------------------------------- */

static const char *const severity_names[] = {"error", "warning", "note"};
static const char *const severity_colours[] = {"\033[1;31m", "\033[1;33m", "\033[1;36m"};

static void colour(const char *code) {
    if (in_colour) fputs(code, stderr);
}

static void plain(void) { colour("\033[0m"); }

/* Text as it stands, but for what could play with the terminal; lines may break in it. */
static void put(const char *text) {
    size_t length = strlen(text);
    while (length) {
        glyph g = glyph_at(text, length);
        if (*text == '\n') fputc('\n', stderr);
        else fwrite(g.bytes, 1, g.length, stderr);
        text += g.taken;
        length -= g.taken;
    }
}

static void put_severity(anb_severity severity) {
    colour(severity_colours[severity]);
    fprintf(stderr, "%s: ", severity_names[severity]);
    plain();
}

static void put_text(const char *text) {
    colour("\033[1m");
    put(text);
    plain();
    fputc('\n', stderr);
}

static void put_hint(const char *hint) {
    if (!hint) return;
    colour("\033[1;32m");
    fputs("hint: ", stderr);
    plain();
    put(hint);
    fputc('\n', stderr);
}

/* ---- the source line and its mark -------------------------------------------- */

/* A source line laid out: cells are columns of the screen, counted from 0. */
typedef struct line_layout {
    const char *text;
    size_t length;
    unsigned mark_start, mark_end; /* cells */
    unsigned width;                /* cells of the whole line */
    unsigned from, to;             /* the cells that are shown */
} line_layout;

static unsigned width_at(const glyph *g, const char *text, unsigned cell) {
    return *text == '\t' ? TAB - cell % TAB : g->width;
}

/* Finds the cells of columns `start` (from 1) and `end` (one past). */
static void measure(line_layout *line, unsigned start, unsigned end) {
    unsigned cell = 0, column = 1;
    line->mark_start = line->mark_end = UINT32_MAX;
    for (size_t at = 0; at < line->length; column++) {
        glyph g = glyph_at(line->text + at, line->length - at);
        if (column == start) line->mark_start = cell;
        if (column == end) line->mark_end = cell;
        cell += width_at(&g, line->text + at, cell);
        at += g.taken;
    }
    line->width = cell;
    if (line->mark_start > cell) line->mark_start = cell;
    if (line->mark_end > cell) line->mark_end = cell;
    if (line->mark_end <= line->mark_start) line->mark_end = line->mark_start + 1;
}

static unsigned room(void) {
    struct winsize size;
    unsigned columns = PAGE;
    if (on_terminal && ioctl(STDERR_FILENO, TIOCGWINSZ, &size) == 0 && size.ws_col) columns = size.ws_col;
    return columns > GUTTER + LEAST_ROOM ? columns - GUTTER : LEAST_ROOM;
}

/* Chooses the part of a long line to show: the mark, with a third of the room before it. */
static void choose_window(line_layout *line) {
    unsigned limit = room();
    line->from = 0;
    line->to = line->width;
    if (line->width <= limit && line->mark_end <= limit) return;
    limit -= 6; /* for "..." at both ends */
    unsigned lead = limit / 3;
    if (line->mark_start > lead) line->from = line->mark_start - lead;
    if (line->width > limit && line->from > line->width - limit) line->from = line->width - limit;
    if (line->to > line->from + limit) line->to = line->from + limit;
}

static void put_line(const line_layout *line) {
    unsigned cell = 0;
    if (line->from) fputs("...", stderr);
    for (size_t at = 0; at < line->length && cell < line->to;) {
        glyph g = glyph_at(line->text + at, line->length - at);
        unsigned width = width_at(&g, line->text + at, cell);
        bool whole = cell >= line->from && cell + width <= line->to;
        if (whole && line->text[at] != '\t') fwrite(g.bytes, 1, g.length, stderr);
        else
            for (unsigned i = cell; i < cell + width; i++)
                if (i >= line->from && i < line->to) fputc(' ', stderr);
        cell += width;
        at += g.taken;
    }
    fputs(line->to < line->width ? "...\n" : "\n", stderr);
}

static void put_mark(const line_layout *line, anb_severity severity) {
    unsigned blanks = line->mark_start - line->from + (line->from ? 3 : 0);
    unsigned end = line->mark_end < line->to || line->mark_start >= line->to ? line->mark_end : line->to;
    fprintf(stderr, "      | %*s", (int)blanks, "");
    colour(severity_colours[severity]);
    for (unsigned i = line->mark_start; i < end; i++) fputc('^', stderr);
    plain();
    fputc('\n', stderr);
}

static void put_source(const anb_message *message) {
    if (!message->line || !message->source_line) return;
    line_layout line = {.text = message->source_line, .length = message->source_line_length};
    bool one_line = message->end_line == message->line;
    measure(&line, message->column, one_line ? message->end_column : UINT32_MAX);
    choose_window(&line);
    fprintf(stderr, "%5u | ", message->line);
    put_line(&line);
    put_mark(&line, message->severity);
}

/* ---- whole messages ------------------------------------------------------------ */

static void put_message(const anb_message *message) {
    put(message->path && *message->path ? message->path : "anabranch");
    if (message->line) fprintf(stderr, ":%u:%u", message->line, message->column);
    fputs(": ", stderr);
    put_severity(message->severity);
    put_text(message->text);
    put_source(message);
}

static void put_with_notes(const anb_context *context, size_t index) {
    anb_message message, note;
    anb_message_get(context, index, &message);
    put_message(&message);
    for (size_t i = 0; i < anb_note_count(context, index); i++) {
        anb_note_get(context, index, i, &note);
        put_message(&note);
    }
    put_hint(message.hint);
}

size_t message_print_all(anb_context *context) {
    size_t count = anb_message_count(context), errors = anb_error_count(context), shown = 0;
    for (size_t i = 0; i < count; i++) {
        anb_message message;
        anb_message_get(context, i, &message);
        shown += message.severity == ANB_ERROR;
        put_with_notes(context, i);
    }
    if (errors > shown) fprintf(stderr, "%zu errors in all; the first %zu are shown\n", errors, shown);
    fflush(stderr);
    anb_messages_clear(context);
    return errors;
}

static void say(const char *path, anb_severity severity, const char *hint, const char *format,
                va_list arguments) {
    char text[TEXT_LIMIT];
    vsnprintf(text, sizeof text, format, arguments);
    put_message(&(anb_message){.severity = severity, .text = text, .path = path});
    put_hint(hint);
    fflush(stderr);
}

int message_wrong(const char *hint, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    say(NULL, ANB_ERROR, hint, format, arguments);
    va_end(arguments);
    return STATUS_WRONG;
}

int message_wrong_file(const char *path, const char *hint, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    say(path, ANB_ERROR, hint, format, arguments);
    va_end(arguments);
    return STATUS_WRONG;
}

void message_warn_file(const char *path, const char *hint, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    say(path, ANB_WARNING, hint, format, arguments);
    va_end(arguments);
}

/* A file that is not there is the caller's mistake; a disk that fails is the machine's. */
static int status_of_errno(int number) {
    return number == EIO || number == ENOMEM || number == ENFILE || number == EMFILE ? STATUS_MACHINE
                                                                                    : STATUS_WRONG;
}

int message_finish(anb_context *context, anb_status status, const char *path) {
    int number = errno;
    size_t errors = message_print_all(context);
    switch (status) {
    case ANB_OK:
    case ANB_CLOSED: return STATUS_OK;
    case ANB_CANCELLED: return interrupt_status();
    case ANB_MEMORY:
        if (!errors) message_wrong_file(path, NULL, "out of memory");
        return STATUS_MACHINE;
    case ANB_IO:
        if (!errors) message_wrong_file(path, NULL, "cannot be read: %s", strerror(number));
        return status_of_errno(number);
    case ANB_INVALID: break;
    }
    return errors ? STATUS_WRONG : message_wrong_file(path, NULL, "this cannot be used");
}
