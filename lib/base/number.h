/* Numbers to text and back, exactly, whatever the locale. */
#ifndef ANB_BASE_NUMBER_H
#define ANB_BASE_NUMBER_H

#include <stddef.h>

enum { ANB__NUMBER_SIZE = 32 }; /* bytes that any number's text fits in */

/* The shortest text that reads back to the same double, of several the closest: plain where that is not
 * longer than with an exponent. Infinities and NaN become `inf`, `-inf`, `nan`. Returns the length; no NUL.
 */
size_t anb__number_write(double value, char *buffer);

/* The same of value * 10^shift: the digits are the value's own, only the point moves. */
size_t anb__number_write_shifted(double value, int shift, char *buffer);

/* With `digits` significant digits (1 to 17), correctly rounded from the exact value, trailing zeros dropped;
 * times 10^shift. */
size_t anb__number_write_digits(double value, int digits, int shift, char *buffer);

/* Reads digits, a point only if a digit follows it, an exponent only if digits follow it; correctly rounded.
 * Returns the bytes read, 0 where no number starts. Overflow gives infinity. */
size_t anb__number_read(const char *text, size_t length, double *value);

/* The double nearest to the number times 10^shift: "3.3" and -12 give what 3.3e-12 gives. */
size_t anb__number_read_scaled(const char *text, size_t length, int shift, double *value);

#endif
