/* Shortest text of a double: R. Giulietti, *The Schubfach way to render doubles*, 2020 (figure 7). */
#include <math.h>
#include <stdbool.h>
#include <string.h>

#include "base/number.h"
#include "base/powers.h"

typedef unsigned __int128 wide;

/* A decimal: digits * 10^exponent. */
typedef struct decimal {
    uint64_t digits;
    int exponent;
} decimal;

/* g * cp / 2^128 with the last bit set where something was cut off. */
static inline uint64_t round_to_odd(const anb__power *g, uint64_t cp) {
    wide x = (wide)g->lo * cp, y = (wide)g->hi * cp + (uint64_t)(x >> 64);
    return (uint64_t)(y >> 64) | ((uint64_t)y > 1);
}

static decimal shortest(uint64_t fraction, unsigned biased) {
    uint64_t c = biased ? fraction | 1ull << 52 : fraction;
    int q = (biased ? (int)biased : 1) - 1075;
    if (-52 <= q && q <= 0 && !(c & ((1ull << -q) - 1))) return (decimal){c >> -q, 0};
    bool even = !(c & 1), closer = !fraction && biased > 1;
    int k = (q * 1262611 - (closer ? 524031 : 0)) >> 22;
    int h = q + anb__floor_log2_pow10(-k) + 1;
    const anb__power *g = &anb__powers[-k - ANB__LEAST_POWER];
    uint64_t lower = round_to_odd(g, (4 * c - 2 + closer) << h) + !even;
    uint64_t v = round_to_odd(g, (4 * c) << h);
    uint64_t upper = round_to_odd(g, (4 * c + 2) << h) - !even;
    uint64_t s = v / 4;
    /* one digit less if exactly one of the two neighbours with a zero at the end is inside; chosen without a
     * branch, which nothing could predict */
    uint64_t tens = s / 10;
    bool tens_below = lower <= 40 * tens, tens_above = 40 * tens + 40 <= upper;
    bool below = lower <= 4 * s, above = 4 * s + 4 <= upper;
    uint64_t middle = 4 * s + 2;
    bool nearest = v > middle || (v == middle && (s & 1));
    uint64_t full = s + (below != above ? above : nearest), less = tens + tens_above;
    bool is_less = s >= 10 && tens_below != tens_above;
    return (decimal){is_less ? less : full, k + is_less};
}

/* ---- digits ------------------------------------------------------------------------------- */

static const char pairs[201] =
    "0001020304050607080910111213141516171819202122232425262728293031323334353637383940414243444546474849"
    "5051525354555657585960616263646566676869707172737475767778798081828384858687888990919293949596979899";

/* Eight digits with leading zeros, all at once: halves of four digits, then pairs, then single ones, each
 * step a multiplication by the inverse in fields of one word. */
static inline void put_eight(uint32_t n, char *to) {
    uint64_t x = n / 10000 | (uint64_t)(n % 10000) << 32;
    uint64_t hundreds = (x * 10486 >> 20) & 0x7F0000007Fu;
    x = hundreds | (x - 100 * hundreds) << 16;
    uint64_t tens = (x * 103 >> 10) & 0x000F000F000F000Fu;
    x = (tens | (x - 10 * tens) << 8) + 0x3030303030303030u;
#if __BYTE_ORDER__ != __ORDER_LITTLE_ENDIAN__
    x = __builtin_bswap64(x);
#endif
    memcpy(to, &x, sizeof x);
}

/* Zeros at the end of 17 digits, the first of which is none. */
static inline int trailing_zeros(const char *digits) {
    int zeros = 0;
    for (const char *at = digits + 9; zeros < 16; at -= 8, zeros += 8) {
        uint64_t x;
        memcpy(&x, at, sizeof x);
        x ^= 0x3030303030303030u;
#if __BYTE_ORDER__ != __ORDER_LITTLE_ENDIAN__
        x = __builtin_bswap64(x);
#endif
        if (x) return zeros + __builtin_clzll(x) / 8;
    }
    return zeros;
}

enum { MOST_DIGITS = 17 };

static inline int count_digits(uint64_t n) {
    static const uint64_t powers[20] = {0,
                                        10,
                                        100,
                                        1000,
                                        10000,
                                        100000,
                                        1000000,
                                        10000000,
                                        100000000,
                                        1000000000,
                                        10000000000,
                                        100000000000,
                                        1000000000000,
                                        10000000000000,
                                        100000000000000,
                                        1000000000000000,
                                        10000000000000000,
                                        100000000000000000,
                                        1000000000000000000,
                                        10000000000000000000u};
    int guess = ((64 - __builtin_clzll(n | 1)) * 1233) >> 12; /* log10(2) */
    return guess + (n >= powers[guess]);
}

/* The digits of n < 10^17 at the end of a field of 17, zeros before them. */
static inline void put_seventeen(uint64_t n, char *to) {
    uint64_t high = n / 100000000;
    put_eight((uint32_t)(n % 100000000), to + 9);
    put_eight((uint32_t)(high % 100000000), to + 1);
    to[0] = (char)('0' + high / 100000000);
}

static inline size_t put_exponent(int exponent, char *to) {
    unsigned size = (unsigned)(exponent < 0 ? -exponent : exponent);
    to[0] = 'e';
    to[1] = exponent < 0 ? '-' : '+';
    if (size < 100) {
        memcpy(to + 2, pairs + 2 * size, 2);
        return 4;
    }
    to[2] = (char)('0' + size / 100);
    memcpy(to + 3, pairs + 2 * (size % 100), 2);
    return 5;
}

/* `count` digits, the first of which stands for 10^(point-1). */
static size_t lay_out(const char *digits, int count, int point, char *to) {
    int plain = point > count ? point : point > 0 ? count + 1 - (point == count) : count + 2 - point;
    int spread = count + (count > 1) + (point - 1 > 99 || point - 1 < -99 ? 5 : 4);
    if (plain > spread) {
        to[0] = digits[0];
        to[1] = '.';
        memcpy(to + 2, digits + 1, (size_t)count - 1);
        size_t length = count > 1 ? (size_t)count + 1 : 1;
        return length + put_exponent(point - 1, to + length);
    }
    if (point <= 0) {
        to[0] = '0';
        to[1] = '.';
        memset(to + 2, '0', (size_t)-point);
        memcpy(to + 2 - point, digits, (size_t)count);
        return (size_t)plain;
    }
    if (point >= count) {
        memcpy(to, digits, (size_t)count);
        memset(to + count, '0', (size_t)(point - count));
        return (size_t)plain;
    }
    memcpy(to, digits, (size_t)point);
    to[point] = '.';
    memcpy(to + point + 1, digits + point, (size_t)(count - point));
    return (size_t)plain;
}

/* A number below 1 of few leading zeros, the most frequent case: all 17 digits are copied, whatever their
 * count. */
static inline size_t lay_out_small(const char *digits, int count, int point, char *to) {
    memcpy(to, "0.000", 5);
    memcpy(to + 2 - point, digits, MOST_DIGITS);
    return (size_t)(count + 2 - point);
}

/* A whole number beyond 2^53 in plain digits: all of them are written, not zeros. */
static size_t put_whole(double size, char *to) {
    wide n = (wide)size;
    char digits[40];
    int count = 0;
    for (; n; n /= 10) digits[count++] = (char)('0' + (int)(n % 10));
    for (int i = 0; i < count; i++) to[i] = digits[count - 1 - i];
    return (size_t)count;
}

static size_t put_special(double value, char *to) {
    const char *word = isnan(value) ? "nan" : "inf";
    memcpy(to, word, 3);
    return 3;
}

size_t anb__number_write(double value, char *buffer) {
    uint64_t bits;
    memcpy(&bits, &value, sizeof bits);
    char *to = buffer;
    if (bits >> 63) *to++ = '-';
    bits &= INT64_MAX;
    if (!bits) {
        *to++ = '0';
        return (size_t)(to - buffer);
    }
    unsigned biased = (unsigned)(bits >> 52);
    if (biased == 0x7FF) return (size_t)(to - buffer) + put_special(value, to);
    decimal d = shortest(bits & ((1ull << 52) - 1), biased);
    char digits[2 * MOST_DIGITS];
    put_seventeen(d.digits, digits);
    int first = MOST_DIGITS - count_digits(d.digits), last = MOST_DIGITS - trailing_zeros(digits);
    int count = last - first, point = MOST_DIGITS - first + d.exponent;
    if (point <= 0 && point >= -2)
        return (size_t)(to - buffer) + lay_out_small(digits + first, count, point, to);
    size_t length = lay_out(digits + first, count, point, to);
    if (fabs(value) >= 9007199254740992.0 && (int)length == point) length = put_whole(fabs(value), to);
    return (size_t)(to - buffer) + length;
}

size_t anb__number_write_shifted(double value, int shift, char *buffer) {
    char plain[ANB__NUMBER_SIZE], digits[ANB__NUMBER_SIZE];
    size_t length = anb__number_write(value, plain), i = plain[0] == '-', to = 0;
    int count = 0, point = 0, exponent = 0;
    bool after_point = false;
    for (; i < length && plain[i] != 'e'; i++) {
        if (plain[i] == '.')
            after_point = true;
        else if (count || plain[i] != '0') {
            digits[count++] = plain[i];
            point += !after_point;
        } else {
            point -= after_point;
        }
    }
    if (!shift || !count || !isfinite(value)) {
        memcpy(buffer, plain, length);
        return length;
    }
    for (size_t k = i + 2; k < length; k++) exponent = 10 * exponent + (plain[k] - '0');
    if (i < length && plain[i + 1] == '-') exponent = -exponent;
    while (count > 1 && digits[count - 1] == '0') count--;
    if (plain[0] == '-') buffer[to++] = '-';
    return to + lay_out(digits, count, point + exponent + shift, buffer + to);
}

/* ---- a given number of digits ------------------------------------------------------------------ */

enum { LIMBS = 40, LIMB = 1000000000 }; /* nine decimal digits each: 2^1074 needs 36 */

/* The exact value as limbs of nine digits before and after the point. */
typedef struct exact {
    uint32_t whole[LIMBS], part[LIMBS * 4];
    int wholes, parts;
} exact;

static void expand(double size, exact *e) {
    int exponent;
    double mantissa = frexp(size, &exponent);
    uint64_t c = (uint64_t)ldexp(mantissa, 53);
    exponent -= 53;
    memset(e, 0, sizeof *e);
    uint64_t whole = exponent >= 0 ? c : exponent > -64 ? c >> -exponent : 0;
    for (; whole; whole /= LIMB) e->whole[e->wholes++] = (uint32_t)(whole % LIMB);
    for (int i = 0; i < exponent; i++) {
        uint32_t carry = 0;
        for (int k = 0; k < e->wholes; k++) {
            uint32_t twice = 2 * e->whole[k] + carry;
            carry = twice >= LIMB;
            e->whole[k] = twice - (carry ? LIMB : 0);
        }
        if (carry) e->whole[e->wholes++] = 1;
    }
    if (exponent >= 0) return;
    /* the fraction, bit by bit from the lowest: halve and take the bit in at the top */
    for (int i = 0; i < -exponent; i++) {
        uint64_t rest = i < 64 ? c >> i & 1 : 0;
        for (int k = 0; k < e->parts || (rest && k < 4 * LIMBS); k++) {
            uint64_t here = rest * LIMB + e->part[k];
            e->part[k] = (uint32_t)(here / 2);
            rest = here % 2;
            if (k >= e->parts) e->parts = k + 1;
        }
    }
}

enum { ROOM = 9 * LIMBS * 5 };

/* All the digits without leading zeros; *point is the place of the decimal point in them. */
static int all_digits(const exact *e, char *digits, int *point) {
    int count = 0;
    *point = 0;
    for (int k = e->wholes + e->parts; k-- > 0;) {
        bool before = k >= e->parts;
        uint32_t limb = before ? e->whole[k - e->parts] : e->part[e->parts - 1 - k];
        for (uint32_t unit = LIMB / 10; unit; unit /= 10) {
            char digit = (char)('0' + limb / unit % 10);
            if (!count && digit == '0') {
                *point -= !before;
                continue;
            }
            digits[count++] = digit;
            *point += before;
        }
    }
    return count;
}

/* Rounds to `keep` digits, halves to even. */
static int round_digits(char *digits, int count, int keep, int *point) {
    if (count <= keep) return count;
    bool more = false;
    for (int i = keep + 1; i < count; i++) more = more || digits[i] != '0';
    bool up = digits[keep] > '5' || (digits[keep] == '5' && (more || (digits[keep - 1] - '0') % 2));
    int k = keep;
    while (up && k > 0 && digits[k - 1] == '9') k--;
    if (!up) return keep;
    if (!k) {
        digits[0] = '1';
        ++*point;
        return 1;
    }
    digits[k - 1]++;
    return k;
}

size_t anb__number_write_digits(double value, int digits, int shift, char *buffer) {
    char *to = buffer, list[ROOM];
    exact e;
    int point;
    if (signbit(value)) *to++ = '-';
    if (!isfinite(value)) return (size_t)(to - buffer) + put_special(value, to);
    if (value == 0) {
        *to++ = '0';
        return (size_t)(to - buffer);
    }
    expand(fabs(value), &e);
    int count = all_digits(&e, list, &point);
    count = round_digits(list, count, digits, &point);
    while (count > 1 && list[count - 1] == '0') count--;
    return (size_t)(to - buffer) + lay_out(list, count, point + shift, to);
}
