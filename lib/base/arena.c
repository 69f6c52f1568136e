#include "base/arena.h"

#include <stdint.h>
#include <stdlib.h>
#include <string.h>

struct anb__arena_chunk {
    anb__arena_chunk *older;
    size_t size; /* of the whole chunk */
};

enum { ALIGNMENT = 16, FIRST_CHUNK = 4096, LARGEST_STEP = 1 << 20 };
#define HEADER ((sizeof(anb__arena_chunk) + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT)

static void *fail(anb__arena *arena) {
    if (arena->escape) longjmp(*arena->escape, 1);
    return NULL;
}

/* A chunk with room for `size` bytes; chunks double until they are a megabyte. */
static int add_chunk(anb__arena *arena, size_t size) {
    size_t step = arena->total < FIRST_CHUNK ? FIRST_CHUNK : arena->total;
    if (step > LARGEST_STEP) step = LARGEST_STEP;
    if (size > SIZE_MAX - HEADER) return 0;
    if (step < size + HEADER) step = size + HEADER;
    anb__arena_chunk *chunk = calloc(1, step);
    if (!chunk) return 0;
    chunk->older = arena->chunks;
    chunk->size = step;
    arena->chunks = chunk;
    arena->next = (char *)chunk + HEADER;
    arena->end = (char *)chunk + step;
    arena->total += step;
    return 1;
}

void *anb__arena_take(anb__arena *arena, size_t size) {
    if (size > SIZE_MAX - ALIGNMENT) return fail(arena);
    size = (size + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
    if (!arena->next || (size_t)(arena->end - arena->next) < size)
        if (!add_chunk(arena, size)) return fail(arena);
    void *out = arena->next;
    arena->next += size;
    return out;
}

void *anb__arena_grow(anb__arena *arena, void *old, size_t old_size, size_t new_size) {
    size_t held = (old_size + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
    if (old && new_size <= held) return old;
    if (old && (char *)old + held == arena->next && new_size - held <= (size_t)(arena->end - arena->next)) {
        size_t more = (new_size - held + ALIGNMENT - 1) / ALIGNMENT * ALIGNMENT;
        if (more <= (size_t)(arena->end - arena->next)) {
            arena->next += more;
            return old;
        }
    }
    void *out = anb__arena_take(arena, new_size);
    if (out && old_size) memcpy(out, old, old_size);
    return out;
}

char *anb__arena_text(anb__arena *arena, const char *text, size_t length) {
    char *out = anb__arena_take(arena, length + 1);
    if (out && length) memcpy(out, text, length);
    return out;
}

void anb__arena_free(anb__arena *arena) {
    anb__arena_chunk *chunk = arena->chunks;
    while (chunk) {
        anb__arena_chunk *older = chunk->older;
        free(chunk);
        chunk = older;
    }
    jmp_buf *escape = arena->escape;
    *arena = ANB__ARENA_EMPTY;
    arena->escape = escape;
}
