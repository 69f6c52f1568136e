/* The standard layout: the same tokens and comments, other blanks and line ends. */
#ifndef ANB_LANGUAGE_FORMAT_H
#define ANB_LANGUAGE_FORMAT_H

#include "base/text.h"

/* Lays out a text that the parser has found no fault with. One statement stands on one line as far as it
 * fits, blocks are indented by four, one blank line at most stands between statements, comments stay with
 * what they stand beside. */
void anb__format(const char *text, uint32_t length, anb__text *out);

#endif
