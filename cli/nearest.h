/* The nearest of some names to a mistyped one. */
#ifndef CLI_NEAREST_H
#define CLI_NEAREST_H

#include <stddef.h>

typedef struct cli_nearest {
    const char *wanted; /* as it was typed */
    const char *name;   /* the best so far, or NULL */
    size_t distance;
} cli_nearest;

cli_nearest nearest_to(const char *wanted);
/* Offers a name; it is kept if it is nearer than all before, and near enough to be meant. */
void nearest_offer(cli_nearest *search, const char *name);

#endif
