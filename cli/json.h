/* Texts as JSON (RFC 8259) and CSV (RFC 4180) want them. */
#ifndef CLI_JSON_H
#define CLI_JSON_H

#include "output.h"

/* A text in quotes, what needs it escaped. */
void json_text(cli_output *out, const char *text);
/* A text as a field: in quotes where it needs them. */
void csv_text(cli_output *out, const char *text);
void json_number(cli_output *out, double value);

#endif
