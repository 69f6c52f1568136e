#include "solve/plan.h"

#include <math.h>
#include <setjmp.h>
#include <stdlib.h>
#include <string.h>

#include "solve/plan_emit.h"

enum {
    FEW_PORTS = 3,     /* for so many, one candidate is enough in a system of moderate size */
    FEW_UNKNOWNS = 12, /* up to so many, ports come last; beyond, they are ordered with the others */
    MODERATE = 200,
    FIRST_LEVEL = 32 << 10, /* bytes of the caches that a block of slots should fit into */
    SECOND_LEVEL = 384 << 10,
    MOST_GROUPS = 16
};
#define GROWTH_LIMIT 3e3   /* growth that still leaves about 1e-12, see solve/kernels.h */
#define MANY_PIVOTS 64.0   /* so many, each at the limit, count for one: errors add up like random ones */
#define LEAST_PATIENCE 1e5 /* steps spent on the second candidate however cheap the first one is */

/* ---- costs ------------------------------------------------------------------------------------- */

static double cost_of_elimination(const anb__system *system, double height) {
    return system->symmetric ? 1 + height + height * (height + 1) / 2 : 1 + height + height * height;
}

static double cost_of_block(const anb__system *system, double size) {
    return system->symmetric ? size * (size * size + 1) / 2 : size * size * size;
}

/* Dense blocks run at more than twice the speed of lists. */
static double weight_of_block(uint32_t size) { return size <= ANB__FIXED || size > 12 ? 0.4 : 0.7; }

static double cost_of_row(const anb__system *system, const anb__layout *x, uint32_t i) {
    double cost = cost_of_elimination(system, anb__height(&x->pattern, i));
    uint32_t k = x->need.index[i];
    if (k == ANB__NOWHERE) return cost;
    double elements = x->need.targets[k] + 0.5;
    return cost + (system->symmetric ? 1 : 2) * elements * anb__height(&x->pattern, i);
}

/* Finds from where on the rest is best inverted as one dense block, and sets the cost of it all. */
static double place_block(const anb__system *system, anb__layout *x) {
    uint32_t n = x->pattern.size;
    double before = 0, best = INFINITY;
    for (uint32_t i = 0; i < n; i++) before += cost_of_row(system, x, i);
    for (uint32_t size = 0; size <= n; size++) {
        if (size) before -= cost_of_row(system, x, n - size);
        double block = cost_of_block(system, size), weighted = before + weight_of_block(size) * block;
        if (weighted < best) {
            best = weighted;
            x->block = n - size;
            x->cost = before + block;
        }
        if (weight_of_block(size) * block > best) break;
    }
    return best;
}

/* ---- candidates ------------------------------------------------------------------------------------ */

typedef struct compiler {
    anb__arena work;
    const anb__system *system;
    anb__graph graph;
    bool *is_port;
    bool as_sums; /* a port is not just one unknown of its own */
    anb__plan *plan;
} compiler;

static void find_ports(compiler *c) {
    const anb__system *system = c->system;
    c->is_port = anb__arena_take(&c->work, system->size + 1);
    for (uint32_t k = 0; k < system->port_count; k++) {
        uint32_t first = system->first_term[k], end = system->first_term[k + 1];
        if (end - first != 1) c->as_sums = true;
        for (uint32_t i = first; i < end; i++) {
            uint32_t unknown = system->terms[i].unknown;
            if (c->is_port[unknown]) c->as_sums = true;
            c->is_port[unknown] = true;
        }
    }
}

/* One order and its cost; infinite where it took more than `patience` steps to find out. */
static double try_order(compiler *c, anb__order_rule rule, double patience, anb__layout *out) {
    uint32_t *order = anb__arena_take(&c->work, ((size_t)c->system->size + 1) * sizeof *order);
    anb__order_of(&c->work, c->system, &c->graph, c->is_port, rule, order);
    anb__pattern_of(&c->work, &c->graph, order, &out->pattern);
    if (!anb__need_of(&c->work, c->system, &out->pattern, c->as_sums, patience, &out->need)) return INFINITY;
    return place_block(c->system, out);
}

/* Ports that go last leave the rest to be eliminated without the terminations that damp it: long chains then
 * lose digits at their own resonances. So a small gain is not worth having them last. */
#define WORTH_HAVING 1.2

static void choose_layout(compiler *c, anb__layout *out) {
    if (c->system->port_count <= FEW_PORTS && c->system->size > FEW_UNKNOWNS && c->system->size <= MODERATE) {
        try_order(c, ANB__ALL_ALIKE, INFINITY, out);
        return;
    }
    double cost = try_order(c, ANB__PORTS_LAST, INFINITY, out);
    if (c->system->size <= FEW_UNKNOWNS && c->system->port_count <= FEW_PORTS) return;
    anb__layout other = {0};
    double patience = 2 * cost > LEAST_PATIENCE ? 2 * cost : LEAST_PATIENCE;
    if (try_order(c, ANB__ALL_ALIKE, patience, &other) < WORTH_HAVING * cost) *out = other;
}

/* ---- blocks of points ---------------------------------------------------------------------------------- */

static uint32_t suitable_groups(const anb__plan *plan) {
    size_t bytes = (size_t)plan->scratch_slot * ANB__GROUP * sizeof(double);
    size_t groups = FIRST_LEVEL / bytes;
    if (groups < 2) groups = SECOND_LEVEL / bytes < 2 ? SECOND_LEVEL / bytes : 2;
    if (groups > MOST_GROUPS) groups = MOST_GROUPS;
    return groups ? (uint32_t)groups : 1;
}

/* ---- compiling -------------------------------------------------------------------------------- */

static void compile(compiler *c) {
    const anb__system *system = c->system;
    anb__plan *plan = c->plan;
    plan->symmetric = system->symmetric;
    plan->port_count = system->port_count;
    plan->element_count = anb__plan_elements(system->symmetric, system->port_count);
    plan->entry_count = system->entry_count;
    anb__graph_of(&c->work, system, &c->graph);
    find_ports(c);
    anb__layout layout = {0};
    choose_layout(c, &layout);
    anb__emit(&c->work, system, &layout, c->as_sums, plan);
    plan->growth_limit = pow(GROWTH_LIMIT, 4) * (1 + system->size / MANY_PIVOTS);
    plan->operations = (uint64_t)layout.cost;
    plan->block_groups = suitable_groups(plan);
}

/* False when memory is gone. */
static bool compile_or_escape(compiler *c) {
    jmp_buf escape;
    c->work.escape = &escape;
    c->plan->arena.escape = &escape;
    if (setjmp(escape)) return false;
    compile(c);
    return true;
}

anb_status anb__plan_compile(const anb__system *system, anb__plan **out) {
    compiler c = {.system = system, .plan = calloc(1, sizeof *c.plan)};
    *out = NULL;
    if (!c.plan) return ANB_MEMORY;
    bool done = compile_or_escape(&c);
    anb__arena_free(&c.work);
    c.plan->arena.escape = NULL;
    if (done)
        *out = c.plan;
    else
        anb__plan_free(c.plan);
    return done ? ANB_OK : ANB_MEMORY;
}

void anb__plan_free(anb__plan *plan) {
    if (!plan) return;
    anb__arena_free(&plan->arena);
    free(plan);
}

/* ---- about a plan ----------------------------------------------------------------------------- */

uint32_t anb__plan_slot_of(const anb__plan *plan, uint32_t entry) { return plan->slot_of[entry]; }
uint32_t anb__plan_slot_count(const anb__plan *plan) { return plan->slot_count; }
uint32_t anb__plan_block_groups(const anb__plan *plan) { return plan->block_groups; }
uint64_t anb__plan_operations(const anb__plan *plan) { return plan->operations; }
bool anb__plan_is_symmetric(const anb__plan *plan) { return plan->symmetric; }

/* ---- kernels ---------------------------------------------------------------------------------- */

static const anb__plan_kernel kernels[] = {
#if defined(__x86_64__)
    {"avx512", anb__plan_run_avx512},
    {"avx2", anb__plan_run_avx2},
#endif
    {"plain", anb__plan_run_plain},
};

static bool runs_here(const char *name) {
#if defined(__x86_64__)
    if (!strcmp(name, "avx512"))
        return __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") &&
               __builtin_cpu_supports("avx512vl");
    if (!strcmp(name, "avx2")) return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
#endif
    return !strcmp(name, "plain");
}

const anb__plan_kernel *anb__plan_kernel_find(const char *name) {
    for (size_t i = 0; i < sizeof kernels / sizeof *kernels; i++)
        if ((!name || !strcmp(name, kernels[i].name)) && runs_here(kernels[i].name)) return &kernels[i];
    return NULL;
}
