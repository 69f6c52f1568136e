/* The exit statuses of the command, the same for every subcommand. */
#ifndef CLI_STATUS_H
#define CLI_STATUS_H

enum {
    STATUS_OK = 0,      /* all is well; also when the reader of a pipe has gone */
    STATUS_UNMET = 1,   /* what was asked about does not hold */
    STATUS_WRONG = 2,   /* the call, the netlist or a file is wrong */
    STATUS_MACHINE = 3, /* memory or disk gave out, or a failure after the first byte was written */
    STATUS_SIGNAL = 128 /* and the signal's number: 130 after Ctrl-C */
};

#endif
