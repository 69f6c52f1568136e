/* Reading a netlist and the files that it includes. */
#ifndef ANB_NETWORK_INCLUDE_H
#define ANB_NETWORK_INCLUDE_H

#include "language/tree.h"

/* Reads and parses every file that `file` includes, and those that they include, and hangs each below
 * its INCLUDE as a FILE. Paths are relative to the file that names them. A file that is included
 * twice hangs in both places as one and the same tree. Mistakes go into the report. */
void anb__read_includes(anb__report *report, anb__names *names, anb__arena *arena, anb__tree *file);

/* The whole of a file; "-" is standard input. NULL where it cannot be read: errno says why. */
char *anb__read_text(anb__arena *arena, const char *path, uint32_t *length);

/* What `errno` says of a file that cannot be read, in words. */
const char *anb__reading_problem(int error);

/* `path` as seen from the file `from`, in the arena. */
const char *anb__path_from(anb__arena *arena, const char *from, const char *path);

#endif
