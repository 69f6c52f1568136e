#include "quantity.h"

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "anabranch.h"
#include "message.h"
#include "status.h"

/* ---- writing ------------------------------------------------------------------ */

/* The power of ten after an `e`, kept within what any number can use. */
static int read_exponent(const char *text) {
    long value = strtol(text, NULL, 10);
    return value > 9999 ? 9999 : value < -9999 ? -9999 : (int)value;
}

/* Takes a number's text apart: its digits without point and leading zeros, and the power of ten of the
 * first of them. Works on the text, so that no digit is lost. */
static int take_apart(const char *text, char digits[NUMBER_SIZE]) {
    int exponent = -1, count = 0;
    bool point = false;
    for (; *text && *text != 'e' && *text != 'E'; text++) {
        if (*text == '.') point = true;
        else if (*text == '0' && !count) exponent -= point;
        else if (*text >= '0' && *text <= '9' && count < NUMBER_SIZE - 1) {
            digits[count++] = *text;
            exponent += !point;
        }
    }
    while (count > 1 && digits[count - 1] == '0') count--;
    digits[count] = 0;
    return *text ? exponent + read_exponent(text + 1) : exponent;
}

void quantity_write(double value, const char *unit, char text[QUANTITY_SIZE]) {
    static const char *const prefixes[] = {"f", "p", "n", "u", "m", "", "k", "M", "G", "T"};
    enum { NONE = 5, LAST = 9 };
    char number[NUMBER_SIZE], digits[NUMBER_SIZE];
    number[anb_number_write(value < 0 ? -value : value, number)] = 0;
    int exponent = take_apart(number, digits), prefix = NONE;
    while (prefix < LAST && exponent >= 3 * (prefix - NONE + 1)) prefix++;
    while (prefix > 0 && exponent < 3 * (prefix - NONE)) prefix--;
    int before = exponent - 3 * (prefix - NONE) + 1, size = (int)strlen(digits);
    bool plain = before < 1 || before > 3 || size > 20;
    if (!*digits || plain)
        snprintf(text, QUANTITY_SIZE, "%s%s %s", value < 0 ? "-" : "", number, unit);
    else
        snprintf(text, QUANTITY_SIZE, "%s%.*s%.*s%s%s %s%s", value < 0 ? "-" : "", before, digits,
                 before > size ? before - size : 0, "00", size > before ? "." : "",
                 size > before ? digits + before : "", prefixes[prefix], unit);
}

void quantity_write_impedance(const double z[2], char text[2 * QUANTITY_SIZE]) {
    quantity_write(z[0], "ohm", text);
    if (z[1] == 0) return;
    strcat(text, z[1] < 0 ? " - j*" : " + j*");
    quantity_write(z[1] < 0 ? -z[1] : z[1], "ohm", text + strlen(text));
}

/* ---- reading -------------------------------------------------------------------- */

typedef struct unit_prefix {
    const char *name;
    int exponent;
} unit_prefix;

/* As in the language; the second and third are U+03A9 and U+2126. */
static const char *const ohms[] = {"ohm", "\xCE\xA9", "\xE2\x84\xA6"};
static const unit_prefix prefixes[] = {
    {"", 0},          {"f", -15}, {"p", -12}, {"n", -9}, {"u", -6}, {"\xC2\xB5", -6},
    {"\xCE\xBC", -6}, {"m", -3},  {"k", 3},   {"M", 6},  {"G", 9},  {"T", 12},
};

static size_t starts_with(const char *text, const char *word) {
    size_t length = strlen(word);
    return strncmp(text, word, length) ? 0 : length;
}

/* The bytes of a unit of resistance at the start of a text, 0 where there is none. */
static size_t read_unit(const char *text, int *exponent) {
    for (size_t p = 0; p < sizeof prefixes / sizeof *prefixes; p++) {
        size_t prefix = starts_with(text, prefixes[p].name);
        if (!prefix && *prefixes[p].name) continue;
        for (size_t i = 0; i < sizeof ohms / sizeof *ohms; i++) {
            size_t length = starts_with(text + prefix, ohms[i]);
            if (length) {
                *exponent = prefixes[p].exponent;
                return prefix + length;
            }
        }
    }
    return 0;
}

static size_t blanks(const char *text) { return strspn(text, " \t"); }

/* Reads one resistance; returns its bytes, 0 where the text is none. The prefix joins the
 * number's exponent before it is read, so that 0.075 kohm is the double nearest to 75. */
static size_t read_resistance(const char *text, double *out) {
    char joined[128];
    double ignored;
    int exponent;
    size_t start = blanks(text), digits = anb_number_read(text + start, strlen(text + start), &ignored);
    size_t at = start + digits + blanks(text + start + digits), size = strcspn(text + start, "eE");
    size_t unit = digits ? read_unit(text + at, &exponent) : 0;
    if (!unit || digits > 100) return 0;
    if (size < digits) exponent += read_exponent(text + start + size + 1);
    else size = digits;
    int length = snprintf(joined, sizeof joined, "%.*se%d", (int)size, text + start, exponent);
    if (anb_number_read(joined, (size_t)length, out) != (size_t)length) return 0;
    at += unit;
    return at + blanks(text + at);
}

int quantity_read_resistances(const char *option, const char *text, double **out, size_t *count) {
    *count = 0;
    *out = malloc((strlen(text) + 1) * sizeof **out);
    if (!*out) {
        message_wrong(NULL, "out of memory");
        return STATUS_MACHINE;
    }
    for (const char *at = text;; at++) {
        double value;
        size_t taken = read_resistance(at, &value);
        if (!taken || (at[taken] && at[taken] != ',') || !(value > 0)) break;
        (*out)[(*count)++] = value;
        at += taken;
        if (!*at) return STATUS_OK;
    }
    free(*out);
    *out = NULL;
    return message_wrong("50ohm, or one for each port: 50ohm,75ohm",
                         "`--%s` wants positive resistances with their unit, not `%s`", option, text);
}
