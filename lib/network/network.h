/* The expanded network: parts placed on numbered nodes, every value calculated.
 *
 * Every part is a set of branches, each from one node to another, and the equations of the
 * part tie the branches' voltages and currents together (parts/part.h). A part whose second
 * terminals are ground has branches to node 0. `inverse(a)` places a's parts the other way
 * round and marks them `negated`: the same equations with every current's sign turned.
 */
#ifndef ANB_NETWORK_NETWORK_H
#define ANB_NETWORK_NETWORK_H

#include "base/arena.h"
#include "base/complex.h"
#include "base/report.h"
#include "network/catalogue.h"
#include "network/program.h"

typedef struct anb__argument {
    uint8_t name; /* anb__argument_name */
    bool has_at;  /* `value @ at_hz` */
    anb__dimension dimension;
    anb__complex value;           /* in base units: SI, turns, dB */
    double at_hz;
    const anb__program *program;  /* where not NULL: the value, as a function of frequency */
} anb__argument;

typedef struct anb__branch {
    uint32_t plus, minus; /* nodes; 0 is ground */
} anb__branch;

typedef struct anb__placed {
    uint8_t kind; /* anb__part_kind */
    bool negated;
    uint16_t branch_count;
    uint16_t argument_count;
    uint32_t first_branch;          /* in anb__network.branches */
    const anb__argument *arguments; /* only those that are given (or assumed); shared by equal placements */
    anb__span span;                 /* where it is written */
    const char *label;              /* "S1.r", or NULL */
} anb__placed;

typedef struct anb__port {
    const char *name; /* "out[3]" */
    anb__complex z;   /* ohm, real part > 0 */
    uint32_t plus, minus;
    anb__span span;
} anb__port;

typedef enum anb__grid_kind {
    ANB__GRID_POINTS,     /* `count` points, evenly spaced */
    ANB__GRID_STEP,       /* low + step*k */
    ANB__GRID_PER_DECADE, /* `count` points, equal steps of the logarithm */
    ANB__GRID_AT          /* `list` */
} anb__grid_kind;

/* One sweep statement. */
typedef struct anb__grid_part {
    anb__grid_kind kind;
    double low, high, step; /* Hz */
    uint64_t count;
    const double *list; /* AT: `count` frequencies as written */
} anb__grid_part;

/* A label: the parts that it names stand in a row. */
typedef struct anb__label {
    const char *name; /* "S1.r" */
    uint32_t first_part, part_count;
    anb__span span;
} anb__label;

/* An incident wave. */
typedef struct anb__drive {
    uint32_t port;
    double watt, phase_turns;
    anb__span span;
} anb__drive;

/* Statements that later steps evaluate, as trees of their own kind: REQUIRE, TUNE, CASES. */
typedef struct anb__kept {
    const struct anb__tree **list;
    uint32_t count, capacity;
} anb__kept;

/* A name with `cases`, and each of its values as text for `name=value`. */
typedef struct anb__case {
    const char *name;
    const char *const *values;
    uint32_t count;
} anb__case;

typedef struct anb__network {
    anb__arena arena; /* everything below lives in it */
    const char *title; /* "" where there is none */
    const char **node_names; /* [node_count]; "" for nodes without a name; node 0 is "ground" */
    uint32_t node_count;
    anb__placed *parts;
    uint32_t part_count;
    anb__branch *branches;
    uint32_t branch_count;
    anb__port *ports;
    uint32_t port_count;
    anb__grid_part *sweeps;
    uint32_t sweep_count;
    anb__label *labels; /* of placements that can be reached by a name */
    uint32_t label_count;
    anb__drive *drives;
    uint32_t drive_count;
    anb__case *case_names; /* those that no replacement has set */
    uint32_t case_count, case_capacity;
    anb__kept requirements, tunes, cases; /* the trees live in their own arena */
    bool needs_sweep; /* a requirement has neither a range nor a frequency of its own */
} anb__network;

/* The argument of a placed part, or NULL where it has none of this name. */
static inline const anb__argument *anb__argument_of(const anb__placed *part, anb__argument_name name) {
    for (uint16_t i = 0; i < part->argument_count; i++)
        if (part->arguments[i].name == name) return &part->arguments[i];
    return NULL;
}

#endif
