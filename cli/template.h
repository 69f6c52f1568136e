/* Names of files that hold names of cases: "out_{length}.s3p". */
#ifndef CLI_TEMPLATE_H
#define CLI_TEMPLATE_H

#include <stdbool.h>
#include <stddef.h>

/* A name that stands in braces in a template. */
typedef struct template_name {
    const char *start; /* after the brace */
    size_t length;
} template_name;

/* Finds the next `{name}` from `text` on; returns what follows it, or NULL. */
const char *template_next(const char *text, template_name *out);

/* Whether `name` is the one in braces. */
bool template_is(template_name name, const char *other);


/* Gives the value of a name in braces. */
typedef const char *template_value(void *user, template_name name);

/* The template with its values, to be freed; NULL when memory is gone. Blanks in a value are left
 * out, and what should stand in no file name becomes `_`. */
char *template_fill(const char *text, template_value *value, void *user);

#endif
