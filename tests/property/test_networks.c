/* Laws of physics, and of arithmetic, on random networks with every part and option.
 *
 * ANB_NETWORKS sets their number (10 000). Networks whose ports nothing determines at a frequency are passed
 * over there, and counted. The last test prints how often each kind and option was made; none may be below
 * 200 in a full run.
 */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "property/generator.h"
#include "sweep/engine.h"

static counts tally;
static uint64_t points_seen, points_without_solution, points_pivoted;

static unsigned network_count(void) {
    const char *text = getenv("ANB_NETWORKS");
    return text ? (unsigned)atoi(text) : 10000;
}

/* ---- solving --------------------------------------------------------------------------------------- */

typedef struct solved {
    bool known;
    anb__complex s[MOST_PORTS * MOST_PORTS];
} solved;

/* The network's points through the engine, each as a block of its own or all in one. */
static void by_engine(const anb__network *network, const double *hz, const char *kernel, bool one_by_one,
                      solved *out) {
    anb__grid_part at = {.kind = ANB__GRID_AT, .count = POINTS, .list = hz};
    anb__network with = *network;
    anb__grid grid;
    anb__engine engine;
    anb__bench bench;
    static double s[MOST_PORTS * MOST_PORTS * ANB__GROUP];
    uint32_t n = network->port_count;
    with.sweeps = &at;
    with.sweep_count = 1;
    assert_int_equal(anb__grid_new(&with, &grid), ANB_OK);
    assert_int_equal(anb__engine_new(&with, &grid, kernel, &engine), ANB_OK);
    assert_int_equal(anb__bench_new(&engine, &bench), ANB_OK);
    bool whole = !one_by_one && anb__compute_points(&bench, hz, POINTS, s) == ANB_OK;
    for (int p = 0; p < POINTS; p++) {
        out[p].known = whole || anb__compute_points(&bench, &hz[p], 1, s) == ANB_OK;
        unsigned lane = whole ? (unsigned)p : 0;
        for (uint32_t to = 0; to < n; to++)
            for (uint32_t from = 0; from < n; from++) {
                uint32_t high = to > from ? to : from, low = to > from ? from : to;
                size_t e =
                    engine.assembly.symmetric ? (size_t)high * (high + 1) / 2 + low : (size_t)to * n + from;
                out[p].s[to * n + from] =
                    anb__cx(s[e * ANB__GROUP + lane], s[e * ANB__GROUP + ANB__LANES + lane]);
            }
    }
    points_pivoted += bench.pivoted_points;
    anb__bench_clear(&bench);
    anb__engine_clear(&engine);
    anb__grid_clear(&grid);
}

/* The same through all the equations; `condition` gets the largest current for a unit source, in units of the
 * port's own. */
static void by_tableau(const anb__network *network, const double *hz, solved *out) {
    anb__nodes nodes;
    anb__tableau t;
    anb__pivoted *pivoted;
    uint32_t where;
    assert_int_equal(anb__number_nodes(network, &nodes), ANB_OK);
    assert_int_equal(anb__tableau_new(network, &nodes, &t), ANB_OK);
    assert_int_equal(
        anb__pivoted_new(t.size, t.rows, t.columns, t.entry_count, t.probes, network->port_count, &pivoted),
        ANB_OK);
    anb__complex *values = malloc((t.entry_count + 1) * sizeof *values), currents[MOST_PORTS * MOST_PORTS];
    anb__series_entry *entries = malloc((t.entry_count + 1) * sizeof *entries);
    assert_true(values && entries);
    for (int p = 0; p < POINTS; p++) {
        anb__solved result = ANB__UNDETERMINED;
        out[p].known = anb__tableau_values(&t, hz[p], values, &where);
        if (out[p].known) result = anb__pivoted_solve(pivoted, values, currents);
        if (result == ANB__UNDETERMINED && anb__tableau_series(&t, hz[p], entries, &where))
            result = anb__solve_limit(t.size, entries, t.entry_count, t.probes, network->port_count, currents,
                                      &where);
        out[p].known = result == ANB__SOLVED;
        anb__tableau_scattering(&t, currents, out[p].s);
    }
    free(values);
    free(entries);
    anb__pivoted_free(pivoted);
    anb__tableau_clear(&t);
    anb__nodes_clear(&nodes);
}

static double largest(const solved *a, uint32_t ports) {
    double size = 1;
    for (uint32_t k = 0; k < ports * ports; k++) size = fmax(size, anb__cabs(a->s[k]));
    return size;
}

static double difference(const solved *a, const solved *b, uint32_t ports) {
    double worst = 0;
    for (uint32_t k = 0; k < ports * ports; k++) {
        double d = anb__cabs(anb__csub(a->s[k], b->s[k]));
        if (!(d <= worst)) worst = d;
    }
    return worst / largest(a, ports);
}

/* Holds a deviation against its limit; the worst is printed at the end of each test. */
typedef struct measure {
    const char *what;
    double limit, worst;
    unsigned held;
} measure;

static void hold(measure *m, double deviation, uint64_t seed, const double hz) {
    m->held++;
    if (!(deviation <= m->worst)) m->worst = deviation;
    if (!(deviation <= m->limit))
        fail_msg("%s: %.3g in network %llu at %.17g Hz", m->what, deviation, (unsigned long long)seed, hz);
}

static void report(const measure *m) {
    printf("%s: %u held, worst %.2g\n", m->what, m->held, m->worst);
    assert_true(m->held > 0);
}

/* ---- the two ways ------------------------------------------------------------------------------------- */

/* How much an answer changes when the frequency does by a few units of its last place: what no way can be
 * better than. */
static double sharpness(const anb__network *network, const double *hz, const solved *at, int p) {
    double moved[POINTS];
    static solved near[POINTS];
    for (int k = 0; k < POINTS; k++) moved[k] = hz[k] * (1 + 4e-16);
    by_tableau(network, moved, near);
    return near[p].known && at->known ? difference(at, &near[p], network->port_count) : INFINITY;
}

static void test_two_ways(void **state) {
    static sample s;
    static solved fast[POINTS], sure[POINTS];
    measure m = {.what = "compiled plan against the pivoted way", .limit = 5e-11};
    (void)state;
    for (unsigned i = 0; i < network_count(); i++) {
        make_sample(i, i % 2 ? ANY_PARTS : RECIPROCAL_PARTS, &s, &tally);
        by_engine(&s.network, s.hz, NULL, false, fast);
        by_tableau(&s.network, s.hz, sure);
        for (int p = 0; p < POINTS; p++) {
            points_seen++;
            points_without_solution += !sure[p].known;
            if (!sure[p].known || !fast[p].known) continue;
            double d = difference(&fast[p], &sure[p], s.network.port_count);
            if (d > m.limit && d < 1e5 * sharpness(&s.network, s.hz, &sure[p], p)) continue;
            hold(&m, d, i, s.hz[p]);
        }
    }
    report(&m);
}

/* ---- bits ------------------------------------------------------------------------------------- */

static void test_blocks_and_kernels(void **state) {
    static sample s;
    static solved one[POINTS], all[POINTS], plain[POINTS];
    measure m = {.what = "kernels against each other", .limit = 1e-10};
    (void)state;
    for (unsigned i = 0; i < network_count() / 10; i++) {
        make_sample(i, ANY_PARTS, &s, &tally);
        by_engine(&s.network, s.hz, NULL, false, all);
        by_engine(&s.network, s.hz, NULL, true, one);
        by_engine(&s.network, s.hz, "plain", false, plain);
        size_t bytes = s.network.port_count * s.network.port_count * sizeof(anb__complex);
        for (int p = 0; p < POINTS; p++) {
            assert_int_equal(one[p].known, all[p].known);
            if (!all[p].known) continue;
            if (memcmp(one[p].s, all[p].s, bytes))
                fail_msg("network %u, point %d: other bits alone than in a block", i, p);
            double d = difference(&all[p], &plain[p], s.network.port_count);
            if (d > 1e-12 && d < 1e5 * sharpness(&s.network, s.hz, &all[p], p)) continue;
            hold(&m, d, i, s.hz[p]);
        }
    }
    report(&m);
}

/* ---- physics ---------------------------------------------------------------------------------- */

/* The power that leaves for a random incident wave, over what came in. */
static double power_out(const solved *a, uint32_t ports, uint64_t *state) {
    anb__complex in[MOST_PORTS];
    double came = 0, left = 0;
    for (uint32_t k = 0; k < ports; k++) {
        in[k] = anb__cx(random_share(state) - 0.5, random_share(state) - 0.5);
        came += in[k].re * in[k].re + in[k].im * in[k].im;
    }
    for (uint32_t to = 0; to < ports; to++) {
        anb__complex b = {0, 0};
        for (uint32_t from = 0; from < ports; from++)
            b = anb__cadd(b, anb__cmul(a->s[to * ports + from], in[from]));
        left += b.re * b.re + b.im * b.im;
    }
    return left / came;
}

static void test_power(void **state) {
    static sample s;
    static solved out[POINTS];
    measure passive = {.what = "passivity", .limit = 1e-9},
            lossless = {.what = "losslessness", .limit = 1e-6};
    uint64_t waves = 1;
    (void)state;
    for (unsigned i = 0; i < network_count(); i++) {
        bool no_loss = i % 3 == 0;
        make_sample(i + 1000003, no_loss ? LOSSLESS_PARTS : PASSIVE_PARTS, &s, &tally);
        by_engine(&s.network, s.hz, NULL, false, out);
        for (int p = 0; p < POINTS; p++) {
            if (!out[p].known) continue;
            double gain = power_out(&out[p], s.network.port_count, &waves) - 1;
            if (no_loss && fabs(gain) > 1e-9 && fabs(gain) < 1e5 * sharpness(&s.network, s.hz, &out[p], p))
                continue;
            if (no_loss)
                hold(&lossless, fabs(gain), i, s.hz[p]);
            else
                hold(&passive, gain > 0 ? gain : 0, i, s.hz[p]);
        }
    }
    report(&passive);
    report(&lossless);
}

static void test_reciprocity(void **state) {
    static sample s;
    static solved out[POINTS];
    measure m = {.what = "reciprocity, by the pivoted way", .limit = 1e-9};
    (void)state;
    for (unsigned i = 0; i < network_count() / 4; i++) {
        make_sample(i + 2000003, RECIPROCAL_PARTS, &s, &tally);
        by_tableau(&s.network, s.hz, out);
        uint32_t n = s.network.port_count;
        for (int p = 0; p < POINTS; p++)
            for (uint32_t k = 0; out[p].known && k < n * n; k++) {
                double d =
                    anb__cabs(anb__csub(out[p].s[k], out[p].s[k % n * n + k / n])) / largest(&out[p], n);
                if (d > 1e-12 && d < 1e5 * sharpness(&s.network, s.hz, &out[p], p)) continue;
                hold(&m, d, i, s.hz[p]);
            }
    }
    report(&m);
}

/* Ports in the opposite order. */
static void test_renumbered_ports(void **state) {
    static sample s;
    static solved before[POINTS], after[POINTS], turned[POINTS];
    measure m = {.what = "renumbered ports", .limit = 1e-10};
    (void)state;
    for (unsigned i = 0; i < network_count() / 4; i++) {
        make_sample(i + 3000003, PASSIVE_PARTS, &s, &tally);
        uint32_t n = s.network.port_count;
        anb__port ports[MOST_PORTS];
        by_engine(&s.network, s.hz, NULL, false, before);
        for (uint32_t k = 0; k < n; k++) ports[k] = s.ports[n - 1 - k];
        s.network.ports = ports;
        by_engine(&s.network, s.hz, NULL, false, after);
        for (int p = 0; p < POINTS; p++) {
            if (!before[p].known || !after[p].known) continue;
            turned[p] = after[p];
            for (uint32_t k = 0; k < n * n; k++) turned[p].s[n * n - 1 - k] = after[p].s[k];
            double d = difference(&before[p], &turned[p], n);
            if (d > 1e-12 && d < 1e5 * sharpness(&s.network, s.hz, &after[p], p)) continue;
            hold(&m, d, i, s.hz[p]);
        }
    }
    report(&m);
}

/* A line is two lines of a third and two thirds of its length. */
static void test_cut_line(void **state) {
    static sample s;
    static solved whole[POINTS], cut[POINTS];
    measure m = {.what = "a line cut in two", .limit = 1e-10};
    (void)state;
    for (unsigned i = 0; i < network_count() / 4; i++) {
        make_sample(i + 4000003, PASSIVE_PARTS, &s, &tally);
        anb__placed *line = NULL;
        for (uint32_t k = 0; k < s.network.part_count; k++) {
            const anb__branch *b = &s.branches[s.parts[k].first_branch];
            bool grounded = !b[0].minus && !b[1].minus;
            const anb__argument *loss = anb__argument_of(&s.parts[k], ANB__ARG_LOSS);
            if (s.parts[k].kind == ANB__PART_LINE && grounded && (!loss || loss->dimension.metre))
                line = &s.parts[k];
        }
        if (!line || s.network.part_count == MOST_PARTS) continue;
        by_engine(&s.network, s.hz, NULL, false, whole);
        anb__argument first[MOST_ARGUMENTS], second[MOST_ARGUMENTS];
        for (int k = 0; k < line->argument_count; k++) {
            first[k] = second[k] = line->arguments[k];
            if (first[k].name != ANB__ARG_LENGTH) continue;
            first[k].value.re /= 3;
            second[k].value.re -= first[k].value.re;
        }
        anb__placed *more = &s.parts[s.network.part_count++];
        anb__branch *b = &s.branches[line->first_branch], *c = &s.branches[s.network.branch_count];
        *more = *line;
        more->first_branch = s.network.branch_count;
        s.network.branch_count += 2;
        uint32_t middle = s.network.node_count++;
        c[0] = (anb__branch){middle, 0};
        c[1] = b[1];
        b[1] = (anb__branch){middle, 0};
        line->arguments = first;
        more->arguments = second;
        by_engine(&s.network, s.hz, NULL, false, cut);
        for (int p = 0; p < POINTS; p++) {
            if (!whole[p].known || !cut[p].known) continue;
            double d = difference(&whole[p], &cut[p], s.network.port_count);
            if (d > 1e-12 && d < 1e5 * sharpness(&s.network, s.hz, &cut[p], p)) continue;
            hold(&m, d, i, s.hz[p]);
        }
    }
    report(&m);
}

/* ---- a part by itself ------------------------------------------------------------------------- */

/* A + B Y = 0 with Y from the stamps, row by row against the size of what is summed. Parts that bring unknown
 * currents into the matrix have no Y. */
static void check_single(const sample *s, uint64_t seed, measure *m) {
    uint32_t first[MOST_NODES + 2];
    struct anb__node_term terms[MOST_NODES];
    const anb__placed *part = &s->parts[0];
    int n = part->branch_count;
    first[0] = 0;
    for (int k = 0; k <= n; k++) {
        first[k + 1] = (uint32_t)k;
        terms[k] = (struct anb__node_term){(uint32_t)k, 1};
    }
    anb__numbering numbering = {(uint32_t)n, first, terms};
    anb__assembly assembly;
    assert_int_equal(anb__assemble(&s->network, &numbering, NULL, 0, &assembly), ANB_OK);
    bool has_admittance = assembly.unknown_count == (uint32_t)n &&
                          anb__connection_of(&s->network, part) == ANB__CONNECTS_BY_EQUATIONS;
    if (has_admittance) {
        double hz[ANB__LANES], y[16][2] = {{0}};
        uint32_t identity[16];
        double *scratch = aligned_alloc(64, (anb__assembly_scratch(&assembly, 1) * 8 / 64 + 1) * 64);
        double *slots = aligned_alloc(64, 16 * ANB__GROUP * sizeof *slots);
        assert_true(scratch && slots);
        for (int k = 0; k < ANB__LANES; k++) hz[k] = s->hz[0];
        for (uint32_t k = 0; k < 16; k++) identity[k] = k;
        anb__assembly_kernel(NULL)(&assembly, identity, hz, 1, scratch, slots);
        for (uint32_t e = 0; e < assembly.entry_count; e++) {
            uint32_t r = assembly.rows[e], c = assembly.columns[e];
            for (int part_of = 0; part_of < 2; part_of++) {
                y[r * (uint32_t)n + c][part_of] = slots[e * ANB__GROUP + (unsigned)part_of * ANB__LANES];
                if (assembly.symmetric) y[c * (uint32_t)n + r][part_of] = y[r * (uint32_t)n + c][part_of];
            }
        }
        anb__point point;
        anb__equations q;
        anb__point_at(s->hz[0], &point);
        assert_true(anb__part_equations(part, &point, &q));
        for (int r = 0; r < n; r++)
            for (int c = 0; c < n; c++) {
                anb__complex sum = anb__a(&q, r, c)->zero ? anb__cx(0, 0) : anb__a(&q, r, c)->c[0];
                double size = anb__cabs(sum);
                for (int k = 0; k < n; k++) {
                    anb__complex b = anb__b(&q, r, k)->zero ? anb__cx(0, 0) : anb__b(&q, r, k)->c[0];
                    b = anb__cmul(b, anb__cx(y[k * n + c][0], y[k * n + c][1]));
                    size += anb__cabs(b);
                    sum = anb__cadd(sum, b);
                }
                if (isfinite(size) && size > 0) hold(m, anb__cabs(sum) / size, seed, s->hz[0]);
            }
        free(scratch);
        free(slots);
    }
    anb__assembly_clear(&assembly);
}

static void test_equations_against_stamps(void **state) {
    static sample s;
    measure m = {.what = "equations against stamps", .limit = 1e-11};
    (void)state;
    for (unsigned i = 0; i < network_count() / 10; i++)
        for (int kind = 0; kind < ANB__PART_KIND_COUNT; kind++) {
            make_single(i, (anb__part_kind)kind, &s, &tally);
            check_single(&s, i, &m);
        }
    report(&m);
}

/* ---- counts ----------------------------------------------------------------------------------- */

static void test_counts(void **state) {
    unsigned least = network_count() >= 10000 ? 200 : 1;
    (void)state;
    for (int k = 0; k < ANB__PART_KIND_COUNT; k++) {
        printf("%s: %u\n", anb__parts[k].name, tally.kinds[k]);
        assert_true(tally.kinds[k] >= least);
    }
    for (int k = 0; k < ANB__ARG_COUNT; k++) assert_true(tally.options[k] >= least);
    printf("hard places %u, 0 Hz %u, negated %u; of %llu points %llu without a solution, %llu pivoted\n",
           tally.hard_points, tally.zero_hertz, tally.negated, (unsigned long long)points_seen,
           (unsigned long long)points_without_solution, (unsigned long long)points_pivoted);
    assert_true(tally.hard_points >= least && tally.zero_hertz >= least && tally.negated >= least);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_equations_against_stamps),
        cmocka_unit_test(test_two_ways),
        cmocka_unit_test(test_blocks_and_kernels),
        cmocka_unit_test(test_power),
        cmocka_unit_test(test_reciprocity),
        cmocka_unit_test(test_renumbered_ports),
        cmocka_unit_test(test_cut_line),
        cmocka_unit_test(test_counts),
    };
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
