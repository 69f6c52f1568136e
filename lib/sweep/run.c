#include "sweep/run.h"

#include <pthread.h>
#include <stdlib.h>
#include <unistd.h>

enum { PLACES_PER_THREAD = 4 }; /* blocks under way for each thread */

typedef enum place_state { EMPTY, DONE } place_state;

/* A ring of blocks: block k stands at place k % places from when it is taken until it is delivered. */
typedef struct pool {
    const anb__engine *engine;
    const anb__grid *grid;
    const anb__job *job;
    const atomic_bool *cancelled;
    anb__block *ring;
    place_state *state;
    uint64_t places, blocks, taken, delivered;
    bool stop;
    uint64_t pivoted_points;
    pthread_mutex_t lock;
    pthread_cond_t may_take, may_deliver;
} pool;

static anb_status process(pool *p, anb__bench *bench, anb__block *block) {
    const anb__job *job = p->job;
    if (atomic_load_explicit(p->cancelled, memory_order_relaxed)) return ANB_CANCELLED;
    anb_status status = anb__grid_fill(p->grid, block->first, block->count, block->hz);
    if (status == ANB_OK) status = job->process(job->user, bench, block);
    block->failed_hz = bench->failed_hz;
    block->failed_unknown = bench->failed_unknown;
    block->failed_part = bench->failed_part;
    return status;
}

static void set_extent(const pool *p, uint64_t k, anb__block *block) {
    uint64_t left = p->grid->count - k * p->job->block_points;
    block->first = k * p->job->block_points;
    block->count = left < p->job->block_points ? left : p->job->block_points;
}

/* ---- a worker -------------------------------------------------------------------------------- */

static void work(pool *p, anb__bench *bench) {
    pthread_mutex_lock(&p->lock);
    for (;;) {
        while (!p->stop && p->taken < p->blocks && p->taken >= p->delivered + p->places)
            pthread_cond_wait(&p->may_take, &p->lock);
        if (p->stop || p->taken >= p->blocks) break;
        uint64_t k = p->taken++;
        anb__block *block = &p->ring[k % p->places];
        set_extent(p, k, block);
        pthread_mutex_unlock(&p->lock);
        anb_status status = process(p, bench, block);
        pthread_mutex_lock(&p->lock);
        block->status = status;
        p->state[k % p->places] = DONE;
        pthread_cond_signal(&p->may_deliver);
    }
    p->pivoted_points += bench->pivoted_points;
    pthread_mutex_unlock(&p->lock);
}

typedef struct worker {
    pool *pool;
    anb__bench bench;
    bool has_bench, runs;
    pthread_t thread;
} worker;

static void *run_worker(void *argument) {
    worker *w = argument;
    work(w->pool, &w->bench);
    return NULL;
}

/* ---- the calling thread --------------------------------------------------------------------------- */

static void note_failure(const anb__block *block, anb__outcome *outcome) {
    outcome->failed_hz = block->failed_hz;
    outcome->failed_unknown = block->failed_unknown;
    outcome->failed_part = block->failed_part;
}

static anb_status deliver_all(pool *p, anb__outcome *outcome) {
    anb_status status = ANB_OK;
    for (uint64_t k = 0; k < p->blocks && status == ANB_OK; k++) {
        uint64_t place = k % p->places;
        pthread_mutex_lock(&p->lock);
        while (p->state[place] != DONE) pthread_cond_wait(&p->may_deliver, &p->lock);
        pthread_mutex_unlock(&p->lock);
        anb__block *block = &p->ring[place];
        status = block->status;
        if (status == ANB_OK) status = p->job->deliver(p->job->user, block);
        if (status == ANB_OK && atomic_load(p->cancelled)) status = ANB_CANCELLED;
        if (status == ANB_INVALID) note_failure(block, outcome);
        pthread_mutex_lock(&p->lock);
        p->state[place] = EMPTY;
        p->delivered++;
        p->stop = p->stop || status != ANB_OK;
        pthread_cond_broadcast(&p->may_take);
        pthread_mutex_unlock(&p->lock);
    }
    return status;
}

static anb_status run_alone(pool *p, anb__bench *bench, anb__outcome *outcome) {
    anb_status status = ANB_OK;
    for (uint64_t k = 0; k < p->blocks && status == ANB_OK; k++) {
        anb__block *block = &p->ring[0];
        set_extent(p, k, block);
        status = process(p, bench, block);
        if (status == ANB_OK) status = p->job->deliver(p->job->user, block);
        if (status == ANB_INVALID) note_failure(block, outcome);
    }
    p->pivoted_points = bench->pivoted_points;
    return status;
}

/* A pool that could not start all its threads goes on with those it has. */
static anb_status run_threads(pool *p, worker *workers, unsigned threads, anb__outcome *outcome) {
    unsigned running = 0;
    for (unsigned i = 0; i < threads; i++) {
        workers[i].runs = !pthread_create(&workers[i].thread, NULL, run_worker, &workers[i]);
        running += workers[i].runs;
    }
    anb_status status = running ? deliver_all(p, outcome) : run_alone(p, &workers[0].bench, outcome);
    for (unsigned i = 0; i < threads; i++)
        if (workers[i].runs) pthread_join(workers[i].thread, NULL);
    return status;
}

/* ---- setting up -------------------------------------------------------------------------------------- */

static anb_status fill_ring(pool *p) {
    p->ring = calloc(p->places, sizeof *p->ring);
    p->state = calloc(p->places, sizeof *p->state);
    if (!p->ring || !p->state) return ANB_MEMORY;
    for (uint64_t i = 0; i < p->places; i++) {
        p->ring[i].hz = malloc(p->job->block_points * sizeof(double));
        p->ring[i].payload = p->job->make_payload(p->job->user);
        if (!p->ring[i].hz || !p->ring[i].payload) return ANB_MEMORY;
    }
    return ANB_OK;
}

static void empty_ring(pool *p) {
    for (uint64_t i = 0; p->ring && i < p->places; i++) {
        free(p->ring[i].hz);
        if (p->ring[i].payload) p->job->free_payload(p->job->user, p->ring[i].payload);
    }
    free(p->ring);
    free(p->state);
}

static anb_status make_benches(const anb__engine *engine, worker *workers, unsigned threads, pool *p) {
    for (unsigned i = 0; i < threads; i++) {
        workers[i].pool = p;
        workers[i].has_bench = true;
        anb_status status = anb__bench_new(engine, &workers[i].bench);
        if (status != ANB_OK) return status;
    }
    return ANB_OK;
}

static unsigned useful_threads(unsigned asked, uint64_t blocks) {
    long processors = sysconf(_SC_NPROCESSORS_ONLN);
    unsigned threads = asked ? asked : processors > 0 ? (unsigned)processors : 1;
    return blocks < threads ? (blocks ? (unsigned)blocks : 1) : threads;
}

anb_status anb__run(const anb__engine *engine, const anb__grid *grid, unsigned threads, const anb__job *job,
                    const atomic_bool *cancelled, anb__outcome *outcome) {
    pool p = {.engine = engine, .grid = grid, .job = job, .cancelled = cancelled};
    p.blocks = (grid->count + job->block_points - 1) / job->block_points;
    threads = useful_threads(threads, p.blocks);
    p.places = threads == 1 ? 1 : (uint64_t)threads * PLACES_PER_THREAD;
    pthread_mutex_init(&p.lock, NULL);
    pthread_cond_init(&p.may_take, NULL);
    pthread_cond_init(&p.may_deliver, NULL);
    worker *workers = calloc(threads, sizeof *workers);
    anb_status status = workers ? fill_ring(&p) : ANB_MEMORY;
    if (status == ANB_OK) status = make_benches(engine, workers, threads, &p);
    if (status == ANB_OK)
        status = threads == 1 ? run_alone(&p, &workers[0].bench, outcome)
                              : run_threads(&p, workers, threads, outcome);
    outcome->pivoted_points = p.pivoted_points;
    for (unsigned i = 0; workers && i < threads; i++)
        if (workers[i].has_bench) anb__bench_clear(&workers[i].bench);
    free(workers);
    empty_ring(&p);
    pthread_mutex_destroy(&p.lock);
    pthread_cond_destroy(&p.may_take);
    pthread_cond_destroy(&p.may_deliver);
    return status;
}
