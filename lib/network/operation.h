/* What can be calculated: one list of operations, for constants, for values that depend on
 * the frequency (network/program.h), and for their limits at 0 Hz.
 *
 * Numbers are in base units; angles are in turns. An operation on two operands that has only one
 * leaves `b` alone.
 */
#ifndef ANB_NETWORK_OPERATION_H
#define ANB_NETWORK_OPERATION_H

#include "base/series.h"

typedef enum anb__operation {
    ANB__ADD, ANB__SUBTRACT, ANB__MULTIPLY, ANB__DIVIDE, ANB__RAISE, ANB__NEGATE,
    ANB__SQRT, ANB__ABS,
    ANB__EXP, ANB__EXP_TURNS,                    /* of a plain number; of j times an angle */
    ANB__LN, ANB__LOG10,
    ANB__SIN, ANB__COS, ANB__TAN,                /* of radians */
    ANB__SIN_TURNS, ANB__COS_TURNS, ANB__TAN_TURNS,
    ANB__ASIN, ANB__ACOS, ANB__ATAN, ANB__ATAN2, /* in turns */
    ANB__MIN, ANB__MAX, ANB__ROUND, ANB__FLOOR, ANB__CEIL,
    ANB__REAL, ANB__IMAG, ANB__CONJ, ANB__ARG,   /* ARG in turns */
    ANB__AMPLITUDE, ANB__DECIBEL,
    ANB__OPERATION_COUNT
} anb__operation;

/* Why an operation has no result. */
typedef enum anb__trouble {
    ANB__FINE,
    ANB__BY_ZERO,
    ANB__NEGATIVE_ROOT,      /* also a power of a negative number that is not whole */
    ANB__NEGATIVE_LOGARITHM,
    ANB__LOGARITHM_OF_ZERO,
    ANB__OUTSIDE_ONE,        /* asin and acos beyond -1 .. 1 */
    ANB__NOT_REAL,           /* a complex number where the operation takes real ones */
    ANB__NOT_FINITE
} anb__trouble;

/* The result; finite where the answer is ANB__FINE, else untouched. */
anb__trouble anb__operate(anb__operation operation, anb__complex a, anb__complex b, anb__complex *out);

/* The same in series around 0 Hz; false where the result has none. */
bool anb__operate_series(anb__operation operation, const anb__series *a, const anb__series *b,
                         anb__series *out);

#endif
