#include "json.h"

#include <string.h>

#include "quantity.h"

static void json_byte(cli_output *out, char byte) {
    unsigned char c = (unsigned char)byte;
    if (c == '"' || c == '\\') {
        output_char(out, '\\');
        output_char(out, byte);
    } else if (c < 0x20) {
        output_format(out, "\\u%04x", c);
    } else {
        output_char(out, byte);
    }
}

void json_text(cli_output *out, const char *text) {
    output_char(out, '"');
    for (; *text; text++) json_byte(out, *text);
    output_char(out, '"');
}

void json_number(cli_output *out, double value) {
    char text[NUMBER_SIZE];
    output_write(out, text, anb_number_write(value, text));
}

void csv_text(cli_output *out, const char *text) {
    if (!strpbrk(text, ",\"\r\n")) {
        output_text(out, text);
        return;
    }
    output_char(out, '"');
    for (; *text; text++) {
        if (*text == '"') output_char(out, '"');
        output_char(out, *text);
    }
    output_char(out, '"');
}
