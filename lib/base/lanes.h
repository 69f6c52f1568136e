/* Lanes: one point of work in each element of a vector register.
 *
 * Points are taken in groups of ANB__LANES = 8. A complex quantity of one group is 16
 * doubles, re[8] then im[8] (two cache lines), whatever the register's width; the kernels
 * step through it in vectors of 8 (AVX-512), 4 (AVX2) or 2 (plain) doubles. A file of kernels is
 * written once and compiled for each instruction set, with ANB__KERNEL(name) for its names.
 *
 * Only the files of kernels include this header.
 */
#ifndef ANB_BASE_LANES_H
#define ANB_BASE_LANES_H

#include <stdint.h>
#include <string.h>

#include "base/group.h"

#if defined(__AVX512F__) && defined(__AVX512DQ__)
#include <immintrin.h>
#define ANB__WIDTH 8
#define ANB__KERNEL(name) anb__##name##_avx512
#elif defined(__AVX2__) && defined(__FMA__)
#include <immintrin.h>
#define ANB__WIDTH 4
#define ANB__KERNEL(name) anb__##name##_avx2
#else
#define ANB__WIDTH 2
#define ANB__KERNEL(name) anb__##name##_plain
#endif

typedef double anb__vec __attribute__((vector_size(ANB__WIDTH * 8)));
typedef int64_t anb__ivec __attribute__((vector_size(ANB__WIDTH * 8)));

enum { ANB__VECTORS = ANB__LANES / ANB__WIDTH }; /* of one part of one group */

static inline anb__vec anb__load(const double *from) {
    anb__vec out;
    memcpy(&out, from, sizeof out);
    return out;
}
static inline void anb__store(double *to, anb__vec value) { memcpy(to, &value, sizeof value); }
static inline anb__vec anb__all(double value) { return (anb__vec){0} + value; }

/* a*b + c and c - a*b, fused where the machine can. */
static inline anb__vec anb__fma(anb__vec a, anb__vec b, anb__vec c) {
#if ANB__WIDTH == 8
    return (anb__vec)_mm512_fmadd_pd((__m512d)a, (__m512d)b, (__m512d)c);
#elif ANB__WIDTH == 4
    return (anb__vec)_mm256_fmadd_pd((__m256d)a, (__m256d)b, (__m256d)c);
#else
    return a * b + c;
#endif
}
static inline anb__vec anb__fnma(anb__vec a, anb__vec b, anb__vec c) {
#if ANB__WIDTH == 8
    return (anb__vec)_mm512_fnmadd_pd((__m512d)a, (__m512d)b, (__m512d)c);
#elif ANB__WIDTH == 4
    return (anb__vec)_mm256_fnmadd_pd((__m256d)a, (__m256d)b, (__m256d)c);
#else
    return c - a * b;
#endif
}

static inline anb__vec anb__vsqrt(anb__vec a) {
#if ANB__WIDTH == 8
    return (anb__vec)_mm512_sqrt_pd((__m512d)a);
#elif ANB__WIDTH == 4
    return (anb__vec)_mm256_sqrt_pd((__m256d)a);
#else
    return (anb__vec){__builtin_sqrt(a[0]), __builtin_sqrt(a[1])};
#endif
}

/* mask (all ones or zeros) ? a : b */
static inline anb__vec anb__select(anb__ivec mask, anb__vec a, anb__vec b) {
    return (anb__vec)((mask & (anb__ivec)a) | (~mask & (anb__ivec)b));
}
static inline anb__vec anb__vabs(anb__vec a) {
    return (anb__vec)((anb__ivec)a & (INT64_MAX + (anb__ivec){0}));
}
/* The larger; b where one of them is not a number. */
static inline anb__vec anb__vmax(anb__vec a, anb__vec b) { return anb__select(a > b, a, b); }

/* One bit for each lane whose mask is set, lane 0 lowest. */
static inline unsigned anb__bits(anb__ivec mask) {
#if ANB__WIDTH == 8
    return (unsigned)_mm512_movepi64_mask((__m512i)mask);
#elif ANB__WIDTH == 4
    return (unsigned)_mm256_movemask_pd((__m256d)mask);
#else
    return (unsigned)((mask[0] & 1) | (mask[1] & 2));
#endif
}

/* The nearest whole number, halves to even; for |a| < 2^51. */
static inline anb__vec anb__vround(anb__vec a) {
    anb__vec magic = anb__all(6755399441055744.0); /* 1.5 * 2^52 */
    return (a + magic) - magic;
}

#endif
