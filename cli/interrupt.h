/* Ctrl-C and its like: a sweep that runs is cancelled, the unfinished file is removed, and
 * the command ends with 128 and the signal's number. */
#ifndef CLI_INTERRUPT_H
#define CLI_INTERRUPT_H

#include <stdbool.h>

#include "anabranch.h"

/* Sets the handlers up, once. A closed pipe is a status of a write from here on. */
void interrupt_start(void);

/* Between these two a first signal cancels the work on `context`, which then has two seconds
 * to end; at all other times, and at the second one, a signal ends the program at once. */
void interrupt_begin(anb_context *context);
void interrupt_end(void);

/* Whether a signal came, and the exit status that it asks for. */
bool interrupt_seen(void);
int interrupt_status(void);

/* The unfinished file to remove when the program is ended, or NULL for none. The text must
 * live until the next call. Signals wait between hold and release. */
void interrupt_unfinished(const char *path);
void interrupt_hold(void);
void interrupt_release(void);

#endif
