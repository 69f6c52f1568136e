#include "parts/part.h"

#include <string.h>

#define TWO_PI 6.283185307179586476925

void anb__point_at(double hz, anb__point *out) {
    out->hz = hz;
    if (hz == 0) {
        out->frequency = anb__series_power(anb__cx(1, 0), 2);
        out->root = anb__series_power(anb__cx(1, 0), 1);
    } else {
        out->frequency = anb__series_value(anb__cx(hz, 0));
        out->root = anb__series_value(anb__cx(sqrt(hz), 0));
    }
    out->s = anb__series_scale(&out->frequency, anb__cx(0, TWO_PI));
}

static const anb__family *const families[ANB__PART_KIND_COUNT] = {
    [ANB__PART_RESISTOR] = &anb__family_resistor,
    [ANB__PART_INDUCTOR] = &anb__family_inductor,
    [ANB__PART_CAPACITOR] = &anb__family_capacitor,
    [ANB__PART_IMPEDANCE] = &anb__family_impedance,
    [ANB__PART_ADMITTANCE] = &anb__family_admittance,
    [ANB__PART_OPEN_STUB] = &anb__family_open_stub,
    [ANB__PART_SHORTED_STUB] = &anb__family_shorted_stub,
    [ANB__PART_LINE] = &anb__family_line,
    [ANB__PART_LINE_CONSTANTS] = &anb__family_line_constants,
    [ANB__PART_TRANSFORMER] = &anb__family_transformer,
    [ANB__PART_ATTENUATOR] = &anb__family_attenuator,
    [ANB__PART_PHASE_SHIFT] = &anb__family_phase_shift,
    [ANB__PART_ISOLATOR] = &anb__family_isolator,
    [ANB__PART_GYRATOR] = &anb__family_gyrator,
    [ANB__PART_COUPLED_LINES] = &anb__family_coupled_lines,
    [ANB__PART_COUPLED_INDUCTORS] = &anb__family_coupled_inductors,
    [ANB__PART_CIRCULATOR] = &anb__family_circulator,
    [ANB__PART_TRANSCONDUCTANCE] = &anb__family_transconductance,
};

const anb__family *anb__family_of(const anb__placed *part) { return families[part->kind]; }

bool anb__part_equations(const anb__placed *part, const anb__point *point, anb__equations *out) {
    if (!anb__family_of(part)->equations(part, point, out)) return false;
    if (part->negated)
        for (int k = 0; k < out->size * out->size; k++)
            out->b[k] = anb__series_scale(&out->b[k], anb__cx(-1, 0));
    return true;
}

bool anb__part_has_program(const anb__placed *part) {
    for (int i = 0; i < part->argument_count; i++)
        if (part->arguments[i].program) return true;
    return false;
}

static bool is_zero(const anb__placed *part, anb__argument_name name) {
    const anb__argument *argument = anb__argument_of(part, name);
    return argument && !argument->program && anb__cis_zero(argument->value);
}

static bool has_any(const anb__placed *part, const anb__argument_name *names, int count) {
    for (int i = 0; i < count; i++)
        if (anb__argument_of(part, names[i])) return true;
    return false;
}

static bool is_wire(const anb__placed *part) {
    static const anb__argument_name in_series[] = {ANB__ARG_ESL, ANB__ARG_RESISTANCE};
    if (part->kind == ANB__PART_RESISTOR) return is_zero(part, ANB__ARG_R) && !has_any(part, in_series, 1);
    if (part->kind == ANB__PART_INDUCTOR) return is_zero(part, ANB__ARG_L) && !has_any(part, in_series, 2);
    return part->kind == ANB__PART_IMPEDANCE && is_zero(part, ANB__ARG_Z);
}

static bool is_through(const anb__placed *part) {
    if (part->kind == ANB__PART_LINE) return is_zero(part, ANB__ARG_LENGTH) && !anb__has(part, ANB__ARG_LOSS);
    if (part->kind == ANB__PART_LINE_CONSTANTS) return is_zero(part, ANB__ARG_LENGTH);
    if (part->kind == ANB__PART_ATTENUATOR) return is_zero(part, ANB__ARG_LOSS);
    return part->kind == ANB__PART_PHASE_SHIFT && is_zero(part, ANB__ARG_PHASE);
}

static bool is_nothing(const anb__placed *part) {
    if (part->kind == ANB__PART_CAPACITOR) return is_zero(part, ANB__ARG_C);
    return part->kind == ANB__PART_ADMITTANCE && is_zero(part, ANB__ARG_Y);
}

anb__connection anb__connection_of(const anb__network *network, const anb__placed *part) {
    const anb__branch *branches = network->branches + part->first_branch;
    if (is_wire(part)) return ANB__CONNECTS_AS_WIRE;
    if (is_through(part) && branches[0].minus == branches[1].minus) return ANB__CONNECTS_AS_THROUGH;
    return is_nothing(part) ? ANB__CONNECTS_NOTHING : ANB__CONNECTS_BY_EQUATIONS;
}

bool anb__has(const anb__placed *part, anb__argument_name name) {
    return anb__argument_of(part, name) != NULL;
}

anb__complex anb__constant(const anb__placed *part, anb__argument_name name, double fallback) {
    const anb__argument *argument = anb__argument_of(part, name);
    return argument ? argument->value : anb__cx(fallback, 0);
}

bool anb__argument_series(const anb__placed *part, anb__argument_name name, const anb__point *point,
                          double fallback, anb__series *out) {
    const anb__argument *argument = anb__argument_of(part, name);
    if (!argument) {
        *out = anb__series_real(fallback);
        return true;
    }
    if (!argument->program) {
        *out = anb__series_constant(argument->value);
        return true;
    }
    if (point->hz == 0 && anb__program_series(argument->program, out)) return true;
    anb__complex value;
    if (!anb__program_value(argument->program, point->hz, &value)) return false;
    *out = point->hz == 0 ? anb__series_constant(value) : anb__series_value(value);
    return true;
}

anb__series anb__root_ratio(const anb__argument *argument, const anb__point *point) {
    return anb__series_scale(&point->root, anb__cx(1 / sqrt(argument->at_hz), 0));
}

void anb__equations_clear(anb__equations *equations, int size) {
    equations->size = size;
    for (int k = 0; k < size * size; k++) equations->a[k] = equations->b[k] = anb__series_zero();
}
