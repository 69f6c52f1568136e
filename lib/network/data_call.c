/* `touchstone("file.s2p")`: what can be said of a file of data before it is read. */
#include <ctype.h>
#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "network/expander.h"
#include "network/include.h"

/* N of an ending `.sNp`; 0 where the name does not tell. */
static uint32_t ports_of_name(const char *path) {
    const char *end = strrchr(path, '.');
    uint32_t ports = 0;
    if (!end || tolower((unsigned char)end[1]) != 's') return 0;
    for (end += 2; isdigit((unsigned char)*end) && ports < 100000; end++)
        ports = 10 * ports + (uint32_t)(*end - '0');
    return tolower((unsigned char)*end) == 'p' && !end[1] ? ports : 0;
}

/* 0, or the errno of reading it. */
static int unreadable(const char *path) {
    struct stat status;
    int file = open(path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
    if (file < 0) return errno;
    int error = fstat(file, &status) ? errno : S_ISDIR(status.st_mode) ? EISDIR : 0;
    close(file);
    return error;
}

static bool check_option(anb__expander *x, const anb__tree *option) {
    if (option->kind == ANB__TREE_ERROR) return false;
    if (option->kind != ANB__TREE_ARGUMENT) {
        anb__error(x->report, option->span, "argument-count", "`touchstone` takes one file");
        return false;
    }
    if (strcmp(option->name->text, "outside")) {
        anb__diagnostic *d = anb__error(x->report, option->name_span, "unknown-option",
                                        "`touchstone` has no option `%s`", option->name->text);
        anb__add_hint(x->report, d, "it has `outside`");
        return false;
    }
    if (option->first->kind == ANB__TREE_NAME && !strcmp(option->first->name->text, "hold")) return true;
    anb__error(x->report, option->first->span, "wrong-option", "`outside` can be `hold` only");
    return false;
}

anb__value anb__data_call(anb__expander *x, const anb__tree *tree) {
    const anb__tree *file = tree->first;
    bool right = true;
    if (!file || file->kind != ANB__TREE_STRING) {
        if (!file || file->kind != ANB__TREE_ERROR)
            anb__error(x->report, file ? file->span : tree->span, "missing-argument",
                       "`touchstone` needs the name of a file, e.g. `touchstone(\"part.s2p\")`");
        return anb__poison();
    }
    for (const anb__tree *option = file->next; option; option = option->next)
        right &= check_option(x, option);
    const char *from = x->report->sources.list[tree->span.source].path;
    const char *path = anb__path_from(&x->scratch, from, file->text);
    int error = unreadable(path);
    if (error) {
        anb__error(x->report, file->span, "unreadable-file", "`%s` cannot be read: %s", file->text,
                   anb__reading_problem(error));
        return anb__poison();
    }
    if (!right) return anb__poison();
    anb__item item = {.kind = ANB__ITEM_DATA, .span = tree->span, .count = ports_of_name(path)};
    return anb__item_value(x, &item);
}
