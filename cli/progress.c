#include "progress.h"

#include <stdio.h>
#include <unistd.h>

#include "message.h"

enum { BAR = 30 };
static const double first_after = 1, again_after = 0.1; /* seconds */

static double seconds_since(const struct timespec *start) {
    struct timespec now;
    clock_gettime(CLOCK_MONOTONIC, &now);
    return (double)(now.tv_sec - start->tv_sec) + 1e-9 * (double)(now.tv_nsec - start->tv_nsec);
}

cli_progress progress_start(const char *what, bool to_standard_output) {
    cli_progress out = {.what = what, .share = 1};
    clock_gettime(CLOCK_MONOTONIC, &out.start);
    out.wanted = message_on_terminal() && !(to_standard_output && isatty(STDOUT_FILENO));
    return out;
}

static void time_left(double seconds, char *text, size_t size) {
    unsigned whole = (unsigned)(seconds + 0.5);
    if (seconds > 359999) snprintf(text, size, "days");
    else if (whole >= 3600) snprintf(text, size, "%u h %02u min", whole / 3600, whole / 60 % 60);
    else if (whole >= 60) snprintf(text, size, "%u min %02u s", whole / 60, whole % 60);
    else snprintf(text, size, "%u s", whole);
}

static void draw(cli_progress *progress, double share, double passed) {
    char bar[BAR + 1], left[32] = "?";
    int full = (int)(share * BAR);
    for (int i = 0; i < BAR; i++) bar[i] = i < full ? '=' : ' ';
    bar[BAR] = 0;
    if (share > 0) time_left(passed * (1 - share) / share, left, sizeof left);
    fprintf(stderr, "\r\033[K%s [%s] %3d %%, %s left", progress->what, bar, (int)(100 * share), left);
    fflush(stderr);
    progress->shown = true;
    progress->drawn = passed;
}

void progress_show(void *user, double share) {
    cli_progress *progress = user;
    if (!progress->wanted) return;
    double passed = seconds_since(&progress->start);
    if (passed < first_after || passed < progress->drawn + again_after) return;
    share = progress->base + progress->share * share;
    draw(progress, share < 0 ? 0 : share > 1 ? 1 : share, passed);
}

void progress_clear(cli_progress *progress) {
    if (progress->shown) fputs("\r\033[K", stderr);
    progress->shown = false;
    fflush(stderr);
}
