/* Text to the nearest double. The fast way takes the number's first 19 digits times a power of ten of 128
 * bits and looks whether everything within the error of that product rounds alike (after D. Lemire, *Number
 * parsing at a gigabyte per second*, 2021); if not, the decimal is compared with the middle between two
 * doubles in whole numbers. */
#include <math.h>
#include <stdbool.h>
#include <stdint.h>
#include <string.h>

#include "base/number.h"
#include "base/powers.h"

typedef unsigned __int128 wide;

/* What the text says: digits * 10^exponent, `digits` being the first 19 significant ones. */
typedef struct decimal {
    uint64_t digits;
    long exponent;
    bool more;         /* digits that are not zero follow */
    const char *first; /* the first significant digit's byte */
    const char *end;   /* of the digits */
    size_t length;     /* of the text, exponent included */
} decimal;

static bool is_digit(char c) { return c >= '0' && c <= '9'; }

enum { MOST_DIGITS = 19, LARGEST_EXPONENT = 1000000 };

static void take_digit(decimal *d, const char *at, bool after_point, int *count) {
    if (*count == 0 && *at == '0') {
        d->exponent -= after_point;
        return;
    }
    if (*count == 0) d->first = at;
    if (*count < MOST_DIGITS) {
        d->digits = 10 * d->digits + (uint64_t)(*at - '0');
        d->exponent -= after_point;
        ++*count;
    } else {
        d->more = d->more || *at != '0';
        d->exponent += !after_point;
    }
}

static long read_exponent(const char **at, const char *end) {
    const char *c = *at + 1;
    bool minus = c < end && *c == '-';
    long exponent = 0;
    if (c < end && (*c == '-' || *c == '+')) c++;
    if (c >= end || !is_digit(*c)) return 0;
    for (; c < end && is_digit(*c); c++)
        if (exponent < LARGEST_EXPONENT) exponent = 10 * exponent + (*c - '0');
    *at = c;
    return minus ? -exponent : exponent;
}

static decimal scan(const char *text, size_t length) {
    decimal d = {0};
    const char *at = text, *end = text + length;
    int count = 0;
    for (; at < end && is_digit(*at); at++) take_digit(&d, at, false, &count);
    if (end - at > 1 && *at == '.' && is_digit(at[1]))
        for (at++; at < end && is_digit(*at); at++) take_digit(&d, at, true, &count);
    d.end = at;
    if (at == text) return d;
    if (at < end && (*at == 'e' || *at == 'E')) d.exponent += read_exponent(&at, end);
    d.length = (size_t)(at - text);
    return d;
}

/* ---- the fast way ---------------------------------------------------------------------------- */

static double compose(uint64_t mantissa, int exponent) { return ldexp((double)mantissa, exponent); }

/* The double nearest to p * 2^exponent, p of 128 bits with `more` behind it, its top bit set. */
static double round_product(wide p, bool more, int exponent) {
    int top = exponent + 127; /* of the leading bit */
    int keep = top >= -1022 ? 53 : 53 - (-1022 - top);
    if (keep < 0) return 0;
    int drop = 128 - keep;
    uint64_t mantissa = keep ? (uint64_t)(p >> drop) : 0;
    wide rest = keep ? p & (((wide)1 << drop) - 1) : p;
    wide half = (wide)1 << (drop - 1);
    if (rest > half || (rest == half && (more || mantissa & 1))) mantissa++;
    return compose(mantissa, exponent + drop);
}

/* The upper 128 bits of g w, moved so that the top bit is set, and their exponent of two. */
static wide product(const anb__power *g, uint64_t w, int *exponent, bool *more) {
    wide low = (wide)g->lo * w, high = (wide)g->hi * w + (uint64_t)(low >> 64);
    uint64_t rest = (uint64_t)low;
    if (!(high >> 127)) {
        high = high << 1 | rest >> 63;
        rest <<= 1;
        --*exponent;
    }
    *more = rest != 0;
    return high;
}

/* False where the digits that are not looked at could decide. */
static bool read_fast(const decimal *d, double *value) {
    static const double exact[] = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,  1e8,  1e9,  1e10, 1e11,
                                   1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22};
    if (!d->more && d->digits < 1ull << 53 && d->exponent >= -22 && d->exponent <= 22) {
        double digits = (double)d->digits;
        *value = d->exponent < 0 ? digits / exact[-d->exponent] : digits * exact[d->exponent];
        return true;
    }
    if (d->exponent < ANB__LEAST_POWER || d->exponent > 308) {
        *value = d->exponent > 308 ? INFINITY : 0;
        return d->exponent > 308 || d->exponent < -342 - 20;
    }
    int shift = __builtin_clzll(d->digits), k = (int)d->exponent;
    int exponent = anb__floor_log2_pow10(k) - 127 - shift + 64;
    bool more;
    wide p = product(&anb__powers[k - ANB__LEAST_POWER], d->digits << shift, &exponent, &more);
    /* g is too large by less than 1 in 2^128, the digits too small by less than 1 in 2^64 >> shift */
    wide below = 3, above = d->more ? ((wide)1 << (66 + shift)) : 3;
    if ((shift > 58 && d->more) || p + above < p) {
        *value = round_product(p, true, exponent);
        return false;
    }
    double low = round_product(p - below, true, exponent), high = round_product(p + above, true, exponent);
    *value = low;
    return low == high;
}

/* ---- the exact way ------------------------------------------------------------------------------- */

enum { WORDS = 280, KEPT = 800 /* digits; beyond them only whether any is not zero can matter */ };

typedef struct big {
    uint32_t word[WORDS]; /* least first */
    int count;
} big;

static void multiply_add(big *b, uint32_t by, uint32_t plus) {
    uint64_t carry = plus;
    for (int i = 0; i < b->count; i++) {
        carry += (uint64_t)b->word[i] * by;
        b->word[i] = (uint32_t)carry;
        carry >>= 32;
    }
    if (carry) b->word[b->count++] = (uint32_t)carry;
}

static void times_ten(big *b, long power) {
    for (; power >= 9; power -= 9) multiply_add(b, 1000000000, 0);
    for (; power > 0; power--) multiply_add(b, 10, 0);
}

static void times_two(big *b, int power) {
    for (; power >= 31; power -= 31) multiply_add(b, 1u << 31, 0);
    if (power > 0) multiply_add(b, 1u << power, 0);
}

static int compare(const big *a, const big *b) {
    if (a->count != b->count) return a->count < b->count ? -1 : 1;
    for (int i = a->count; i-- > 0;)
        if (a->word[i] != b->word[i]) return a->word[i] < b->word[i] ? -1 : 1;
    return 0;
}

/* All the digits as one number, and the power of ten that goes with it. */
static long read_big(const decimal *d, big *b) {
    int count = 0;
    long point = 0, exponent = d->exponent;
    int first_19 = 0;
    bool sticky = false;
    *b = (big){{0}, 0};
    for (const char *c = d->first; c < d->end; c++) {
        if (*c == '.') continue;
        first_19++;
        if (count < KEPT) {
            multiply_add(b, 10, (uint32_t)(*c - '0'));
            count++;
        } else {
            sticky = sticky || *c != '0';
            point++;
        }
    }
    if (sticky) {
        multiply_add(b, 10, 1);
        count++;
    }
    /* d->exponent belongs to the first 19 digits */
    return exponent - (count - (first_19 < MOST_DIGITS ? first_19 : MOST_DIGITS));
}

/* -1, 0 or 1 as the decimal is below, at or above the middle between `value` and the next double up. */
static int against_middle(const decimal *d, double value) {
    big left, right = {{0}, 0};
    long ten = read_big(d, &left);
    uint64_t bits;
    memcpy(&bits, &value, sizeof bits);
    int biased = (int)(bits >> 52), exponent = (biased ? biased : 1) - 1075;
    uint64_t c = (bits & ((1ull << 52) - 1)) | (biased ? 1ull << 52 : 0);
    uint64_t middle = 2 * c + 1;
    right.word[0] = (uint32_t)middle;
    right.word[1] = (uint32_t)(middle >> 32);
    right.count = right.word[1] ? 2 : 1;
    exponent -= 1;
    if (ten > 0)
        times_ten(&left, ten);
    else
        times_ten(&right, -ten);
    if (exponent > 0)
        times_two(&right, exponent);
    else
        times_two(&left, -exponent);
    return compare(&left, &right);
}

/* From an estimate that may be a few units off to the nearest. */
static double settle(const decimal *d, double estimate) {
    double value = isinf(estimate) ? 1.7976931348623157e308 : estimate;
    for (;;) {
        int side = against_middle(d, value);
        uint64_t bits;
        memcpy(&bits, &value, sizeof bits);
        double above = nextafter(value, INFINITY);
        if (side > 0 || (side == 0 && bits & 1)) {
            if (isinf(above)) return above;
            value = above;
            if (side == 0) return value;
            continue;
        }
        if (value == 0) return value;
        double below = nextafter(value, 0);
        if (against_middle(d, below) >= 0 && !(against_middle(d, below) == 0 && bits & 1)) return value;
        value = below;
    }
}

size_t anb__number_read_scaled(const char *text, size_t length, int shift, double *value) {
    decimal d = scan(text, length);
    if (!d.length) return 0;
    d.exponent += shift;
    if (!d.digits)
        *value = 0;
    else if (!read_fast(&d, value))
        *value = settle(&d, *value);
    return d.length;
}

size_t anb__number_read(const char *text, size_t length, double *value) {
    return anb__number_read_scaled(text, length, 0, value);
}
