/* Where results go: standard output, or a file that appears whole or not at all. */
#ifndef CLI_OUTPUT_H
#define CLI_OUTPUT_H

#include <stdbool.h>
#include <stddef.h>

#include "anabranch.h"

typedef struct cli_output {
    const char *name;  /* for messages */
    int file;          /* descriptor */
    char *target;      /* the file to appear, its links followed; NULL when written straight on */
    char *temporary;   /* the file beside it that is written */
    char *bytes;       /* what waits to be written */
    size_t used;
    bool written;      /* something has left */
    anb_status status; /* of all writes so far: after the first failure nothing more is written */
    int number;        /* errno of that failure */
} cli_output;

/* Opens a result. NULL and "-" are standard output. A device or a pipe is written straight
 * on; a file is written beside its place. Returns an exit status, having said what is wrong;
 * where that is not STATUS_OK there is nothing to finish. */
int output_open(cli_output *out, const char *path);

/* Adds bytes. An anb_writer: `out` is an output. */
anb_status output_write(void *out, const char *bytes, size_t length);
/* The same for texts, a character, and for a few integers and words. A failure shows at the end. */
void output_text(cli_output *out, const char *text);
void output_char(cli_output *out, char character);
void output_format(cli_output *out, const char *format, ...) __attribute__((format(printf, 2, 3)));

/* What was to be written cannot be had: errno `number`. As a failed write, it shows at the end. */
void output_fail(cli_output *out, int number);

/* Ends it: with STATUS_OK what waits is written and the file appears; with any other
 * it does not appear, and standard output gets a last line `! incomplete` where something has
 * left already. Returns the exit status of the whole, having said what failed here. */
int output_finish(cli_output *out, int status);

/* Whether two paths name one file that exists. */
bool output_same_file(const char *a, const char *b);

#endif
