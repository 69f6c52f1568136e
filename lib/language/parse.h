/* From text to tree. */
#ifndef ANB_LANGUAGE_PARSE_H
#define ANB_LANGUAGE_PARSE_H

#include "language/tree.h"

/* A source as a FILE. Mistakes go into the report; a statement with one is an ERROR, or has one where the
 * mistake is, so that the names it defines are known all the same. Never NULL. */
anb__tree *anb__parse(anb__report *report, anb__names *names, anb__arena *arena, uint32_t source);

/* `name = value` of the option --set, as a DEFINE. */
anb__tree *anb__parse_override(anb__report *report, anb__names *names, anb__arena *arena, uint32_t source);

/* What follows the word `sweep`, as a SWEEP. */
anb__tree *anb__parse_sweep_override(anb__report *report, anb__names *names, anb__arena *arena,
                                     uint32_t source);

#endif
