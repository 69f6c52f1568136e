/* A whole file in memory. */
#ifndef CLI_INPUT_H
#define CLI_INPUT_H

#include <stddef.h>

/* Reads a file, or standard input where `path` is "-". `text` is to be freed and ends with a
 * NUL that is not counted. Returns an exit status, having said what is wrong. */
int input_read(const char *path, char **text, size_t *length);

#endif
