/* The expansion's own structures; lib/network/ only. The way through is in expand.c. */
#ifndef ANB_NETWORK_EXPANDER_H
#define ANB_NETWORK_EXPANDER_H

#include "network/expand.h"
#include "network/symbols.h"

enum { ANB__PORT_SPACE = UINT32_MAX }; /* names of ports: `port a: z at n` makes no node `a` */

enum {
    ANB__LIMIT_NESTING = 200,
    ANB__LIMIT_CALLS = 2500, /* of functions of ours in one another: keeps the stack small */
    ANB__LIMIT_PARTS = 1000000,
    ANB__LIMIT_LOOP = 1000000,
    ANB__LIMIT_ROUNDS = 10000000, /* rounds of loops and expansions together */
    ANB__LIMIT_POINTS = 10000000,
    ANB__LIMIT_CASES = 1000,
    ANB__RECENT = 64
};

/* A network or an own kind of part, as it is defined. */
struct anb__definition {
    const anb__name *name;
    const anb__tree *tree;       /* NETWORK or KIND */
    const anb__tree *parameters; /* PARAMETERS */
    const anb__tree *body;       /* BLOCK, or the value */
    uint32_t parameter_count;
    uint32_t order;              /* an own kind sees the values that were defined before it */
    const struct anb__assumed *assumed; /* what holds where an own kind is written */
    bool used;
    bool broken;                 /* the parser could not read it: its uses stay silent */
    uint32_t active;             /* how often we are inside it now */
    anb__definition *next;       /* all of them, in the order of the text */
};

/* One option that later parts get. Newest first. */
typedef struct anb__assumed {
    const struct anb__assumed *next;
    anb__part_kind part;
    anb__argument argument;
} anb__assumed;

typedef struct anb__terminal {
    const anb__name *name; /* NULL where it is given by its place */
    uint32_t node;
    anb__span span;
} anb__terminal;

/* The top level, or a network while it is being placed. */
typedef struct anb__region {
    anb__space *space;
    const anb__definition *definition; /* NULL: the top level */
    const anb__assumed *assumed;
    anb__terminal *ports; /* of a network */
    uint32_t port_count, port_capacity;
} anb__region;

/* The parameters of an own kind of part while its body is evaluated. */
typedef struct anb__frame {
    const anb__definition *definition;
    const anb__value *values;
    uint32_t count; /* known so far */
} anb__frame;

typedef struct anb__node {
    const anb__name *name; /* NULL for one without */
    const anb__space *space;
    anb__span span;   /* where it is first written */
    uint32_t joined;  /* the node that it is one with; itself at the root */
    uint32_t touched; /* by terminals of parts */
    uint32_t ports;   /* by terminals of ports */
    uint32_t written; /* times */
} anb__node;

/* `S1.x`: found once everything is placed. */
typedef struct anb__far_node {
    const anb__name *const *path; /* labels, then the node */
    uint32_t length;
    uint32_t space;
    uint32_t node;
    anb__span span;
    struct anb__far_node *next;
} anb__far_node;

/* A port, a label or a node that a measure or a drive names: looked up at the end. */
typedef struct anb__reference {
    const anb__tree *tree;
    char shape; /* as in anb__measure_entry */
    const anb__name *const *path; /* NULL for a port's number */
    uint32_t length;
    uint32_t drive; /* the drive whose port it is, or UINT32_MAX */
    struct anb__reference *next;
} anb__reference;

/* One item of a chain, ready to be placed. */
typedef struct anb__step {
    const anb__tree *tree;
    const anb__item *item; /* NULL: a node */
    uint32_t node;
} anb__step;

typedef struct anb__expander {
    anb__report *report;
    anb__names *names;
    const anb__replacements *replacements;
    bool *replaced;       /* one for each replacement */
    anb__network *network;
    anb__arena scratch;   /* what lives as long as the expansion */
    anb__names texts;     /* names with an index, "n[3]", in the network's arena */

    anb__symbols symbols;
    anb__definition *definitions, **definitions_end;
    anb__space top_space;
    anb__region top;
    anb__region *region;      /* where we are */
    const anb__frame *frame;  /* the own kind whose body is being evaluated, or NULL */
    anb__space *labels;       /* where labels go */
    anb__space *own;          /* the space of the placement that was just labelled, or NULL */
    bool negated;             /* inside an odd number of `inverse` */
    bool measuring;           /* in a `require`, where measures may stand */
    uint32_t space_count, labelled_spaces, order, making;
    uint32_t nesting, calls, rounds;
    unsigned loop_depth;
    bool halted;              /* a limit was met: nothing more is done */
    bool incomplete;          /* something is missing: no checks of the whole */

    anb__symbol **locals;     /* values of the open loops, innermost last */
    uint32_t local_count, local_capacity;
    const anb__item *recent[ANB__RECENT]; /* parts, so that a loop does not make the same one again */
    anb__step *steps;         /* of the chains that are being placed */
    uint32_t step_count, step_capacity;

    anb__node *nodes;
    uint32_t node_count, node_capacity;
    anb__placed *parts;
    uint32_t part_count, part_capacity;
    anb__branch *branches;
    uint32_t branch_count, branch_capacity;
    anb__port *ports;
    uint32_t port_count, port_capacity;
    anb__label *labels_list;
    uint32_t label_count, label_capacity;
    anb__grid_part *sweeps;
    uint32_t sweep_count, sweep_capacity;
    uint32_t drive_capacity;
    uint64_t points;
    double combinations; /* of cases */
    bool ports_wanted, sweep_wanted; /* such a statement has been met, right or wrong */
    struct anb__shared_arguments *shared; /* equal arguments, see arguments.c */
    uint32_t shared_count, shared_capacity;
    anb__far_node *far_nodes, **far_nodes_end;
    anb__reference *references, **references_end;
    const anb__tree **visited; /* included files */
    uint32_t visited_count, visited_capacity;
    const anb__tree *root;
    bool lost; /* the parser has found mistakes: names may be missing */
    anb__span title_span;
    bool has_title;
} anb__expander;

/* ---- growing arrays (expand.c) ------------------------------------------------------ */

/* Room for one more; returns the array, moved perhaps. */
void *anb__room(anb__arena *arena, void *items, uint32_t count, uint32_t *capacity, size_t size);

/* Counts one round or expansion; false once the limit is met, which is reported. */
bool anb__count_round(anb__expander *x, anb__span span);
/* Goes one level of our own calls deeper; false, reported, at the limit. */
bool anb__enter(anb__expander *x, anb__span span);
static inline void anb__leave(anb__expander *x) { x->calls--; }
/* One level of what the user nests: networks, own kinds, composites. */
bool anb__nest(anb__expander *x, anb__span span);
void anb__report_limit(anb__expander *x, anb__span span, const char *what, const char *limit);

/* ---- texts for messages (words.c) ------------------------------------------------------ */

/* The source text of a span, shortened where it is long. */
const char *anb__quote(anb__expander *x, anb__span span);
/* "a part", "a list", "an impedance in ohm" */
const char *anb__value_phrase(anb__expander *x, const anb__value *value);
/* True once more errors are known than are kept: words for further ones are not worth their time. */
static inline bool anb__is_tired(const anb__expander *x) { return x->report->errors >= ANB__ERROR_LIMIT; }
/* The name of a space that is nearest, of those that are wanted, or NULL. */
const char *anb__near(const anb__expander *x, uint32_t space, const char *name,
                      bool (*wanted)(const anb__symbol *symbol, const void *user), const void *user);
/* A hint at the nearest of some names, where there is one. */
void anb__hint_nearest(anb__expander *x, anb__diagnostic *d, const char *name, const char *nearest);
/* To every error since `last`: where the thing was used in which it lies. */
void anb__add_uses(anb__expander *x, const anb__diagnostic *last, const anb__name *name, const char *how,
                   anb__span span);
/* True where a statement that could not be read may define the name. */
bool anb__maybe_defined(const anb__expander *x, const anb__name *name);

/* ---- names (scope.c) ---------------------------------------------------------------------- */

/* The value of a name here, or NULL. */
const anb__value *anb__find_value(const anb__expander *x, const anb__name *name);
anb__definition *anb__find_definition(const anb__expander *x, const anb__name *name);
/* Gives a name its kind in the current region; false, reported, where it has another. */
bool anb__claim(anb__expander *x, anb__symbol *symbol, anb__symbol_kind kind, anb__span span);
void anb__define(anb__expander *x, const anb__name *name, anb__span span, const anb__value *value);
/* True where the network that this tree defines is known already. */
bool anb__is_defined(const anb__expander *x, const anb__tree *tree);
void anb__define_shape(anb__expander *x, const anb__tree *tree, anb__symbol_kind kind);
void anb__report_undefined(anb__expander *x, const anb__tree *tree);
/* True, once for each name, where it is to be reported as undefined. */
bool anb__first_told(anb__expander *x, const anb__name *name);
/* "name[1][2]"; `base` itself where there is no index. False, reported, where an index is none. */
bool anb__indexed_name(anb__expander *x, const anb__tree *tree, const anb__name **base,
                       const anb__name **full);
anb__space *anb__new_space(anb__expander *x, anb__space *parent, const anb__name *label);
/* "S1.x"; NULL in a space that has no name. */
const char *anb__path_text(anb__expander *x, const anb__space *space, const anb__name *name);

/* ---- values (evaluate.c, functions.c, condition.c) --------------------------------------------- */

typedef enum anb__truth { ANB__FALSE, ANB__TRUE, ANB__UNKNOWN } anb__truth;

/* What a place refuses, for anb__wanted. */
enum {
    ANB__NO_TOLERANCE = 1,
    ANB__NO_TUNE = 2,
    ANB__NO_FREQUENCY = 4,
    ANB__NO_COMPLEX = 8,
    ANB__FIXED = ANB__NO_TOLERANCE | ANB__NO_FREQUENCY | ANB__NO_COMPLEX
};

anb__value anb__poison(void);
anb__value anb__evaluate(anb__expander *x, const anb__tree *tree);
/* A number to calculate with; false, reported, where it is none. */
bool anb__operand(anb__expander *x, const anb__tree *tree, anb__quantity *out);
/* The number that a place asks for; `what` is its name in messages, e.g. "a port's impedance". */
bool anb__wanted(anb__expander *x, const anb__tree *tree, const char *what, anb__dimension dimension,
                 unsigned refused, anb__quantity *out);
/* The same for a quantity that is there already. */
bool anb__check_wanted(anb__expander *x, const anb__tree *tree, const char *what,
                       anb__dimension dimension, unsigned refused, anb__quantity *q);
bool anb__wanted_whole(anb__expander *x, const anb__tree *tree, const char *what, double least,
                       double *out);
/* A range, or the name of one. */
bool anb__wanted_range(anb__expander *x, const anb__tree *tree, const char *what,
                       anb__dimension dimension, unsigned refused, anb__quantity bounds[2]);
/* What is wrong with a value's dimension, in words. */
void anb__report_dimension(anb__expander *x, const anb__tree *tree, const anb__quantity *q,
                           const char *what, const anb__argument_form *forms, unsigned form_count);
anb__quantity anb__dbm_to_watt(const anb__quantity *q);

anb__value anb__plain_value(double value);
anb__value anb__quantity_value(const anb__quantity *q);
anb__value anb__compute(anb__expander *x, const anb__tree *tree, anb__operation operation,
                        const anb__quantity *a, const anb__quantity *b, anb__dimension dimension);
anb__value anb__function_call(anb__expander *x, const anb__tree *tree, const anb__function_entry *entry);
anb__truth anb__condition(anb__expander *x, const anb__tree *tree);

/* ---- calls of parts, own kinds and networks (part_call.c, arguments.c, own_call.c, data_call.c) ------ */

anb__value anb__call(anb__expander *x, const anb__tree *tree);
anb__value anb__part_call(anb__expander *x, const anb__tree *tree, anb__part_kind kind);
anb__value anb__own_call(anb__expander *x, const anb__tree *tree, anb__definition *definition);
anb__value anb__composing_call(anb__expander *x, const anb__tree *tree);
anb__value anb__data_call(anb__expander *x, const anb__tree *tree);
/* The item of a part; adds what is assumed to `arguments`, which has room for ANB__ARG_COUNT. */
anb__value anb__part_item(anb__expander *x, anb__span span, anb__part_kind kind, anb__argument *arguments,
                          unsigned count);
/* The value of an own kind's body for these parameters. */
anb__value anb__own_body(anb__expander *x, anb__span span, anb__definition *definition, anb__value *values);
/* A stated argument against its entry; false, reported, where it does not fit. */
bool anb__check_argument(anb__expander *x, const anb__tree *tree, anb__part_kind kind,
                         const anb__argument_entry *entry, const anb__value *value, anb__argument *out);
const anb__argument *anb__share_arguments(anb__expander *x, const anb__argument *arguments,
                                          unsigned count);
/* Adds to `arguments` what is assumed for the part and not contradicted. */
unsigned anb__add_assumed(anb__expander *x, anb__part_kind kind, anb__argument *arguments, unsigned count);
void anb__assume(anb__expander *x, const anb__tree *tree);

/* ---- items (item.c) ------------------------------------------------------------------------------ */

const anb__item *anb__new_item(anb__expander *x, const anb__item *item);
anb__value anb__item_value(anb__expander *x, const anb__item *item);
/* What stands in a chain, as an item; never NULL. */
const anb__item *anb__item_of(anb__expander *x, const anb__tree *tree);
const anb__item *anb__item_of_value(anb__expander *x, const anb__tree *tree, const anb__value *value);
anb__value anb__composite(anb__expander *x, const anb__tree *tree);

/* ---- nodes (node.c) ------------------------------------------------------------------------------- */

uint32_t anb__new_node(anb__expander *x);
/* The node that a tree names; false, reported, where it is none. */
bool anb__node_of(anb__expander *x, const anb__tree *tree, uint32_t *node);
/* True where the tree is a node rather than a value. */
bool anb__names_node(const anb__expander *x, const anb__tree *tree);
uint32_t anb__root_of(anb__expander *x, uint32_t node);
void anb__join(anb__expander *x, uint32_t a, uint32_t b);
void anb__settle_nodes(anb__expander *x);
static inline void anb__touch(anb__expander *x, uint32_t node) { x->nodes[node].touched++; }
/* The labels and the name of `S1.x` as a list; false, reported, where an index is wrong. */
bool anb__path_of(anb__expander *x, const anb__tree *tree, const anb__name *const **path, uint32_t *length);
anb__symbol *anb__follow(const anb__expander *x, uint32_t space, const anb__name *const *path,
                         uint32_t length);
void anb__resolve_far_nodes(anb__expander *x);
void anb__check_nodes(anb__expander *x);
/* Fills the network's arrays from the expansion's. */
void anb__finish(anb__expander *x);

/* ---- placing (place.c, chain.c, instance.c) ----------------------------------------------------------- */

/* Between two nodes; `to_ground`: the right one is the ground that a `shunt` means. */
void anb__place_item(anb__expander *x, const anb__item *item, anb__span span, uint32_t left,
                     uint32_t right, bool to_ground);
void anb__place_chain(anb__expander *x, const anb__tree *chain);
void anb__place_on(anb__expander *x, const anb__tree *tree);
/* Places a network; terminals by place or by name. */
void anb__place_network(anb__expander *x, const anb__item *item, anb__span span,
                        const anb__terminal *terminals, uint32_t count, bool to_ground);
/* One part of the catalogue on its nodes, one for each terminal of the layout. */
void anb__add_part(anb__expander *x, const anb__item *item, anb__span span, const anb__layout *layout,
                   const uint32_t *nodes);
/* Data of a file on that many nodes: says why they cannot be placed. */
void anb__refuse_data(anb__expander *x, const anb__item *item, anb__span span, uint32_t count);
void anb__touch_all(anb__expander *x, const anb__terminal *terminals, uint32_t count);

/* What is placed between opening and closing a label belongs to it. */
typedef struct anb__label_mark {
    const anb__item *item; /* what is labelled */
    const anb__name *name;
    anb__space *labels;    /* where the label stands */
    anb__span span;
    uint32_t first_part;
} anb__label_mark;
void anb__open_label(anb__expander *x, const anb__item *label, const anb__item *item, anb__label_mark *mark);
void anb__close_label(anb__expander *x, const anb__label_mark *mark);
/* Looks for mistakes in networks and own kinds that nothing uses. */
void anb__check_unused(anb__expander *x);

/* ---- statements (statement.c, port.c, sweep.c, requirement.c) ------------------------------------- */

void anb__statements(anb__expander *x, const anb__tree *parent);
void anb__port_statement(anb__expander *x, const anb__tree *tree);
void anb__check_ports(anb__expander *x);
void anb__sweep_statement(anb__expander *x, const anb__tree *tree, bool counts);
void anb__require_statement(anb__expander *x, const anb__tree *tree);
void anb__drive_statement(anb__expander *x, const anb__tree *tree);
void anb__tune_statement(anb__expander *x, const anb__tree *tree);
void anb__cases_statement(anb__expander *x, const anb__tree *tree);
/* Enters a CASES without mistakes into the network's list. */
void anb__list_case(anb__expander *x, const anb__tree *tree);
/* The dimension of a measure in a `require`. */
anb__value anb__measure_call(anb__expander *x, const anb__tree *tree, const anb__measure_entry *entry);
void anb__resolve_references(anb__expander *x);
/* The value that replaces a definition, evaluated here; NULL where none does. */
const anb__tree *anb__replacement_of(anb__expander *x, const anb__name *name);

#endif
