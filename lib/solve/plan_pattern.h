/* The pattern of the factors, and which elements of the inverse are needed. Everything is in terms of
 * positions in the order of elimination. */
#ifndef ANB_SOLVE_PLAN_PATTERN_H
#define ANB_SOLVE_PLAN_PATTERN_H

#include "solve/order.h"

typedef struct anb__pattern {
    uint32_t size;
    uint32_t *position; /* of an unknown */
    size_t *start;      /* [size + 1] */
    uint32_t *row;      /* below the diagonal of column i: row[start[i] .. start[i+1]), ascending */
} anb__pattern;

/* Elements of the inverse, as sets of pairs of active positions: those from which a path in the elimination
 * tree leads ... down to a port, that is the ports' and their ancestors'. */
typedef struct anb__need {
    uint32_t count;
    uint32_t *active; /* [count] positions, ascending */
    uint32_t *index;  /* [size]: of a position among them, or ANB__NOWHERE */
    uint32_t words;
    uint64_t *wanted;  /* [count][words]: (i, j), j >= i, that are elements of the result */
    uint64_t *needed;  /* the same for those that other elements are computed from */
    uint32_t *targets; /* [count]: how many j > i are wanted or needed */
    double work;       /* complex multiply-adds of Takahashi's recurrence for all rows */
} anb__need;

static inline uint32_t anb__height(const anb__pattern *p, uint32_t i) {
    return (uint32_t)(p->start[i + 1] - p->start[i]);
}

static inline bool anb__has(const uint64_t *set, uint32_t j) { return set[j / 64] >> j % 64 & 1; }

/* `order` gives the order of elimination; positions come from an equivalent one in which the unknowns
 * of one structure stand side by side (a postorder of the elimination tree). */
void anb__pattern_of(anb__arena *work, const anb__graph *graph, const uint32_t *order, anb__pattern *out);

/* `as_sums`: the result is made of sums, so its elements count as needed. False, with `out` undefined, where
 * finding out would take more than `patience` steps. */
bool anb__need_of(anb__arena *work, const anb__system *system, const anb__pattern *pattern, bool as_sums,
                  double patience, anb__need *out);

#endif
