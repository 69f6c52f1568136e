#include "options.h"

#include <limits.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "message.h"
#include "nearest.h"
#include "output.h"
#include "status.h"

typedef enum option_kind {
    FLAG,   /* bool */
    TEXT,   /* const char * */
    CHOICE, /* const char *: one of the words in `argument` */
    NUMBER, /* unsigned: 1 to `most` */
    REPEAT  /* const char *[]: `set`; may be given again */
} option_kind;

typedef struct option_entry {
    const char *name;
    char letter; /* or 0 */
    option_kind kind;
    const char *argument; /* as the help shows it; NULL for a flag */
    unsigned most;
    size_t offset; /* of its setting */
    unsigned commands;
    const char *help;
} option_entry;

#define AT(member) offsetof(cli_settings, member)

static const option_entry options[] = {
    {"output", 'o', TEXT, "FILE", 0, AT(output), ON_ALL,
     "write FILE, whole or not at all"},
    {"set", 0, REPEAT, "NAME=VALUE", 0, AT(set), ON_SWEEP | ON_SHOW,
     "give a name another value (repeatable)"},
    {"sweep", 0, TEXT, "SWEEP", 0, AT(sweep), ON_SWEEP | ON_SHOW,
     "in place of the netlist's: \"1 GHz .. 2 GHz points 9\""},
    {"touchstone", 0, CHOICE, "1|1.1|2|2.1", 0, AT(touchstone), ON_SWEEP,
     "version; else 1, or 2 where references differ"},
    {"unit", 0, CHOICE, "Hz|kHz|MHz|GHz", 0, AT(unit), ON_SWEEP,
     "unit of the frequencies; else Hz"},
    {"format", 0, CHOICE, "ri|ma|db", 0, AT(format), ON_SWEEP,
     "form of the S-parameters; else ri (re and im)"},
    {"reference", 0, TEXT, "Z[,Z...]", 0, AT(reference), ON_SWEEP,
     "renormalise to 50ohm, or one Z for each port"},
    {"digits", 0, NUMBER, "N", 17, AT(digits), ON_SWEEP,
     "significant digits; else as many as are needed"},
    {"statistics", 0, FLAG, NULL, 0, AT(statistics), ON_SHOW,
     "also how a sweep of it is computed"},
    {"json", 0, FLAG, NULL, 0, AT(json), ON_SWEEP | ON_SHOW,
     "print one JSON object"},
    {"csv", 0, FLAG, NULL, 0, AT(csv), ON_SWEEP | ON_SHOW,
     "print a table with commas"},
    {"check", 0, FLAG, NULL, 0, AT(check), ON_FORMAT,
     "name the files not in this layout; status 1 if any"},
    {"write", 0, FLAG, NULL, 0, AT(write), ON_FORMAT,
     "write each file anew where its layout differs"},
    {"threads", 0, NUMBER, "N", 1024, AT(threads), ON_SWEEP | ON_SHOW,
     "threads; else one for each processor"},
    {"help", 'h', FLAG, NULL, 0, AT(help), ON_ALL,
     "this text"},
};
enum { OPTION_COUNT = sizeof options / sizeof *options };

/* ---- words ------------------------------------------------------------------ */

int choice_index(const char *choices, const char *word) {
    size_t length = strlen(word);
    for (int index = 0;; index++) {
        size_t size = strcspn(choices, "|");
        if (size == length && !strncmp(choices, word, size)) return index;
        if (!choices[size]) return -1;
        choices += size + 1;
    }
}

/* Offers each word of "a|b|c". `copy` takes the words; it is as long as the choices. */
static void offer_choices(cli_nearest *search, const char *choices, char *copy) {
    strcpy(copy, choices);
    for (char *word = strtok(copy, "|"); word; word = strtok(NULL, "|")) nearest_offer(search, word);
}

static int wrong_choice(const option_entry *option, const char *value) {
    char copy[64];
    cli_nearest search = nearest_to(value);
    offer_choices(&search, option->argument, copy);
    return message_wrong(search.name ? search.name : option->argument, "`--%s` cannot be `%s`",
                         option->name, value);
}

/* A whole number from 1 to `most`, or 0. */
static unsigned whole_number(const char *text, unsigned most) {
    unsigned value = 0;
    if (!*text) return 0;
    for (; *text; text++) {
        if (*text < '0' || *text > '9' || value > most) return 0;
        value = 10 * value + (unsigned)(*text - '0');
    }
    return value <= most ? value : 0;
}

/* ---- finding an option -------------------------------------------------------- */

static const option_entry *find_option(const char *name, size_t length, unsigned commands) {
    for (int i = 0; i < OPTION_COUNT; i++)
        if (options[i].commands & commands && strlen(options[i].name) == length &&
            !strncmp(options[i].name, name, length))
            return &options[i];
    return NULL;
}

static const option_entry *find_letter(char letter, unsigned commands) {
    for (int i = 0; i < OPTION_COUNT; i++)
        if (options[i].letter == letter && options[i].commands & commands) return &options[i];
    return NULL;
}

/* The name of the first command of a set. */
static const char *first_command(unsigned commands) {
    return commands & ON_SWEEP ? "sweep" : commands & ON_SHOW ? "show" : "format";
}

static int unknown_option(const cli_command *command, const char *word) {
    char hint[80], text[80];
    const char *typed = word + (word[1] == '-' ? 2 : 1);
    snprintf(text, sizeof text, "%.*s", (int)strcspn(typed, "="), typed);
    cli_nearest search = nearest_to(text);
    for (int i = 0; i < OPTION_COUNT; i++)
        if (options[i].commands & command->bit) nearest_offer(&search, options[i].name);
    const option_entry *other = find_option(text, strlen(text), ON_ALL);
    if (search.name) snprintf(hint, sizeof hint, "--%s", search.name);
    else if (other) snprintf(hint, sizeof hint, "it belongs to `%s`", first_command(other->commands));
    else snprintf(hint, sizeof hint, "`anabranch %s --help` lists them", command->name);
    return message_wrong(hint, "`%s` has no option `%.*s`", command->name, (int)strcspn(word, "="), word);
}

/* ---- taking it ------------------------------------------------------------------ */

static bool given(const option_entry *option, const cli_settings *out) {
    const char *place = (const char *)out + option->offset;
    switch (option->kind) {
    case FLAG: return *(const bool *)place;
    case NUMBER: return *(const unsigned *)place != 0;
    case TEXT:
    case CHOICE: return *(const char *const *)place != NULL;
    case REPEAT: break;
    }
    return false;
}

static int take(const option_entry *option, const char *value, cli_settings *out) {
    char *place = (char *)out + option->offset;
    if (given(option, out)) return message_wrong(NULL, "`--%s` is given twice", option->name);
    switch (option->kind) {
    case FLAG: *(bool *)place = true; break;
    case TEXT: *(const char **)place = value; break;
    case REPEAT: out->set[out->set_count++] = value; break;
    case CHOICE:
        if (choice_index(option->argument, value) < 0) return wrong_choice(option, value);
        *(const char **)place = value;
        break;
    case NUMBER:
        *(unsigned *)place = whole_number(value, option->most);
        if (!*(unsigned *)place)
            return message_wrong(NULL, "`--%s` wants a whole number from 1 to %u, not `%s`", option->name,
                                 option->most, value);
    }
    return STATUS_OK;
}

typedef struct option_call {
    const cli_command *command;
    int at, count;
    char **words;
} option_call;

/* `value` is what follows the option in its own word, or NULL: then the next word. */
static int take_with_value(option_call *call, const option_entry *option, const char *value,
                           cli_settings *out) {
    if (option->kind == FLAG)
        return value ? message_wrong(NULL, "`--%s` takes no value", option->name) : take(option, NULL, out);
    if (!value && call->at == call->count)
        return message_wrong(NULL, "`--%s` wants a value: %s", option->name, option->argument);
    return take(option, value ? value : call->words[call->at++], out);
}

static int take_long(option_call *call, const char *word, cli_settings *out) {
    size_t length = strcspn(word + 2, "=");
    const option_entry *option = find_option(word + 2, length, call->command->bit);
    if (!option) return unknown_option(call->command, word);
    return take_with_value(call, option, word[2 + length] ? word + 3 + length : NULL, out);
}

static int take_short(option_call *call, const char *word, cli_settings *out) {
    const option_entry *option = find_letter(word[1], call->command->bit);
    if (!option) return unknown_option(call->command, word);
    return take_with_value(call, option, word[2] ? word + 2 : NULL, out);
}

static int read_words(option_call *call, cli_settings *out) {
    bool options_over = false;
    int status = STATUS_OK;
    while (call->at < call->count && status == STATUS_OK && !out->help) {
        const char *word = call->words[call->at++];
        if (options_over || word[0] != '-' || !word[1]) out->files[out->file_count++] = word;
        else if (!strcmp(word, "--")) options_over = true;
        else status = word[1] == '-' ? take_long(call, word, out) : take_short(call, word, out);
    }
    return status;
}

static int check_files(const cli_command *command, const cli_settings *out) {
    char hint[80];
    snprintf(hint, sizeof hint, "anabranch %s %s", command->name, command->operands);
    if (!out->file_count) return message_wrong(hint, "`%s` wants a file", command->name);
    if (out->file_count > command->most_files)
        return message_wrong(hint, "`%s` takes one file; `%s` is one too many", command->name, out->files[1]);
    return STATUS_OK;
}

int options_read(const cli_command *command, int count, char **words, cli_settings *out) {
    out->files = calloc((size_t)count + 1, sizeof *out->files);
    out->set = calloc((size_t)count + 1, sizeof *out->set);
    if (!out->files || !out->set) {
        message_wrong(NULL, "out of memory");
        return STATUS_MACHINE;
    }
    int status = read_words(&(option_call){command, 0, count, words}, out);
    return status != STATUS_OK || out->help ? status : check_files(command, out);
}

void settings_free(cli_settings *settings) {
    free(settings->files);
    free(settings->set);
}

/* ---- help ------------------------------------------------------------------------ */

static void option_heading(const option_entry *option, char *text, size_t size) {
    if (option->letter) snprintf(text, size, "-%c, ", option->letter);
    else *text = 0;
    size_t used = strlen(text);
    snprintf(text + used, size - used, "--%s%s%s", option->name, option->argument ? " " : "",
             option->argument ? option->argument : "");
}

int options_help(const cli_command *command) {
    cli_output out;
    char heading[64];
    int status = output_open(&out, NULL);
    if (status != STATUS_OK) return status;
    output_format(&out, "usage: anabranch %s [OPTION...] %s\n%s\n\n", command->name, command->operands,
                  command->purpose);
    for (int i = 0; i < OPTION_COUNT; i++) {
        if (!(options[i].commands & command->bit)) continue;
        option_heading(&options[i], heading, sizeof heading);
        output_format(&out, "  %-25s %s\n", heading, options[i].help);
    }
    output_format(&out, "\n%s", command->more);
    return output_finish(&out, STATUS_OK);
}
