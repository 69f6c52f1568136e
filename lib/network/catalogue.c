#include "network/catalogue.h"

#include <string.h>

#include "network/operation.h"
#include "network/quantity.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* ---- terminals ------------------------------------------------------------------ */

static const anb__layout two_terminal = {2, 1, {"left", "right"}, {{0, 1}}};
static const anb__layout two_port = {2, 2, {"left", "right"}, {{0, ANB__TO_GROUND}, {1, ANB__TO_GROUND}}};
static const anb__layout windings = {4, 2, {"a1", "a2", "b1", "b2"}, {{0, 1}, {2, 3}}};
static const anb__layout pair = {
    4, 4, {"a1", "a2", "b1", "b2"},
    {{0, ANB__TO_GROUND}, {1, ANB__TO_GROUND}, {2, ANB__TO_GROUND}, {3, ANB__TO_GROUND}}};
static const anb__layout own_mode = {4, 2, {"in", "out", "in_return", "out_return"}, {{0, 2}, {1, 3}}};
static const anb__layout three_ports = {
    3, 3, {"p1", "p2", "p3"}, {{0, ANB__TO_GROUND}, {1, ANB__TO_GROUND}, {2, ANB__TO_GROUND}}};
static const anb__layout controlled = {4, 2, {"in", "in_return", "out", "out_return"}, {{0, 1}, {2, 3}}};

/* ---- arguments --------------------------------------------------------------------- */

#define MAIN (ANB__NEEDED | ANB__BY_PLACE)
#define ONE(d) 1, {{d, ANB__AT_NEVER}}
#define ONE_MAY_AT(d) 1, {{d, ANB__AT_MAY}}
#define LENGTH_FORMS \
    3, {{ANB__ANGLE, ANB__AT_MUST}, {ANB__SECOND, ANB__AT_NEVER}, {ANB__METRE, ANB__AT_NEVER}}
#define LOSS_FORMS 2, {{ANB__LEVEL, ANB__AT_MAY}, {ANB__LEVEL_PER_METRE, ANB__AT_MAY}}
#define RATING {"rating", ANB__ARG_RATING, 0, ANB__ABOVE_ZERO | ANB__CONSTANT, ONE(ANB__WATT)}
#define Z_OPTION {"z", ANB__ARG_Z, 0, ANB__ABOVE_ZERO | ANB__BY_PLACE, ONE(ANB__OHM)}
#define LENGTH {"length", ANB__ARG_LENGTH, 0, MAIN, LENGTH_FORMS}

static const anb__argument_entry resistor[] = {
    {"r", ANB__ARG_R, 0, MAIN | ANB__WARN_BELOW_ZERO, ONE(ANB__OHM)},
    RATING,
    {"esl", ANB__ARG_ESL, 0, ANB__WARN_BELOW_ZERO, ONE(ANB__HENRY)},
    {"cp", ANB__ARG_CP, 0, ANB__WARN_BELOW_ZERO, ONE(ANB__FARAD)},
};

static const anb__argument_entry inductor[] = {
    {"l", ANB__ARG_L, 0, MAIN | ANB__WARN_BELOW_ZERO, ONE(ANB__HENRY)},
    {"q", ANB__ARG_Q, 1, ANB__ABOVE_ZERO, ONE_MAY_AT(ANB__PLAIN)},
    {"resistance", ANB__ARG_RESISTANCE, 1, ANB__WARN_BELOW_ZERO, ONE(ANB__OHM)},
    {"srf", ANB__ARG_SRF, 0, ANB__ABOVE_ZERO, ONE(ANB__HERTZ)},
    RATING,
};

static const anb__argument_entry capacitor[] = {
    {"c", ANB__ARG_C, 0, MAIN | ANB__WARN_BELOW_ZERO, ONE(ANB__FARAD)},
    {"q", ANB__ARG_Q, 1, ANB__ABOVE_ZERO, ONE_MAY_AT(ANB__PLAIN)},
    {"esr", ANB__ARG_ESR, 1, ANB__WARN_BELOW_ZERO, ONE(ANB__OHM)},
    {"loss_tangent", ANB__ARG_LOSS_TANGENT, 0, ANB__NOT_BELOW_ZERO, ONE(ANB__PLAIN)},
    {"esl", ANB__ARG_ESL, 2, ANB__WARN_BELOW_ZERO, ONE(ANB__HENRY)},
    {"srf", ANB__ARG_SRF, 2, ANB__ABOVE_ZERO, ONE(ANB__HERTZ)},
    RATING,
};

static const anb__argument_entry impedance[] = {
    {"z", ANB__ARG_Z, 0, MAIN | ANB__MAY_COMPLEX | ANB__WARN_BELOW_ZERO, ONE(ANB__OHM)},
};

static const anb__argument_entry admittance[] = {
    {"y", ANB__ARG_Y, 0, MAIN | ANB__MAY_COMPLEX | ANB__WARN_BELOW_ZERO, ONE(ANB__SIEMENS)},
};

static const anb__argument_entry line[] = {
    {"z", ANB__ARG_Z, 0, MAIN | ANB__ABOVE_ZERO, ONE(ANB__OHM)},
    LENGTH,
    {"permittivity", ANB__ARG_PERMITTIVITY, 1, ANB__ABOVE_ZERO, ONE(ANB__PLAIN)},
    {"velocity_factor", ANB__ARG_VELOCITY_FACTOR, 1, ANB__ABOVE_ZERO, ONE(ANB__PLAIN)},
    {"loss", ANB__ARG_LOSS, 0, ANB__NOT_BELOW_ZERO, LOSS_FORMS},
    {"loss_tangent", ANB__ARG_LOSS_TANGENT, 0, ANB__NOT_BELOW_ZERO, ONE(ANB__PLAIN)},
};

static const anb__argument_entry line_constants[] = {
    {"r", ANB__ARG_R, 0, MAIN | ANB__NOT_BELOW_ZERO, ONE(ANB__OHM_PER_METRE)},
    {"l", ANB__ARG_L, 0, MAIN | ANB__NOT_BELOW_ZERO, ONE(ANB__HENRY_PER_METRE)},
    {"g", ANB__ARG_G, 0, MAIN | ANB__NOT_BELOW_ZERO, ONE(ANB__SIEMENS_PER_METRE)},
    {"c", ANB__ARG_C, 0, MAIN | ANB__NOT_BELOW_ZERO, ONE(ANB__FARAD_PER_METRE)},
    {"length", ANB__ARG_LENGTH, 0, MAIN, ONE(ANB__METRE)},
};

static const anb__argument_entry transformer[] = {
    {"n", ANB__ARG_N, 0, MAIN | ANB__NOT_ZERO, ONE(ANB__PLAIN)},
};

static const anb__argument_entry attenuator[] = {
    {"loss", ANB__ARG_LOSS, 0, MAIN | ANB__WARN_BELOW_ZERO, ONE(ANB__LEVEL)},
    Z_OPTION,
};

static const anb__argument_entry phase_shift[] = {
    {"phase", ANB__ARG_PHASE, 0, MAIN, ONE(ANB__ANGLE)},
    Z_OPTION,
};

static const anb__argument_entry matched[] = {Z_OPTION};

static const anb__argument_entry gyrator[] = {
    {"r", ANB__ARG_R, 0, MAIN | ANB__NOT_ZERO, ONE(ANB__OHM)},
};

static const anb__argument_entry coupled_lines[] = {
    {"length", ANB__ARG_LENGTH, 0, ANB__BY_PLACE, LENGTH_FORMS},
    {"even", ANB__ARG_EVEN, 0, ANB__NEEDED | ANB__ABOVE_ZERO, ONE(ANB__OHM)},
    {"odd", ANB__ARG_ODD, 0, ANB__NEEDED | ANB__ABOVE_ZERO, ONE(ANB__OHM)},
    {"even_length", ANB__ARG_EVEN_LENGTH, 0, 0, LENGTH_FORMS},
    {"odd_length", ANB__ARG_ODD_LENGTH, 0, 0, LENGTH_FORMS},
    {"loss", ANB__ARG_LOSS, 0, ANB__NOT_BELOW_ZERO, LOSS_FORMS},
};

static const anb__argument_entry coupled_inductors[] = {
    {"l1", ANB__ARG_L1, 0, MAIN | ANB__ABOVE_ZERO, ONE(ANB__HENRY)},
    {"l2", ANB__ARG_L2, 0, MAIN | ANB__ABOVE_ZERO, ONE(ANB__HENRY)},
    {"k", ANB__ARG_K, 0, MAIN | ANB__WITHIN_ONE, ONE(ANB__PLAIN)},
};

static const anb__argument_entry transconductance[] = {
    {"gm", ANB__ARG_GM, 0, MAIN | ANB__MAY_COMPLEX, ONE(ANB__SIEMENS)},
};

#define ARGUMENTS(table) table, COUNT(table)

const anb__part_entry anb__parts[ANB__PART_KIND_COUNT] = {
    [ANB__PART_RESISTOR] = {"resistor", &two_terminal, &two_terminal, ARGUMENTS(resistor)},
    [ANB__PART_INDUCTOR] = {"inductor", &two_terminal, &two_terminal, ARGUMENTS(inductor)},
    [ANB__PART_CAPACITOR] = {"capacitor", &two_terminal, &two_terminal, ARGUMENTS(capacitor)},
    [ANB__PART_IMPEDANCE] = {"impedance", &two_terminal, &two_terminal, ARGUMENTS(impedance)},
    [ANB__PART_ADMITTANCE] = {"admittance", &two_terminal, &two_terminal, ARGUMENTS(admittance)},
    [ANB__PART_OPEN_STUB] = {"open_stub", &two_terminal, &two_terminal, ARGUMENTS(line)},
    [ANB__PART_SHORTED_STUB] = {"shorted_stub", &two_terminal, &two_terminal, ARGUMENTS(line)},
    [ANB__PART_LINE] = {"line", &two_port, &own_mode, ARGUMENTS(line)},
    [ANB__PART_LINE_CONSTANTS] = {"line_constants", &two_port, &two_port, ARGUMENTS(line_constants)},
    [ANB__PART_TRANSFORMER] = {"transformer", &two_port, &windings, ARGUMENTS(transformer)},
    [ANB__PART_ATTENUATOR] = {"attenuator", &two_port, &two_port, ARGUMENTS(attenuator)},
    [ANB__PART_PHASE_SHIFT] = {"phase_shift", &two_port, &two_port, ARGUMENTS(phase_shift)},
    [ANB__PART_ISOLATOR] = {"isolator", &two_port, &two_port, ARGUMENTS(matched)},
    [ANB__PART_GYRATOR] = {"gyrator", &two_port, &two_port, ARGUMENTS(gyrator)},
    [ANB__PART_COUPLED_LINES] = {"coupled_lines", NULL, &pair, ARGUMENTS(coupled_lines)},
    [ANB__PART_COUPLED_INDUCTORS] = {"coupled_inductors", NULL, &windings, ARGUMENTS(coupled_inductors)},
    [ANB__PART_CIRCULATOR] = {"circulator", NULL, &three_ports, ARGUMENTS(matched)},
    [ANB__PART_TRANSCONDUCTANCE] = {"transconductance", NULL, &controlled, ARGUMENTS(transconductance)},
};

static const char *const later_parts[] = {"microstrip", "stripline", "coplanar", "coax", "stackup"};
static const char *const composing[] = {"reversed", "inverse", "repeat", "touchstone"};

static bool is_in(const char *name, const char *const *list, size_t count) {
    for (size_t i = 0; i < count; i++)
        if (!strcmp(list[i], name)) return true;
    return false;
}

bool anb__is_later_part(const char *name) { return is_in(name, later_parts, COUNT(later_parts)); }
bool anb__is_composing(const char *name) { return is_in(name, composing, COUNT(composing)); }

bool anb__find_part(const char *name, anb__part_kind *kind) {
    for (int i = 0; i < ANB__PART_KIND_COUNT; i++)
        if (!strcmp(anb__parts[i].name, name)) {
            *kind = (anb__part_kind)i;
            return true;
        }
    return false;
}

const anb__argument_entry *anb__find_argument(const anb__part_entry *part, const char *key) {
    for (int i = 0; i < part->argument_count; i++)
        if (!strcmp(part->arguments[i].key, key)) return &part->arguments[i];
    return NULL;
}

/* ---- functions ------------------------------------------------------------------- */

static const anb__function_entry functions[] = {
    {"sqrt", ANB__RULE_ROOT, ANB__SQRT, 0, false},
    {"abs", ANB__RULE_KEEP, ANB__ABS, 0, false},
    {"exp", ANB__RULE_EXP, ANB__EXP, ANB__EXP_TURNS, false},
    {"ln", ANB__RULE_PLAIN, ANB__LN, 0, false},
    {"log10", ANB__RULE_PLAIN, ANB__LOG10, 0, false},
    {"sin", ANB__RULE_ANGLE, ANB__SIN, ANB__SIN_TURNS, true},
    {"cos", ANB__RULE_ANGLE, ANB__COS, ANB__COS_TURNS, true},
    {"tan", ANB__RULE_ANGLE, ANB__TAN, ANB__TAN_TURNS, true},
    {"asin", ANB__RULE_TO_ANGLE, ANB__ASIN, 0, true},
    {"acos", ANB__RULE_TO_ANGLE, ANB__ACOS, 0, true},
    {"atan", ANB__RULE_TO_ANGLE, ANB__ATAN, 0, true},
    {"atan2", ANB__RULE_ATAN2, ANB__ATAN2, 0, true},
    {"min", ANB__RULE_CHOOSE, ANB__MIN, 0, true},
    {"max", ANB__RULE_CHOOSE, ANB__MAX, 0, true},
    {"round", ANB__RULE_PLAIN, ANB__ROUND, 0, true},
    {"floor", ANB__RULE_PLAIN, ANB__FLOOR, 0, true},
    {"ceil", ANB__RULE_PLAIN, ANB__CEIL, 0, true},
    {"real", ANB__RULE_KEEP, ANB__REAL, 0, false},
    {"imag", ANB__RULE_KEEP, ANB__IMAG, 0, false},
    {"conj", ANB__RULE_KEEP, ANB__CONJ, 0, false},
    {"arg", ANB__RULE_ARG, ANB__ARG, 0, false},
    {"count", ANB__RULE_COUNT_OF, 0, 0, false},
    {"amplitude", ANB__RULE_AMPLITUDE, ANB__AMPLITUDE, 0, true},
    {"decibel", ANB__RULE_DECIBEL, ANB__DECIBEL, 0, true},
    {"preferred", ANB__RULE_PREFERRED, 0, 0, true},
};

const anb__function_entry *anb__find_function(const char *name) {
    for (size_t i = 0; i < COUNT(functions); i++)
        if (!strcmp(functions[i].name, name)) return &functions[i];
    return NULL;
}

/* ---- measures ---------------------------------------------------------------------- */

static const anb__measure_entry measures[] = {
    {"S", "pp", "to, from", ANB__PLAIN, true},
    {"return_loss", "p", "port", ANB__LEVEL, false},
    {"vswr", "p", "port", ANB__PLAIN, false},
    {"resistance", "p", "port", ANB__OHM, false},
    {"reactance", "p", "port", ANB__OHM, false},
    {"insertion_loss", "pp", "from, to", ANB__LEVEL, false},
    {"isolation", "pp", "p, q", ANB__LEVEL, false},
    {"coupling", "pp", "from, to", ANB__LEVEL, false},
    {"gain", "pp", "from, to", ANB__LEVEL, false},
    {"excess_loss", "pp+", "from, a, b, ...", ANB__LEVEL, false},
    {"amplitude_balance", "ppp+", "from, a, b, ...", ANB__LEVEL, false},
    {"phase_balance", "ppp", "from, a, b", ANB__ANGLE, false},
    {"phase", "pp", "from, to", ANB__ANGLE, false},
    {"spread", "m", "measure", ANB__PLAIN, false},
    {"group_delay", "pp", "from, to", ANB__SECOND, false},
    {"dissipation", "p", "port", ANB__PLAIN, false},
    {"directivity", "ppp", "in, coupled, isolated", ANB__LEVEL, false},
    {"stability", "pp", "a, b", ANB__PLAIN, false},
    {"dissipated", "l", "label", ANB__WATT, false},
    {"outgoing", "p", "port", ANB__WATT, false},
    {"voltage", "n", "node or label", ANB__VOLT, false},
    {"current", "l", "label", ANB__AMPERE, false},
    {"delivered", "pl", "port, label", ANB__PLAIN, false},
};

const anb__measure_entry *anb__find_measure(const char *name) {
    for (size_t i = 0; i < COUNT(measures); i++)
        if (!strcmp(measures[i].name, name)) return &measures[i];
    return NULL;
}

/* ---- all of them ---------------------------------------------------------------------- */

unsigned anb__part_names(const char *names[ANB__MOST_NAMES]) {
    unsigned count = 0;
    for (int i = 0; i < ANB__PART_KIND_COUNT; i++) names[count++] = anb__parts[i].name;
    for (size_t i = 0; i < COUNT(composing); i++) names[count++] = composing[i];
    for (size_t i = 0; i < COUNT(later_parts); i++) names[count++] = later_parts[i];
    return count;
}

unsigned anb__function_names(const char *names[ANB__MOST_NAMES]) {
    for (size_t i = 0; i < COUNT(functions); i++) names[i] = functions[i].name;
    return COUNT(functions);
}

unsigned anb__measure_names(const char *names[ANB__MOST_NAMES]) {
    for (size_t i = 0; i < COUNT(measures); i++) names[i] = measures[i].name;
    return COUNT(measures);
}
