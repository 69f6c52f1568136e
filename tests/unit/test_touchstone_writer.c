/* The writer: every version, unit, format and layout, and what it refuses. Rules W1 and the like are those of
 * the Touchstone format as the project reads it: one line for two ports, four pairs a line beyond. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <math.h>
#include <string.h>

#include "base/number.h"
#include "data/write.h"

enum { MOST_PORTS = 5 };

static const char *const names[MOST_PORTS] = {"in", "out", "third", "fourth", "fifth"};
static const double alike[MOST_PORTS] = {50, 50, 50, 50, 50};
static const double unlike[MOST_PORTS] = {50, 75, 100, 25, 12.5};

/* One file that is written, and what there was to say of it. */
typedef struct sheet {
    anb__arena arena;
    anb__report report;
    anb__form form;
    anb_data *data;
    anb__text text;
} sheet;

/* S(to, from) at a point is 0.<to><from> - (point + 0.5) j, both indices from 1; S(2, 1) at the first point
 * is 0.21 - 0.5j. Frequencies are 1.5 GHz, 2.5 GHz, ... */
static double real_part(uint32_t to, uint32_t from) { return (10 * (to + 1) + from + 1) / 100.0; }

static void set_s(anb_data *data, uint64_t point, size_t to, size_t from, double re, double im) {
    size_t e = anb__element(data, to, from);
    double *at = data->s + (point / ANB__LANES * data->elements + e) * ANB__GROUP + point % ANB__LANES;
    at[0] = re;
    at[ANB__LANES] = im;
}

static anb_data *sample_data(uint32_t ports, uint64_t points, bool symmetric) {
    anb_data *data = anb__data_new(ports, points, symmetric);
    assert_non_null(data);
    for (uint64_t k = 0; k < points; k++) {
        data->frequencies[k] = 1e9 * ((double)k + 1.5);
        for (uint32_t to = 0; to < ports; to++)
            for (uint32_t from = 0; from < (symmetric ? to + 1 : ports); from++)
                set_s(data, k, to, from, real_part(to, from), -(double)k - 0.5);
    }
    return data;
}

static void sheet_begin(sheet *s, uint32_t ports, uint64_t points, bool symmetric, const double *reference) {
    memset(s, 0, sizeof *s);
    s->report.arena = &s->arena;
    s->data = sample_data(ports, points, symmetric);
    s->form = (anb__form){
        .ports = ports, .points = points, .reference = reference, .title = "", .source = "", .names = names};
}

static void sheet_end(sheet *s) {
    anb__text_free(&s->text);
    anb_data_free(s->data);
    anb__arena_free(&s->arena);
}

/* Beginning, one block, end. False where the block is. */
static bool write_sheet(sheet *s, const anb_write_options *options) {
    s->text.length = 0;
    assert_true(anb__form_check(&s->report, options, &s->form));
    anb__form_begin(&s->form, &s->text);
    bool finite = anb__form_block(&s->form, s->data, 0, &s->text);
    if (anb__form_lists_frequencies(&s->form))
        anb__form_frequencies(&s->form, s->data->frequencies, 0, s->data->points, &s->text);
    anb__form_end(&s->form, true, &s->text);
    assert_false(s->text.failed);
    anb__text_char(&s->text, '\0');
    return finite;
}

static void gives(sheet *s, const anb_write_options *options, const char *want) {
    assert_true(write_sheet(s, options));
    assert_string_equal(s->text.bytes, want);
}

static void ends_with(sheet *s, const anb_write_options *options, const char *want) {
    assert_true(write_sheet(s, options));
    size_t length = strlen(s->text.bytes), tail = strlen(want);
    assert_true(length >= tail);
    assert_string_equal(s->text.bytes + length - tail, want);
}

static void refuses(sheet *s, const anb_write_options *options, const char *code, const char *text,
                    const char *hint) {
    assert_false(anb__form_check(&s->report, options, &s->form));
    const anb__diagnostic *d = s->report.last;
    assert_non_null(d);
    assert_string_equal(d->code, code);
    assert_string_equal(d->text, text);
    if (hint)
        assert_string_equal(d->hint, hint);
    else
        assert_null(d->hint);
    assert_int_equal(d->severity, ANB_ERROR);
}

/* ---- layouts ------------------------------------------------------------------------------------ */

#define PORTS_2 "! port 1: in\n! port 2: out\n"
#define PORTS_3 PORTS_2 "! port 3: third\n"
#define PORTS_5 PORTS_3 "! port 4: fourth\n! port 5: fifth\n"

static void one_port(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 2, false, alike);
    gives(&s, &(anb_write_options){0},
          "! port 1: in\n# Hz S RI R 50\n1.5e+09 0.11 -0.5\n2.5e+09 0.11 -1.5\n");
    sheet_end(&s);
}

static void two_ports(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 2, false, alike);
    gives(&s, &(anb_write_options){0},
          PORTS_2 "# Hz S RI R 50\n"
                  "1.5e+09 0.11 -0.5 0.21 -0.5 0.12 -0.5 0.22 -0.5\n"
                  "2.5e+09 0.11 -1.5 0.21 -1.5 0.12 -1.5 0.22 -1.5\n");
    sheet_end(&s);
}

static void three_ports(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 3, 2, false, alike);
    gives(&s, &(anb_write_options){0},
          PORTS_3 "# Hz S RI R 50\n"
                  "1.5e+09 0.11 -0.5 0.12 -0.5 0.13 -0.5\n"
                  "0.21 -0.5 0.22 -0.5 0.23 -0.5\n"
                  "0.31 -0.5 0.32 -0.5 0.33 -0.5\n"
                  "2.5e+09 0.11 -1.5 0.12 -1.5 0.13 -1.5\n"
                  "0.21 -1.5 0.22 -1.5 0.23 -1.5\n"
                  "0.31 -1.5 0.32 -1.5 0.33 -1.5\n");
    sheet_end(&s);
}

static void five_ports(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 5, 1, false, alike);
    gives(&s, &(anb_write_options){0},
          PORTS_5 "# Hz S RI R 50\n"
                  "1.5e+09 0.11 -0.5 0.12 -0.5 0.13 -0.5 0.14 -0.5\n0.15 -0.5\n"
                  "0.21 -0.5 0.22 -0.5 0.23 -0.5 0.24 -0.5\n0.25 -0.5\n"
                  "0.31 -0.5 0.32 -0.5 0.33 -0.5 0.34 -0.5\n0.35 -0.5\n"
                  "0.41 -0.5 0.42 -0.5 0.43 -0.5 0.44 -0.5\n0.45 -0.5\n"
                  "0.51 -0.5 0.52 -0.5 0.53 -0.5 0.54 -0.5\n0.55 -0.5\n");
    sheet_end(&s);
}

/* The triangle is kept once and written twice, in every layout. */
static void symmetric(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 1, true, alike);
    ends_with(&s, &(anb_write_options){0}, "R 50\n1.5e+09 0.11 -0.5 0.21 -0.5 0.21 -0.5 0.22 -0.5\n");
    sheet_end(&s);
    sheet_begin(&s, 3, 1, true, alike);
    ends_with(&s, &(anb_write_options){0},
              "R 50\n1.5e+09 0.11 -0.5 0.21 -0.5 0.31 -0.5\n"
              "0.21 -0.5 0.22 -0.5 0.32 -0.5\n0.31 -0.5 0.32 -0.5 0.33 -0.5\n");
    sheet_end(&s);
    sheet_begin(&s, 5, 1, true, alike);
    ends_with(&s, &(anb_write_options){0}, "\n0.51 -0.5 0.52 -0.5 0.53 -0.5 0.54 -0.5\n0.55 -0.5\n");
    assert_non_null(
        strstr(s.text.bytes, "R 50\n1.5e+09 0.11 -0.5 0.21 -0.5 0.31 -0.5 0.41 -0.5\n0.51 -0.5\n"));
    sheet_end(&s);
}

/* More points than a group holds. */
static void many_points(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 2 * ANB__LANES + 3, false, alike);
    ends_with(&s, &(anb_write_options){0}, "\n1.85e+10 0.11 -17.5\n1.95e+10 0.11 -18.5\n");
    sheet_end(&s);
}

/* ---- versions ------------------------------------------------------------------------------------- */

static void version_1_1(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 3, 1, false, unlike);
    assert_true(write_sheet(&s, &(anb_write_options){.version = "1.1"}));
    assert_non_null(strstr(s.text.bytes, "\n# Hz S RI R 50 75 100\n1.5e+09 0.11"));
    assert_null(strchr(s.text.bytes, '['));
    sheet_end(&s);
}

static void version_2(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 1, false, unlike);
    const char *want = "[Version] 2.0\n" PORTS_2 "# Hz S RI R 50\n"
                       "[Number of Ports] 2\n[Two-Port Data Order] 21_12\n[Number of Frequencies] 1\n"
                       "[Reference] 50 75\n[Matrix Format] Full\n[Network Data]\n"
                       "1.5e+09 0.11 -0.5 0.21 -0.5 0.12 -0.5 0.22 -0.5\n[End]\n";
    gives(&s, &(anb_write_options){0}, want); /* what unlike references take */
    gives(&s, &(anb_write_options){.version = "2"}, want);
    gives(&s, &(anb_write_options){.version = "2.0"}, want);
    assert_true(write_sheet(&s, &(anb_write_options){.version = "2.1"}));
    assert_memory_equal(s.text.bytes, "[Version] 2.1\n", 14);
    assert_string_equal(s.text.bytes + 14, want + 14);
    sheet_end(&s);
}

static void version_2_of_three_ports(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 3, 2, false, unlike);
    gives(&s, &(anb_write_options){.version = "2.1", .unit = "GHz"},
          "[Version] 2.1\n" PORTS_3 "# GHz S RI R 50\n"
          "[Number of Ports] 3\n[Number of Frequencies] 2\n"
          "[Reference] 50 75 100\n[Matrix Format] Full\n[Network Data]\n"
          "1.5 0.11 -0.5 0.12 -0.5 0.13 -0.5\n0.21 -0.5 0.22 -0.5 0.23 -0.5\n0.31 -0.5 0.32 -0.5 0.33 -0.5\n"
          "2.5 0.11 -1.5 0.12 -1.5 0.13 -1.5\n0.21 -1.5 0.22 -1.5 0.23 -1.5\n0.31 -1.5 0.32 -1.5 0.33 -1.5\n"
          "[End]\n");
    sheet_end(&s);
}

static void version_2_of_equal_references(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    gives(&s, &(anb_write_options){.version = "2"},
          "[Version] 2.0\n! port 1: in\n# Hz S RI R 50\n[Number of Ports] 1\n[Number of Frequencies] 1\n"
          "[Reference] 50\n[Matrix Format] Full\n[Network Data]\n1.5e+09 0.11 -0.5\n[End]\n");
    sheet_end(&s);
}

static void refusals(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 1, false, unlike);
    refuses(&s, &(anb_write_options){.version = "1"}, "references",
            "the ports have different references, and version 1 of Touchstone has one for all",
            "`--touchstone 2`, or `--reference 50ohm` to refer all ports to 50 ohm");
    sheet_end(&s);
    sheet_begin(&s, 2, 1, false, alike);
    refuses(&s, &(anb_write_options){.version = "3"}, "version", "there is no Touchstone version `3`",
            "1, 1.1, 2 or 2.1");
    sheet_end(&s);
    sheet_begin(&s, 2, 1, false, alike);
    refuses(&s, &(anb_write_options){.unit = "mhz"}, "frequency-unit", "`mhz` is no unit of frequency",
            "Hz, kHz, MHz or GHz");
    sheet_end(&s);
    sheet_begin(&s, 2, 1, false, alike);
    refuses(&s, &(anb_write_options){.digits = 18}, "digits", "18 is no number of digits: 1 to 17", NULL);
    sheet_end(&s);
    sheet_begin(&s, 2, 1, false, alike);
    refuses(&s, &(anb_write_options){.digits = -1}, "digits", "-1 is no number of digits: 1 to 17", NULL);
    sheet_end(&s);
}

/* ---- units, formats, digits --------------------------------------------------------------------------- */

static void units(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    ends_with(&s, &(anb_write_options){.unit = "Hz"}, "# Hz S RI R 50\n1.5e+09 0.11 -0.5\n");
    ends_with(&s, &(anb_write_options){.unit = "kHz"}, "# kHz S RI R 50\n1500000 0.11 -0.5\n");
    ends_with(&s, &(anb_write_options){.unit = "MHz"}, "# MHz S RI R 50\n1500 0.11 -0.5\n");
    ends_with(&s, &(anb_write_options){.unit = "GHz"}, "# GHz S RI R 50\n1.5 0.11 -0.5\n");
    s.data->frequencies[0] = 1234567890.125; /* digits that a division by 1e9 would change */
    ends_with(&s, &(anb_write_options){.unit = "GHz"}, "R 50\n1.234567890125 0.11 -0.5\n");
    sheet_end(&s);
}

static void formats(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 1, false, alike);
    set_s(s.data, 0, 0, 0, 3, 4);
    set_s(s.data, 0, 1, 0, 0, -2);
    set_s(s.data, 0, 0, 1, -0.1, 0);
    set_s(s.data, 0, 1, 1, 0, 0);
    ends_with(&s, &(anb_write_options){.format = ANB_RI}, "S RI R 50\n1.5e+09 3 4 0 -2 -0.1 0 0 0\n");
    /* atan(4/3) = 53.13010235 deg, 20 log10 5 = 13.97940009, 20 log10 2 = 6.020599913: elementary */
    ends_with(&s, &(anb_write_options){.format = ANB_MA, .digits = 10},
              "S MA R 50\n1.5e+09 5 53.13010235 2 -90 0.1 180 0 0\n");
    ends_with(&s, &(anb_write_options){.format = ANB_DB, .digits = 10},
              "S DB R 50\n1.5e+09 13.97940009 53.13010235 6.020599913 -90 -20 180 -9999 0\n");
    sheet_end(&s);
}

/* Zero is exact with either sign of its parts. */
static void zeros(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    set_s(s.data, 0, 0, 0, -0.0, -0.0);
    ends_with(&s, &(anb_write_options){.format = ANB_DB}, "R 50\n1.5e+09 -9999 0\n");
    ends_with(&s, &(anb_write_options){.format = ANB_MA}, "R 50\n1.5e+09 0 0\n");
    sheet_end(&s);
}

static void digits(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    set_s(s.data, 0, 0, 0, 2.0 / 3, -1.0 / 3);
    s.data->frequencies[0] = 1234567891;
    ends_with(&s, &(anb_write_options){.digits = 1}, "R 50\n1234567891 0.7 -0.3\n");
    ends_with(&s, &(anb_write_options){.digits = 4}, "R 50\n1234567891 0.6667 -0.3333\n");
    ends_with(&s, &(anb_write_options){.digits = 0},
              "R 50\n1234567891 0.6666666666666666 -0.3333333333333333\n");
    ends_with(&s, &(anb_write_options){.digits = 17},
              "R 50\n1234567891 0.66666666666666663 -0.33333333333333331\n");
    sheet_end(&s);
}

/* Doubles of all sizes come back bit for bit. */
static void round_trip(void **state) {
    sheet s;
    uint64_t bits = 88172645463325252u;
    (void)state;
    enum { POINTS = 500 };
    sheet_begin(&s, 1, POINTS, false, alike);
    double want[POINTS][2];
    for (unsigned k = 0; k < 2 * POINTS; k++) {
        bits ^= bits << 13, bits ^= bits >> 7, bits ^= bits << 17; /* Marsaglia 2003, xorshift */
        double *value = &want[k / 2][k % 2];
        memcpy(value, &bits, sizeof bits);
        if (!isfinite(*value)) *value = 0.1;
        if (k % 2) set_s(s.data, k / 2, 0, 0, want[k / 2][0], want[k / 2][1]);
    }
    assert_true(write_sheet(&s, &(anb_write_options){0}));
    const char *at = strstr(s.text.bytes, "R 50\n") + 5;
    for (unsigned k = 0; k < POINTS; k++) {
        double got[3];
        for (int i = 0; i < 3; i++) {
            bool negative = *at == '-';
            size_t length = anb__number_read(at + negative, strlen(at) - negative, &got[i]);
            assert_true(length > 0);
            if (negative) got[i] = -got[i];
            at += negative + length;
            assert_int_equal(*at++, i < 2 ? ' ' : '\n');
        }
        assert_true(got[0] == s.data->frequencies[k]);
        assert_true(got[1] == want[k][0]);
        assert_true(got[2] == want[k][1]);
    }
    assert_int_equal(*at, '\0');
    sheet_end(&s);
}

/* ---- comments, and what is not a number ----------------------------------------------------------- */

static void comments(void **state) {
    static const char *const port[] = {"gr\xC3\xBC\xC3\x9F"};
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    s.form.title = "50 \xCE\xA9\tfilter\n# Hz S RI R 1\x7F~";
    s.form.source = "dir/\xF0\x9F\x93\xA1.anab";
    s.form.names = port;
    gives(&s, &(anb_write_options){0},
          "! 50 ??filter?# Hz S RI R 1?~\n! from dir/?.anab\n! port 1: gr??\n# Hz S RI R 50\n"
          "1.5e+09 0.11 -0.5\n");
    for (const char *at = s.text.bytes; *at; at++) assert_true(*at == '\n' || (*at >= 0x20 && *at <= 0x7E));
    sheet_end(&s);
}

static void incomplete(void **state) {
    static const char *const versions[] = {"1", "1.1", "2", "2.1"};
    (void)state;
    for (size_t i = 0; i < sizeof versions / sizeof *versions; i++) {
        sheet s;
        sheet_begin(&s, 1, 1, false, alike);
        assert_true(anb__form_check(&s.report, &(anb_write_options){.version = versions[i]}, &s.form));
        anb__form_end(&s.form, false, &s.text);
        anb__text_char(&s.text, '\0');
        assert_string_equal(s.text.bytes, "! incomplete\n");
        sheet_end(&s);
    }
}

static void not_finite(void **state) {
    static const double wrong[] = {(double)NAN, (double)INFINITY, -(double)INFINITY};
    static const anb_output_kind kinds[] = {ANB_TOUCHSTONE, ANB_JSON, ANB_CSV};
    (void)state;
    for (size_t kind = 0; kind < 3; kind++)
        for (size_t i = 0; i < 3; i++)
            for (int part = 0; part < 2; part++) {
                sheet s;
                anb_write_options options = {.kind = kinds[kind]};
                sheet_begin(&s, 2, 10, true, alike);
                assert_true(write_sheet(&s, &options));
                set_s(s.data, 9, 1, 0, part ? 0 : wrong[i], part ? wrong[i] : 0);
                assert_false(write_sheet(&s, &options));
                options.format = ANB_DB;
                assert_false(write_sheet(&s, &options));
                sheet_end(&s);
            }
}

/* A size beyond the greatest double, of finite parts, has no magnitude to write. */
static void magnitude_overflows(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, false, alike);
    set_s(s.data, 0, 0, 0, 1.5e308, 1.5e308);
    assert_true(write_sheet(&s, &(anb_write_options){.format = ANB_RI}));
    assert_false(write_sheet(&s, &(anb_write_options){.format = ANB_MA}));
    assert_false(write_sheet(&s, &(anb_write_options){.format = ANB_DB}));
    sheet_end(&s);
}

/* ---- JSON and CSV ----------------------------------------------------------------------------------- */

static void json(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 2, false, unlike);
    s.form.title = "a \"b\" \\ \x01 \xCE\xA9";
    gives(&s, &(anb_write_options){.kind = ANB_JSON},
          "{\n \"title\": \"a \\\"b\\\" \\\\ \\u0001 \xCE\xA9\",\n \"version\": \"2.0\",\n \"ports\": 2,\n"
          " \"port_names\": [\"in\", \"out\"],\n \"parameter\": \"S\",\n \"format\": \"RI\",\n"
          " \"reference_ohm\": [50, 75],\n \"noise\": null,\n \"mixed_mode_order\": null,\n"
          " \"warnings\": [],\n \"matrices\": [\n"
          "  [[[0.11,-0.5],[0.12,-0.5]],[[0.21,-0.5],[0.22,-0.5]]],\n"
          "  [[[0.11,-1.5],[0.12,-1.5]],[[0.21,-1.5],[0.22,-1.5]]]],\n"
          " \"frequencies_hz\": [1.5e+09, 2.5e+09]\n}\n");
    sheet_end(&s);
}

/* Blocks after the first go on with a comma. */
static void json_blocks(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 1, 1, true, alike);
    assert_true(anb__form_check(&s.report, &(anb_write_options){.kind = ANB_JSON}, &s.form));
    assert_true(anb__form_block(&s.form, s.data, 0, &s.text));
    assert_true(anb__form_block(&s.form, s.data, 1, &s.text));
    anb__form_frequencies(&s.form, s.data->frequencies, 0, 1, &s.text);
    anb__form_frequencies(&s.form, s.data->frequencies, 1, 1, &s.text);
    anb__form_end(&s.form, false, &s.text);
    anb__text_char(&s.text, '\0');
    assert_string_equal(s.text.bytes, "\n  [[[0.11,-0.5]]],\n  [[[0.11,-0.5]]]],\n"
                                      " \"frequencies_hz\": [1.5e+09, 1.5e+09\n! incomplete\n");
    sheet_end(&s);
}

static void csv(void **state) {
    sheet s;
    (void)state;
    sheet_begin(&s, 2, 2, false, unlike);
    gives(&s, &(anb_write_options){.kind = ANB_CSV},
          "frequency_hz,s_1_1_re,s_1_1_im,s_1_2_re,s_1_2_im,s_2_1_re,s_2_1_im,s_2_2_re,s_2_2_im\n"
          "1.5e+09,0.11,-0.5,0.12,-0.5,0.21,-0.5,0.22,-0.5\n"
          "2.5e+09,0.11,-1.5,0.12,-1.5,0.21,-1.5,0.22,-1.5\n");
    sheet_end(&s);
    sheet_begin(&s, 2, 1, true, alike);
    ends_with(&s, &(anb_write_options){.kind = ANB_CSV},
              "_im\n1.5e+09,0.11,-0.5,0.21,-0.5,0.21,-0.5,0.22,-0.5\n");
    sheet_end(&s);
}

/* Their keys and headers say hertz, real and imaginary part: neither unit nor format changes that. */
static void other_forms_are_in_hertz(void **state) {
    static const anb_output_kind kinds[] = {ANB_JSON, ANB_CSV};
    (void)state;
    for (size_t i = 0; i < 2; i++) {
        sheet plain, asked;
        sheet_begin(&plain, 2, 1, false, alike);
        sheet_begin(&asked, 2, 1, false, alike);
        assert_true(write_sheet(&plain, &(anb_write_options){.kind = kinds[i]}));
        gives(&asked, &(anb_write_options){.kind = kinds[i], .unit = "GHz", .format = ANB_MA},
              plain.text.bytes);
        sheet_end(&plain);
        sheet_end(&asked);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(one_port),
                                       cmocka_unit_test(two_ports),
                                       cmocka_unit_test(three_ports),
                                       cmocka_unit_test(five_ports),
                                       cmocka_unit_test(symmetric),
                                       cmocka_unit_test(many_points),
                                       cmocka_unit_test(version_1_1),
                                       cmocka_unit_test(version_2),
                                       cmocka_unit_test(version_2_of_three_ports),
                                       cmocka_unit_test(version_2_of_equal_references),
                                       cmocka_unit_test(refusals),
                                       cmocka_unit_test(units),
                                       cmocka_unit_test(formats),
                                       cmocka_unit_test(zeros),
                                       cmocka_unit_test(digits),
                                       cmocka_unit_test(round_trip),
                                       cmocka_unit_test(comments),
                                       cmocka_unit_test(incomplete),
                                       cmocka_unit_test(not_finite),
                                       cmocka_unit_test(magnitude_overflows),
                                       cmocka_unit_test(json),
                                       cmocka_unit_test(json_blocks),
                                       cmocka_unit_test(csv),
                                       cmocka_unit_test(other_forms_are_in_hertz)};
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
