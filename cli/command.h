/* What the command consists of: subcommands, and the options that they share. */
#ifndef CLI_COMMAND_H
#define CLI_COMMAND_H

#include <stdbool.h>
#include <stddef.h>

/* Everything that a call can say. What it does not say is zero. */
typedef struct cli_settings {
    const char **files;
    size_t file_count;
    const char *output;    /* -o */
    const char **set;      /* --set, in the order of the call */
    size_t set_count;
    const char *sweep;     /* --sweep */
    const char *touchstone, *unit, *format, *reference;
    unsigned digits, threads;
    bool json, csv, statistics, check, write, help;
} cli_settings;

/* One bit for each command, for the options' table. */
enum { ON_SWEEP = 1, ON_SHOW = 2, ON_FORMAT = 4, ON_ALL = 7 };

typedef struct cli_command {
    const char *name;
    unsigned bit;
    const char *operands;   /* as the usage line shows them */
    size_t most_files;
    const char *purpose;    /* one line */
    const char *more;       /* the end of its help: an example, with what it does */
    int (*run)(const cli_settings *settings); /* returns the exit status */
} cli_command;

int sweep_run(const cli_settings *settings);
int show_run(const cli_settings *settings);
int format_run(const cli_settings *settings);

#endif
