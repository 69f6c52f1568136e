/* The syntax tree: what the text says, nothing evaluated.
 *
 * Every node has its span and its children in the order of the text. The tree lives in an
 * arena; names are interned. The kinds carry the names of the rules in grammar/netlist.ebnf.
 */
#ifndef ANB_LANGUAGE_TREE_H
#define ANB_LANGUAGE_TREE_H

#include "base/names.h"
#include "base/report.h"
#include "language/units.h"

typedef enum anb__tree_kind {
    /* values */
    ANB__TREE_ERROR,  /* something that was reported already: silences what follows from it */
    ANB__TREE_NUMBER, /* number, unit */
    ANB__TREE_STRING, /* text */
    ANB__TREE_NAME,   /* name */
    ANB__TREE_PI,     /* pi, j, c0, frequency: the predefined ones */
    ANB__TREE_J,
    ANB__TREE_C0,
    ANB__TREE_FREQUENCY,
    ANB__TREE_LIST,     /* [a, b, ...]: elements */
    ANB__TREE_RANGE,    /* low .. high */
    ANB__TREE_INDEX,    /* base[k]: base, index; an element of a list or a node with a number */
    ANB__TREE_MEMBER,   /* base.name: base (NAME, INDEX or MEMBER); name */
    ANB__TREE_CALL,     /* name(arguments): name; children are the arguments */
    ANB__TREE_ARGUMENT, /* key = value: name; value. Positional arguments stand bare */
    ANB__TREE_MINUS,    /* -a */
    ANB__TREE_ADD,
    ANB__TREE_SUBTRACT,
    ANB__TREE_MULTIPLY,
    ANB__TREE_DIVIDE,
    ANB__TREE_POWER,
    ANB__TREE_LESS,
    ANB__TREE_LESS_EQUAL,
    ANB__TREE_GREATER,
    ANB__TREE_GREATER_EQUAL,
    ANB__TREE_EQUAL,
    ANB__TREE_NOT_EQUAL,
    ANB__TREE_AND,
    ANB__TREE_OR,
    ANB__TREE_NOT,
    ANB__TREE_AT,        /* v @ f: value, frequency */
    ANB__TREE_TOLERANCE, /* v +/- t: value, tolerance; flag ANB__TREE_NORMAL */
    ANB__TREE_GROUP,     /* (a): one child; kept so that the printer can keep it */
    /* items of a chain */
    ANB__TREE_GROUND,
    ANB__TREE_OPEN,
    ANB__TREE_SHORT,
    ANB__TREE_CHAIN,    /* a -- b -- ...: items */
    ANB__TREE_PARALLEL, /* a || b || ...: items */
    ANB__TREE_SHUNT,    /* shunt a: item */
    ANB__TREE_LABELLED, /* label: a: label (NAME or INDEX), item */
    /* statements */
    ANB__TREE_FILE,         /* the whole of one source: statements */
    ANB__TREE_TITLE,        /* STRING */
    ANB__TREE_INCLUDE,      /* STRING, then the FILE once it is read (or none) */
    ANB__TREE_DEFINE,       /* name = value: name; value. Flag ANB__TREE_SHARED */
    ANB__TREE_KIND,         /* name(parameters) = value: name; PARAMETERS, value */
    ANB__TREE_PARAMETERS,   /* PARAMETER ... */
    ANB__TREE_PARAMETER,    /* name, or name = default: name; default or nothing */
    ANB__TREE_ASSUME,       /* CALLs with keyed arguments only */
    ANB__TREE_TUNE,         /* name; start, then TUNE_WITHIN, TUNE_SERIES or TUNE_FROM ... */
    ANB__TREE_TUNE_WITHIN,  /* RANGE (or a name of one) */
    ANB__TREE_TUNE_SERIES,  /* NAME (E24) */
    ANB__TREE_TUNE_FROM,    /* LIST (or a name of one) */
    ANB__TREE_CASES,        /* name; LIST (or name), or a range followed by POINTS */
    ANB__TREE_PORT,         /* PORT_NAMES; impedance or nothing; AT_NODES or nothing (see flags) */
    ANB__TREE_PORT_NAMES,   /* NAME or INDEX ... */
    ANB__TREE_AT_NODES,     /* one or two nodes */
    ANB__TREE_PATH,         /* a chain as a statement: CHAIN (a lone item is a CHAIN of one) */
    ANB__TREE_PLACE,        /* [label:] part on (...): LABEL or nothing; part; TERMINALS */
    ANB__TREE_TERMINALS,    /* nodes, or ARGUMENTs `terminal = node` */
    ANB__TREE_JOIN,         /* nodes */
    ANB__TREE_NETWORK,      /* name; PARAMETERS, BLOCK */
    ANB__TREE_BLOCK,        /* { statements } */
    ANB__TREE_FOR,          /* name; range, BLOCK */
    ANB__TREE_IF,           /* condition, BLOCK, then BLOCK or IF for else, or nothing */
    ANB__TREE_SWEEP,        /* range and POINTS/STEP/PER_DECADE, or SWEEP_AT */
    ANB__TREE_POINTS,       /* value */
    ANB__TREE_STEP,         /* value */
    ANB__TREE_PER_DECADE,   /* value */
    ANB__TREE_SWEEP_AT,     /* frequencies */
    ANB__TREE_REQUIRE,      /* measure; LIMIT; OVER or AT_FREQUENCY or nothing; WEIGHT or nothing */
    ANB__TREE_AT_LEAST,     /* >= value */
    ANB__TREE_AT_MOST,      /* <= value */
    ANB__TREE_WITHIN,       /* within low .. high: RANGE */
    ANB__TREE_OVER,         /* range */
    ANB__TREE_AT_FREQUENCY, /* value */
    ANB__TREE_WEIGHT,       /* value */
    ANB__TREE_DRIVE,        /* port (NAME or INDEX); power; phase or nothing */
    ANB__TREE_KIND_COUNT
} anb__tree_kind;

enum {
    ANB__TREE_NORMAL = 1,        /* TOLERANCE: `normal` */
    ANB__TREE_SHARED = 2,        /* DEFINE: `shared` */
    ANB__TREE_HAS_IMPEDANCE = 4, /* PORT: the second child is the impedance */
    ANB__TREE_HAS_NODES = 8,     /* PORT: the last child is AT_NODES */
    ANB__TREE_HAS_LABEL = 16     /* PLACE: the first child is the label */
};

typedef struct anb__tree anb__tree;
struct anb__tree {
    uint8_t kind; /* anb__tree_kind */
    uint8_t flags;
    anb__span span;
    anb__span name_span; /* of `name`, where there is one */
    const anb__name
        *name; /* NAME, MEMBER, CALL, ARGUMENT, DEFINE, KIND, PARAMETER, TUNE, CASES, NETWORK, FOR */
    union {
        double number;    /* NUMBER: in base units, correctly rounded from the digits and the unit */
        const char *text; /* STRING: escapes undone, NUL-terminated */
    };
    const anb__unit *unit; /* NUMBER: its unit, interned in the arena; NULL for a plain number */
    anb__tree *first;      /* children */
    anb__tree *last;
    anb__tree *next; /* the next child of the same parent */
};

#endif
