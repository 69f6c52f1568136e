#include "base/report.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

static const char *write_text(anb__arena *arena, const char *format, va_list arguments) {
    va_list copy;
    va_copy(copy, arguments);
    int length = vsnprintf(NULL, 0, format, copy);
    va_end(copy);
    if (length < 0) return "";
    char *text = anb__arena_take(arena, (size_t)length + 1);
    if (text) vsnprintf(text, (size_t)length + 1, format, arguments);
    return text;
}

static bool known_already(const anb__report *report, anb__span span, const char *code) {
    for (const anb__diagnostic *d = report->first; d; d = d->next)
        if (d->span.source == span.source && d->span.start == span.start && d->span.end == span.end &&
            !strcmp(d->code, code))
            return true;
    return false;
}

static anb__diagnostic *add(anb__report *report, anb_severity severity, anb__span span,
                            const char *code, const char *format, va_list arguments) {
    unsigned *count = severity == ANB_ERROR ? &report->errors : &report->warnings;
    anb__diagnostic *d = anb__arena_take(report->arena, sizeof *d);
    if (*count >= ANB__ERROR_LIMIT) {
        ++*count;
        return d;
    }
    if (known_already(report, span, code)) return d;
    ++*count;
    *d = (anb__diagnostic){.severity = severity, .code = code, .span = span};
    d->text = write_text(report->arena, format, arguments);
    if (report->last) report->last->next = d;
    else report->first = d;
    report->last = d;
    return d;
}

anb__diagnostic *anb__error(anb__report *report, anb__span span, const char *code,
                            const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    anb__diagnostic *d = add(report, ANB_ERROR, span, code, format, arguments);
    va_end(arguments);
    return d;
}

anb__diagnostic *anb__warning(anb__report *report, anb__span span, const char *code,
                              const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    anb__diagnostic *d = add(report, ANB_WARNING, span, code, format, arguments);
    va_end(arguments);
    return d;
}

void anb__add_note(anb__report *report, anb__diagnostic *diagnostic, anb__span span,
                   const char *format, ...) {
    anb__note *note = anb__arena_take(report->arena, sizeof *note);
    va_list arguments;
    va_start(arguments, format);
    *note = (anb__note){.span = span, .text = write_text(report->arena, format, arguments)};
    va_end(arguments);
    anb__note **end = &diagnostic->notes;
    while (*end) end = &(*end)->next;
    *end = note;
}

void anb__add_hint(anb__report *report, anb__diagnostic *diagnostic, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    diagnostic->hint = write_text(report->arena, format, arguments);
    va_end(arguments);
}

static void find_lines(anb__arena *arena, anb__source *source) {
    uint32_t count = 1;
    for (uint32_t i = 0; i < source->length; i++) count += source->text[i] == '\n';
    uint32_t *starts = anb__arena_take(arena, count * sizeof *starts);
    source->line_starts = starts;
    source->line_count = starts ? count : 0;
    for (uint32_t i = 0; starts && i < source->length; i++)
        if (source->text[i] == '\n') *++starts = i + 1;
}

uint32_t anb__add_source(anb__report *report, const char *path, const char *text, uint32_t length) {
    anb__sources *sources = &report->sources;
    if (sources->count == sources->capacity) {
        uint32_t capacity = sources->capacity ? 2 * sources->capacity : 4;
        sources->list = anb__arena_grow(report->arena, sources->list, sources->count * sizeof *sources->list,
                                        capacity * sizeof *sources->list);
        sources->capacity = capacity;
    }
    sources->list[sources->count] = (anb__source){.path = path, .text = text, .length = length};
    find_lines(report->arena, &sources->list[sources->count]);
    return sources->count++;
}

void anb__place(const anb__source *source, uint32_t offset, uint32_t *line, uint32_t *column) {
    uint32_t low = 0, high = source->line_count;
    if (offset > source->length) offset = source->length;
    while (high - low > 1) {
        uint32_t middle = (low + high) / 2;
        if (source->line_starts[middle] <= offset) low = middle;
        else high = middle;
    }
    uint32_t at = source->line_count ? source->line_starts[low] : 0;
    if (!at && source->length >= 3 && !memcmp(source->text, "\xEF\xBB\xBF", 3)) at = 3;
    *line = low + 1;
    *column = 1;
    for (; at < offset; at++) *column += ((unsigned char)source->text[at] & 0xC0) != 0x80;
}
