/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "support/testing.h"

#include "base/checked.h"
#include "base/context.h"
#include "base/exact_sum.h"
#include "base/executor.h"
#include "base/text.h"

#include <float.h>
#include <stdlib.h>
#include <string.h>

static void statuses_have_texts(void **state)
{
    (void)state;
    assert_string_equal(stericol_status_text(STERICOL_OK), "done");
    assert_string_equal(stericol_status_text(STERICOL_FAULT), "a fault of the program");
    assert_string_equal(stericol_status_text((stericol_status)99), "unknown status");
}

static void the_first_failure_stays(void **state)
{
    stericol_context *context = stericol_context_new();

    (void)state;
    assert_int_equal(stericol_context_status(context), STERICOL_OK);
    assert_string_equal(stericol_context_message(context), "");
    assert_int_equal(stericol_fail(context, STERICOL_INPUT, "a.nc", "te\nmp", "do that", "off by %d", 3), STERICOL_INPUT);
    assert_int_equal(stericol_fail(context, STERICOL_OUTPUT, NULL, NULL, NULL, "later"), STERICOL_OUTPUT);
    assert_int_equal(stericol_context_status(context), STERICOL_INPUT);
    assert_string_equal(stericol_context_message(context), "a.nc: te\\x0Amp: off by 3; do that");
    stericol_context_clear(context);
    assert_string_equal(stericol_context_message(context), "");
    stericol_context_free(context);
    stericol_context_free(NULL);
}

static void keep_notice(void *user, stericol_notice_level level, const char *text)
{
    stericol_text_format(user, "%d %s|", (int)level, text);
}

static void notices_reach_their_receiver(void **state)
{
    stericol_context *context = stericol_context_new();
    stericol_text seen = {0};

    (void)state;
    stericol_notice(context, STERICOL_NOTE, NULL, NULL, "dropped");
    stericol_context_on_notice(context, keep_notice, &seen);
    stericol_notice(context, STERICOL_WARNING, "f", "v", "taken as %s", "m");
    assert_string_equal(stericol_text_string(&seen), "1 f: v: taken as m|");
    stericol_text_free(&seen);
    stericol_context_free(context);
}

static void numbers_are_read_strictly(void **state)
{
    static const struct {
        const char *text;
        bool good;
        double value;
    } rows[] = {{"1", true, 1},          {" -2.5e3 ", true, -2500}, {"+.5", true, 0.5}, {"5.", true, 5},
                {"", false, 0},          {" ", false, 0},           {"1,5", false, 0},  {"0x10", false, 0},
                {"nan", false, 0},       {"inf", false, 0},         {"1e999", false, 0}, {"1 2", false, 0},
                {"1e", false, 0},        {"e5", false, 0},          {".", false, 0},    {"--1", false, 0},
                {"1e-400", true, 0}};
    double value;
    long long whole;

    (void)state;
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++) {
        bool good = stericol_parse_number(rows[i].text, &value);

        if (good != rows[i].good)
            fail_msg("'%s' was %s", rows[i].text, good ? "taken" : "refused");
        if (good)
            assert_same_number(value, rows[i].value);
    }
    assert_true(stericol_parse_whole(" 12 ", 1, 12, &whole));
    assert_int_equal(whole, 12);
    assert_false(stericol_parse_whole("13", 1, 12, &whole));
    assert_false(stericol_parse_whole("1.0", 1, 12, &whole));
    assert_false(stericol_parse_whole("99999999999999999999", 1, INT64_MAX, &whole));
    assert_false(stericol_parse_whole("- 1", -9, 12, &whole));
}

static void text_from_files_cannot_steer_a_terminal(void **state)
{
    stericol_text text = {0};

    (void)state;
    stericol_text_add_printable(&text, "a\x1b[31m\xc3\xa9\xff\xe2\x80\xae\xc2\x9b");
    assert_string_equal(stericol_text_string(&text), "a\\x1B[31m\xc3\xa9\\xFF\\xE2\\x80\\xAE\\xC2\\x9B");
    stericol_text_free(&text);
}

static void sizes_do_not_overflow(void **state)
{
    size_t size = 7;
    void *array = NULL;

    (void)state;
    assert_false(stericol_multiply_sizes(SIZE_MAX / 2, 3, &size));
    assert_int_equal(size, 7);
    assert_true(stericol_multiply_sizes(0, SIZE_MAX, &size));
    assert_int_equal(size, 0);
    assert_false(stericol_add_sizes(SIZE_MAX, 1, &size));
    assert_null(stericol_new_array(SIZE_MAX / 2, 8));
    assert_null(stericol_new_doubles(SIZE_MAX / 8));
    assert_null(stericol_new_doubles(SIZE_MAX / 4));
    assert_false(stericol_grow_array(&array, SIZE_MAX / 2, 8));
    array = stericol_new_doubles(3);
    assert_int_equal((uintptr_t)array % 64, 0);
    free(array);
}

/* A small generator with a fixed start, so that a failure can be repeated. */
static uint64_t draw(uint64_t *seed)
{
    *seed ^= *seed << 13;
    *seed ^= *seed >> 7;
    *seed ^= *seed << 17;
    return *seed;
}

/* Expected values here follow from the definition: powers of two whose sum is known. */
static void exact_sums_are_exact(void **state)
{
    stericol_exact_sum sum = {0};
    double tiny = ldexp(1.0, -1074);

    (void)state;
    assert_same_number(stericol_exact_sum_value(&sum), 0.0);
    stericol_exact_sum_add(&sum, 1e300);
    stericol_exact_sum_add(&sum, 1.0);
    stericol_exact_sum_add(&sum, tiny);
    stericol_exact_sum_add(&sum, -1e300);
    stericol_exact_sum_add(&sum, -1.0);
    assert_same_number(stericol_exact_sum_value(&sum), tiny);
    stericol_exact_sum_clear(&sum);
    for (int i = 0; i < 3; i++)
        stericol_exact_sum_add(&sum, DBL_MAX);
    assert_true(isinf(stericol_exact_sum_value(&sum)));
    stericol_exact_sum_add(&sum, -DBL_MAX);
    stericol_exact_sum_add(&sum, -DBL_MAX);
    assert_same_number(stericol_exact_sum_value(&sum), DBL_MAX);
    stericol_exact_sum_clear(&sum);
    /* ties to even, and a bit far below that breaks the tie */
    stericol_exact_sum_add(&sum, 1.0);
    stericol_exact_sum_add(&sum, ldexp(1.0, -53));
    assert_same_number(stericol_exact_sum_value(&sum), 1.0);
    stericol_exact_sum_add(&sum, tiny);
    assert_same_number(stericol_exact_sum_value(&sum), 1.0 + DBL_EPSILON);
    stericol_exact_sum_clear(&sum);
    stericol_exact_sum_add(&sum, -3.25);
    stericol_exact_sum_add(&sum, 1.0);
    assert_same_number(stericol_exact_sum_value(&sum), -2.25);
    stericol_exact_sum_add(&sum, NAN);
    assert_nan(stericol_exact_sum_value(&sum));
    stericol_exact_sum_clear(&sum);
    stericol_exact_sum_add_product(&sum, 1.0 + DBL_EPSILON, 1.0 + DBL_EPSILON);
    stericol_exact_sum_add(&sum, -1.0);
    stericol_exact_sum_add(&sum, -2.0 * DBL_EPSILON);
    assert_same_number(stericol_exact_sum_value(&sum), DBL_EPSILON * DBL_EPSILON);
}

static void exact_sums_do_not_know_order(void **state)
{
    enum { N = 4000 };
    static double terms[N];
    stericol_exact_sum forward = {0}, backward = {0}, parts[3] = {{.pending = 0}};
    uint64_t seed = 20261201;
    double value;

    (void)state;
    for (int i = 0; i < N; i++) {
        terms[i] = ldexp((double)(draw(&seed) >> 11), (int)(draw(&seed) % 1900) - 1000);
        if (draw(&seed) & 1)
            terms[i] = -terms[i];
    }
    for (int i = 0; i < N; i++) {
        stericol_exact_sum_add(&forward, terms[i]);
        stericol_exact_sum_add(&backward, terms[N - 1 - i]);
        stericol_exact_sum_add(&parts[i % 3], terms[i]);
    }
    stericol_exact_sum_merge(&parts[0], &parts[2]);
    stericol_exact_sum_merge(&parts[0], &parts[1]);
    value = stericol_exact_sum_value(&forward);
    assert_same_number(stericol_exact_sum_value(&backward), value);
    assert_same_number(stericol_exact_sum_value(&parts[0]), value);
    /* and the whole taken away leaves nothing */
    for (int i = 0; i < N; i++)
        stericol_exact_sum_add(&forward, -terms[i]);
    assert_same_number(stericol_exact_sum_value(&forward), 0.0);
}

static void count_items(void *argument, size_t from, size_t to, size_t worker)
{
    size_t *count = argument;

    assert_int_equal(worker, 0);
    for (size_t i = from; i < to; i++)
        count[i]++;
}

static void mark(void *argument)
{
    *(int *)argument = 1;
}

static void the_serial_executor_does_every_item_once(void **state)
{
    size_t count[10] = {0};
    int marked = 0;
    stericol_executor *executor = &stericol_serial_executor;

    (void)state;
    executor->run(executor, 10, 3, count_items, count);
    for (size_t i = 0; i < 10; i++)
        assert_int_equal(count[i], 1);
    executor->start(executor, mark, &marked);
    executor->wait(executor);
    assert_int_equal(marked, 1);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(statuses_have_texts),
        cmocka_unit_test(the_first_failure_stays),
        cmocka_unit_test(notices_reach_their_receiver),
        cmocka_unit_test(numbers_are_read_strictly),
        cmocka_unit_test(text_from_files_cannot_steer_a_terminal),
        cmocka_unit_test(sizes_do_not_overflow),
        cmocka_unit_test(exact_sums_are_exact),
        cmocka_unit_test(exact_sums_do_not_know_order),
        cmocka_unit_test(the_serial_executor_does_every_item_once),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
