/* What the forms share (lib/data only). */
#ifndef ANB_DATA_FORM_H
#define ANB_DATA_FORM_H

#include "base/number.h"
#include "data/write.h"

/* A pair of numbers formatted once: for symmetric data its text stands at two places. */
typedef struct anb__pair_text {
    uint8_t length;
    char bytes[2 * ANB__NUMBER_SIZE];
} anb__pair_text;

static inline size_t anb__put_value(const anb__form *form, double value, char *to) {
    return form->digits ? anb__number_write_digits(value, form->digits, 0, to) : anb__number_write(value, to);
}

/* The texts of all kept elements at a point, with `between` between the two numbers. False where one is not
 * finite. */
bool anb__format_elements(const anb__form *form, const anb_data *data, uint64_t point, char between,
                          anb__pair_text *out);

void anb__touchstone_begin(const anb__form *form, anb__text *text);
bool anb__touchstone_block(const anb__form *form, const anb_data *data, anb__text *text);
void anb__touchstone_end(const anb__form *form, bool complete, anb__text *text);
void anb__json_begin(const anb__form *form, anb__text *text);
bool anb__json_block(const anb__form *form, const anb_data *data, uint64_t first, anb__text *text);
void anb__json_frequencies(const anb__form *form, const double *hz, uint64_t first, uint64_t count,
                           anb__text *text);
void anb__json_end(const anb__form *form, bool complete, anb__text *text);
void anb__csv_begin(const anb__form *form, anb__text *text);
bool anb__csv_block(const anb__form *form, const anb_data *data, anb__text *text);

#endif
