/* Messages on standard error: what the library found, and what is wrong with a call.
 *
 *     splitter.anab:4:12: error: `line` wants an impedance, 70.7 is a plain number
 *         4 | arm = line(70.7, 90 deg @ f0)
 *           |            ^^^^
 *     hint: 70.7 ohm
 *
 * The first line's form is fixed, for editors; so is `note` for second places.
 */
#ifndef CLI_MESSAGE_H
#define CLI_MESSAGE_H

#include <stdbool.h>
#include <stddef.h>

#include "anabranch.h"

/* Looks once whether standard error wants colour: a terminal that is not dumb, no NO_COLOR. */
void message_start(void);
/* Whether standard error is a terminal that can move its cursor. */
bool message_on_terminal(void);

/* Prints the context's diagnostics and clears them. Returns how many errors were among them. */
size_t message_print_all(anb_context *context);

/* `anabranch: error: text`, or with a file's name in front: `path: error: text`. A hint may
 * be NULL. All return STATUS_WRONG. */
int message_wrong(const char *hint, const char *format, ...) __attribute__((format(printf, 2, 3)));
int message_wrong_file(const char *path, const char *hint, const char *format, ...)
    __attribute__((format(printf, 3, 4)));
/* The same as a warning. */
void message_warn_file(const char *path, const char *hint, const char *format, ...)
    __attribute__((format(printf, 3, 4)));

/* After a call of the library that may have failed: prints the diagnostics, or where there is
 * no error among them a line for the status, about `path`. Returns the exit status. */
int message_finish(anb_context *context, anb_status status, const char *path);

#endif
