/* A byte buffer that grows. */
#ifndef ANB_BASE_TEXT_H
#define ANB_BASE_TEXT_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

typedef struct anb__text {
    char *bytes;
    size_t length, capacity;
    bool failed; /* memory is gone: what was appended since is lost */
} anb__text;

/* Room for `size` more bytes at the end, for the caller to fill and to count in `length`; NULL when memory is
 * gone. */
char *anb__text_room(anb__text *text, size_t size);
void anb__text_bytes(anb__text *text, const char *bytes, size_t length);
void anb__text_string(anb__text *text, const char *string);
void anb__text_char(anb__text *text, char byte);
void anb__text_integer(anb__text *text, uint64_t value);
void anb__text_number(anb__text *text, double value); /* shortest */
void anb__text_free(anb__text *text);

#endif
