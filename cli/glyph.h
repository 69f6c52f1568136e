/* Characters as a terminal shows them, whatever the locale: netlists are UTF-8. */
#ifndef CLI_GLYPH_H
#define CLI_GLYPH_H

#include <stddef.h>

typedef struct glyph {
    const char *bytes; /* what to print: control characters and bad UTF-8 become U+FFFD */
    size_t length;     /* of `bytes` */
    size_t taken;      /* bytes of the text that it stands for, 1 or more */
    unsigned width;    /* columns of a terminal: 0, 1 or 2 */
} glyph;

/* The glyph at the start of a text of 1 or more bytes. Bytes 0x80 to 0xBF that belong to no
 * character go with the glyph before them, so that glyphs are counted as columns are. */
glyph glyph_at(const char *text, size_t length);

#endif
