#include "check.h"
#include "groundrules/model.h"

#include <pthread.h>
#include <string.h>

static struct section_problem pair(double gap) {
    struct section_problem problem = {.height = 0.2e-3, .dk = 4.3, .count = 2};
    problem.conductors[0] = (struct section_conductor){-0.3e-3, 0.3e-3, 35e-6, 0};
    problem.conductors[1] = (struct section_conductor){gap, 0.3e-3, 35e-6, 0};
    return problem;
}

static void *ask_many(void *context) {
    struct model_memo *memo = context;
    for (int i = 0; i < 40; i++) {
        struct section_problem problem = pair(0.1e-3 * (1 + i % 10));
        struct section_solution solution;
        struct error error = {0};
        if (!model_memo_section(memo, &problem, &solution, &error))
            return memo;
    }
    return NULL;
}

static void test_no_field_is_solved_twice_also_with_threads(void **state) {
    (void)state;
    struct error error = {0};
    struct model_memo *memo = model_memo_create(&error);
    pthread_t threads[4];
    for (int i = 0; i < 4; i++)
        assert_int_equal(pthread_create(&threads[i], NULL, ask_many, memo), 0);
    for (int i = 0; i < 4; i++) {
        void *failed = NULL;
        pthread_join(threads[i], &failed);
        assert_null(failed);
    }
    assert_int_equal(model_memo_counts(memo).asked, 160);
    assert_int_equal(model_memo_counts(memo).solved, 10);
    model_memo_free(memo);
}

static void test_a_moved_section_is_the_same_section(void **state) {
    (void)state;
    struct error error = {0};
    struct model_memo *memo = model_memo_create(&error);
    struct section_problem here = pair(0.3e-3), there = here;
    there.conductors[0].left += 1e-3;
    there.conductors[1].left += 1e-3;
    struct section_solution first, second;
    assert_ok(model_memo_section(memo, &here, &first, &error));
    assert_ok(model_memo_section(memo, &there, &second, &error));
    assert_int_equal(model_memo_counts(memo).solved, 1);
    assert_memory_equal(&first, &second, sizeof first);
    model_memo_free(memo);
}

static void test_a_failure_is_remembered_and_told_each_time(void **state) {
    (void)state;
    struct model_memo *memo = model_memo_create(&(struct error){0});
    struct section_problem touching = pair(0.0);
    for (int i = 0; i < 2; i++) {
        struct error error = {0};
        struct section_solution solution;
        assert_false(model_memo_section(memo, &touching, &solution, &error));
        assert_int_equal(error.kind, ERROR_INPUT);
    }
    model_memo_free(memo);
    model_memo_free(NULL);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_no_field_is_solved_twice_also_with_threads),
        cmocka_unit_test(test_a_moved_section_is_the_same_section),
        cmocka_unit_test(test_a_failure_is_remembered_and_told_each_time),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
