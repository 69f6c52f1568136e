#include "sweep/engine.h"

#include <stdlib.h>
#include <string.h>
#include <time.h>

static double seconds(void) {
    struct timespec now;
    clock_gettime(CLOCK_MONOTONIC, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

static void *aligned(size_t doubles) {
    size_t bytes = (doubles * sizeof(double) / ANB__ALIGNMENT + 1) * ANB__ALIGNMENT;
    return aligned_alloc(ANB__ALIGNMENT, bytes);
}

/* ---- the plan -------------------------------------------------------------------------------- */

/* Frequencies spread over the sweep, none of them 0, for choosing the order of elimination. */
static anb_status sample_frequencies(const anb__grid *grid, double *hz) {
    for (int k = 0; k < ANB__LANES; k++) {
        uint64_t at = grid->count ? (grid->count - 1) * (uint64_t)(2 * k + 1) / (2 * ANB__LANES) : 0;
        hz[k] = 1e9;
        if (grid->count && anb__grid_fill(grid, at, 1, &hz[k]) != ANB_OK) return ANB_MEMORY;
        if (hz[k] == 0) hz[k] = 1e9;
    }
    return ANB_OK;
}

/* The values of the entries at eight frequencies: [lane][entry]. */
static anb_status sample(const anb__engine *e, const anb__grid *grid, anb__complex *samples) {
    uint32_t count = e->assembly.entry_count;
    double hz[ANB__LANES];
    double *scratch = aligned(anb__assembly_scratch(&e->assembly, 1)),
           *slots = aligned((size_t)count * ANB__GROUP);
    uint32_t *identity = malloc(((size_t)count + 1) * sizeof *identity);
    anb_status status = scratch && slots && identity ? sample_frequencies(grid, hz) : ANB_MEMORY;
    if (status == ANB_OK) {
        for (uint32_t i = 0; i < count; i++) identity[i] = i;
        e->fill(&e->assembly, identity, hz, 1, scratch, slots);
        for (uint32_t lane = 0; lane < ANB__LANES; lane++)
            for (uint32_t i = 0; i < count; i++) {
                const double *from = slots + (size_t)i * ANB__GROUP + lane;
                samples[(size_t)lane * count + i] = anb__cx(from[0], from[ANB__LANES]);
            }
    }
    free(scratch);
    free(slots);
    free(identity);
    return status;
}

/* S = c (p' M^-1 p) c - d with c = sqrt(2 R)/Z and d = Z'/Z (docs/theory.md, eq. 2). */
static void port_constants(const anb__network *network, anb__complex *scale, anb__complex *offset) {
    for (uint32_t k = 0; k < network->port_count; k++) {
        anb__complex z = network->ports[k].z;
        scale[k] = anb__cdiv(anb__cx(sqrt(2 * z.re), 0), z);
        offset[k] = anb__cdiv(anb__cconj(z), z);
    }
}

static anb_status compile_plan(anb__engine *e, const anb__grid *grid) {
    const anb__network *network = e->network;
    uint32_t count = e->assembly.entry_count, ports = network->port_count;
    anb__complex *samples = malloc(((size_t)count * ANB__LANES + 1) * sizeof *samples);
    anb__entry *entries = malloc(((size_t)count + 1) * sizeof *entries);
    anb__complex *scale = malloc(((size_t)ports + 1) * sizeof *scale),
                 *offset = malloc(((size_t)ports + 1) * sizeof *offset);
    e->slot_of = malloc(((size_t)count + 1) * sizeof *e->slot_of);
    anb_status status =
        samples && entries && scale && offset && e->slot_of ? sample(e, grid, samples) : ANB_MEMORY;
    if (status == ANB_OK) {
        for (uint32_t i = 0; i < count; i++)
            entries[i] = (anb__entry){e->assembly.rows[i], e->assembly.columns[i]};
        port_constants(network, scale, offset);
        anb__system system = {.size = e->assembly.unknown_count,
                              .symmetric = e->assembly.symmetric,
                              .entry_count = count,
                              .entries = entries,
                              .sample_count = ANB__LANES,
                              .samples = samples,
                              .port_count = ports,
                              .first_term = e->nodes.first_port_term,
                              .terms = e->nodes.port_terms,
                              .scale = scale,
                              .offset = offset};
        status = anb__plan_compile(&system, &e->plan);
    }
    for (uint32_t i = 0; status == ANB_OK && i < count; i++) e->slot_of[i] = anb__plan_slot_of(e->plan, i);
    free(samples);
    free(entries);
    free(scale);
    free(offset);
    return status;
}

/* The ports' terminations, as conductances between their nodes. */
static anb_status assemble(anb__engine *e) {
    const anb__network *network = e->network;
    anb__shunt *shunts = malloc(((size_t)network->port_count + 1) * sizeof *shunts);
    if (!shunts) return ANB_MEMORY;
    for (uint32_t k = 0; k < network->port_count; k++) {
        const anb__port *port = &network->ports[k];
        shunts[k] = (anb__shunt){{port->plus, port->minus}, anb__cdiv(anb__cx(1, 0), port->z)};
    }
    anb_status status =
        anb__assemble(network, &e->nodes.numbering, shunts, network->port_count, &e->assembly);
    free(shunts);
    return status;
}

anb_status anb__engine_new(const anb__network *network, const anb__grid *grid, const char *kernel,
                           anb__engine *out) {
    double start = seconds();
    *out = (anb__engine){.network = network};
    out->kernel = anb__plan_kernel_find(kernel);
    out->fill = anb__assembly_kernel(kernel);
    anb_status status = anb__number_nodes(network, &out->nodes);
    if (status == ANB_OK) status = assemble(out);
    if (status == ANB_OK) status = compile_plan(out, grid);
    out->compile_seconds = seconds() - start;
    return status;
}

void anb__engine_clear(anb__engine *engine) {
    anb__plan_free(engine->plan);
    free(engine->slot_of);
    anb__assembly_clear(&engine->assembly);
    anb__nodes_clear(&engine->nodes);
    *engine = (anb__engine){0};
}

/* ---- a thread's bench ---------------------------------------------------------------------------- */

anb_status anb__bench_new(const anb__engine *engine, anb__bench *out) {
    size_t ports = engine->network->port_count;
    *out = (anb__bench){.engine = engine, .groups = anb__plan_block_groups(engine->plan)};
    out->hz = aligned((size_t)out->groups * ANB__LANES);
    out->slots = aligned((size_t)anb__plan_slot_count(engine->plan) * out->groups * ANB__GROUP);
    out->scratch = aligned(anb__assembly_scratch(&engine->assembly, out->groups));
    out->suspect = malloc(out->groups);
    out->currents = malloc((ports * ports + 1) * sizeof *out->currents);
    out->s = malloc((ports * ports + 1) * sizeof *out->s);
    bool done = out->hz && out->slots && out->scratch && out->suspect && out->currents && out->s;
    return done ? ANB_OK : ANB_MEMORY;
}

void anb__bench_clear(anb__bench *bench) {
    anb__pivoted_free(bench->pivoted);
    if (bench->has_tableau) anb__tableau_clear(&bench->tableau);
    free(bench->hz);
    free(bench->slots);
    free(bench->scratch);
    free(bench->suspect);
    free(bench->values);
    free(bench->currents);
    free(bench->s);
    *bench = (anb__bench){0};
}

/* ---- the pivoted way -------------------------------------------------------------------------------- */

static anb_status as_failed(anb__bench *bench, double hz, uint32_t unknown, uint32_t part) {
    bench->failed_hz = hz;
    bench->failed_unknown = unknown;
    bench->failed_part = part;
    return ANB_INVALID;
}

static anb_status solve_in_series(anb__bench *bench, double hz) {
    const anb__tableau *t = &bench->tableau;
    anb__series_entry *entries = malloc(((size_t)t->entry_count + 1) * sizeof *entries);
    uint32_t where = UINT32_MAX;
    if (!entries) return ANB_MEMORY;
    if (!anb__tableau_series(t, hz, entries, &where)) {
        free(entries);
        return as_failed(bench, hz, UINT32_MAX, where);
    }
    anb__solved solved = anb__solve_limit(t->size, entries, t->entry_count, t->probes, t->network->port_count,
                                          bench->currents, &where);
    free(entries);
    if (solved == ANB__NO_MEMORY) return ANB_MEMORY;
    return solved == ANB__SOLVED ? ANB_OK : as_failed(bench, hz, where, UINT32_MAX);
}

static anb_status make_tableau(anb__bench *bench) {
    if (bench->has_tableau) return ANB_OK;
    anb_status status = anb__tableau_new(bench->engine->network, &bench->engine->nodes, &bench->tableau);
    bench->has_tableau = status == ANB_OK;
    if (status != ANB_OK) anb__tableau_clear(&bench->tableau);
    return status;
}

static anb_status make_pivoted(anb__bench *bench) {
    const anb__tableau *t = &bench->tableau;
    if (bench->pivoted) return ANB_OK;
    if (!bench->values) bench->values = malloc(((size_t)t->entry_count + 1) * sizeof *bench->values);
    if (!bench->values) return ANB_MEMORY;
    return anb__pivoted_new(t->size, t->rows, t->columns, t->entry_count, t->probes, t->network->port_count,
                            &bench->pivoted);
}

/* S of one point from all the equations. Where their matrix is singular, as it may well be at 0 Hz, the
 * series decide. */
static anb_status solve_point(anb__bench *bench, double hz) {
    uint32_t where = UINT32_MAX;
    bench->pivoted_points++;
    anb_status status = make_tableau(bench);
    if (status == ANB_OK) status = make_pivoted(bench);
    if (status != ANB_OK) return status;
    if (!anb__tableau_values(&bench->tableau, hz, bench->values, &where))
        return as_failed(bench, hz, UINT32_MAX, where);
    anb__solved solved = anb__pivoted_solve(bench->pivoted, bench->values, bench->currents);
    if (solved == ANB__NO_MEMORY) return ANB_MEMORY;
    if (solved == ANB__UNDETERMINED) status = solve_in_series(bench, hz);
    if (status == ANB_OK) anb__tableau_scattering(&bench->tableau, bench->currents, bench->s);
    return status;
}

static void store_point(const anb__bench *bench, double *group, unsigned lane) {
    uint32_t ports = bench->engine->network->port_count;
    bool packed = bench->engine->assembly.symmetric;
    for (uint32_t to = 0; to < ports; to++)
        for (uint32_t from = 0; from < (packed ? to + 1 : ports); from++, group += ANB__GROUP) {
            group[lane] = bench->s[(size_t)to * ports + from].re;
            group[ANB__LANES + lane] = bench->s[(size_t)to * ports + from].im;
        }
}

/* ---- blocks -------------------------------------------------------------------------------------------- */

/* Copies the frequencies, the last one repeated to the end of its group. 0 Hz is no matter for the plan: a
 * stand-in goes there, and the lane counts as suspect. */
static void load_frequencies(anb__bench *bench, const double *hz, uint64_t count, uint32_t groups) {
    for (uint32_t k = 0; k < groups * ANB__LANES; k++) {
        double here = hz[k < count ? k : count - 1];
        bench->hz[k] = here == 0 ? 1 : here;
    }
}

static anb_status compute_block(anb__bench *bench, const double *hz, uint64_t count, uint32_t groups,
                                double *out, size_t group_size) {
    const anb__engine *e = bench->engine;
    load_frequencies(bench, hz, count, groups);
    e->fill(&e->assembly, e->slot_of, bench->hz, groups, bench->scratch, bench->slots);
    e->kernel->run(e->plan, bench->slots, groups, out, bench->suspect);
    for (uint64_t k = 0; k < count; k++) {
        unsigned lane = k % ANB__LANES;
        bool suspect = bench->suspect[k / ANB__LANES] >> lane & 1;
        if (!suspect && hz[k] != 0) continue;
        anb_status status = solve_point(bench, hz[k]);
        if (status != ANB_OK) return status;
        store_point(bench, out + k / ANB__LANES * group_size, lane);
    }
    return ANB_OK;
}

anb_status anb__compute_points(anb__bench *bench, const double *hz, uint64_t count, double *out) {
    const anb__engine *e = bench->engine;
    size_t ports = e->network->port_count;
    size_t group_size = (e->assembly.symmetric ? ports * (ports + 1) / 2 : ports * ports) * ANB__GROUP;
    while (count) {
        uint64_t most = (uint64_t)bench->groups * ANB__LANES, here = count < most ? count : most;
        uint32_t groups = (uint32_t)((here + ANB__LANES - 1) / ANB__LANES);
        anb_status status = compute_block(bench, hz, here, groups, out, group_size);
        if (status != ANB_OK) return status;
        hz += here;
        count -= here;
        out += groups * group_size;
    }
    return ANB_OK;
}
