/* The options of all commands: one table for reading a call and for its help. */
#ifndef CLI_OPTIONS_H
#define CLI_OPTIONS_H

#include "command.h"

/* Reads the words after the command's name. `out` starts zeroed; its lists are to be released
 * with settings_free. Returns an exit status, having said what is wrong. */
int options_read(const cli_command *command, int count, char **words, cli_settings *out);
void settings_free(cli_settings *settings);

/* The place of a word among "a|b|c", or -1. */
int choice_index(const char *choices, const char *word);

/* Prints a command's help to standard output. Returns the exit status. */
int options_help(const cli_command *command);

#endif
