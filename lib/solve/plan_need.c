/* Which elements of the inverse are needed.
 *
 * With M = L D U, the elements Z_ij of the inverse above the diagonal of row i follow from those of
 * later rows, Z_ij = - sum U_ik Z_kj over the elements k of row i of U (and so below it, with L), and
 * Z_ii = 1/D_i - sum U_ik Z_ki (K. Takahashi, J. Fagan and M. Chin 1973; A. M. Erisman and W. F. Tinney
 * 1975). So what the rows need is found by going through them in ascending order.
 */
#include <string.h>

#include "solve/plan_code.h"
#include "solve/plan_pattern.h"

static void set_bit(uint64_t *set, uint32_t j) { set[j / 64] |= (uint64_t)1 << j % 64; }

static void set_pair(const anb__need *need, uint64_t *sets, uint32_t i, uint32_t j) {
    uint32_t low = i < j ? i : j, high = i < j ? j : i;
    set_bit(sets + (size_t)low * need->words, high);
}

/* ---- active positions ------------------------------------------------------------------------------- */

static void mark_ancestors(const anb__pattern *pattern, uint32_t i, uint32_t *mark) {
    while (mark[i] == ANB__NOWHERE) {
        mark[i] = 0;
        if (!anb__height(pattern, i)) return;
        i = pattern->row[pattern->start[i]];
    }
}

static void find_active(anb__arena *work, const anb__system *system, const anb__pattern *pattern,
                        anb__need *out) {
    uint32_t n = pattern->size, terms = system->port_count ? system->first_term[system->port_count] : 0;
    out->index = anb__arena_take(work, ((size_t)n + 1) * sizeof *out->index);
    memset(out->index, 0xff, ((size_t)n + 1) * sizeof *out->index);
    for (uint32_t k = 0; k < terms; k++)
        mark_ancestors(pattern, pattern->position[system->terms[k].unknown], out->index);
    out->count = 0;
    for (uint32_t i = 0; i < n; i++)
        if (out->index[i] != ANB__NOWHERE) out->index[i] = out->count++;
    out->active = anb__arena_take(work, ((size_t)out->count + 1) * sizeof *out->active);
    for (uint32_t i = 0; i < n; i++)
        if (out->index[i] != ANB__NOWHERE) out->active[out->index[i]] = i;
    out->words = (out->count + 63) / 64;
}

/* ---- what the result itself asks for --------------------------------------------------------------- */

static void want_ports(anb__arena *work, const anb__system *system, const anb__pattern *pattern, bool as_sums,
                       anb__need *need) {
    uint32_t terms = system->port_count ? system->first_term[system->port_count] : 0;
    uint32_t *at = anb__arena_take(work, ((size_t)terms + 1) * sizeof *at);
    uint64_t *sets = as_sums ? need->needed : need->wanted;
    for (uint32_t k = 0; k < terms; k++) at[k] = need->index[pattern->position[system->terms[k].unknown]];
    for (uint32_t k = 0; k < terms; k++)
        for (uint32_t l = 0; l <= k; l++) set_pair(need, sets, at[k], at[l]);
}

/* ---- what these need in turn ------------------------------------------------------------------------- */

/* The columns j > i of row i that are wanted or needed; the diagonal one is left out. */
static uint32_t list_targets(const anb__need *need, uint32_t i, uint32_t *list) {
    const uint64_t *a = need->wanted + (size_t)i * need->words, *b = need->needed + (size_t)i * need->words;
    uint32_t count = 0;
    for (uint32_t w = i / 64; w < need->words; w++)
        for (uint64_t set = a[w] | b[w]; set; set &= set - 1) {
            uint32_t j = 64 * w + (uint32_t)__builtin_ctzll(set);
            if (j != i) list[count++] = j;
        }
    return count;
}

/* set |= more, bits below `from` left out */
static void add_from(uint64_t *set, const uint64_t *more, uint32_t from, uint32_t words) {
    uint32_t w = from / 64;
    if (w < words) set[w] |= more[w] & ~(uint64_t)0 << from % 64;
    while (++w < words) set[w] |= more[w];
}

/* All pairs of the two sets become needed: whole words at a time where the sets are dense. */
static void need_pairs(const anb__need *need, uint32_t *rows, uint32_t height, const uint32_t *list,
                       uint32_t count, uint64_t *sets) {
    uint32_t words = need->words;
    if ((double)height * count < (double)words * (height + count)) {
        for (uint32_t k = 0; k < height; k++)
            for (uint32_t j = 0; j < count; j++) set_pair(need, need->needed, rows[k], list[j]);
        return;
    }
    memset(sets, 0, 2 * (size_t)words * sizeof *sets);
    for (uint32_t k = 0; k < height; k++) set_bit(sets, rows[k]);
    for (uint32_t j = 0; j < count; j++) set_bit(sets + words, list[j]);
    for (uint32_t k = 0; k < height; k++)
        add_from(need->needed + (size_t)rows[k] * words, sets + words, rows[k], words);
    for (uint32_t j = 0; j < count; j++)
        add_from(need->needed + (size_t)list[j] * words, sets, list[j], words);
}

/* What one row works with. */
typedef struct lists {
    uint32_t *rows, *targets; /* [count] active numbers */
    uint64_t *sets;           /* [2 * words] */
} lists;

static double close_row(const anb__pattern *pattern, anb__need *need, uint32_t i, const lists *x) {
    uint64_t *own = need->needed + (size_t)i * need->words;
    uint32_t at = need->active[i], height = anb__height(pattern, at);
    const uint32_t *row = pattern->row + pattern->start[at];
    bool diagonal = anb__has(own, i) || anb__has(need->wanted + (size_t)i * need->words, i);
    for (uint32_t k = 0; k < height; k++) {
        x->rows[k] = need->index[row[k]];
        if (diagonal) set_bit(own, x->rows[k]);
    }
    uint32_t count = list_targets(need, i, x->targets);
    need_pairs(need, x->rows, height, x->targets, count, x->sets);
    need->targets[i] = count;
    return (double)height * (count + diagonal);
}

bool anb__need_of(anb__arena *work, const anb__system *system, const anb__pattern *pattern, bool as_sums,
                  double patience, anb__need *out) {
    *out = (anb__need){0};
    find_active(work, system, pattern, out);
    size_t bits = (size_t)out->count * out->words;
    if ((double)bits > patience) return false;
    out->wanted = anb__arena_take(work, (bits + 1) * sizeof *out->wanted);
    out->needed = anb__arena_take(work, (bits + 1) * sizeof *out->needed);
    out->targets = anb__arena_take(work, ((size_t)out->count + 1) * sizeof *out->targets);
    lists x = {.rows = anb__arena_take(work, ((size_t)out->count + 1) * sizeof *x.rows)};
    x.targets = anb__arena_take(work, ((size_t)out->count + 1) * sizeof *x.targets);
    x.sets = anb__arena_take(work, (2 * (size_t)out->words + 1) * sizeof *x.sets);
    want_ports(work, system, pattern, as_sums, out);
    for (uint32_t i = 0; i < out->count && out->work <= patience; i++)
        out->work += close_row(pattern, out, i, &x);
    return out->work <= patience;
}
