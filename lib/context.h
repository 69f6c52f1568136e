/* The inside of the public objects. */
#ifndef ANB_CONTEXT_H
#define ANB_CONTEXT_H

#include <stdatomic.h>

#include "base/names.h"
#include "base/report.h"
#include "network/network.h"
#include "sweep/grid.h"

struct anb_context {
    atomic_bool cancelled;
    anb__arena arena; /* of the messages */
    anb_message *messages;
    size_t message_count;
    struct anb__notes {
        anb_message *list;
        size_t count;
    } *notes; /* [message_count] */
    size_t error_count;
};

struct anb_netlist {
    anb__arena arena; /* sources, names, tree */
    anb__report report; /* its sources; its messages have been handed to the context */
    anb__names names;
    anb__network network;
    anb__grid grid;
    const char *path;
    const struct anb__tree *file; /* what the statements that later steps evaluate are in */
};

/* Starts a call: the messages of the one before are gone. */
void anb__context_begin(anb_context *context);

/* Hands a report's messages to the context, texts and places copied, and empties the report of them. */
anb_status anb__context_take(anb_context *context, anb__report *report);

#endif
