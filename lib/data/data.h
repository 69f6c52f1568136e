/* N-port data: S of a number of ports at a number of points.
 *
 * Points lie in groups of ANB__LANES, as the kernels compute them (base/group.h): element e of S in group g
 * is at s[(g * elements + e) * ANB__GROUP], re[8] then im[8], one for each point of the group. Elements are
 * the lower triangle by rows (to >= from: to*(to+1)/2 + from) if the data are symmetric, else all, to*ports +
 * from. The last group is padded.
 */
#ifndef ANB_DATA_DATA_H
#define ANB_DATA_DATA_H

#include "anabranch.h"
#include "base/complex.h"
#include "base/group.h"

struct anb_data {
    uint32_t ports;
    uint64_t points;
    bool symmetric;
    size_t elements;     /* of S that are kept */
    double *frequencies; /* [points], Hz */
    double *s;
    anb__complex *reference; /* [ports], ohm */
};

/* S is not set. NULL when memory is gone. */
anb_data *anb__data_new(uint32_t ports, uint64_t points, bool symmetric);

static inline size_t anb__element(const anb_data *data, size_t to, size_t from) {
    if (!data->symmetric) return to * data->ports + from;
    return to >= from ? to * (to + 1) / 2 + from : from * (from + 1) / 2 + to;
}

static inline anb__complex anb__s_at(const anb_data *data, uint64_t point, size_t element) {
    const double *at =
        data->s + (point / ANB__LANES * data->elements + element) * ANB__GROUP + point % ANB__LANES;
    return anb__cx(at[0], at[ANB__LANES]);
}

#endif
