/* Diagnostics as data, and the texts that they point into.
 *
 * A message is a sentence without a full stop, in lower case, with names and
 * source text in `backquotes`. A hint says what to write instead.
 */
#ifndef ANB_BASE_REPORT_H
#define ANB_BASE_REPORT_H

#include <stdbool.h>
#include <stdint.h>

#include "anabranch.h"
#include "base/arena.h"

/* A piece of a source: bytes start .. end-1. */
typedef struct anb__span {
    uint32_t source; /* index into anb__sources */
    uint32_t start;
    uint32_t end;
} anb__span;

typedef struct anb__source {
    const char *path; /* as the user wrote it; "-" for standard input */
    const char *text; /* `length` bytes, then a NUL */
    uint32_t length;
    const uint32_t *line_starts; /* [line_count]: byte offsets */
    uint32_t line_count;
} anb__source;

typedef struct anb__sources {
    anb__source *list;
    uint32_t count;
    uint32_t capacity;
} anb__sources;

typedef struct anb__note {
    struct anb__note *next;
    anb__span span;
    const char *text;
} anb__note;

typedef struct anb__diagnostic {
    struct anb__diagnostic *next;
    anb_severity severity;
    const char *code; /* a stable word, e.g. "unknown-part" */
    anb__span span;
    const char *text;
    anb__note *notes;
    const char *hint; /* or NULL */
} anb__diagnostic;

typedef struct anb__report {
    anb__arena *arena;
    anb__sources sources;
    anb__diagnostic *first;
    anb__diagnostic *last;
    unsigned errors; /* counted beyond the limit too */
    unsigned warnings;
} anb__report;

enum { ANB__ERROR_LIMIT = 20 };

/* Adds a diagnostic and returns it, for anb__add_note and anb__add_hint.
 * One with the same code and span as an earlier one, and errors beyond the
 * limit, are counted or dropped, and a scratch diagnostic is returned. */
anb__diagnostic *anb__error(anb__report *report, anb__span span, const char *code, const char *format, ...)
    __attribute__((format(printf, 4, 5)));
anb__diagnostic *anb__warning(anb__report *report, anb__span span, const char *code, const char *format, ...)
    __attribute__((format(printf, 4, 5)));
void anb__add_note(anb__report *report, anb__diagnostic *diagnostic, anb__span span, const char *format, ...)
    __attribute__((format(printf, 4, 5)));
void anb__add_hint(anb__report *report, anb__diagnostic *diagnostic, const char *format, ...)
    __attribute__((format(printf, 3, 4)));

/* Registers a source; its text must outlive the report. Returns its index. */
uint32_t anb__add_source(anb__report *report, const char *path, const char *text, uint32_t length);

/* From the first byte of a to the last of b (the same source). */
static inline anb__span anb__span_join(anb__span a, anb__span b) {
    return (anb__span){a.source, a.start, b.end};
}

/* Line and column, both from 1, columns in code points (a byte-order mark counts none), of a byte of a
 * source. */
void anb__place(const anb__source *source, uint32_t offset, uint32_t *line, uint32_t *column);

#endif
