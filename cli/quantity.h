/* Quantities as a person writes them, for options and tables. */
#ifndef CLI_QUANTITY_H
#define CLI_QUANTITY_H

#include <stdbool.h>
#include <stddef.h>

enum {
    NUMBER_SIZE = 32, /* what anb_number_write asks for */
    QUANTITY_SIZE = 64
};

/* A value with the prefix that leaves 1 to 3 digits before the point, exact: "433.92 MHz". */
void quantity_write(double value, const char *unit, char text[QUANTITY_SIZE]);

/* An impedance, re and im in ohm: "50 ohm", "40 ohm - j*12 ohm". */
void quantity_write_impedance(const double z[2], char text[2 * QUANTITY_SIZE]);

/* Reads resistances with their unit, "50ohm, 0.075 kohm", into a list to be freed. Returns an exit status,
 * having said what is wrong with `option`'s value. */
int quantity_read_resistances(const char *option, const char *text, double **out, size_t *count);

#endif
