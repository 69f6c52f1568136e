/* The command `anabranch`: a thin front on libanabranch. It reads the call, hands it to one
 * of the commands below, and prints what comes back; all that is computed, the library computes. */
#include <errno.h>
#include <fcntl.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

#include "anabranch.h"
#include "command.h"
#include "interrupt.h"
#include "message.h"
#include "nearest.h"
#include "options.h"
#include "output.h"
#include "status.h"

static const cli_command commands[] = {
    {"sweep", ON_SWEEP, "FILE", 1, "The S-parameters of a netlist over its frequencies.",
     "example\n"
     "  anabranch sweep splitter.anab -o splitter.s3p --set z0=75ohm\n"
     "Where the netlist has `cases x = ...`, -o out_{x}.s3p writes one file for each.\n",
     sweep_run},
    {"show", ON_SHOW, "FILE", 1, "What a netlist became: its ports, nodes and parts with their values.",
     "example\n"
     "  anabranch show feed.anab --set f0=2.4GHz\n"
     "A node without a name is shown as # and its number.\n",
     show_run},
    {"format", ON_FORMAT, "FILE...", (size_t)-1,
     "Netlists in their standard layout, comments kept.",
     "examples\n"
     "  anabranch format splitter.anab -o splitter.anab\n"
     "  anabranch format --check *.anab\n"
     "Formatting changes no result. What is laid out already stays as it is.\n",
     format_run},
};
enum { COMMAND_COUNT = sizeof commands / sizeof *commands };

/* ---- the tool's own help ------------------------------------------------------- */

static void put_help(cli_output *out) {
    output_text(out, "anabranch: what a passive radio-frequency network does, exactly and fast\n\n"
                     "usage: anabranch COMMAND [OPTION...] FILE...\n\n");
    for (int i = 0; i < COMMAND_COUNT; i++)
        output_format(out, "  %-8s %s\n", commands[i].name, commands[i].purpose);
    output_text(out, "\n  --help     this text; after a command, its options\n"
                     "  --version  the version\n\n"
                     "FILE is a netlist, or - for standard input. Results go to standard output or\n"
                     "with -o to a file, which appears whole or not at all.\n\n"
                     "example\n"
                     "  anabranch sweep splitter.anab -o splitter.s3p\n\n"
                     "Exit status: 0 all is well; 1 what was asked does not hold; 2 the call, the\n"
                     "netlist or a file is wrong; 3 memory or disk failed; 130 interrupted.\n");
}

static int print_help(void) {
    cli_output out;
    int status = output_open(&out, NULL);
    if (status != STATUS_OK) return status;
    put_help(&out);
    return output_finish(&out, STATUS_OK);
}

static int print_version(void) {
    cli_output out;
    int status = output_open(&out, NULL);
    if (status != STATUS_OK) return status;
    output_format(&out, "anabranch %s\n", anb_version());
    return output_finish(&out, STATUS_OK);
}

/* ---- the call --------------------------------------------------------------------- */

static const cli_command *find_command(const char *name) {
    for (int i = 0; i < COMMAND_COUNT; i++)
        if (!strcmp(commands[i].name, name)) return &commands[i];
    return NULL;
}

static int unknown_command(const char *word) {
    bool option = word[0] == '-' && word[1];
    cli_nearest search = nearest_to(word);
    for (int i = 0; i < COMMAND_COUNT && !option; i++) nearest_offer(&search, commands[i].name);
    nearest_offer(&search, "--help");
    nearest_offer(&search, "--version");
    return message_wrong(search.name ? search.name : "`anabranch --help` lists the commands",
                         search.name && option ? "there is no option `%s`"
                         : option              ? "a command comes before `%s`"
                                               : "there is no command `%s`",
                         word);
}

static int run(const cli_command *command, int count, char **words) {
    cli_settings settings = {0};
    int status = options_read(command, count, words, &settings);
    if (status == STATUS_OK) status = settings.help ? options_help(command) : command->run(&settings);
    settings_free(&settings);
    return status;
}

static int dispatch(int count, char **words) {
    if (count < 2) return message_wrong("`anabranch --help` lists the commands", "which command?");
    if (!strcmp(words[1], "--help") || !strcmp(words[1], "-h")) return print_help();
    if (!strcmp(words[1], "--version")) return print_version();
    const cli_command *command = find_command(words[1]);
    return command ? run(command, count - 2, words + 2) : unknown_command(words[1]);
}

/* A standard descriptor that is closed would be the next file's: it is given to something
 * whose use fails. */
static void fill_descriptors(void) {
    for (int file = 0; file <= 2; file++)
        if (fcntl(file, F_GETFD) < 0 && errno == EBADF) open("/dev/null", file ? O_RDONLY : O_WRONLY);
}

int main(int count, char **words) {
    static char errors[1 << 14];
    fill_descriptors();
    setvbuf(stderr, errors, _IOFBF, sizeof errors);
    message_start();
    interrupt_start();
    return dispatch(count, words);
}
