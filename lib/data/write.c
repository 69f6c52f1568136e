#include "data/write.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "data/form.h"

/* ---- what can be refused beforehand --------------------------------------------------------- */

static const anb__span nowhere = {UINT32_MAX, 0, 0};

static bool equal_references(const anb__form *form) {
    for (uint32_t k = 1; k < form->ports; k++)
        if (form->reference[k] != form->reference[0]) return false;
    return true;
}

static bool read_version(anb__report *report, const anb_write_options *options, anb__form *form) {
    static const char *const names[] = {"1", "1.1", "2", "2.1"};
    form->version = equal_references(form) ? ANB__VERSION_1 : ANB__VERSION_2;
    if (!options->version) return true;
    for (int i = 0; i < 4; i++)
        if (!strcmp(options->version, names[i]) || (i == 2 && !strcmp(options->version, "2.0"))) {
            form->version = (anb__version)i;
            return true;
        }
    anb__diagnostic *d =
        anb__error(report, nowhere, "version", "there is no Touchstone version `%s`", options->version);
    anb__add_hint(report, d, "1, 1.1, 2 or 2.1");
    return false;
}

static bool read_unit(anb__report *report, const anb_write_options *options, anb__form *form) {
    static const struct {
        const char *name;
        int shift;
    } units[] = {{"Hz", 0}, {"kHz", -3}, {"MHz", -6}, {"GHz", -9}};
    form->unit = "Hz";
    if (!options->unit) return true;
    for (size_t i = 0; i < sizeof units / sizeof *units; i++)
        if (!strcmp(options->unit, units[i].name)) {
            form->unit = units[i].name;
            form->unit_shift = units[i].shift;
            return true;
        }
    anb__diagnostic *d =
        anb__error(report, nowhere, "frequency-unit", "`%s` is no unit of frequency", options->unit);
    anb__add_hint(report, d, "Hz, kHz, MHz or GHz");
    return false;
}

bool anb__form_check(anb__report *report, const anb_write_options *options, anb__form *form) {
    form->kind = options->kind;
    form->format = options->format;
    form->digits = options->digits;
    if (!read_version(report, options, form) || !read_unit(report, options, form)) return false;
    if (form->kind != ANB_TOUCHSTONE) { /* these have one form: hertz, real and imaginary parts */
        form->format = ANB_RI;
        form->unit = "Hz";
        form->unit_shift = 0;
    }
    if (options->digits < 0 || options->digits > 17) {
        anb__error(report, nowhere, "digits", "%d is no number of digits: 1 to 17", options->digits);
        return false;
    }
    if (form->kind == ANB_TOUCHSTONE && form->version == ANB__VERSION_1 && !equal_references(form)) {
        anb__diagnostic *d =
            anb__error(report, nowhere, "references",
                       "the ports have different references, and version 1 of Touchstone has one for all");
        anb__add_hint(report, d, "`--touchstone 2`, or `--reference 50ohm` to refer all ports to 50 ohm");
        return false;
    }
    return true;
}

/* ---- elements ------------------------------------------------------------------------------------- */

static size_t put_polar(const anb__form *form, anb__complex s, char between, char *to) {
    const double degrees = 57.29577951308232087680;
    double size = anb__cabs(s), angle = degrees * atan2(s.im, s.re);
    if (size == 0) angle = 0;
    if (form->format == ANB_DB) size = size == 0 ? -9999 : 20 * log10(size);
    size_t length = anb__put_value(form, size, to);
    to[length++] = between;
    return length + anb__put_value(form, angle, to + length);
}

static inline size_t put_pair(const anb__form *form, anb__complex s, char between, char *to) {
    if (form->format != ANB_RI) return put_polar(form, s, between, to);
    size_t length = anb__put_value(form, s.re, to);
    to[length++] = between;
    return length + anb__put_value(form, s.im, to + length);
}

bool anb__format_elements(const anb__form *form, const anb_data *data, uint64_t point, char between,
                          anb__pair_text *out) {
    bool finite = true;
    for (size_t e = 0; e < data->elements; e++) {
        anb__complex s = anb__s_at(data, point, e);
        finite = finite && anb__cis_finite(s) && (form->format == ANB_RI || isfinite(anb__cabs(s)));
        out[e].length = (uint8_t)put_pair(form, s, between, out[e].bytes);
    }
    return finite;
}

void anb__put_frequency(const anb__form *form, double hz, anb__text *text) {
    char *to = anb__text_room(text, ANB__NUMBER_SIZE);
    if (to) text->length += anb__number_write_shifted(hz, form->unit_shift, to);
}

/* ---- by kind ------------------------------------------------------------------------------------------ */

void anb__form_begin(const anb__form *form, anb__text *text) {
    if (form->kind == ANB_TOUCHSTONE)
        anb__touchstone_begin(form, text);
    else if (form->kind == ANB_JSON)
        anb__json_begin(form, text);
    else
        anb__csv_begin(form, text);
}

bool anb__form_block(const anb__form *form, const anb_data *data, uint64_t first, anb__text *text) {
    if (form->kind == ANB_TOUCHSTONE) return anb__touchstone_block(form, data, text);
    if (form->kind == ANB_JSON) return anb__json_block(form, data, first, text);
    return anb__csv_block(form, data, text);
}

bool anb__form_lists_frequencies(const anb__form *form) { return form->kind == ANB_JSON; }

void anb__form_frequencies(const anb__form *form, const double *hz, uint64_t first, uint64_t count,
                           anb__text *text) {
    anb__json_frequencies(form, hz, first, count, text);
}

void anb__form_end(const anb__form *form, bool complete, anb__text *text) {
    if (form->kind == ANB_TOUCHSTONE) anb__touchstone_end(form, complete, text);
    if (form->kind == ANB_JSON) anb__json_end(form, complete, text);
}
