/* Memory that runs out: every allocation of a whole job fails once, the n-th for all n, those of KLU
 * included. Each time the call ends with ANB_MEMORY, or well where it could do without, and nothing is left
 * behind. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>
#include <SuiteSparse_config.h>
#include <stdatomic.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "anabranch.h"

/* ---- allocations that are counted, and one that fails --------------------------------------------- */

static atomic_long calls, held;
static long fails_at; /* 0: none */

static int fails(void) { return atomic_fetch_add(&calls, 1) + 1 == fails_at; }

static void *counted(void *block) {
    if (block) atomic_fetch_add(&held, 1);
    return block;
}

void *__real_malloc(size_t size);
void *__real_calloc(size_t count, size_t size);
void *__real_realloc(void *old, size_t size);
void *__real_aligned_alloc(size_t alignment, size_t size);
void __real_free(void *block);
void *__wrap_malloc(size_t size);
void *__wrap_calloc(size_t count, size_t size);
void *__wrap_realloc(void *old, size_t size);
void *__wrap_aligned_alloc(size_t alignment, size_t size);
void __wrap_free(void *block);

void *__wrap_malloc(size_t size) { return fails() ? NULL : counted(__real_malloc(size)); }
void *__wrap_calloc(size_t count, size_t size) {
    return fails() ? NULL : counted(__real_calloc(count, size));
}
void *__wrap_realloc(void *old, size_t size) {
    if (fails()) return NULL;
    return old ? __real_realloc(old, size) : counted(__real_realloc(NULL, size));
}
void *__wrap_aligned_alloc(size_t alignment, size_t size) {
    return fails() ? NULL : counted(__real_aligned_alloc(alignment, size));
}
void __wrap_free(void *block) {
    if (block) atomic_fetch_sub(&held, 1);
    __real_free(block);
}

/* ---- jobs ------------------------------------------------------------------------------------------- */

typedef struct job {
    const char *text;
    unsigned threads;
    const char *version;
    anb_status expected; /* with memory enough */
    int format;          /* the formatter as well */
} job;

static anb_status swallow(void *user, const char *bytes, size_t length) {
    (void)bytes;
    *(size_t *)user += length;
    return ANB_OK;
}

static anb_status write_sweep(anb_context *context, const anb_netlist *netlist, const job *j) {
    size_t length = 0;
    anb_sweep_options sweep = {.threads = j->threads};
    anb_write_options form = {.version = j->version};
    return anb_sweep_write(context, netlist, &sweep, &form, swallow, &length);
}

static anb_status collect(anb_context *context, const anb_netlist *netlist, const job *j) {
    anb_data *data;
    anb_sweep_options sweep = {.threads = j->threads};
    anb_status status = anb_sweep(context, netlist, &sweep, &data);
    anb_data_free(data);
    return status;
}

static anb_status format(anb_context *context, const job *j) {
    char *text = NULL;
    size_t length;
    anb_status status = anb_format(context, "job.anab", j->text, strlen(j->text), &text, &length);
    if (status == ANB_OK) anb_text_free(text);
    return status;
}

static anb_status run(const job *j) {
    anb_netlist *netlist;
    anb_context *context = anb_context_new();
    if (!context) return ANB_MEMORY;
    anb_status status = anb_netlist_parse(context, "job.anab", j->text, strlen(j->text), NULL, &netlist);
    if (status == ANB_OK) status = write_sweep(context, netlist, j);
    if (status == ANB_OK) status = collect(context, netlist, j);
    if (status == ANB_OK && j->format) status = format(context, j);
    anb_netlist_free(netlist);
    anb_context_free(context);
    return status;
}

static void fail_each(const job *j) {
    long failures = 0;
    for (long n = 1;; n++) {
        atomic_store(&calls, 0);
        atomic_store(&held, 0);
        fails_at = n;
        anb_status status = run(j);
        fails_at = 0;
        if (atomic_load(&held))
            fail_msg("allocation %ld fails: %ld blocks are left behind", n, atomic_load(&held));
        if (atomic_load(&calls) < n) {
            assert_int_equal(status, j->expected);
            break;
        }
        if (status != ANB_MEMORY && status != j->expected)
            fail_msg("allocation %ld fails: status %d", n, status);
        failures += status == ANB_MEMORY;
    }
    printf("%ld failures were told\n", failures);
    assert_true(failures > 5);
}

static void test_feed(void **state) {
    (void)state;
    fail_each(&(job){.text = "title \"16-way feed\"\n"
                             "z0 = 50 ohm\n"
                             "network split(z) {\n  port top, one, two\n"
                             "  top -- line(z, 90 deg @ 1 GHz, loss = 0.2 dB @ 1 GHz) -- one\n"
                             "  top -- line(z, 90 deg @ 1 GHz) -- two\n  one -- 100 ohm -- two\n}\n"
                             "port common: z0 at n[1]\n"
                             "for k in 1 .. 16 { port out[k]: z0 at n[15 + k] }\n"
                             "for k in 1 .. 15 { S[k]: split(sqrt(2)*z0) on (n[k], n[2*k], n[2*k + 1]) }\n"
                             "sweep at 0 Hz, 500 MHz, 1 GHz, 2 GHz\n",
                     .threads = 1,
                     .expected = ANB_OK,
                     .format = 1});
}

static void test_errors(void **state) {
    (void)state;
    fail_each(&(job){.text = "port a, b: 50 ohm\n"
                             "a -- line(70.7, 90 deg @ 1 GHz) -- b\n"
                             "a -- inductor(2 nH, qx = 40) -- b\n"
                             "b -- shunt 3 GHz\n"
                             "sweep at 1 GHz\n",
                     .threads = 1,
                     .expected = ANB_INVALID});
}

static void test_threads(void **state) {
    (void)state;
    fail_each(&(job){.text = "port a: 20 ohm - j*15 ohm\n"
                             "port b: 80 ohm + j*30 ohm\n"
                             "a -- 3 nH -- m -- 10 pF -- n -- 5 nH -- b -- shunt 1.2 pF\n"
                             "m -- 2 pF -- ground\nn -- shunt 1 uH\n"
                             "sweep 0 Hz .. 1 GHz points 40001\n",
                     .threads = 2,
                     .version = "2",
                     .expected = ANB_OK});
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_feed), cmocka_unit_test(test_errors),
                                       cmocka_unit_test(test_threads)};
    SuiteSparse_config.malloc_func = __wrap_malloc;
    SuiteSparse_config.calloc_func = __wrap_calloc;
    SuiteSparse_config.realloc_func = __wrap_realloc;
    SuiteSparse_config.free_func = __wrap_free;
    return cmocka_run_group_tests(tests, NULL, NULL) ? 1 : 0;
}
