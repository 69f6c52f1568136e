#include "context.h"

#include <stdlib.h>
#include <string.h>

const char *anb_version(void) { return ANB_VERSION; }

anb_context *anb_context_new(void) { return calloc(1, sizeof(anb_context)); }

void anb_context_free(anb_context *context) {
    if (!context) return;
    anb__arena_free(&context->arena);
    free(context);
}

void anb_context_cancel(anb_context *context) { atomic_store(&context->cancelled, true); }

void anb_messages_clear(anb_context *context) {
    anb__arena_free(&context->arena);
    context->messages = NULL;
    context->notes = NULL;
    context->message_count = context->error_count = 0;
}

void anb__context_begin(anb_context *context) { anb_messages_clear(context); }

/* ---- copying messages ---------------------------------------------------------------------- */

static const char *copy_text(anb__arena *arena, const char *text) {
    return text ? anb__arena_text(arena, text, strlen(text)) : NULL;
}

/* The place of a span: its lines and columns, and the text of its first line. */
static void place_message(anb__arena *arena, const anb__report *report, anb__span span, anb_message *out) {
    if (span.source >= report->sources.count) return;
    const anb__source *source = &report->sources.list[span.source];
    uint32_t start = span.start < source->length ? span.start : source->length, first = start, last = start;
    uint32_t end = span.end < start ? start : span.end;
    while (first && source->text[first - 1] != '\n') first--;
    while (last < source->length && source->text[last] != '\n') last++;
    if (last > first && source->text[last - 1] == '\r') last--;
    if (!first && source->length >= 3 && !memcmp(source->text, "\xEF\xBB\xBF", 3)) first = 3;
    anb__place(source, start, &out->line, &out->column);
    anb__place(source, end, &out->end_line, &out->end_column);
    out->path = copy_text(arena, source->path);
    out->source_line = last > first ? anb__arena_text(arena, source->text + first, last - first) : "";
    out->source_line_length = last > first ? last - first : 0;
}

static anb_message *copy_notes(anb__arena *arena, const anb__report *report, const anb__diagnostic *d,
                               size_t *count) {
    *count = 0;
    for (const anb__note *note = d->notes; note; note = note->next) ++*count;
    anb_message *list = anb__arena_take(arena, (*count + 1) * sizeof *list), *to = list;
    for (const anb__note *note = d->notes; note; note = note->next, to++) {
        *to = (anb_message){
            .severity = ANB_NOTE, .code = d->code, .text = copy_text(arena, note->text), .path = ""};
        place_message(arena, report, note->span, to);
    }
    return list;
}

static void copy_message(anb__arena *arena, const anb__report *report, const anb__diagnostic *d,
                         anb_message *to) {
    *to = (anb_message){.severity = d->severity,
                        .code = d->code,
                        .text = copy_text(arena, d->text),
                        .hint = copy_text(arena, d->hint),
                        .path = "",
                        .source_line = ""};
    place_message(arena, report, d->span, to);
}

static void copy_all(anb_context *context, const anb__report *report) {
    size_t old = context->message_count, count = old;
    for (const anb__diagnostic *d = report->first; d; d = d->next) count++;
    anb__arena *arena = &context->arena;
    anb_message *messages = anb__arena_take(arena, (count + 1) * sizeof *messages);
    struct anb__notes *notes = anb__arena_take(arena, (count + 1) * sizeof *notes);
    if (old) {
        memcpy(messages, context->messages, old * sizeof *messages);
        memcpy(notes, context->notes, old * sizeof *notes);
    }
    size_t k = old;
    for (const anb__diagnostic *d = report->first; d; d = d->next, k++) {
        copy_message(arena, report, d, &messages[k]);
        notes[k].list = copy_notes(arena, report, d, &notes[k].count);
    }
    context->messages = messages;
    context->notes = notes;
    context->message_count = count;
    context->error_count += report->errors;
}

anb_status anb__context_take(anb_context *context, anb__report *report) {
    jmp_buf escape;
    if (setjmp(escape)) {
        context->arena.escape = NULL;
        return ANB_MEMORY;
    }
    context->arena.escape = &escape;
    copy_all(context, report);
    context->arena.escape = NULL;
    report->first = report->last = NULL;
    report->errors = report->warnings = 0;
    return ANB_OK;
}

/* ---- reading them ----------------------------------------------------------------------------- */

size_t anb_message_count(const anb_context *context) { return context->message_count; }

void anb_message_get(const anb_context *context, size_t index, anb_message *out) {
    *out = context->messages[index];
}

size_t anb_note_count(const anb_context *context, size_t index) { return context->notes[index].count; }

void anb_note_get(const anb_context *context, size_t index, size_t note, anb_message *out) {
    *out = context->notes[index].list[note];
}

size_t anb_error_count(const anb_context *context) { return context->error_count; }
