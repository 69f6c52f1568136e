#include "network/include.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "language/parse.h"

enum { DEEPEST = 50 };

typedef struct loaded {
    dev_t device;
    ino_t inode;
    anb__tree *file; /* NULL while it is being read */
    bool active;
    struct loaded *next;
} loaded;

typedef struct loader {
    anb__report *report;
    anb__names *names;
    anb__arena *arena;
    loaded *files;
    unsigned depth;
} loader;

/* ---- files ------------------------------------------------------------------------------ */

const char *anb__path_from(anb__arena *arena, const char *from, const char *path) {
    const char *slash = strrchr(from, '/');
    if (*path == '/' || !slash) return path;
    size_t folder = (size_t)(slash - from) + 1, length = strlen(path);
    char *out = anb__arena_take(arena, folder + length + 1);
    if (!out) return NULL;
    memcpy(out, from, folder);
    memcpy(out + folder, path, length);
    return out;
}

const char *anb__reading_problem(int error) {
    switch (error) {
    case ENOENT: return "there is no such file";
    case ENOTDIR: return "a part of its path is no folder";
    case EACCES: return "permission is denied";
    case EISDIR: return "it is a folder";
    case EFBIG: return "it is larger than 2 GiB";
    default: return "reading failed";
    }
}

/* NULL where reading failed or memory is gone: errno says which. 2 GiB is the limit, since offsets in
 * a source are 32 bits wide. */
static char *read_all(anb__arena *arena, int file, uint32_t *length) {
    size_t capacity = 1 << 16, count = 0;
    char *text = anb__arena_take(arena, capacity);
    while (text) {
        ssize_t got = read(file, text + count, capacity - count - 1);
        if (got < 0 && errno == EINTR) continue;
        if (got < 0) return NULL;
        if (got == 0) break;
        count += (size_t)got;
        if (count >= INT32_MAX) {
            errno = EFBIG;
            return NULL;
        }
        if (count + 1 < capacity) continue;
        text = anb__arena_grow(arena, text, capacity, 2 * capacity);
        capacity *= 2;
    }
    if (!text) {
        errno = ENOMEM;
        return NULL;
    }
    text[count] = 0;
    *length = (uint32_t)count;
    return text;
}

/* The file is closed before anything jumps. */
char *anb__read_text(anb__arena *arena, const char *path, uint32_t *length) {
    bool standard = !strcmp(path, "-");
    int file = standard ? STDIN_FILENO : open(path, O_RDONLY | O_CLOEXEC);
    if (file < 0) return NULL;
    jmp_buf *escape = arena->escape;
    arena->escape = NULL;
    char *text = read_all(arena, file, length);
    int error = errno;
    arena->escape = escape;
    if (!standard) close(file);
    if (!text && error == ENOMEM && escape) longjmp(*escape, 1);
    errno = error;
    return text;
}

/* ---- includes ----------------------------------------------------------------------------- */

static void read_below(loader *l, anb__tree *parent);

static loaded *find(const loader *l, const struct stat *status) {
    for (loaded *f = l->files; f; f = f->next)
        if (f->device == status->st_dev && f->inode == status->st_ino) return f;
    return NULL;
}

static loaded *remember(loader *l, const struct stat *status, anb__tree *file) {
    loaded *f = anb__arena_take(l->arena, sizeof *f);
    *f = (loaded){status->st_dev, status->st_ino, file, true, l->files};
    l->files = f;
    return f;
}

static void hang(anb__tree *include, anb__tree *file) {
    if (!file) return;
    include->last->next = file;
    include->last = file;
}

static void report_unreadable(loader *l, const anb__tree *name) {
    anb__error(l->report, name->span, "unreadable-file", "`%s` cannot be read: %s", name->text,
               anb__reading_problem(errno));
}

static void load(loader *l, anb__tree *include, const char *path, const struct stat *status) {
    uint32_t length;
    char *text = anb__read_text(l->arena, path, &length);
    if (!text) {
        report_unreadable(l, include->first);
        return;
    }
    uint32_t source = anb__add_source(l->report, path, text, length);
    anb__tree *file = anb__parse(l->report, l->names, l->arena, source);
    loaded *f = remember(l, status, file);
    hang(include, file);
    l->depth++;
    read_below(l, file);
    l->depth--;
    f->active = false;
}

static void read_include(loader *l, anb__tree *include) {
    anb__tree *name = include->first;
    struct stat status;
    if (!name || name->kind != ANB__TREE_STRING) return;
    const char *from = l->report->sources.list[include->span.source].path;
    const char *path = anb__path_from(l->arena, from, name->text);
    if (stat(path, &status)) {
        report_unreadable(l, name);
        return;
    }
    const loaded *known = find(l, &status);
    if (known && known->active)
        anb__error(l->report, name->span, "include-loop", "`%s` includes itself, by way of this line",
                   name->text);
    else if (known) hang(include, known->file);
    else if (l->depth == DEEPEST)
        anb__error(l->report, name->span, "limit", "files include each other %d deep: this is the limit",
                   DEEPEST);
    else load(l, include, path, &status);
}

/* Includes stand at the top level, perhaps in an `if`. */
static void read_below(loader *l, anb__tree *parent) {
    for (anb__tree *tree = parent->first; tree; tree = tree->next) {
        if (tree->kind == ANB__TREE_INCLUDE) read_include(l, tree);
        else if (tree->kind == ANB__TREE_IF || tree->kind == ANB__TREE_BLOCK) read_below(l, tree);
    }
}

void anb__read_includes(anb__report *report, anb__names *names, anb__arena *arena, anb__tree *file) {
    loader l = {report, names, arena, NULL, 1};
    struct stat status;
    const char *path = report->sources.list[file->span.source].path;
    if (strcmp(path, "-") && !stat(path, &status)) remember(&l, &status, file);
    read_below(&l, file);
}
