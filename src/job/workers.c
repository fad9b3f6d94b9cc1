/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "job/workers.h"

#include "base/checked.h"
#include "base/context.h"

#include <assert.h>
#include <pthread.h>
#include <signal.h>
#include <stdatomic.h>
#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

/* One call of run().  Grains are counted, not items, so that the counter cannot overflow. */
struct batch {
    stericol_task *task;
    void *argument;
    size_t count, grain, grains;
    atomic_size_t next; /* the first grain that nobody has taken */
};

typedef struct helper {
    stericol_workers *workers;
    size_t worker;
    pthread_t thread;
} helper;

struct stericol_workers {
    stericol_executor executor; /* first, so that a pointer to it is one to the whole */
    helper *helpers;
    size_t helper_count;  /* that were started */
    pthread_mutex_t turn; /* held by the thread whose run() is going on */

    pthread_mutex_t lock; /* guards all that follows */
    pthread_cond_t work, done;
    struct batch *open;   /* the batch that helpers may join, or NULL */
    unsigned long number; /* of the open batch, so that a helper joins it once */
    size_t joined;        /* helpers at work on it */
    bool leaving;

    pthread_cond_t background_work, background_done;
    pthread_t background_thread;
    bool background_started; /* the thread */
    bool background_busy;    /* from start() until the task is done */
    bool background_taken;   /* from start() until wait() */
    void (*background)(void *argument);
    void *background_argument;
};

/* Takes grains until there are none. */
static void work_on(struct batch *batch, size_t worker)
{
    size_t index;

    while ((index = atomic_fetch_add(&batch->next, 1)) < batch->grains) {
        size_t from = index * batch->grain;
        size_t to = batch->count - from > batch->grain ? from + batch->grain : batch->count;

        batch->task(batch->argument, from, to, worker);
    }
}

static void *help(void *argument)
{
    helper *self = argument;
    stericol_workers *workers = self->workers;
    unsigned long seen = 0;

    pthread_mutex_lock(&workers->lock);
    for (;;) {
        struct batch *batch;

        while (!workers->leaving && (workers->open == NULL || workers->number == seen))
            pthread_cond_wait(&workers->work, &workers->lock);
        if (workers->leaving)
            break;
        seen = workers->number;
        batch = workers->open;
        workers->joined++;
        pthread_mutex_unlock(&workers->lock);
        work_on(batch, self->worker);
        pthread_mutex_lock(&workers->lock);
        if (--workers->joined == 0)
            pthread_cond_signal(&workers->done);
    }
    pthread_mutex_unlock(&workers->lock);
    return NULL;
}

static void run(stericol_executor *self, size_t count, size_t grain, stericol_task *task, void *argument)
{
    stericol_workers *workers = (stericol_workers *)self;
    struct batch batch = {.task = task, .argument = argument, .count = count, .grain = grain};

    assert(grain != 0);
    if (count == 0)
        return;
    batch.grains = count / grain + (count % grain != 0);
    atomic_init(&batch.next, 0);
    pthread_mutex_lock(&workers->turn);
    if (batch.grains > 1 && workers->helper_count != 0) {
        pthread_mutex_lock(&workers->lock);
        workers->open = &batch;
        workers->number++;
        pthread_cond_broadcast(&workers->work);
        pthread_mutex_unlock(&workers->lock);
    }
    work_on(&batch, 0);
    /* Nothing is left to take: who has not joined yet need not; who has must come back, as the batch ends
     * here. */
    pthread_mutex_lock(&workers->lock);
    workers->open = NULL;
    while (workers->joined != 0)
        pthread_cond_wait(&workers->done, &workers->lock);
    pthread_mutex_unlock(&workers->lock);
    pthread_mutex_unlock(&workers->turn);
}

/* ---- the background task ---- */

static void *work_in_background(void *argument)
{
    stericol_workers *workers = argument;

    pthread_mutex_lock(&workers->lock);
    for (;;) {
        while (!workers->leaving && !workers->background_busy)
            pthread_cond_wait(&workers->background_work, &workers->lock);
        if (!workers->background_busy)
            break;
        pthread_mutex_unlock(&workers->lock);
        workers->background(workers->background_argument);
        pthread_mutex_lock(&workers->lock);
        workers->background_busy = false;
        pthread_cond_signal(&workers->background_done);
    }
    pthread_mutex_unlock(&workers->lock);
    return NULL;
}

static void start(stericol_executor *self, void (*background)(void *argument), void *argument)
{
    stericol_workers *workers = (stericol_workers *)self;

    pthread_mutex_lock(&workers->lock);
    assert(!workers->background_taken);
    workers->background = background;
    workers->background_argument = argument;
    workers->background_taken = workers->background_busy = true;
    pthread_cond_signal(&workers->background_work);
    pthread_mutex_unlock(&workers->lock);
}

static void wait_for_background(stericol_executor *self)
{
    stericol_workers *workers = (stericol_workers *)self;

    pthread_mutex_lock(&workers->lock);
    while (workers->background_busy)
        pthread_cond_wait(&workers->background_done, &workers->lock);
    workers->background_taken = false;
    pthread_mutex_unlock(&workers->lock);
}

/* ---- beginning and end ---- */

/* The program's own faults must still stop the thread that makes them. */
static void block_signals(sigset_t *before)
{
    sigset_t blocked;

    sigfillset(&blocked);
    sigdelset(&blocked, SIGSEGV);
    sigdelset(&blocked, SIGBUS);
    sigdelset(&blocked, SIGFPE);
    sigdelset(&blocked, SIGILL);
    sigdelset(&blocked, SIGABRT);
    pthread_sigmask(SIG_SETMASK, &blocked, before);
}

static int start_threads(stericol_workers *workers, size_t helpers)
{
    sigset_t before;
    int error;

    block_signals(&before);
    error = pthread_create(&workers->background_thread, NULL, work_in_background, workers);
    workers->background_started = error == 0;
    for (size_t i = 0; error == 0 && i < helpers; i++) {
        workers->helpers[i].workers = workers;
        workers->helpers[i].worker = i + 1;
        error = pthread_create(&workers->helpers[i].thread, NULL, help, &workers->helpers[i]);
        workers->helper_count += error == 0;
    }
    pthread_sigmask(SIG_SETMASK, &before, NULL);
    return error;
}

stericol_status stericol_workers_new(stericol_context *context, size_t threads, stericol_workers **workers)
{
    stericol_workers *made;
    int error;

    *workers = NULL;
    if (threads == 0)
        threads = stericol_default_threads();
    if (threads > STERICOL_WORKERS_MOST)
        threads = STERICOL_WORKERS_MOST;
    made = calloc(1, sizeof *made);
    if (made == NULL)
        return stericol_fail_memory(context, sizeof *made, "the workers");
    made->helpers = stericol_new_array(threads, sizeof *made->helpers);
    if (made->helpers == NULL) {
        free(made);
        return stericol_fail_memory(context, 0, "the workers");
    }
    made->executor = (stericol_executor){threads, run, start, wait_for_background};
    /* With default attributes these do not fail on the systems that we build for: they only set fields. */
    pthread_mutex_init(&made->turn, NULL);
    pthread_mutex_init(&made->lock, NULL);
    pthread_cond_init(&made->work, NULL);
    pthread_cond_init(&made->done, NULL);
    pthread_cond_init(&made->background_work, NULL);
    pthread_cond_init(&made->background_done, NULL);
    error = start_threads(made, threads - 1);
    if (error != 0) {
        stericol_workers_free(made);
        return stericol_fail(context, STERICOL_MEMORY, NULL, NULL, "give a smaller --threads",
                             "%zu workers cannot be started: %s", threads, strerror(error));
    }
    *workers = made;
    return STERICOL_OK;
}

void stericol_workers_free(stericol_workers *workers)
{
    if (workers == NULL)
        return;
    pthread_mutex_lock(&workers->lock);
    workers->leaving = true;
    pthread_cond_broadcast(&workers->work);
    pthread_cond_broadcast(&workers->background_work);
    pthread_mutex_unlock(&workers->lock);
    for (size_t i = 0; i < workers->helper_count; i++)
        pthread_join(workers->helpers[i].thread, NULL);
    if (workers->background_started)
        pthread_join(workers->background_thread, NULL);
    pthread_cond_destroy(&workers->background_done);
    pthread_cond_destroy(&workers->background_work);
    pthread_cond_destroy(&workers->done);
    pthread_cond_destroy(&workers->work);
    pthread_mutex_destroy(&workers->lock);
    pthread_mutex_destroy(&workers->turn);
    free(workers->helpers);
    free(workers);
}

stericol_executor *stericol_workers_executor(stericol_workers *workers)
{
    return &workers->executor;
}
