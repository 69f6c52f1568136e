#include "data/data.h"

#include <stdlib.h>

static void *aligned(uint64_t count, size_t size) {
    if (count > SIZE_MAX / size - ANB__ALIGNMENT) return NULL;
    return aligned_alloc(ANB__ALIGNMENT, (count * size / ANB__ALIGNMENT + 1) * ANB__ALIGNMENT);
}

anb_data *anb__data_new(uint32_t ports, uint64_t points, bool symmetric) {
    anb_data *data = calloc(1, sizeof *data);
    if (!data) return NULL;
    size_t n = ports;
    uint64_t groups = (points + ANB__LANES - 1) / ANB__LANES;
    data->ports = ports;
    data->points = points;
    data->symmetric = symmetric;
    data->elements = symmetric ? n * (n + 1) / 2 : n * n;
    data->frequencies = aligned(points, sizeof *data->frequencies);
    data->reference = calloc(n + 1, sizeof *data->reference);
    data->s = groups <= SIZE_MAX / (data->elements + 1)
                  ? aligned(groups * data->elements, ANB__GROUP * sizeof *data->s)
                  : NULL;
    if (data->frequencies && data->reference && data->s) return data;
    anb_data_free(data);
    return NULL;
}

void anb_data_free(anb_data *data) {
    if (!data) return;
    free(data->frequencies);
    free(data->reference);
    free(data->s);
    free(data);
}

size_t anb_data_port_count(const anb_data *data) { return data->ports; }

size_t anb_data_point_count(const anb_data *data) { return (size_t)data->points; }

double anb_data_frequency(const anb_data *data, size_t point) { return data->frequencies[point]; }

void anb_data_s(const anb_data *data, size_t point, size_t to, size_t from, double out[2]) {
    anb__complex s = anb__s_at(data, point, anb__element(data, to, from));
    out[0] = s.re;
    out[1] = s.im;
}

void anb_data_reference(const anb_data *data, size_t port, double out[2]) {
    out[0] = data->reference[port].re;
    out[1] = data->reference[port].im;
}

int anb_data_reciprocal(const anb_data *data) { return data->symmetric; }
