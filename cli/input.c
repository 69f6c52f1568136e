#include "input.h"

#include <errno.h>
#include <fcntl.h>
#include <stdbool.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "message.h"
#include "status.h"

/* Reads to the end of a descriptor; returns errno. */
static int read_all(int file, char **text, size_t *length) {
    size_t capacity = 0;
    *length = 0;
    for (;;) {
        if (capacity - *length < 4096) {
            capacity = capacity ? 2 * capacity : 1 << 16;
            char *more = realloc(*text, capacity);
            if (!more) return ENOMEM;
            *text = more;
        }
        ssize_t taken = read(file, *text + *length, capacity - *length - 1);
        if (taken == 0) break;
        if (taken < 0 && errno != EINTR) return errno;
        if (taken > 0) *length += (size_t)taken;
    }
    (*text)[*length] = 0;
    return 0;
}

static int cannot_read(const char *path, int number) {
    message_wrong_file(path, NULL, "cannot be read: %s", strerror(number));
    return number == ENOMEM || number == EIO ? STATUS_MACHINE : STATUS_WRONG;
}

int input_read(const char *path, char **text, size_t *length) {
    *text = NULL;
    bool standard = !strcmp(path, "-");
    int file = standard ? STDIN_FILENO : open(path, O_RDONLY | O_CLOEXEC);
    if (file < 0) return cannot_read(path, errno);
    int number = read_all(file, text, length);
    if (!standard) close(file);
    if (!number) return STATUS_OK;
    free(*text);
    *text = NULL;
    return cannot_read(path, number);
}
