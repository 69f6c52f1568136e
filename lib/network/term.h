/* Expressions of the frequency while they are being built, and the programs made of them. */
#ifndef ANB_NETWORK_TERM_H
#define ANB_NETWORK_TERM_H

#include <stdint.h>

#include "base/arena.h"
#include "network/operation.h"
#include "network/program.h"

typedef enum anb__term_kind { ANB__TERM_CONSTANT, ANB__TERM_FREQUENCY, ANB__TERM_OPERATION } anb__term_kind;

typedef struct anb__term anb__term;
struct anb__term {
    uint8_t kind;
    uint8_t operation;
    uint8_t slot;      /* of its value, while a program is made */
    uint8_t need;      /* slots that its calculation needs (Sethi and Ullman 1970) */
    uint32_t visited;  /* the making that has seen it */
    uint32_t last_use; /* step that takes its value last */
    anb__complex constant;
    anb__term *a, *b;  /* operands; b may be NULL */
    const anb__program *program; /* once it is made */
};

anb__term *anb__term_constant(anb__arena *arena, anb__complex value);
anb__term *anb__term_frequency(anb__arena *arena);
anb__term *anb__term_operation(anb__arena *arena, anb__operation operation, anb__term *a, anb__term *b);

/* The program of a term, made once. `arena` keeps it, `scratch` what is needed on the way;
 * `making` counts the makings. NULL where more than ANB__PROGRAM_SLOTS values would have to be held
 * at once. */
const anb__program *anb__program_of(anb__arena *arena, anb__arena *scratch, anb__term *term,
                                    uint32_t *making);

enum { ANB__PROGRAM_SLOTS = 64 };

#endif
