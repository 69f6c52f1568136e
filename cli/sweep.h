/* The pieces that `sweep` is made of: one netlist into one file, and one file for each case. */
#ifndef CLI_SWEEP_H
#define CLI_SWEEP_H

#include "anabranch.h"
#include "command.h"
#include "progress.h"

/* Refuses a name that contradicts what would stand in it. Returns the exit status. */
int sweep_check_name(const char *path, const cli_settings *settings, size_t ports);

/* Sweeps and writes to `path` (NULL: standard output). Returns the exit status. */
int sweep_to(anb_context *context, const anb_netlist *netlist, const cli_settings *settings,
             const anb_write_options *form, const char *path, cli_progress *progress);

/* `-o out_{name}.s3p`: a file for each value of the cases that it names. Returns the exit status. */
int sweep_cases(anb_context *context, const cli_settings *settings, const anb_write_options *form);

/* Warns about the names with `cases` of which only the first is computed: those that the
 * output's name does not have in braces. */
void sweep_warn_cases(const anb_netlist *netlist, const cli_settings *settings);

#endif
