/* Touchstone, versions 1, 1.1, 2.0 and 2.1. */
#include <stdlib.h>
#include <string.h>

#include "data/form.h"

enum { PAIRS_A_LINE = 4 };

static bool is_version_2(const anb__form *form) { return form->version >= ANB__VERSION_2; }

/* Comments hold printable ASCII: everything else becomes a question mark. */
static void put_printable(const char *string, anb__text *text) {
    for (; *string; string++) {
        unsigned char byte = (unsigned char)*string;
        if ((byte & 0xC0) == 0x80) continue; /* the rest of a letter that has its mark already */
        anb__text_char(text, byte >= 0x20 && byte <= 0x7E ? (char)byte : '?');
    }
}

static void put_comment(const char *label, const char *what, anb__text *text) {
    if (!*what) return;
    anb__text_string(text, "! ");
    anb__text_string(text, label);
    put_printable(what, text);
    anb__text_char(text, '\n');
}

static void put_comments(const anb__form *form, anb__text *text) {
    put_comment("", form->title, text);
    put_comment("from ", form->source, text);
    for (uint32_t k = 0; k < form->ports; k++) {
        anb__text_string(text, "! port ");
        anb__text_integer(text, k + 1);
        anb__text_string(text, ": ");
        put_printable(form->names[k], text);
        anb__text_char(text, '\n');
    }
}

static void put_option_line(const anb__form *form, anb__text *text) {
    static const char *const formats[] = {" S RI R ", " S MA R ", " S DB R "};
    anb__text_string(text, "# ");
    anb__text_string(text, form->unit);
    anb__text_string(text, formats[form->format]);
    uint32_t count = form->version == ANB__VERSION_1_1 ? form->ports : 1;
    for (uint32_t k = 0; k < count; k++) {
        if (k) anb__text_char(text, ' ');
        anb__text_number(text, form->reference[k]);
    }
    anb__text_char(text, '\n');
}

static void put_keyword(const char *keyword, uint64_t value, anb__text *text) {
    anb__text_string(text, keyword);
    anb__text_integer(text, value);
    anb__text_char(text, '\n');
}

static void put_keywords(const anb__form *form, anb__text *text) {
    put_keyword("[Number of Ports] ", form->ports, text);
    if (form->ports == 2) anb__text_string(text, "[Two-Port Data Order] 21_12\n");
    put_keyword("[Number of Frequencies] ", form->points, text);
    anb__text_string(text, "[Reference]");
    for (uint32_t k = 0; k < form->ports; k++) {
        anb__text_char(text, ' ');
        anb__text_number(text, form->reference[k]);
    }
    anb__text_string(text, "\n[Matrix Format] Full\n[Network Data]\n");
}

void anb__touchstone_begin(const anb__form *form, anb__text *text) {
    if (is_version_2(form))
        anb__text_string(text, form->version == ANB__VERSION_2 ? "[Version] 2.0\n" : "[Version] 2.1\n");
    put_comments(form, text);
    put_option_line(form, text);
    if (is_version_2(form)) put_keywords(form, text);
}

/* The order of one point's pairs: all on one line, 11 21 12 22, for two ports; else by rows, four to a line.
 */
static char *put_matrix(const anb_data *data, const anb__pair_text *pairs, char *to) {
    uint32_t n = data->ports;
    for (uint32_t row = 0; row < n; row++)
        for (uint32_t column = 0; column < n; column++) {
            bool breaks = n > 2 && (column ? column % PAIRS_A_LINE == 0 : row > 0);
            const anb__pair_text *pair =
                &pairs[n == 2 ? anb__element(data, column, row) : anb__element(data, row, column)];
            *to++ = breaks ? '\n' : ' ';
            memcpy(to, pair->bytes, sizeof pair->bytes);
            to += pair->length;
        }
    *to++ = '\n';
    return to;
}

bool anb__touchstone_block(const anb__form *form, const anb_data *data, anb__text *text) {
    size_t n = data->ports, most = n * n * (sizeof(anb__pair_text) + 1) + 2;
    anb__pair_text *pairs = malloc(data->elements * sizeof *pairs);
    bool finite = true;
    text->failed = text->failed || !pairs;
    for (uint64_t k = 0; k < data->points && finite && !text->failed; k++) {
        anb__put_frequency(form, data->frequencies[k], text);
        char *to = anb__text_room(text, most);
        finite = anb__format_elements(form, data, k, ' ', pairs);
        if (to) text->length += (size_t)(put_matrix(data, pairs, to) - to);
    }
    free(pairs);
    return finite;
}

void anb__touchstone_end(const anb__form *form, bool complete, anb__text *text) {
    if (!complete)
        anb__text_string(text, "! incomplete\n");
    else if (is_version_2(form))
        anb__text_string(text, "[End]\n");
}
