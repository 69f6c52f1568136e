/* Writes the table of powers of ten that numbers are converted with: for every exponent k the upper 128 bits
 * of 10^k, rounded up, so that 10^k <= g * 2^(floor(log2 10^k) - 127). Run by the build. */
#include <stdint.h>
#include <stdio.h>
#include <string.h>

enum { LEAST = -342, MOST = 324, WORDS = 80 }; /* 80 words of 32 bits */

typedef struct big {
    uint32_t word[WORDS]; /* least first */
} big;

static void multiply(big *b, uint32_t by) {
    uint64_t carry = 0;
    for (int i = 0; i < WORDS; i++) {
        carry += (uint64_t)b->word[i] * by;
        b->word[i] = (uint32_t)carry;
        carry >>= 32;
    }
}

static uint32_t divide(big *b, uint32_t by) {
    uint64_t rest = 0;
    for (int i = WORDS; i-- > 0;) {
        rest = rest << 32 | b->word[i];
        b->word[i] = (uint32_t)(rest / by);
        rest %= by;
    }
    return (uint32_t)rest;
}

static int bits(const big *b) {
    for (int i = WORDS; i-- > 0;)
        for (int k = 32; k-- > 0;)
            if (b->word[i] >> k & 1) return 32 * i + k + 1;
    return 0;
}

static int bit(const big *b, int at) { return at < 0 ? 0 : b->word[at / 32] >> (at % 32) & 1; }

/* The upper 128 bits; `inexact` says that something follows them. */
static void print_upper(const big *b, int inexact) {
    uint64_t part[2] = {0, 0};
    int count = bits(b);
    for (int i = 0; i < 128; i++) part[i / 64] = part[i / 64] << 1 | (uint64_t)bit(b, count - 1 - i);
    for (int i = 0; i < count - 128; i++) inexact |= bit(b, i);
    if (inexact && !++part[1]) part[0]++;
    printf("    {0x%016llxu, 0x%016llxu},\n", (unsigned long long)part[0], (unsigned long long)part[1]);
}

int main(void) {
    printf("/* Made by powers.c. */\n#include \"base/powers.h\"\n\n"
           "const anb__power anb__powers[%d] = {\n",
           MOST - LEAST + 1);
    for (int k = LEAST; k <= MOST; k++) {
        big b = {{0}};
        int inexact = 0;
        if (k >= 0) {
            b.word[0] = 1;
            for (int i = 0; i < k; i++) multiply(&b, 10);
        } else {
            b.word[WORDS - 1] = 1u << 31;
            for (int i = 0; i < -k; i++) inexact |= divide(&b, 10) != 0;
        }
        print_upper(&b, inexact);
    }
    printf("};\n");
    return 0;
}
