/* A bar with the time left, on a terminal, for work that takes longer than a second. */
#ifndef CLI_PROGRESS_H
#define CLI_PROGRESS_H

#include <stdbool.h>
#include <time.h>

typedef struct cli_progress {
    const char *what;      /* the word in front */
    bool wanted, shown;
    double base, share;    /* this piece of the work begins at `base` and is `share` of the whole */
    struct timespec start;
    double drawn;          /* seconds after the start */
} cli_progress;

/* Nothing is shown where standard error is no terminal, or where the result itself goes to one. */
cli_progress progress_start(const char *what, bool to_standard_output);
/* `user` is a progress; `share` of its piece is done. */
void progress_show(void *user, double share);
/* Takes the bar away; it comes back with the next share. */
void progress_clear(cli_progress *progress);

#endif
