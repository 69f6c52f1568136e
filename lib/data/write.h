/* N-port data as text: Touchstone, JSON, CSV.
 *
 * A form says how; it is checked against what it is to hold before anything is written. Blocks are
 * formatted one by one, each into a buffer of its own, so that several threads can do it at once; the caller
 * puts the beginning, the blocks in order, and the end together.
 */
#ifndef ANB_DATA_WRITE_H
#define ANB_DATA_WRITE_H

#include "base/report.h"
#include "base/text.h"
#include "data/data.h"

typedef enum anb__version { ANB__VERSION_1, ANB__VERSION_1_1, ANB__VERSION_2, ANB__VERSION_2_1 } anb__version;

/* What is written, and how. */
typedef struct anb__form {
    anb_output_kind kind;
    anb__version version;
    anb_format_kind format;
    const char *unit; /* "Hz", "kHz", "MHz", "GHz" */
    int unit_shift;   /* of the decimal point from hertz to it */
    int digits;       /* 0: shortest */
    uint32_t ports;
    uint64_t points;
    const double *reference; /* [ports], ohm */
    const char *title, *source;
    const char *const *names; /* [ports] */
} anb__form;

/* Takes over what `options` ask for (all but the references, which the caller has resolved) and refuses what
 * the version cannot hold. False, reported, where it does. */
bool anb__form_check(anb__report *report, const anb_write_options *options, anb__form *form);

void anb__form_begin(const anb__form *form, anb__text *text);
/* `data` are S at the form's references. `first` is the index of the block's first point. False where a
 * number is not finite. */
bool anb__form_block(const anb__form *form, const anb_data *data, uint64_t first, anb__text *text);
/* Frequencies once more, for a form that lists them apart (JSON): after the blocks, in order. */
bool anb__form_lists_frequencies(const anb__form *form);
void anb__form_frequencies(const anb__form *form, const double *hz, uint64_t first, uint64_t count,
                           anb__text *text);
/* The end, or that of a text that had to be broken off. */
void anb__form_end(const anb__form *form, bool complete, anb__text *text);

/* Of the forms (internal): one number of the form, with a blank or comma before it by the caller. */
void anb__put_frequency(const anb__form *form, double hz, anb__text *text);

#endif
