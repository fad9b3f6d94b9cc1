/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Workers; also meant to run under the thread sanitizer, which judges the unlocked counts below. */
#include "support/testing.h"

#include "job/workers.h"

#include <pthread.h>
#include <signal.h>
#include <stdatomic.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

enum { ITEMS = 1009, REPETITIONS = 1000 };

static const size_t thread_counts[] = {1, 2, 3, 7};

struct tally {
    unsigned seen[ITEMS]; /* not atomic: two workers on one item are a race, which the sanitizer reports */
    atomic_int busy[8];   /* by worker */
    atomic_bool bad;      /* a worker out of range or used twice at once, or a range that is none */
    size_t workers, grain;
};

static void count_items(void *argument, size_t from, size_t to, size_t worker)
{
    struct tally *tally = argument;

    if (worker >= tally->workers || atomic_fetch_add(&tally->busy[worker], 1) != 0 || from >= to ||
        to - from > tally->grain)
        atomic_store(&tally->bad, true);
    for (size_t i = from; i < to; i++)
        tally->seen[i]++;
    atomic_fetch_sub(&tally->busy[worker], 1);
}

static void assert_all_seen(const struct tally *tally, size_t count, unsigned times)
{
    assert_false(atomic_load(&tally->bad));
    for (size_t i = 0; i < ITEMS; i++)
        assert_int_equal(tally->seen[i], i < count ? times : 0);
}

static stericol_workers *new_workers(size_t threads)
{
    stericol_context *context = stericol_context_new();
    stericol_workers *workers;

    if (stericol_workers_new(context, threads, &workers) != STERICOL_OK)
        fail_msg("%s", stericol_context_message(context));
    stericol_context_free(context);
    return workers;
}

static void every_item_comes_once(void **state)
{
    static const size_t counts[] = {0, 1, 2, 7, ITEMS}, grains[] = {1, 3, 64, ITEMS, 100000, SIZE_MAX};

    (void)state;
    for (size_t i = 0; i < sizeof thread_counts / sizeof thread_counts[0]; i++) {
        stericol_workers *workers = new_workers(thread_counts[i]);
        stericol_executor *executor = stericol_workers_executor(workers);

        assert_int_equal(executor->workers, thread_counts[i]);
        for (size_t j = 0; j < sizeof counts / sizeof counts[0]; j++)
            for (size_t k = 0; k < sizeof grains / sizeof grains[0]; k++) {
                static struct tally tally;

                memset(&tally, 0, sizeof tally);
                tally.workers = thread_counts[i];
                tally.grain = grains[k];
                executor->run(executor, counts[j], grains[k], count_items, &tally);
                assert_all_seen(&tally, counts[j], 1);
            }
        stericol_workers_free(workers);
    }
    stericol_workers_free(NULL);
}

static void it_holds_a_thousand_times(void **state)
{
    (void)state;
    for (size_t i = 0; i < sizeof thread_counts / sizeof thread_counts[0]; i++) {
        stericol_workers *workers = new_workers(thread_counts[i]);
        stericol_executor *executor = stericol_workers_executor(workers);
        static struct tally tally;

        memset(&tally, 0, sizeof tally);
        tally.workers = thread_counts[i];
        tally.grain = 100;
        for (unsigned j = 0; j < REPETITIONS; j++)
            executor->run(executor, ITEMS, 100, count_items, &tally);
        assert_all_seen(&tally, ITEMS, REPETITIONS);
        stericol_workers_free(workers);
    }
}

static void workers_can_come_and_go(void **state)
{
    (void)state;
    for (unsigned i = 0; i < 100; i++) {
        stericol_workers *workers = new_workers(3);
        stericol_executor *executor = stericol_workers_executor(workers);
        static struct tally tally;

        memset(&tally, 0, sizeof tally);
        tally.workers = 3;
        tally.grain = 500;
        if (i % 2 == 0) {
            executor->run(executor, ITEMS, 500, count_items, &tally);
            assert_all_seen(&tally, ITEMS, 1);
        }
        stericol_workers_free(workers);
    }
}

/* Every worker is held until all have come: the calling thread works, and so does everybody else. */
struct meeting {
    atomic_size_t present;
    size_t expected;
    pthread_t caller;
    atomic_bool caller_worked;
};

static void meet(void *argument, size_t from, size_t to, size_t worker)
{
    struct meeting *meeting = argument;

    (void)from;
    (void)to;
    if (pthread_equal(pthread_self(), meeting->caller)) {
        atomic_store(&meeting->caller_worked, true);
        if (worker != 0)
            atomic_store(&meeting->caller_worked, false);
    }
    atomic_fetch_add(&meeting->present, 1);
    while (atomic_load(&meeting->present) < meeting->expected)
        nanosleep(&(struct timespec){0, 100000}, NULL);
}

static void all_workers_work_at_once(void **state)
{
    (void)state;
    for (size_t i = 0; i < sizeof thread_counts / sizeof thread_counts[0]; i++) {
        stericol_workers *workers = new_workers(thread_counts[i]);
        stericol_executor *executor = stericol_workers_executor(workers);
        struct meeting meeting = {.expected = thread_counts[i], .caller = pthread_self()};

        executor->run(executor, thread_counts[i], 1, meet, &meeting);
        assert_int_equal(atomic_load(&meeting.present), thread_counts[i]);
        assert_true(atomic_load(&meeting.caller_worked));
        stericol_workers_free(workers);
    }
}

/* ---- the background ---- */

struct background {
    atomic_bool released;
    int done; /* not atomic: wait() must make it seen */
    pthread_t thread;
    stericol_executor *executor;
    struct tally *tally;
};

static void wait_for_release(void *argument)
{
    struct background *background = argument;

    background->thread = pthread_self();
    while (!atomic_load(&background->released))
        nanosleep(&(struct timespec){0, 100000}, NULL);
    background->done++;
}

static void release(void *argument, size_t from, size_t to, size_t worker)
{
    struct background *background = argument;

    (void)from;
    (void)to;
    (void)worker;
    atomic_store(&background->released, true);
}

/* The background task ends only after run() has done its work: with one thread for both this would hang. */
static void the_background_overlaps_with_a_run(void **state)
{
    (void)state;
    for (size_t i = 0; i < sizeof thread_counts / sizeof thread_counts[0]; i++) {
        stericol_workers *workers = new_workers(thread_counts[i]);
        stericol_executor *executor = stericol_workers_executor(workers);
        struct background background = {.done = 0};

        executor->wait(executor); /* nothing was started */
        executor->start(executor, wait_for_release, &background);
        executor->run(executor, 1, 1, release, &background);
        executor->wait(executor);
        assert_int_equal(background.done, 1);
        assert_false(pthread_equal(background.thread, pthread_self()));
        stericol_workers_free(workers);
    }
}

static void run_as_well(void *argument)
{
    struct background *background = argument;

    background->executor->run(background->executor, ITEMS, 10, count_items, background->tally);
}

/* Both threads give work at once and take turns. */
static void the_background_may_run_work_itself(void **state)
{
    stericol_workers *workers = new_workers(3);
    static struct tally own, other;
    struct background background = {.executor = stericol_workers_executor(workers), .tally = &other};

    (void)state;
    memset(&own, 0, sizeof own);
    memset(&other, 0, sizeof other);
    own.workers = other.workers = 3;
    own.grain = other.grain = 10;
    for (unsigned i = 0; i < REPETITIONS; i++) {
        background.executor->start(background.executor, run_as_well, &background);
        background.executor->run(background.executor, ITEMS, 10, count_items, &own);
        background.executor->wait(background.executor);
    }
    assert_all_seen(&own, ITEMS, REPETITIONS);
    assert_all_seen(&other, ITEMS, REPETITIONS);
    stericol_workers_free(workers);
}

static void freeing_waits_for_the_background(void **state)
{
    stericol_workers *workers = new_workers(2);
    stericol_executor *executor = stericol_workers_executor(workers);
    struct background background = {.done = 0};

    (void)state;
    atomic_store(&background.released, true);
    executor->start(executor, wait_for_release, &background);
    stericol_workers_free(workers);
    assert_int_equal(background.done, 1);
}

static void look_at_signals(void *argument)
{
    sigset_t *blocked = argument;

    pthread_sigmask(SIG_SETMASK, NULL, blocked);
}

static void signals_are_left_to_the_main_thread(void **state)
{
    stericol_workers *workers = new_workers(2);
    stericol_executor *executor = stericol_workers_executor(workers);
    sigset_t blocked;

    (void)state;
    executor->start(executor, look_at_signals, &blocked);
    executor->wait(executor);
    assert_true(sigismember(&blocked, SIGINT) == 1 && sigismember(&blocked, SIGTERM) == 1);
    assert_false(sigismember(&blocked, SIGSEGV) == 1);
    pthread_sigmask(SIG_SETMASK, NULL, &blocked);
    assert_false(sigismember(&blocked, SIGINT) == 1);
    stericol_workers_free(workers);
}

static void the_default_is_what_the_process_may_use(void **state)
{
    stericol_workers *workers = new_workers(0);

    (void)state;
    assert_true(stericol_default_threads() >= 1 && stericol_default_threads() <= STERICOL_WORKERS_MOST);
    assert_int_equal(stericol_workers_executor(workers)->workers, stericol_default_threads());
    stericol_workers_free(workers);
}

int main(void)
{
    const struct CMUnitTest tests[] = {cmocka_unit_test(every_item_comes_once),
                                       cmocka_unit_test(it_holds_a_thousand_times),
                                       cmocka_unit_test(workers_can_come_and_go),
                                       cmocka_unit_test(all_workers_work_at_once),
                                       cmocka_unit_test(the_background_overlaps_with_a_run),
                                       cmocka_unit_test(the_background_may_run_work_itself),
                                       cmocka_unit_test(freeing_waits_for_the_background),
                                       cmocka_unit_test(signals_are_left_to_the_main_thread),
                                       cmocka_unit_test(the_default_is_what_the_process_may_use)};

    return cmocka_run_group_tests(tests, NULL, NULL);
}
