/* What the language knows by name: parts with their arguments and terminals, functions,
 * measures. Data only; what a part computes stands in parts/.
 */
#ifndef ANB_NETWORK_CATALOGUE_H
#define ANB_NETWORK_CATALOGUE_H

#include "language/units.h"

typedef enum anb__part_kind {
    ANB__PART_RESISTOR,
    ANB__PART_INDUCTOR,
    ANB__PART_CAPACITOR,
    ANB__PART_IMPEDANCE, /* also a complex resistance in a chain */
    ANB__PART_ADMITTANCE, /* also a conductance */
    ANB__PART_OPEN_STUB,
    ANB__PART_SHORTED_STUB,
    ANB__PART_LINE,
    ANB__PART_LINE_CONSTANTS,
    ANB__PART_TRANSFORMER,
    ANB__PART_ATTENUATOR,
    ANB__PART_PHASE_SHIFT,
    ANB__PART_ISOLATOR,
    ANB__PART_GYRATOR,
    ANB__PART_COUPLED_LINES,
    ANB__PART_COUPLED_INDUCTORS,
    ANB__PART_CIRCULATOR,
    ANB__PART_TRANSCONDUCTANCE,
    ANB__PART_KIND_COUNT
} anb__part_kind;

/* Arguments by name; one name means the same in every part. */
typedef enum anb__argument_name {
    ANB__ARG_R,       /* ohm (resistor, gyrator); ohm/m (line_constants) */
    ANB__ARG_L,       /* H; H/m */
    ANB__ARG_C,       /* F; F/m */
    ANB__ARG_G,       /* S/m */
    ANB__ARG_Z,       /* ohm */
    ANB__ARG_Y,       /* S */
    ANB__ARG_N,       /* turns ratio */
    ANB__ARG_GM,      /* S */
    ANB__ARG_K,       /* coupling, -1 to 1 */
    ANB__ARG_L1, ANB__ARG_L2,
    ANB__ARG_LENGTH,  /* turns at `at_hz`, s, or m: see the argument's dimension */
    ANB__ARG_EVEN, ANB__ARG_ODD, ANB__ARG_EVEN_LENGTH, ANB__ARG_ODD_LENGTH,
    ANB__ARG_Q, ANB__ARG_RESISTANCE, ANB__ARG_SRF, ANB__ARG_ESR, ANB__ARG_ESL, ANB__ARG_CP,
    ANB__ARG_LOSS_TANGENT, ANB__ARG_RATING,
    ANB__ARG_LOSS,    /* dB, or dB/m; the attenuator's too */
    ANB__ARG_PERMITTIVITY, ANB__ARG_VELOCITY_FACTOR,
    ANB__ARG_PHASE,   /* turns, a lag */
    ANB__ARG_COUNT
} anb__argument_name;

/* ---- parts ---------------------------------------------------------------------- */

/* Whether a value of one dimension stands with `@ f`. */
typedef enum anb__at_rule { ANB__AT_NEVER, ANB__AT_MAY, ANB__AT_MUST } anb__at_rule;

typedef struct anb__argument_form {
    anb__dimension dimension;
    uint8_t at; /* anb__at_rule */
} anb__argument_form;

/* What an argument has to keep to; the first five are about real, constant values. */
enum {
    ANB__ABOVE_ZERO = 1,
    ANB__NOT_BELOW_ZERO = 2,
    ANB__NOT_ZERO = 4,
    ANB__WITHIN_ONE = 8,     /* -1 to 1 */
    ANB__WARN_BELOW_ZERO = 16,
    ANB__MAY_COMPLEX = 32,
    ANB__NEEDED = 64,
    ANB__BY_PLACE = 128,     /* may be given without its name, in the order of the table */
    ANB__CONSTANT = 256      /* may not depend on the frequency */
};

enum { ANB__MOST_FORMS = 3, ANB__MOST_TERMINALS = 4 };

typedef struct anb__argument_entry {
    const char *key;
    uint8_t name;      /* anb__argument_name */
    uint8_t excludes;  /* of the arguments with one number, not 0, only one may be given */
    uint16_t rules;
    uint8_t form_count;
    anb__argument_form forms[ANB__MOST_FORMS];
} anb__argument_entry;

/* How the branches of a part lie on its terminals: pairs of indices, ANB__TO_GROUND for ground. */
enum { ANB__TO_GROUND = 255 };
typedef struct anb__layout {
    uint8_t terminal_count, branch_count;
    const char *terminals[ANB__MOST_TERMINALS];
    uint8_t branches[ANB__MOST_TERMINALS][2];
} anb__layout;

typedef struct anb__part_entry {
    const char *name;
    const anb__layout *chain; /* in a chain, or NULL */
    const anb__layout *on;    /* with `on` */
    const anb__argument_entry *arguments;
    uint8_t argument_count;
} anb__part_entry;

extern const anb__part_entry anb__parts[ANB__PART_KIND_COUNT];

/* The part of this name; false where there is none. */
bool anb__find_part(const char *name, anb__part_kind *kind);
/* The argument of this key, or NULL. */
const anb__argument_entry *anb__find_argument(const anb__part_entry *part, const char *key);
/* A part that the language has and this version does not: "microstrip" and its like. */
bool anb__is_later_part(const char *name);
/* Parts that are written like a call and made of other parts: reversed, inverse, repeat; touchstone. */
bool anb__is_composing(const char *name);

/* ---- functions ------------------------------------------------------------------- */

/* How the dimension of a function's result follows from its arguments'. */
typedef enum anb__function_rule {
    ANB__RULE_ROOT,      /* any; the root of its dimension */
    ANB__RULE_KEEP,      /* any; the same */
    ANB__RULE_PLAIN,     /* a plain number; the same */
    ANB__RULE_EXP,       /* a plain number or an angle times j; a plain number */
    ANB__RULE_ANGLE,     /* an angle or a plain number; a plain number */
    ANB__RULE_TO_ANGLE,  /* a plain number; an angle */
    ANB__RULE_ARG,       /* any; an angle */
    ANB__RULE_ATAN2,     /* two of one dimension; an angle */
    ANB__RULE_CHOOSE,    /* one or more of one dimension; the same */
    ANB__RULE_AMPLITUDE, /* dB; a plain number */
    ANB__RULE_DECIBEL,   /* a plain number; dB */
    ANB__RULE_COUNT_OF,  /* a list; a plain number */
    ANB__RULE_PREFERRED  /* any, and the name of a series; the same */
} anb__function_rule;

typedef struct anb__function_entry {
    const char *name;
    uint8_t rule;      /* anb__function_rule */
    uint8_t operation; /* anb__operation; of angles where the rule is EXP or ANGLE: the next but `turns` */
    uint8_t of_turns;  /* the operation on an angle */
    bool real_only;
} anb__function_entry;

const anb__function_entry *anb__find_function(const char *name);

/* ---- measures ---------------------------------------------------------------------- */

typedef struct anb__measure_entry {
    const char *name;
    /* Its arguments: p a port, l a label, n a node or a label, m a measure; the last one may be
     * repeated where a + stands behind it. */
    const char *shape;
    const char *usage; /* "from, to" */
    anb__dimension dimension;
    bool complex;
} anb__measure_entry;

const anb__measure_entry *anb__find_measure(const char *name);

/* ---- all of them ---------------------------------------------------------------------- */

enum { ANB__MOST_NAMES = 96 };

/* The names of parts, functions and measures; returns how many. */
unsigned anb__part_names(const char *names[ANB__MOST_NAMES]);
unsigned anb__function_names(const char *names[ANB__MOST_NAMES]);
unsigned anb__measure_names(const char *names[ANB__MOST_NAMES]);

#endif
