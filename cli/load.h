/* Reading the netlist of a call, with what the call overrides. */
#ifndef CLI_LOAD_H
#define CLI_LOAD_H

#include "anabranch.h"
#include "command.h"

/* Reads settings->files[0] and prints what is to be said about it. `out` is NULL on failure.
 * Returns the exit status. */
int load_netlist(anb_context *context, const cli_settings *settings, anb_netlist **out);

/* A context, or NULL, having said that memory is gone. */
anb_context *load_context(void);

/* What a sweep of this call is to be done with. */
anb_sweep_options load_sweep_options(const cli_settings *settings);

#endif
