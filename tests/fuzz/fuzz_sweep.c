/* Any bytes as a netlist: parsed, evaluated, expanded, and where that goes well, swept and written. Large
 * networks and long sweeps are left alone, so that a run is spent on the paths and not on arithmetic. */
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include "anabranch.h"

enum { MOST_PARTS = 200, MOST_PORTS = 8, MOST_POINTS = 64 };

static anb_status swallow(void *user, const char *bytes, size_t length) {
    (void)bytes;
    *(size_t *)user += length;
    return ANB_OK;
}

static void read_messages(const anb_context *context) {
    anb_message message;
    for (size_t i = 0; i < anb_message_count(context); i++) {
        anb_message_get(context, i, &message);
        if (!message.text || !message.code || (message.severity == ANB_ERROR && !*message.text)) abort();
        for (size_t k = 0; k < anb_note_count(context, i); k++) anb_note_get(context, i, k, &message);
    }
}

static void describe(const anb_netlist *netlist) {
    char buffer[64];
    anb_part_info info;
    for (size_t i = 0; i < anb_netlist_part_count(netlist); i++) {
        anb_netlist_part_get(netlist, i, &info);
        anb_netlist_part_values(netlist, i, buffer, sizeof buffer);
        for (size_t k = 0; k < info.node_count; k++)
            if (anb_netlist_part_node(netlist, i, k) >= anb_netlist_node_count(netlist)) abort();
    }
}

int LLVMFuzzerTestOneInput(const uint8_t *bytes, size_t length);

int LLVMFuzzerTestOneInput(const uint8_t *bytes, size_t length) {
    anb_netlist *netlist;
    size_t written = 0;
    anb_context *context = anb_context_new();
    if (!context) return 0;
    anb_status status = anb_netlist_parse(context, "fuzz.anab", (const char *)bytes, length, NULL, &netlist);
    read_messages(context);
    if ((status == ANB_OK) != (netlist != NULL) || (status == ANB_INVALID && !anb_error_count(context)))
        abort();
    if (netlist && anb_netlist_part_count(netlist) <= MOST_PARTS &&
        anb_netlist_port_count(netlist) <= MOST_PORTS) {
        describe(netlist);
        if (anb_netlist_frequency_count(netlist) <= MOST_POINTS) {
            anb_sweep_options sweep = {.threads = 1};
            status = anb_sweep_write(context, netlist, &sweep, NULL, swallow, &written);
            if (status == ANB_INVALID && !anb_error_count(context)) abort();
            read_messages(context);
        }
    }
    anb_netlist_free(netlist);
    anb_context_free(context);
    return 0;
}
