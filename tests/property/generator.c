#include "property/generator.h"

#include <string.h>

#include "network/quantity.h"

uint64_t random_bits(uint64_t *state) {
    uint64_t z = *state += 0x9E3779B97F4A7C15u;
    z = (z ^ z >> 30) * 0xBF58476D1CE4E5B9u;
    z = (z ^ z >> 27) * 0x94D049BB133111EBu;
    return z ^ z >> 31;
}

double random_share(uint64_t *state) { return (double)(random_bits(state) >> 11) * 0x1p-53; }

static unsigned below(uint64_t *state, unsigned limit) { return (unsigned)(random_bits(state) % limit); }

static bool happens(uint64_t *state, double share) { return random_share(state) < share; }

/* Evenly distributed logarithm. */
static double spread(uint64_t *state, double low, double high) {
    return low * pow(high / low, random_share(state));
}

/* ---- arguments --------------------------------------------------------------------------------- */

typedef struct maker {
    uint64_t *state;
    sample *out;
    counts *tally;
    anb__placed *part;
    sort_of_network sort;
} maker;

static const anb__dimension angle = ANB__ANGLE, second = ANB__SECOND, metre = ANB__METRE, plain = ANB__PLAIN,
                            level = ANB__LEVEL, level_per_metre = ANB__LEVEL_PER_METRE;

static anb__argument *give(maker *m, anb__argument_name name, double value, anb__dimension dimension) {
    anb__argument *a = &m->out->arguments[m->out->argument_count++];
    *a = (anb__argument){.name = (uint8_t)name, .dimension = dimension, .value = {value, 0}};
    m->part->argument_count++;
    m->tally->options[name]++;
    return a;
}

static void give_at(maker *m, anb__argument_name name, double value, anb__dimension dimension, double hz) {
    anb__argument *a = give(m, name, value, dimension);
    a->has_at = true;
    a->at_hz = hz;
}

static bool lossy(const maker *m) { return m->sort != LOSSLESS_PARTS; }
static double ohms(maker *m) { return spread(m->state, 0.5, 5e3); }
static double henries(maker *m) { return spread(m->state, 0.3e-9, 100e-9); }
static double farads(maker *m) { return spread(m->state, 0.1e-12, 50e-12); }

static void give_length(maker *m, anb__argument_name name) {
    double waves = (1 + below(m->state, 8)) / 8.0;
    if (m->sort == ANY_PARTS && happens(m->state, 0.1) && !m->part->negated) waves = -waves;
    switch (below(m->state, 3)) {
    case 0:
        give_at(m, name, waves, angle, 1e9);
        break;
    case 1:
        give(m, name, waves * 1e-9, second);
        break;
    default:
        give(m, name, waves * 0.2, metre);
        if (name != ANB__ARG_LENGTH || happens(m->state, 0.3)) break;
        if (happens(m->state, 0.5))
            give(m, ANB__ARG_PERMITTIVITY, spread(m->state, 1, 10), plain);
        else
            give(m, ANB__ARG_VELOCITY_FACTOR, 0.4 + 0.6 * random_share(m->state), plain);
    }
}

static void give_loss(maker *m, bool tangent) {
    const anb__argument *length = anb__argument_of(m->part, ANB__ARG_LENGTH);
    if (!lossy(m) || (length && length->value.re < 0) || happens(m->state, 0.4)) return;
    bool per_metre = length && length->dimension.metre && happens(m->state, 0.5);
    anb__dimension dimension = per_metre ? level_per_metre : level;
    double db = spread(m->state, 0.02, 3);
    if (happens(m->state, 0.5))
        give_at(m, ANB__ARG_LOSS, db, dimension, 1e9);
    else
        give(m, ANB__ARG_LOSS, db, dimension);
    if (tangent && happens(m->state, 0.5))
        give(m, ANB__ARG_LOSS_TANGENT, 0.02 * random_share(m->state), plain);
}

static void give_quality(maker *m, anb__argument_name resistance) {
    if (!lossy(m)) return;
    double q = spread(m->state, 10, 500);
    switch (below(m->state, 4)) {
    case 0:
        give(m, ANB__ARG_Q, q, plain);
        break;
    case 1:
        give_at(m, ANB__ARG_Q, q, plain, 5e8);
        break;
    case 2:
        give(m, resistance, spread(m->state, 0.01, 3), plain);
        break;
    default:
        break;
    }
}

/* ---- kinds -------------------------------------------------------------------------------------------- */

static void fill_kind(maker *m, anb__part_kind kind) {
    uint64_t *s = m->state;
    switch (kind) {
    case ANB__PART_RESISTOR:
        give(m, ANB__ARG_R, happens(s, 0.05) ? 0 : ohms(m), plain);
        if (happens(s, 0.3)) give(m, ANB__ARG_ESL, spread(s, 0.05e-9, 2e-9), plain);
        if (happens(s, 0.3)) give(m, ANB__ARG_CP, spread(s, 0.02e-12, 0.5e-12), plain);
        if (happens(s, 0.1)) give(m, ANB__ARG_RATING, 1, plain);
        break;
    case ANB__PART_INDUCTOR:
        give(m, ANB__ARG_L, henries(m), plain);
        give_quality(m, ANB__ARG_RESISTANCE);
        if (happens(s, 0.3)) give(m, ANB__ARG_SRF, spread(s, 2e9, 20e9), plain);
        break;
    case ANB__PART_CAPACITOR:
        give(m, ANB__ARG_C, happens(s, 0.03) ? 0 : farads(m), plain);
        if (m->out->arguments[m->out->argument_count - 1].value.re == 0) break;
        give_quality(m, ANB__ARG_ESR);
        if (lossy(m) && happens(s, 0.3)) give(m, ANB__ARG_LOSS_TANGENT, 0.02 * random_share(s), plain);
        if (happens(s, 0.3))
            give(m, ANB__ARG_ESL, spread(s, 0.1e-9, 1e-9), plain);
        else if (happens(s, 0.3))
            give(m, ANB__ARG_SRF, spread(s, 2e9, 20e9), plain);
        break;
    case ANB__PART_IMPEDANCE:
        give(m, ANB__ARG_Z, lossy(m) ? ohms(m) : 0, plain)->value.im = ohms(m) - 100;
        break;
    case ANB__PART_ADMITTANCE:
        give(m, ANB__ARG_Y, lossy(m) ? 1 / ohms(m) : 0, plain)->value.im = 1 / ohms(m);
        break;
    case ANB__PART_OPEN_STUB:
    case ANB__PART_SHORTED_STUB:
    case ANB__PART_LINE:
        give(m, ANB__ARG_Z, spread(s, 15, 200), plain);
        give_length(m, ANB__ARG_LENGTH);
        give_loss(m, true);
        break;
    case ANB__PART_LINE_CONSTANTS:
        give(m, ANB__ARG_R, lossy(m) ? spread(s, 0.01, 5) : 0, plain);
        give(m, ANB__ARG_L, spread(s, 100e-9, 600e-9), plain);
        give(m, ANB__ARG_G, lossy(m) ? spread(s, 1e-6, 1e-2) : 0, plain);
        give(m, ANB__ARG_C, spread(s, 30e-12, 200e-12), plain);
        give(m, ANB__ARG_LENGTH, spread(s, 0.01, 0.5), metre);
        break;
    case ANB__PART_TRANSFORMER:
        give(m, ANB__ARG_N, (happens(s, 0.5) ? 1 : -1) * spread(s, 0.3, 4), plain);
        break;
    case ANB__PART_ATTENUATOR:
        give(m, ANB__ARG_LOSS, happens(s, 0.1) ? 0 : spread(s, 0.1, 20), level);
        break;
    case ANB__PART_PHASE_SHIFT:
        give(m, ANB__ARG_PHASE, below(s, 16) / 16.0, angle);
        break;
    case ANB__PART_GYRATOR:
        give(m, ANB__ARG_R, spread(s, 10, 200), plain);
        break;
    case ANB__PART_COUPLED_LINES:
        give(m, ANB__ARG_EVEN, spread(s, 60, 200), plain);
        give(m, ANB__ARG_ODD, spread(s, 15, 60), plain);
        if (happens(s, 0.5))
            give_length(m, ANB__ARG_LENGTH);
        else {
            give_length(m, ANB__ARG_EVEN_LENGTH);
            give_length(m, ANB__ARG_ODD_LENGTH);
        }
        give_loss(m, false);
        break;
    case ANB__PART_COUPLED_INDUCTORS:
        give(m, ANB__ARG_L1, henries(m), plain);
        give(m, ANB__ARG_L2, henries(m), plain);
        give(m, ANB__ARG_K, happens(s, 0.2) ? 1 : 0.99 * random_share(s), plain);
        break;
    case ANB__PART_TRANSCONDUCTANCE:
        give(m, ANB__ARG_GM, spread(s, 1e-3, 0.05), plain);
        break;
    default:
        break;
    }
    bool has_z = kind == ANB__PART_ATTENUATOR || kind == ANB__PART_PHASE_SHIFT ||
                 kind == ANB__PART_ISOLATOR || kind == ANB__PART_CIRCULATOR;
    if (has_z && happens(s, 0.5)) give(m, ANB__ARG_Z, spread(s, 20, 150), plain);
}

static uint16_t branches_of(anb__part_kind kind) {
    switch (kind) {
    case ANB__PART_RESISTOR:
    case ANB__PART_INDUCTOR:
    case ANB__PART_CAPACITOR:
    case ANB__PART_IMPEDANCE:
    case ANB__PART_ADMITTANCE:
    case ANB__PART_OPEN_STUB:
    case ANB__PART_SHORTED_STUB:
        return 1;
    case ANB__PART_CIRCULATOR:
        return 3;
    case ANB__PART_COUPLED_LINES:
        return 4;
    default:
        return 2;
    }
}

static bool fits(anb__part_kind kind, sort_of_network sort) {
    bool one_way = kind == ANB__PART_ISOLATOR || kind == ANB__PART_CIRCULATOR || kind == ANB__PART_GYRATOR ||
                   kind == ANB__PART_TRANSCONDUCTANCE;
    bool loses = kind == ANB__PART_RESISTOR || kind == ANB__PART_ATTENUATOR || kind == ANB__PART_ISOLATOR;
    if (sort == RECIPROCAL_PARTS) return !one_way;
    if (sort == LOSSLESS_PARTS) return !loses && kind != ANB__PART_TRANSCONDUCTANCE;
    return sort == ANY_PARTS || kind != ANB__PART_TRANSCONDUCTANCE;
}

static void add_part(maker *m, anb__part_kind kind) {
    sample *out = m->out;
    anb__placed *part = m->part = &out->parts[out->network.part_count++];
    *part = (anb__placed){.kind = (uint8_t)kind,
                          .branch_count = branches_of(kind),
                          .first_branch = out->network.branch_count,
                          .arguments = &out->arguments[out->argument_count]};
    part->negated = m->sort == ANY_PARTS && happens(m->state, 0.05);
    fill_kind(m, kind);
    out->network.branch_count += part->branch_count;
    m->tally->kinds[kind]++;
    m->tally->negated += part->negated;
}

/* ---- networks --------------------------------------------------------------------------------- */

static bool one_mode_only(anb__part_kind kind) {
    return kind == ANB__PART_TRANSFORMER || kind == ANB__PART_LINE || kind == ANB__PART_COUPLED_INDUCTORS ||
           kind == ANB__PART_TRANSCONDUCTANCE;
}

/* The first parts reach every node once; ground may be met by any. */
static void connect(maker *m) {
    sample *out = m->out;
    uint32_t nodes = out->network.node_count;
    for (uint32_t i = 0; i < out->network.part_count; i++) {
        anb__placed *part = &out->parts[i];
        anb__branch *b = &out->branches[part->first_branch];
        bool floating = part->branch_count == 1 || (one_mode_only(part->kind) && happens(m->state, 0.4));
        for (int k = 0; k < part->branch_count; k++) {
            b[k].plus = below(m->state, nodes);
            b[k].minus = floating ? below(m->state, nodes) : 0;
        }
        if (i + 1 < nodes) b[0].plus = i + 1;
        if (part->branch_count == 1 && happens(m->state, 0.7) && i + 1 < nodes)
            b[0].minus = i + 2 < nodes ? i + 2 : i;
    }
}

static void add_ports(maker *m) {
    sample *out = m->out;
    static const double usual[] = {50, 50, 75, 25, 100};
    out->network.port_count = 1 + below(m->state, MOST_PORTS);
    for (uint32_t k = 0; k < out->network.port_count; k++) {
        anb__port *port = &out->ports[k];
        *port = (anb__port){.name = "p", .z = {usual[below(m->state, 5)], 0}};
        port->plus = 1 + below(m->state, out->network.node_count - 1);
        if (happens(m->state, 0.15)) port->minus = below(m->state, out->network.node_count);
        if (happens(m->state, 0.2)) port->z.im = 60 * random_share(m->state) - 30;
    }
}

/* A frequency at which a line is a multiple of a quarter wave, or an L and a C resonate; 0 where there are
 * none. */
static double hard_place(maker *m) {
    const sample *out = m->out;
    const anb__placed *part = &out->parts[below(m->state, out->network.part_count)];
    const anb__argument *length = anb__argument_of(part, ANB__ARG_LENGTH),
                        *l = anb__argument_of(part, ANB__ARG_L);
    if (length && (length->has_at || length->dimension.second) && part->kind != ANB__PART_LINE_CONSTANTS) {
        double turns = fabs(length->value.re) / (length->has_at ? length->at_hz : 1);
        return 0.25 * (1 + below(m->state, 8)) / turns;
    }
    if (!l || part->kind != ANB__PART_INDUCTOR) return 0;
    for (uint32_t i = 0; i < out->network.part_count; i++) {
        const anb__argument *c = anb__argument_of(&out->parts[i], ANB__ARG_C);
        if (out->parts[i].kind != ANB__PART_CAPACITOR || c->value.re == 0) continue;
        return 1 / (6.283185307179586477 * sqrt(l->value.re * c->value.re));
    }
    return 0;
}

static void choose_points(maker *m) {
    for (int k = 0; k < POINTS; k++) {
        double hz = spread(m->state, 1e7, 1e10);
        if (k % 3 == 0) {
            double hard = k ? hard_place(m) : 0;
            double offset = happens(m->state, 0.5) ? spread(m->state, 1e-14, 1e-6) : 0;
            if (hard > 0) hz = hard * (1 + offset);
            m->tally->hard_points += hard > 0;
            if (!k && happens(m->state, 0.5)) {
                hz = 0;
                m->tally->zero_hertz++;
            }
        }
        m->out->hz[k] = hz;
    }
}

static void start(uint64_t *state, sort_of_network sort, sample *out, counts *tally, maker *m) {
    memset(&out->network, 0, sizeof out->network);
    out->argument_count = 0;
    out->network.parts = out->parts;
    out->network.branches = out->branches;
    out->network.ports = out->ports;
    out->network.title = "";
    *m = (maker){.state = state, .out = out, .tally = tally, .sort = sort};
}

void make_sample(uint64_t seed, sort_of_network sort, sample *out, counts *tally) {
    uint64_t state = seed * 0x2545F4914F6CDD1Du + 7;
    maker m;
    start(&state, sort, out, tally, &m);
    out->network.node_count = 2 + below(&state, happens(&state, 0.2) ? MOST_NODES - 1 : 12);
    uint32_t parts = out->network.node_count + below(&state, 2 * out->network.node_count);
    while (out->network.part_count < parts && out->network.part_count < MOST_PARTS) {
        anb__part_kind kind = (anb__part_kind)below(&state, ANB__PART_KIND_COUNT);
        if (fits(kind, sort)) add_part(&m, kind);
    }
    connect(&m);
    add_ports(&m);
    choose_points(&m);
}

void make_single(uint64_t seed, anb__part_kind kind, sample *out, counts *tally) {
    uint64_t state = seed * 0x9E3779B97F4A7C15u + kind;
    maker m;
    start(&state, ANY_PARTS, out, tally, &m);
    add_part(&m, kind);
    out->network.node_count = out->parts[0].branch_count + 1u;
    for (uint32_t k = 0; k < out->parts[0].branch_count; k++) out->branches[k] = (anb__branch){k + 1, 0};
    out->hz[0] = spread(&state, 1e6, 1e10);
}
