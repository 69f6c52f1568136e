/* What an expression of the language stands for. */
#ifndef ANB_NETWORK_VALUE_H
#define ANB_NETWORK_VALUE_H

#include "base/names.h"
#include "language/tree.h"
#include "network/network.h"
#include "network/quantity.h"

typedef enum anb__value_kind {
    ANB__VALUE_POISON, /* was reported: what takes it stays silent */
    ANB__VALUE_QUANTITY,
    ANB__VALUE_TEXT,
    ANB__VALUE_LIST,
    ANB__VALUE_RANGE,
    ANB__VALUE_ITEM,   /* a part or a chain, to be placed */
    ANB__VALUE_ABSENT  /* of a parameter: not given */
} anb__value_kind;

typedef struct anb__item anb__item;
typedef struct anb__value anb__value;
struct anb__value {
    uint8_t kind;
    uint32_t count; /* LIST */
    union {
        anb__quantity quantity;
        const char *text;
        const anb__value *elements;  /* LIST */
        const anb__quantity *bounds; /* RANGE: low, high */
        const anb__item *item;
    };
};

typedef enum anb__item_kind {
    ANB__ITEM_POISON,   /* was reported; touches its nodes */
    ANB__ITEM_OPEN,     /* nothing */
    ANB__ITEM_PART,     /* of the catalogue */
    ANB__ITEM_CHAIN,    /* children, one after the other */
    ANB__ITEM_PARALLEL, /* children, between the same nodes */
    ANB__ITEM_SHUNT,    /* child, from here to ground */
    ANB__ITEM_LABELLED, /* child */
    ANB__ITEM_REVERSED, /* child */
    ANB__ITEM_INVERSE,  /* child */
    ANB__ITEM_REPEAT,   /* child, `count` times */
    ANB__ITEM_NETWORK,  /* definition, values of its parameters */
    ANB__ITEM_DATA      /* data of `count` ports from a file; 0: not known */
} anb__item_kind;

typedef struct anb__definition anb__definition;

struct anb__item {
    uint8_t kind;
    uint8_t part;    /* PART: anb__part_kind */
    bool stays;      /* holds `shunt` items only: does not move along the path */
    uint16_t argument_count;
    uint32_t count;  /* children; REPEAT: copies; DATA: ports */
    anb__span span;
    union {
        const anb__argument *arguments;   /* PART */
        const anb__item *const *children;
        const anb__value *values;         /* NETWORK: one for each parameter */
    };
    const anb__name *label;               /* LABELLED: with its index, "r[3]" */
    const anb__name *label_base;          /* LABELLED: without */
    const anb__definition *definition;    /* NETWORK */
};

#endif
