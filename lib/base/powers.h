/* Powers of ten to 128 bits, rounded up (made by powers.c when the library is built). */
#ifndef ANB_BASE_POWERS_H
#define ANB_BASE_POWERS_H

#include <stdint.h>

enum { ANB__LEAST_POWER = -342, ANB__MOST_POWER = 324 };

typedef struct anb__power {
    uint64_t hi, lo; /* 10^k <= (hi, lo) * 2^(floor(log2(10^k)) - 127), top bit set */
} anb__power;

extern const anb__power anb__powers[ANB__MOST_POWER - ANB__LEAST_POWER + 1];

static inline int anb__floor_log2_pow10(int k) { return (k * 1741647) >> 19; } /* |k| <= 1233 */

#endif
