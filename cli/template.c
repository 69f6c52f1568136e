#include "template.h"

#include <stdlib.h>
#include <string.h>

static bool in_name(char c) {
    return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_';
}

const char *template_next(const char *text, template_name *out) {
    for (; (text = strchr(text, '{')); text++) {
        const char *end = text + 1;
        while (in_name(*end)) end++;
        if (*end != '}' || end == text + 1) continue;
        *out = (template_name){text + 1, (size_t)(end - text - 1)};
        return end + 1;
    }
    return NULL;
}

bool template_is(template_name name, const char *other) {
    return strlen(other) == name.length && !strncmp(name.start, other, name.length);
}

/* Adds a value in the form for a file's name; returns the new end. */
static char *add_value(char *end, const char *value) {
    for (; *value; value++) {
        unsigned char c = (unsigned char)*value;
        if (c == ' ' || c == '\t') continue;
        *end++ = c < 0x20 || c == 0x7F || strchr("/\\:*?\"<>|", c) ? '_' : *value;
    }
    return end;
}

static size_t room_for(const char *text, template_value *value, void *user) {
    size_t size = strlen(text) + 1;
    template_name name;
    while ((text = template_next(text, &name))) size += strlen(value(user, name));
    return size;
}

char *template_fill(const char *text, template_value *value, void *user) {
    char *out = malloc(room_for(text, value, user)), *end = out;
    template_name name;
    if (!out) return NULL;
    for (const char *next; (next = template_next(text, &name)); text = next) {
        size_t before = (size_t)(name.start - 1 - text);
        memcpy(end, text, before);
        end = add_value(end + before, value(user, name));
    }
    strcpy(end, text);
    return out;
}
