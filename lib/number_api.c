#include "anabranch.h"
#include "base/number.h"

size_t anb_number_write(double value, char *buffer) { return anb__number_write(value, buffer); }

size_t anb_number_read(const char *text, size_t length, double *value) {
    return anb__number_read(text, length, value);
}
