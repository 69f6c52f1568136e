#include "base/text.h"

#include <stdlib.h>
#include <string.h>

#include "base/number.h"

enum { FIRST_CAPACITY = 256, INTEGER_SIZE = 20 };

static bool enlarge(anb__text *text, size_t size) {
    size_t capacity = text->capacity ? text->capacity : FIRST_CAPACITY;
    while (!text->failed && capacity - text->length < size) {
        text->failed = capacity > SIZE_MAX / 2;
        capacity *= 2;
    }
    char *bytes = text->failed ? NULL : realloc(text->bytes, capacity);
    if (!bytes) {
        text->failed = true;
        return false;
    }
    text->bytes = bytes;
    text->capacity = capacity;
    return true;
}

char *anb__text_room(anb__text *text, size_t size) {
    if (text->failed) return NULL;
    if (text->capacity - text->length < size && !enlarge(text, size)) return NULL;
    return text->bytes + text->length;
}

void anb__text_bytes(anb__text *text, const char *bytes, size_t length) {
    char *to = anb__text_room(text, length);
    if (!to || !length) return;
    memcpy(to, bytes, length);
    text->length += length;
}

void anb__text_string(anb__text *text, const char *string) { anb__text_bytes(text, string, strlen(string)); }

void anb__text_char(anb__text *text, char byte) { anb__text_bytes(text, &byte, 1); }

void anb__text_integer(anb__text *text, uint64_t value) {
    char digits[INTEGER_SIZE];
    int first = INTEGER_SIZE;
    do digits[--first] = (char)('0' + value % 10);
    while (value /= 10);
    anb__text_bytes(text, digits + first, (size_t)(INTEGER_SIZE - first));
}

void anb__text_number(anb__text *text, double value) {
    char *to = anb__text_room(text, ANB__NUMBER_SIZE);
    if (to) text->length += anb__number_write(value, to);
}

void anb__text_free(anb__text *text) {
    free(text->bytes);
    *text = (anb__text){0};
}
