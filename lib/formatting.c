/* A netlist's text in its standard layout. */
#include <stdlib.h>
#include <string.h>

#include "context.h"
#include "language/format.h"
#include "language/parse.h"

/* Parses, so that a text with mistakes is told and left alone. */
static anb_status check(anb_context *context, const char *path, const char *text, size_t length) {
    anb__arena arena = ANB__ARENA_EMPTY;
    anb__report report = {.arena = &arena};
    anb__names names = {.arena = &arena};
    jmp_buf escape;
    volatile anb_status status = ANB_MEMORY;
    if (!setjmp(escape)) {
        arena.escape = &escape;
        char *copy = anb__arena_text(&arena, text, length);
        uint32_t source = anb__add_source(&report, path, copy, (uint32_t)length);
        anb__parse(&report, &names, &arena, source);
        anb_status found = report.errors ? ANB_INVALID : ANB_OK;
        status = anb__context_take(context, &report);
        if (status == ANB_OK) status = found;
    }
    anb__arena_free(&arena);
    return status;
}

anb_status anb_format(anb_context *context, const char *path, const char *text, size_t length, char **out,
                      size_t *out_length) {
    anb__text layout = {0};
    *out = NULL;
    *out_length = 0;
    anb__context_begin(context);
    if (length >= UINT32_MAX) return ANB_INVALID;
    anb_status status = check(context, path, text, length);
    if (status != ANB_OK) return status;
    anb__format(text, (uint32_t)length, &layout);
    anb__text_char(&layout, '\0');
    if (layout.failed) {
        anb__text_free(&layout);
        return ANB_MEMORY;
    }
    *out = layout.bytes;
    *out_length = layout.length - 1;
    return ANB_OK;
}

void anb_text_free(char *text) { free(text); }
