#define _XOPEN_SOURCE 700 /* realpath */

#include "output.h"

#include <errno.h>
#include <fcntl.h>
#include <libgen.h>
#include <poll.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "interrupt.h"
#include "message.h"
#include "status.h"

enum { CAPACITY = 1 << 18, FORMATTED = 512 };

/* ---- opening ---------------------------------------------------------------- */

static int cannot_write(const char *name, int number) {
    message_wrong_file(name, NULL, "cannot be written: %s", strerror(number));
    return number == ENOENT || number == EACCES || number == EPERM || number == EISDIR || number == ENOTDIR ||
                   number == ELOOP || number == ENAMETOOLONG || number == EROFS || number == ETXTBSY ||
                   number == ENXIO
               ? STATUS_WRONG
               : STATUS_MACHINE;
}

/* "DIRECTORY/.anabranch-PID-N": beside the target, so that renaming never copies. */
static char *temporary_name(const char *target, unsigned attempt) {
    size_t size = strlen(target) + 64;
    char *name = malloc(size), *copy = strdup(target);
    if (name && copy) snprintf(name, size, "%s/.anabranch-%ld-%u", dirname(copy), (long)getpid(), attempt);
    if (!copy) {
        free(name);
        name = NULL;
    }
    free(copy);
    return name;
}

/* A new file beside the target, known to the signal handlers as long as it is unfinished. */
static int create_temporary(cli_output *out) {
    for (unsigned attempt = 0; attempt < 100; attempt++) {
        free(out->temporary);
        out->temporary = temporary_name(out->target, attempt);
        if (!out->temporary) return ENOMEM;
        interrupt_hold();
        out->file = open(out->temporary, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, 0666);
        int number = errno;
        if (out->file >= 0) interrupt_unfinished(out->temporary);
        interrupt_release();
        if (out->file >= 0) return 0;
        if (number != EEXIST) return number;
    }
    return EEXIST;
}

/* A file that is there keeps its permissions and, as far as we may, its owner. */
static void keep_rights(const cli_output *out, const struct stat *before) {
    if (fchown(out->file, before->st_uid, before->st_gid) == 0) fchmod(out->file, before->st_mode & 07777);
    else fchmod(out->file, before->st_mode & 0777);
}

static int open_file(cli_output *out, const char *path) {
    struct stat before;
    size_t length = strlen(path);
    if (length && path[length - 1] == '/') return EISDIR;
    bool exists = stat(path, &before) == 0;
    if (!exists && (errno != ENOENT || !length)) return errno;
    if (exists && S_ISDIR(before.st_mode)) return EISDIR;
    if (exists && access(path, W_OK) != 0) return errno;
    if (exists && !S_ISREG(before.st_mode)) {
        out->file = open(path, O_WRONLY | O_CLOEXEC);
        return out->file < 0 ? errno : 0;
    }
    out->target = exists ? realpath(path, NULL) : strdup(path);
    if (!out->target) return errno;
    int number = create_temporary(out);
    if (!number && exists) keep_rights(out, &before);
    return number;
}

static void release(cli_output *out) {
    interrupt_unfinished(NULL);
    free(out->target);
    free(out->temporary);
    free(out->bytes);
}

int output_open(cli_output *out, const char *path) {
    bool standard = !path || !strcmp(path, "-");
    *out = (cli_output){.name = standard ? "standard output" : path, .file = STDOUT_FILENO};
    int number = standard ? 0 : open_file(out, path);
    if (!number) out->bytes = malloc(CAPACITY);
    if (out->bytes) return STATUS_OK;
    if (!number && out->temporary) unlink(out->temporary);
    release(out);
    return cannot_write(out->name, number ? number : ENOMEM);
}

/* ---- writing ------------------------------------------------------------------ */

static anb_status failed(cli_output *out, int number) {
    out->number = number;
    return out->status = number == EPIPE ? ANB_CLOSED : ANB_IO;
}

/* Waits until a descriptor that does not block takes more. */
static void wait_for_room(int file) {
    struct pollfd one = {.fd = file, .events = POLLOUT};
    poll(&one, 1, 100);
}

static anb_status write_all(cli_output *out, const char *bytes, size_t length) {
    while (length) {
        if (interrupt_seen()) return out->status = ANB_CANCELLED;
        ssize_t taken = write(out->file, bytes, length);
        if (taken < 0 && errno == EAGAIN) wait_for_room(out->file);
        else if (taken < 0 && errno != EINTR) return failed(out, errno);
        if (taken <= 0) continue;
        out->written = true;
        bytes += taken;
        length -= (size_t)taken;
    }
    return ANB_OK;
}

/* Where the last line that is whole ends, so that no failure leaves half a number behind. */
static size_t whole_lines(const cli_output *out) {
    size_t end = out->used;
    while (end && out->bytes[end - 1] != '\n') end--;
    return end ? end : out->used;
}

static anb_status make_room(cli_output *out) {
    size_t end = whole_lines(out);
    if (write_all(out, out->bytes, end) != ANB_OK) return out->status;
    memmove(out->bytes, out->bytes + end, out->used - end);
    out->used -= end;
    return ANB_OK;
}

anb_status output_write(void *user, const char *bytes, size_t length) {
    cli_output *out = user;
    if (interrupt_seen()) out->status = ANB_CANCELLED;
    while (length && out->status == ANB_OK) {
        size_t room = CAPACITY - out->used, part = length < room ? length : room;
        memcpy(out->bytes + out->used, bytes, part);
        out->used += part;
        bytes += part;
        length -= part;
        if (out->used == CAPACITY) make_room(out);
    }
    return out->status;
}

void output_fail(cli_output *out, int number) {
    if (out->status == ANB_OK) failed(out, number);
}

void output_text(cli_output *out, const char *text) { output_write(out, text, strlen(text)); }

void output_char(cli_output *out, char character) { output_write(out, &character, 1); }

void output_format(cli_output *out, const char *format, ...) {
    char text[FORMATTED], *longer = NULL;
    va_list arguments, again;
    va_start(arguments, format);
    va_copy(again, arguments);
    int length = vsnprintf(text, sizeof text, format, arguments);
    if (length >= (int)sizeof text) {
        longer = malloc((size_t)length + 1);
        if (longer) vsnprintf(longer, (size_t)length + 1, format, again);
        else output_fail(out, ENOMEM);
    }
    va_end(again);
    va_end(arguments);
    if (length > 0) output_write(out, longer ? longer : text, (size_t)length);
    free(longer);
}

/* ---- ending --------------------------------------------------------------------- */

/* Some file systems tell of a full disk only when the data are to be on it; and the rename
 * must not be there before what it names. */
static anb_status settle(cli_output *out) {
    if (fsync(out->file) != 0 && errno != EINVAL && errno != EROFS) return failed(out, errno);
    int file = out->file;
    out->file = -1;
    if (close(file) != 0) return failed(out, errno);
    interrupt_hold();
    bool moved = rename(out->temporary, out->target) == 0;
    if (!moved) failed(out, errno);
    else interrupt_unfinished(NULL);
    interrupt_release();
    return out->status;
}

static void abandon(cli_output *out) {
    static const char mark[] = "! incomplete\n";
    if (out->temporary) {
        unlink(out->temporary);
        return;
    }
    /* What waits is dropped. Nothing is left to be done if even this cannot be written. */
    if (out->written && write(out->file, mark, sizeof mark - 1) < 0) out->number = errno;
}

static void close_file(const cli_output *out) {
    if (out->file >= 0 && out->file != STDOUT_FILENO) close(out->file);
}

int output_finish(cli_output *out, int status) {
    bool good = status == STATUS_OK && out->status == ANB_OK;
    if (good && write_all(out, out->bytes, out->used) == ANB_OK && out->temporary) settle(out);
    good = good && out->status == ANB_OK;
    if (!good) abandon(out);
    close_file(out);
    if (out->status == ANB_IO && status == STATUS_OK) status = cannot_write(out->name, out->number);
    if (out->status == ANB_IO) status = STATUS_MACHINE;
    if (out->status == ANB_CANCELLED) status = interrupt_status();
    if (status == STATUS_WRONG && out->written && !out->temporary) status = STATUS_MACHINE;
    release(out);
    return status;
}

bool output_same_file(const char *a, const char *b) {
    struct stat one, two;
    return stat(a, &one) == 0 && stat(b, &two) == 0 && one.st_dev == two.st_dev && one.st_ino == two.st_ino;
}
