/* Memory that is freed all at once.
 *
 * One arena serves one structure (a tree, a network, a plan). A caller that
 * sets `escape` gets a longjmp to it when memory is gone, so that code which
 * builds trees need not test every allocation; one that leaves it NULL gets
 * NULL back. Everything that such code allocates must then live in an arena,
 * since the jump frees nothing else.
 */
#ifndef ANB_BASE_ARENA_H
#define ANB_BASE_ARENA_H

#include <setjmp.h>
#include <stddef.h>

typedef struct anb__arena_chunk anb__arena_chunk;

typedef struct anb__arena {
    anb__arena_chunk *chunks; /* newest first */
    char *next;               /* first free byte of the newest chunk */
    char *end;
    size_t total;    /* bytes taken from the system */
    jmp_buf *escape; /* where to go when memory is gone, or NULL */
} anb__arena;

#define ANB__ARENA_EMPTY ((anb__arena){0})

/* `size` bytes, all zero, aligned for any type. */
void *anb__arena_take(anb__arena *arena, size_t size);

/* Makes a block of `old_size` bytes `new_size` bytes long; the new part is zero.
 * The block may move. `old` may be NULL when `old_size` is 0. */
void *anb__arena_grow(anb__arena *arena, void *old, size_t old_size, size_t new_size);

/* A copy of `length` bytes with a NUL behind it. */
char *anb__arena_text(anb__arena *arena, const char *text, size_t length);

void anb__arena_free(anb__arena *arena);

#endif
