/* Where a statement may end: shared by the parser and the formatter. */
#ifndef ANB_LANGUAGE_READER_H
#define ANB_LANGUAGE_READER_H

#include "token.h"

/* A line end after this token may end a statement. */
bool anb__may_end(const char *text, anb__token token);

/* A statement goes on with this token, even on a new line. */
bool anb__goes_on(const char *text, anb__token token);

#endif
