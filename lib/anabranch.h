/* libanabranch: what a passive radio-frequency network does, exactly and fast.
 *
 * A network is written as text (docs/language.md), read into an `anb_netlist`,
 * and swept over its frequencies into an `anb_data`, N-port data that can be read
 * entry by entry or written as Touchstone:
 *
 *     anb_context *context = anb_context_new();
 *     anb_netlist *netlist;
 *     anb_data *data;
 *     if (anb_netlist_read(context, "splitter.anab", NULL, &netlist) == ANB_OK &&
 *         anb_sweep(context, netlist, NULL, &data) == ANB_OK) {
 *         double s[2];
 *         anb_data_s(data, 0, 1, 0, s);           // S21 at the first frequency
 *     }
 *
 * Ways that hold throughout:
 *   - Every call that can fail returns an `anb_status`; what was wrong stands in the
 *     context's diagnostics. The library never prints, exits, aborts or touches the locale.
 *   - Objects are opaque, and each has one `_free`, which takes NULL.
 *   - A context and what came from it belong to one thread at a time. There is no
 *     state outside a context.
 *   - Frequencies are in hertz, impedances in ohm, all indices count from 0.
 *   - S-parameters are in power waves (Kurokawa 1965) unless said otherwise;
 *     S(to, from) is the wave out of `to` for one into `from`.
 */
#ifndef ANABRANCH_H
#define ANABRANCH_H

#include <stddef.h>
#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#if defined(__GNUC__)
#define ANB_API __attribute__((visibility("default")))
#else
#define ANB_API
#endif

/* ---- results of calls --------------------------------------------------- */

typedef enum anb_status {
    ANB_OK = 0,
    ANB_INVALID = 1,   /* the netlist, a file or an argument is wrong: see the diagnostics */
    ANB_MEMORY = 2,    /* out of memory */
    ANB_IO = 3,        /* reading or writing failed; errno tells more */
    ANB_CANCELLED = 4, /* stopped through anb_context_cancel or by a consumer */
    ANB_CLOSED = 5     /* the reader of a pipe has gone */
} anb_status;

/* The library's version, e.g. "0.1.0". */
ANB_API const char *anb_version(void);

/* ---- context and diagnostics -------------------------------------------- */

typedef struct anb_context anb_context;

/* NULL when memory is gone. */
ANB_API anb_context *anb_context_new(void);
ANB_API void anb_context_free(anb_context *context);

/* Asks a running call on this context to stop soon with ANB_CANCELLED. The only
 * call that may come from another thread or a signal handler. */
ANB_API void anb_context_cancel(anb_context *context);

typedef enum anb_severity { ANB_ERROR, ANB_WARNING, ANB_NOTE } anb_severity;

/* One message. Lines and columns count from 1, columns in code points; `line` is 0
 * where the message has no place. The texts live until the context's next call. */
typedef struct anb_message {
    anb_severity severity;
    const char *code; /* a stable word for programs, e.g. "unknown-part" */
    const char *text; /* a sentence without a full stop */
    const char *hint; /* what to write instead, or NULL */
    const char *path; /* the file, as it was named; "-" is standard input */
    unsigned line, column;
    unsigned end_line, end_column; /* one past the marked span */
    const char *source_line;       /* the whole line, without its end; not NUL-terminated */
    size_t source_line_length;     /* bytes */
} anb_message;

ANB_API size_t anb_message_count(const anb_context *context);
ANB_API void anb_message_get(const anb_context *context, size_t index, anb_message *out);
/* The second places of a message ("first defined here"): severity is ANB_NOTE. */
ANB_API size_t anb_note_count(const anb_context *context, size_t index);
ANB_API void anb_note_get(const anb_context *context, size_t index, size_t note, anb_message *out);
/* Errors found in all, those beyond the 20 that are kept included. */
ANB_API size_t anb_error_count(const anb_context *context);
ANB_API void anb_messages_clear(anb_context *context);

/* ---- netlists ------------------------------------------------------------ */

typedef struct anb_netlist anb_netlist;

/* What replaces parts of a file's text. A zeroed one replaces nothing. */
typedef struct anb_overrides {
    const char *const *set; /* `set_count` texts "name=value", in the language's syntax */
    size_t set_count;
    const char *sweep; /* a sweep without its first word, e.g. "500 MHz .. 1 GHz points 11", or NULL */
} anb_overrides;

/* Reads, checks and expands a netlist. `path` may be "-" for standard input;
 * `overrides` may be NULL. On ANB_INVALID the diagnostics say what is wrong. */
ANB_API anb_status anb_netlist_read(anb_context *context, const char *path,
                                    const anb_overrides *overrides, anb_netlist **out);
/* The same from memory; `path` is the name for messages and for files named in it. */
ANB_API anb_status anb_netlist_parse(anb_context *context, const char *path, const char *text,
                                     size_t length, const anb_overrides *overrides,
                                     anb_netlist **out);
ANB_API void anb_netlist_free(anb_netlist *netlist);

ANB_API const char *anb_netlist_title(const anb_netlist *netlist); /* "" where there is none */
ANB_API size_t anb_netlist_port_count(const anb_netlist *netlist);
ANB_API const char *anb_netlist_port_name(const anb_netlist *netlist, size_t port);
/* The port's reference impedance, re and im, in ohm. */
ANB_API void anb_netlist_port_reference(const anb_netlist *netlist, size_t port, double out[2]);
/* The nodes between which it lies: `side` 0 is its own node, 1 its return (0, ground, unless
 * it was declared between two). */
ANB_API size_t anb_netlist_port_node(const anb_netlist *netlist, size_t port, unsigned side);

ANB_API size_t anb_netlist_node_count(const anb_netlist *netlist); /* ground is node 0 */
/* The node's name, "" for one without; lives as long as the netlist. */
ANB_API const char *anb_netlist_node_name(const anb_netlist *netlist, size_t node);

ANB_API size_t anb_netlist_part_count(const anb_netlist *netlist);
typedef struct anb_part_info {
    const char *kind;   /* as in the language: "line", "resistor", ... */
    const char *label;  /* "S1.r", or "" */
    size_t node_count;  /* nodes that it touches, in the order of its terminals */
    unsigned line;      /* where it is written */
    const char *path;
} anb_part_info;
ANB_API void anb_netlist_part_get(const anb_netlist *netlist, size_t part, anb_part_info *out);
ANB_API size_t anb_netlist_part_node(const anb_netlist *netlist, size_t part, size_t terminal);
/* The part's values as text in the language's syntax, e.g. "70.710678118654755 ohm, 90 deg @ 1 GHz",
 * written as snprintf does: returns the length needed, without the NUL. */
ANB_API size_t anb_netlist_part_values(const anb_netlist *netlist, size_t part, char *buffer,
                                       size_t size);

/* The frequencies of its sweep, in rising order; 0 where it has none. */
ANB_API size_t anb_netlist_frequency_count(const anb_netlist *netlist);
ANB_API double anb_netlist_frequency(const anb_netlist *netlist, size_t point);

/* Its `cases` names, in the order of the text, but for those that an override has set: a
 * netlist stands for the first value of each. A value is text for "name=value" of an override,
 * as written where it is written out ("3.3 nH"), calculated where it comes from a range. */
ANB_API size_t anb_netlist_case_count(const anb_netlist *netlist);
ANB_API const char *anb_netlist_case_name(const anb_netlist *netlist, size_t index);
ANB_API size_t anb_netlist_case_value_count(const anb_netlist *netlist, size_t index);
ANB_API const char *anb_netlist_case_value(const anb_netlist *netlist, size_t index, size_t value);

/* The netlist's text in its standard layout, comments kept. `out` is to be released
 * with anb_text_free. */
ANB_API anb_status anb_format(anb_context *context, const char *path, const char *text,
                              size_t length, char **out, size_t *out_length);
ANB_API void anb_text_free(char *text);

/* ---- sweeps -------------------------------------------------------------- */

typedef struct anb_data anb_data;

typedef struct anb_sweep_options {
    unsigned threads; /* 0: one for each processor */
    const char *kernel; /* NULL: the best of this machine; "plain", "avx2", "avx512" */
    /* Called now and then, from the calling thread, with the share done (0 to 1); may be NULL. */
    void (*progress)(void *user, double share);
    void *user;
} anb_sweep_options;

/* Sweeps the netlist over its frequencies into one block of data. `options` may be NULL. */
ANB_API anb_status anb_sweep(anb_context *context, const anb_netlist *netlist,
                             const anb_sweep_options *options, anb_data **out);

/* The same, handed on in blocks of points in rising order, so that memory does not grow
 * with their number. A consumer returns ANB_OK to go on; anything else stops the sweep and
 * is returned. `block` is valid during the call only. */
typedef anb_status anb_consumer(void *user, const anb_data *block, size_t first_point);
ANB_API anb_status anb_sweep_blocks(anb_context *context, const anb_netlist *netlist,
                                    const anb_sweep_options *options, anb_consumer *consumer,
                                    void *user);

/* How a sweep was computed, for the curious. */
typedef struct anb_statistics {
    size_t unknowns;      /* of the plan's matrix */
    size_t slots;         /* entries of its factors */
    size_t operations;    /* complex multiply-adds of a point */
    size_t points;
    size_t pivoted_points; /* those that the guard sent the pivoted way */
    double compile_seconds;
    const char *kernel;
} anb_statistics;
/* Sweeps, throws the data away and tells. */
ANB_API anb_status anb_sweep_statistics(anb_context *context, const anb_netlist *netlist,
                                        const anb_sweep_options *options, anb_statistics *out);

/* ---- N-port data ---------------------------------------------------------- */

ANB_API void anb_data_free(anb_data *data);
ANB_API size_t anb_data_port_count(const anb_data *data);
ANB_API size_t anb_data_point_count(const anb_data *data);
ANB_API double anb_data_frequency(const anb_data *data, size_t point);
/* S(to, from) at a point, re and im. */
ANB_API void anb_data_s(const anb_data *data, size_t point, size_t to, size_t from, double out[2]);
ANB_API void anb_data_reference(const anb_data *data, size_t port, double out[2]);
/* 1 where only the triangle of a symmetric matrix is kept. */
ANB_API int anb_data_reciprocal(const anb_data *data);

/* ---- writing -------------------------------------------------------------- */

typedef enum anb_format_kind { ANB_RI, ANB_MA, ANB_DB } anb_format_kind;
typedef enum anb_output_kind { ANB_TOUCHSTONE, ANB_JSON, ANB_CSV } anb_output_kind;

/* A zeroed one gives the defaults: Touchstone of the version that fits, Hz, RI, shortest digits. */
typedef struct anb_write_options {
    anb_output_kind kind;
    const char *version;     /* NULL, "1", "1.1", "2", "2.1" */
    const char *unit;        /* NULL, "Hz", "kHz", "MHz", "GHz" */
    anb_format_kind format;
    const double *reference; /* ohm; NULL, or `reference_count` (1 or one for each port) */
    size_t reference_count;
    int digits;              /* significant digits, 1 to 17; 0: the shortest that read back */
} anb_write_options;

/* Sweeps and writes as it goes: the way of the command `sweep`. `write` gets the bytes in
 * order; it returns ANB_OK, or what is to be returned. What can be refused is refused before
 * the first byte. Warnings (a complex reference, say) stand in the diagnostics. */
typedef anb_status anb_writer(void *user, const char *bytes, size_t length);
ANB_API anb_status anb_sweep_write(anb_context *context, const anb_netlist *netlist,
                                   const anb_sweep_options *sweep,
                                   const anb_write_options *options, anb_writer *write, void *user);

/* A number in the shortest form that reads back to the same double: `buffer` has at least
 * 32 bytes; returns the length. */
ANB_API size_t anb_number_write(double value, char *buffer);
/* Reads a number (digits, point, exponent; no blanks, inf or nan) from `text`, correctly rounded.
 * Returns the bytes read, 0 where none starts here. */
ANB_API size_t anb_number_read(const char *text, size_t length, double *value);

#ifdef __cplusplus
}
#endif

#endif
