/* JSON and CSV: hertz, real and imaginary parts. */
#include <stdlib.h>
#include <string.h>

#include "data/form.h"

/* ---- JSON: one object --------------------------------------------------------------------- */

/* A string of the netlist; bytes below 0x20, quotes and backslashes are escaped. */
static void put_json_string(const char *string, anb__text *text) {
    static const char hex[] = "0123456789abcdef";
    anb__text_char(text, '"');
    for (; *string; string++) {
        unsigned char byte = (unsigned char)*string;
        char escape[] = {'\\', 'u', '0', '0', hex[byte >> 4], hex[byte & 15]};
        if (byte < 0x20)
            anb__text_bytes(text, escape, sizeof escape);
        else {
            if (byte == '"' || byte == '\\') anb__text_char(text, '\\');
            anb__text_char(text, (char)byte);
        }
    }
    anb__text_char(text, '"');
}

void anb__json_begin(const anb__form *form, anb__text *text) {
    static const char *const versions[] = {"1.0", "1.1", "2.0", "2.1"};
    anb__text_string(text, "{\n \"title\": ");
    put_json_string(form->title, text);
    anb__text_string(text, ",\n \"version\": \"");
    anb__text_string(text, versions[form->version]);
    anb__text_string(text, "\",\n \"ports\": ");
    anb__text_integer(text, form->ports);
    anb__text_string(text, ",\n \"port_names\": [");
    for (uint32_t k = 0; k < form->ports; k++) {
        if (k) anb__text_string(text, ", ");
        put_json_string(form->names[k], text);
    }
    anb__text_string(text, "],\n \"parameter\": \"S\",\n \"format\": \"RI\",\n \"reference_ohm\": [");
    for (uint32_t k = 0; k < form->ports; k++) {
        if (k) anb__text_string(text, ", ");
        anb__text_number(text, form->reference[k]);
    }
    anb__text_string(
        text, "],\n \"noise\": null,\n \"mixed_mode_order\": null,\n \"warnings\": [],\n \"matrices\": [");
}

static char *put_json_matrix(const anb_data *data, const anb__pair_text *pairs, char *to) {
    for (uint32_t row = 0; row < data->ports; row++) {
        *to++ = row ? ',' : '[';
        for (uint32_t column = 0; column < data->ports; column++) {
            const anb__pair_text *pair = &pairs[anb__element(data, row, column)];
            *to++ = column ? ',' : '[';
            *to++ = '[';
            memcpy(to, pair->bytes, sizeof pair->bytes);
            to += pair->length;
            *to++ = ']';
        }
        *to++ = ']';
    }
    *to++ = ']';
    return to;
}

bool anb__json_block(const anb__form *form, const anb_data *data, uint64_t first, anb__text *text) {
    size_t n = data->ports, most = n * n * (sizeof(anb__pair_text) + 3) + 2 * n + 2;
    anb__pair_text *pairs = malloc(data->elements * sizeof *pairs);
    bool finite = true;
    text->failed = text->failed || !pairs;
    for (uint64_t k = 0; k < data->points && finite && !text->failed; k++) {
        anb__text_string(text, first + k ? ",\n  " : "\n  ");
        char *to = anb__text_room(text, most);
        finite = anb__format_elements(form, data, k, ',', pairs);
        if (to) text->length += (size_t)(put_json_matrix(data, pairs, to) - to);
    }
    free(pairs);
    return finite;
}

void anb__json_frequencies(const anb__form *form, const double *hz, uint64_t first, uint64_t count,
                           anb__text *text) {
    if (!first) anb__text_string(text, "],\n \"frequencies_hz\": [");
    for (uint64_t k = 0; k < count; k++) {
        if (first + k) anb__text_string(text, ", ");
        anb__put_frequency(form, hz[k], text);
    }
}

void anb__json_end(const anb__form *form, bool complete, anb__text *text) {
    (void)form;
    anb__text_string(text, complete ? "]\n}\n" : "\n! incomplete\n");
}

/* ---- CSV: a row for each point -------------------------------------------------------------- */

void anb__csv_begin(const anb__form *form, anb__text *text) {
    anb__text_string(text, "frequency_hz");
    for (uint32_t row = 0; row < form->ports; row++)
        for (uint32_t column = 0; column < form->ports; column++)
            for (int part = 0; part < 2; part++) {
                anb__text_string(text, ",s_");
                anb__text_integer(text, row + 1);
                anb__text_char(text, '_');
                anb__text_integer(text, column + 1);
                anb__text_string(text, part ? "_im" : "_re");
            }
    anb__text_char(text, '\n');
}

bool anb__csv_block(const anb__form *form, const anb_data *data, anb__text *text) {
    anb__pair_text *pairs = malloc(data->elements * sizeof *pairs);
    bool finite = true;
    text->failed = text->failed || !pairs;
    for (uint64_t k = 0; k < data->points && finite && !text->failed; k++) {
        anb__put_frequency(form, data->frequencies[k], text);
        finite = anb__format_elements(form, data, k, ',', pairs);
        for (uint32_t row = 0; row < data->ports; row++)
            for (uint32_t column = 0; column < data->ports; column++) {
                const anb__pair_text *pair = &pairs[anb__element(data, row, column)];
                anb__text_char(text, ',');
                anb__text_bytes(text, pair->bytes, pair->length);
            }
        anb__text_char(text, '\n');
    }
    free(pairs);
    return finite;
}
