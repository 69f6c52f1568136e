/* Random networks with every kind of part and every option, from a seed. */
#ifndef TEST_PROPERTY_GENERATOR_H
#define TEST_PROPERTY_GENERATOR_H

#include "network/network.h"

/* What a network may hold. */
typedef enum sort_of_network {
    ANY_PARTS,        /* everything */
    PASSIVE_PARTS,    /* nothing active, nothing negative, nothing negated */
    RECIPROCAL_PARTS, /* everything reciprocal */
    LOSSLESS_PARTS    /* reciprocal or not, but without losses */
} sort_of_network;

enum { MOST_NODES = 60, MOST_PARTS = 160, MOST_PORTS = 8, MOST_ARGUMENTS = 8, POINTS = 8 };

typedef struct sample {
    anb__network network;
    anb__placed parts[MOST_PARTS];
    anb__branch branches[MOST_PARTS * 4];
    anb__argument arguments[MOST_PARTS * MOST_ARGUMENTS];
    anb__port ports[MOST_PORTS];
    uint32_t argument_count;
    double hz[POINTS]; /* a third of them at hard places; the first is 0 in some */
} sample;

/* How often each kind of part and each option has been made. */
typedef struct counts {
    unsigned kinds[ANB__PART_KIND_COUNT], options[ANB__ARG_COUNT], hard_points, zero_hertz, negated;
} counts;

uint64_t random_bits(uint64_t *state); /* SplitMix64: Steele, Lea and Flood 2014 */
double random_share(uint64_t *state);  /* 0 .. 1 */

/* The network of that seed. */
void make_sample(uint64_t seed, sort_of_network sort, sample *out, counts *tally);
/* One part of a kind with random arguments on branches from nodes 1, 2, ... to ground. */
void make_single(uint64_t seed, anb__part_kind kind, sample *out, counts *tally);

#endif
