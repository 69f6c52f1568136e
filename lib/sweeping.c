/* The way from a network to its data, from top to bottom. */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "context.h"
#include "data/data.h"
#include "data/write.h"
#include "network/expand.h"
#include "sweep/run.h"

enum { BLOCK_BYTES = 1 << 20 }; /* of S in a block; a block has 8 points at least */

/* A sweep in progress. */
typedef struct sweeping {
    anb_context *context;
    const anb_netlist *netlist;
    const anb_sweep_options *options;
    anb__network network; /* the netlist's, its ports perhaps with other references */
    anb__port *ports;     /* those, or NULL */
    anb__engine engine;
    anb__outcome outcome;
} sweeping;

/* ---- beginning and end --------------------------------------------------------------------------- */

/* Lets `check` write into a fresh report and hands its messages to the context. ANB_INVALID where `check`
 * says false. */
static anb_status consult(const sweeping *s, bool (*check)(anb__report *report, void *user), void *user) {
    anb__arena arena = ANB__ARENA_EMPTY;
    anb__report report = {.arena = &arena, .sources = s->netlist->report.sources};
    jmp_buf escape;
    volatile anb_status status = ANB_MEMORY;
    if (!setjmp(escape)) {
        arena.escape = &escape;
        bool good = check(&report, user);
        status = anb__context_take(s->context, &report);
        if (status == ANB_OK && !good) status = ANB_INVALID;
    }
    anb__arena_free(&arena);
    return status;
}

typedef struct complaint {
    anb__span span;
    const char *code, *text, *hint;
} complaint;

static bool write_complaint(anb__report *report, void *user) {
    const complaint *c = user;
    anb__diagnostic *d = anb__error(report, c->span, c->code, "%s", c->text);
    if (c->hint) anb__add_hint(report, d, "%s", c->hint);
    return false;
}

/* One message of the network as a whole, at a place. */
static anb_status complain(const sweeping *s, anb__span span, const char *code, const char *text,
                           const char *hint) {
    return consult(s, write_complaint, &(complaint){span, code, text, hint});
}

static anb_status refuse_kernel(const sweeping *s) {
    return complain(s, (anb__span){UINT32_MAX, 0, 0}, "no-kernel", "this machine has no kernel of that name",
                    "plain, avx2 or avx512");
}

static bool check_sweep(anb__report *report, void *user) {
    const sweeping *s = user;
    return anb__require_sweep(report, s->netlist->file, &s->netlist->network);
}

static anb_status begin(sweeping *s, anb_context *context, const anb_netlist *netlist,
                        const anb_sweep_options *options) {
    static const anb_sweep_options defaults = {0};
    *s = (sweeping){.context = context, .netlist = netlist, .options = options ? options : &defaults};
    anb__context_begin(context);
    anb_status status = consult(s, check_sweep, s);
    if (status != ANB_OK) return status;
    const char *kernel = s->options->kernel;
    if (!anb__plan_kernel_find(kernel) || !anb__assembly_kernel(kernel)) return refuse_kernel(s);
    s->network = netlist->network;
    return ANB_OK;
}

static anb_status compile(sweeping *s) {
    return anb__engine_new(&s->network, &s->netlist->grid, s->options->kernel, &s->engine);
}

static void end(sweeping *s) {
    anb__engine_clear(&s->engine);
    free(s->ports);
    if (atomic_load(&s->context->cancelled)) atomic_store(&s->context->cancelled, false);
}

/* ---- what has no solution ------------------------------------------------------------------------------ */

/* The part whose branch an unknown current of the tableau belongs to. */
static const anb__placed *part_of_current(const anb__network *network, uint32_t branch) {
    for (uint32_t i = 0; i < network->part_count; i++)
        if (branch - network->parts[i].first_branch < network->parts[i].branch_count)
            return &network->parts[i];
    return NULL;
}

static const anb__placed *part_at_node(const anb__network *network, uint32_t node) {
    for (uint32_t i = 0; i < network->part_count; i++)
        for (uint32_t k = 0; k < network->parts[i].branch_count; k++) {
            const anb__branch *branch = &network->branches[network->parts[i].first_branch + k];
            if (branch->plus == node || branch->minus == node) return &network->parts[i];
        }
    return NULL;
}

static void name_node(const anb__network *network, uint32_t node, char *buffer, size_t size) {
    const char *name = network->node_names[node];
    snprintf(buffer, size, *name ? "node `%s`" : "a node without a name", name);
}

static void name_frequency(double hz, char *buffer) {
    char number[32];
    number[anb_number_write(hz, number)] = '\0';
    sprintf(buffer, "%s Hz", number);
}

/* The message for an unknown of the tableau: a node's voltage, a branch's or a port's current. */
static anb_status complain_unknown(const sweeping *s, uint32_t unknown, const char *at) {
    const anb__network *network = &s->network;
    anb__tableau t;
    char text[400], node[120] = "";
    const anb__placed *part = NULL;
    anb__span span = network->ports[0].span;
    if (anb__tableau_new(network, &s->engine.nodes, &t) != ANB_OK) {
        anb__tableau_clear(&t);
        return ANB_MEMORY;
    }
    if (unknown < t.first_branch) {
        uint32_t n = 0;
        while (t.node_unknown[n] != unknown) n++;
        name_node(network, n, node, sizeof node);
        part = part_at_node(network, n);
        snprintf(text, sizeof text,
                 "at %s the network has no S-parameters: nothing determines the voltage of %s", at, node);
    } else if (unknown < t.first_port) {
        part = part_of_current(network, unknown - t.first_branch);
        if (part) name_node(network, network->branches[unknown - t.first_branch].plus, node, sizeof node);
        snprintf(text, sizeof text,
                 "at %s the network has no S-parameters: nothing determines the current of this part at %s",
                 at, node);
    } else if (unknown != UINT32_MAX) {
        const anb__port *port = &network->ports[unknown - t.first_port];
        span = port->span;
        name_node(network, port->plus, node, sizeof node);
        snprintf(text, sizeof text,
                 "at %s the network has no S-parameters: the current of port `%s` at %s has no finite value",
                 at, port->name, node);
    } else {
        snprintf(text, sizeof text, "at %s the network has no S-parameters", at);
    }
    if (part) span = part->span;
    anb__tableau_clear(&t);
    return complain(s, span, "no-solution", text, NULL);
}

static anb_status complain_failure(const sweeping *s) {
    const anb__outcome *o = &s->outcome;
    char at[48], text[200];
    name_frequency(o->failed_hz, at);
    if (o->failed_part == UINT32_MAX) return complain_unknown(s, o->failed_unknown, at);
    snprintf(text, sizeof text, "at %s a value of this part is not defined or not finite", at);
    return complain(s, s->network.parts[o->failed_part].span, "no-value", text, NULL);
}

/* ---- running ---------------------------------------------------------------------------------- */

static size_t elements_of(const sweeping *s) {
    size_t ports = s->network.port_count;
    return s->engine.assembly.symmetric ? ports * (ports + 1) / 2 : ports * ports;
}

static uint64_t block_points(const sweeping *s) {
    uint64_t groups = BLOCK_BYTES / (elements_of(s) * ANB__GROUP * sizeof(double));
    return (groups ? groups : 1) * ANB__LANES;
}

static void tell_progress(const sweeping *s, const anb__block *block) {
    if (!s->options->progress) return;
    s->options->progress(s->options->user,
                         (double)(block->first + block->count) / (double)s->netlist->grid.count);
}

static anb_status run(sweeping *s, anb__job *job) {
    job->block_points = block_points(s);
    anb_status status = anb__run(&s->engine, &s->netlist->grid, s->options->threads, job,
                                 &s->context->cancelled, &s->outcome);
    return status == ANB_INVALID ? complain_failure(s) : status;
}

static anb_data *new_data(const sweeping *s, uint64_t points) {
    const anb__network *network = &s->network;
    anb_data *data = anb__data_new(network->port_count, points, s->engine.assembly.symmetric);
    for (uint32_t k = 0; data && k < network->port_count; k++) data->reference[k] = network->ports[k].z;
    return data;
}

static void free_data(void *user, void *payload) {
    (void)user;
    anb_data_free(payload);
}

/* S of a block into data that begin at the block's first point. */
static anb_status compute_into(anb__bench *bench, const anb__block *block, anb_data *data) {
    memcpy(data->frequencies, block->hz, block->count * sizeof *block->hz);
    return anb__compute_points(bench, block->hz, block->count, data->s);
}

/* ---- into one block of data ------------------------------------------------------------------- */

typedef struct collecting {
    sweeping base;
    anb_data *data;
} collecting;

/* The blocks lie side by side in the data: there is nothing to keep for each. */
static void *no_payload(void *user) { return user; }
static void keep_payload(void *user, void *payload) { (void)user, (void)payload; }

static anb_status collect(void *user, anb__bench *bench, anb__block *block) {
    collecting *c = user;
    memcpy(c->data->frequencies + block->first, block->hz, block->count * sizeof *block->hz);
    double *to = c->data->s + block->first / ANB__LANES * elements_of(&c->base) * ANB__GROUP;
    return anb__compute_points(bench, block->hz, block->count, to);
}

static anb_status only_progress(void *user, anb__block *block) {
    tell_progress(user, block);
    return ANB_OK;
}

anb_status anb_sweep(anb_context *context, const anb_netlist *netlist, const anb_sweep_options *options,
                     anb_data **out) {
    collecting c = {0};
    *out = NULL;
    anb_status status = begin(&c.base, context, netlist, options);
    if (status == ANB_OK) status = compile(&c.base);
    if (status == ANB_OK) {
        c.data = new_data(&c.base, netlist->grid.count);
        anb__job job = {.user = &c,
                        .make_payload = no_payload,
                        .free_payload = keep_payload,
                        .process = collect,
                        .deliver = only_progress};
        status = c.data ? run(&c.base, &job) : ANB_MEMORY;
    }
    if (status == ANB_OK)
        *out = c.data;
    else
        anb_data_free(c.data);
    end(&c.base);
    return status;
}

/* ---- in blocks to a consumer ------------------------------------------------------------------ */

typedef struct handing {
    sweeping base;
    anb_consumer *consumer;
    void *user;
} handing;

static void *block_data(void *user) {
    sweeping *s = user;
    return new_data(s, block_points(s));
}

static anb_status compute_block(void *user, anb__bench *bench, anb__block *block) {
    (void)user;
    anb_data *data = block->payload;
    data->points = block->count;
    return compute_into(bench, block, data);
}

static anb_status hand_on(void *user, anb__block *block) {
    handing *h = user;
    tell_progress(&h->base, block);
    return h->consumer(h->user, block->payload, block->first);
}

anb_status anb_sweep_blocks(anb_context *context, const anb_netlist *netlist,
                            const anb_sweep_options *options, anb_consumer *consumer, void *user) {
    handing h = {.consumer = consumer, .user = user};
    anb_status status = begin(&h.base, context, netlist, options);
    if (status == ANB_OK) status = compile(&h.base);
    if (status == ANB_OK) {
        anb__job job = {.user = &h,
                        .make_payload = block_data,
                        .free_payload = free_data,
                        .process = compute_block,
                        .deliver = hand_on};
        status = run(&h.base, &job);
    }
    end(&h.base);
    return status;
}

/* ---- for the curious -------------------------------------------------------------------------- */

anb_status anb_sweep_statistics(anb_context *context, const anb_netlist *netlist,
                                const anb_sweep_options *options, anb_statistics *out) {
    sweeping s;
    *out = (anb_statistics){0};
    anb_status status = begin(&s, context, netlist, options);
    if (status == ANB_OK) status = compile(&s);
    if (status == ANB_OK) {
        anb__job job = {.user = &s,
                        .make_payload = block_data,
                        .free_payload = free_data,
                        .process = compute_block,
                        .deliver = only_progress};
        status = run(&s, &job);
    }
    if (status == ANB_OK)
        *out = (anb_statistics){.unknowns = s.engine.assembly.unknown_count,
                                .slots = anb__plan_slot_count(s.engine.plan),
                                .operations = (size_t)anb__plan_operations(s.engine.plan),
                                .points = (size_t)netlist->grid.count,
                                .pivoted_points = (size_t)s.outcome.pivoted_points,
                                .compile_seconds = s.engine.compile_seconds,
                                .kernel = s.engine.kernel->name};
    end(&s);
    return status;
}

/* ---- as text ---------------------------------------------------------------------------------- */

typedef struct writing {
    sweeping base;
    anb__form form;
    double *reference;
    const char **names;
    anb_writer *write;
    void *user;
    bool begun; /* something has been written */
} writing;

typedef struct page {
    anb_data *data;
    anb__text text;
} page;

static void free_page(void *user, void *payload) {
    page *p = payload;
    (void)user;
    anb_data_free(p->data);
    anb__text_free(&p->text);
    free(p);
}

static void *new_page(void *user) {
    page *p = calloc(1, sizeof *p);
    if (p) p->data = block_data(user);
    if (!p || p->data) return p;
    free(p);
    return NULL;
}

static anb_status compute_page(void *user, anb__bench *bench, anb__block *block) {
    writing *w = user;
    page *p = block->payload;
    p->data->points = block->count;
    p->text.length = 0;
    anb_status status = compute_into(bench, block, p->data);
    if (status != ANB_OK) return status;
    bool finite = anb__form_block(&w->form, p->data, block->first, &p->text);
    if (p->text.failed) return ANB_MEMORY;
    return finite ? ANB_OK : ANB_INVALID;
}

/* Hands the text on and empties it. */
static anb_status hand_text(writing *w, anb__text *text) {
    if (text->failed) return ANB_MEMORY;
    w->begun = w->begun || text->length;
    anb_status status = text->length ? w->write(w->user, text->bytes, text->length) : ANB_OK;
    text->length = 0;
    return status;
}

/* The head is written with the first block, so that a sweep without any result leaves no trace. */
static anb_status write_page(void *user, anb__block *block) {
    writing *w = user;
    page *p = block->payload;
    anb_status status = ANB_OK;
    tell_progress(&w->base, block);
    if (!block->first) {
        anb__text head = {0};
        anb__form_begin(&w->form, &head);
        status = hand_text(w, &head);
        anb__text_free(&head);
    }
    return status == ANB_OK ? hand_text(w, &p->text) : status;
}

enum { LISTED_AT_ONCE = 4096 };

static anb_status write_end(writing *w, bool complete) {
    const anb__grid *grid = &w->base.netlist->grid;
    anb__text text = {0};
    anb_status status = ANB_OK;
    double hz[LISTED_AT_ONCE];
    uint64_t listed = complete && anb__form_lists_frequencies(&w->form) ? grid->count : 0;
    for (uint64_t first = 0; first < listed && status == ANB_OK; first += LISTED_AT_ONCE) {
        uint64_t count = listed - first < LISTED_AT_ONCE ? listed - first : LISTED_AT_ONCE;
        status = anb__grid_fill(grid, first, count, hz);
        if (status != ANB_OK) break;
        anb__form_frequencies(&w->form, hz, first, count, &text);
        status = hand_text(w, &text);
    }
    if (status == ANB_OK) {
        anb__form_end(&w->form, complete, &text);
        status = hand_text(w, &text);
    }
    anb__text_free(&text);
    return status;
}

/* ---- references ------------------------------------------------------------------------------- */

/* The references to write at: those asked for, else the ports' own, of complex ones the real part. The
 * network is then computed at them, which is what renormalising its S-parameters gives. */
static void choose_references(anb__report *report, const anb_write_options *options, writing *w) {
    anb__network *network = &w->base.network;
    for (uint32_t k = 0; k < network->port_count; k++) {
        anb__complex z = network->ports[k].z;
        w->names[k] = network->ports[k].name;
        w->reference[k] =
            options->reference_count ? options->reference[options->reference_count == 1 ? 0 : k] : z.re;
        w->base.ports[k].z = anb__cx(w->reference[k], 0);
        if (z.im == 0 || options->reference_count) continue;
        anb__diagnostic *d = anb__warning(
            report, network->ports[k].span, "complex-reference",
            "port `%s` has a complex reference, which no file can hold: it is written at its real part",
            network->ports[k].name);
        anb__add_hint(report, d, "`--reference` chooses another one");
    }
    network->ports = w->base.ports;
}

static bool check_references(anb__report *report, const anb_write_options *options, const writing *w) {
    uint32_t ports = w->base.network.port_count;
    anb__span nowhere = {UINT32_MAX, 0, 0};
    for (size_t k = 0; k < options->reference_count; k++)
        if (!(options->reference[k] > 0) || !isfinite(options->reference[k])) {
            anb__error(report, nowhere, "reference", "a reference has to be above 0 ohm");
            return false;
        }
    if (options->reference_count <= 1 || options->reference_count == ports) return true;
    anb__error(report, nowhere, "reference", "%zu references for %u port%s: one for all, or one for each",
               options->reference_count, ports, ports == 1 ? "" : "s");
    return false;
}

typedef struct preparation {
    writing *w;
    const anb_write_options *options;
} preparation;

static bool prepare_form(anb__report *report, void *user) {
    const preparation *p = user;
    writing *w = p->w;
    if (!check_references(report, p->options, w)) return false;
    choose_references(report, p->options, w);
    w->form = (anb__form){.ports = w->base.network.port_count,
                          .points = w->base.netlist->grid.count,
                          .reference = w->reference,
                          .title = w->base.network.title,
                          .source = w->base.netlist->path,
                          .names = w->names};
    return anb__form_check(report, p->options, &w->form);
}

static anb_status begin_writing(writing *w, const anb_write_options *options) {
    uint32_t ports = w->base.network.port_count;
    w->reference = malloc((ports + 1) * sizeof *w->reference);
    w->names = malloc((ports + 1) * sizeof *w->names);
    w->base.ports = malloc((ports + 1) * sizeof *w->base.ports);
    if (!w->reference || !w->names || !w->base.ports) return ANB_MEMORY;
    memcpy(w->base.ports, w->base.network.ports, ports * sizeof *w->base.ports);
    return consult(&w->base, prepare_form, &(preparation){w, options});
}

anb_status anb_sweep_write(anb_context *context, const anb_netlist *netlist, const anb_sweep_options *sweep,
                           const anb_write_options *options, anb_writer *write, void *user) {
    static const anb_write_options defaults = {0};
    writing w = {.write = write, .user = user};
    anb_status status = begin(&w.base, context, netlist, sweep);
    if (status == ANB_OK) status = begin_writing(&w, options ? options : &defaults);
    if (status == ANB_OK) status = compile(&w.base);
    if (status == ANB_OK) {
        anb__job job = {.user = &w,
                        .make_payload = new_page,
                        .free_payload = free_page,
                        .process = compute_page,
                        .deliver = write_page};
        status = run(&w.base, &job);
        if (status == ANB_OK)
            status = write_end(&w, true);
        else if (w.begun && status != ANB_CLOSED && status != ANB_IO)
            write_end(&w, false);
    }
    free(w.reference);
    free(w.names);
    end(&w.base);
    return status;
}
