#include "load.h"

#include <stdlib.h>

#include "message.h"

int load_netlist(anb_context *context, const cli_settings *settings, anb_netlist **out) {
    anb_overrides overrides = {settings->set, settings->set_count, settings->sweep};
    *out = NULL;
    anb_status status = anb_netlist_read(context, settings->files[0], &overrides, out);
    return message_finish(context, status, settings->files[0]);
}

anb_context *load_context(void) {
    anb_context *context = anb_context_new();
    if (!context) message_wrong(NULL, "out of memory");
    return context;
}

/* ANB_KERNEL forces one of the engine's kernels, to compare them. */
anb_sweep_options load_sweep_options(const cli_settings *settings) {
    const char *kernel = getenv("ANB_KERNEL");
    return (anb_sweep_options){.threads = settings->threads, .kernel = kernel && *kernel ? kernel : NULL};
}
