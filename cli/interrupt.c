#include "interrupt.h"

#include <errno.h>
#include <signal.h>
#include <stdatomic.h>
#include <stddef.h>
#include <unistd.h>

#include "status.h"

enum { PATIENCE = 2 }; /* seconds that cancelled work may take to end */

static const int signals[] = {SIGINT, SIGTERM, SIGHUP, SIGALRM};
enum { SIGNAL_COUNT = sizeof signals / sizeof *signals };

static volatile sig_atomic_t seen; /* the first signal */
static _Atomic(anb_context *) working;
static _Atomic(const char *) unfinished;

/* Everything here is safe in a signal handler. */
static void leave(int number) {
    const char *path = atomic_load(&unfinished);
    if (path) unlink(path);
    _exit(STATUS_SIGNAL + number);
}

static void handle(int number) {
    int saved = errno;
    anb_context *context = atomic_load(&working);
    if (seen) leave(seen);
    if (!context) leave(number);
    seen = number;
    anb_context_cancel(context);
    alarm(PATIENCE);
    errno = saved;
}

/* SIGTERM and SIGHUP stay ignored where they are (nohup). SIGINT does not: a shell ignores it
 * for what it starts in the background, and `kill -INT` is to stop that too. */
void interrupt_start(void) {
    struct sigaction action = {.sa_handler = handle}, before;
    sigemptyset(&action.sa_mask);
    for (int i = 0; i < SIGNAL_COUNT; i++) sigaddset(&action.sa_mask, signals[i]);
    for (int i = 0; i < SIGNAL_COUNT; i++) {
        bool ignorable = signals[i] == SIGTERM || signals[i] == SIGHUP;
        if (ignorable && sigaction(signals[i], NULL, &before) == 0 && before.sa_handler == SIG_IGN) continue;
        sigaction(signals[i], &action, NULL);
    }
    signal(SIGPIPE, SIG_IGN);
}

void interrupt_begin(anb_context *context) { atomic_store(&working, context); }

void interrupt_end(void) { atomic_store(&working, NULL); }

bool interrupt_seen(void) { return seen != 0; }

int interrupt_status(void) { return STATUS_SIGNAL + (seen ? seen : SIGINT); }

void interrupt_unfinished(const char *path) { atomic_store(&unfinished, path); }

static void mask(int how) {
    sigset_t set;
    sigemptyset(&set);
    for (int i = 0; i < SIGNAL_COUNT; i++) sigaddset(&set, signals[i]);
    sigprocmask(how, &set, NULL);
}

void interrupt_hold(void) { mask(SIG_BLOCK); }

void interrupt_release(void) { mask(SIG_UNBLOCK); }
