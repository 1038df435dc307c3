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

/* Also what the solver may refuse is told apart. */
static size_t solved_of(const struct section_problem *first, const struct section_problem *second) {
    struct error error = {0};
    struct section_solution solution;
    struct model_memo *memo = model_memo_create(&error);
    assert_ok(memo != NULL);
    model_memo_section(memo, first, &solution, &error);
    error = (struct error){0};
    model_memo_section(memo, second, &solution, &error);
    size_t solved = model_memo_counts(memo).solved;
    model_memo_free(memo);
    return solved;
}

static void test_every_field_of_a_section_tells_it_apart(void **state) {
    (void)state;
    struct section_problem base = pair(0.3e-3);
    base.plane = SECTION_PLANE_ENDS;
    base.plane_end = 1e-3;
    base.mask = 20e-6;
    base.mask_dk = 3.5;
    base.cover = 0.2e-3;
    base.cover_dk = 4.1;
    assert_int_equal(solved_of(&base, &base), 1);
    struct section_problem other[14];
    for (size_t i = 0; i < 14; i++)
        other[i] = base;
    other[0].height *= 1.01;
    other[1].dk *= 1.01;
    other[2].plane = SECTION_PLANE;
    other[3].plane_end *= 1.01;
    other[4].mask *= 1.01;
    other[5].mask_dk *= 1.01;
    other[6].mask_flat = true;
    other[7].cover *= 1.01;
    other[8].cover_dk *= 1.01;
    other[9].count = 1;
    other[10].conductors[1].left *= 1.01;
    other[11].conductors[1].width *= 1.01;
    other[12].conductors[1].thickness *= 1.01;
    other[13].conductors[1].etch = 1e-6;
    for (size_t i = 0; i < 14; i++) {
        if (solved_of(&base, &other[i]) != 2)
            print_error("case %zu\n", i);
        assert_int_equal(solved_of(&base, &other[i]), 2);
    }
    /* Moved as a whole, plane's end and all, it is the same; and what is not there is of nothing.
     */
    struct section_problem moved = base, bare = base, bare_too;
    moved.conductors[0].left += 1e-3;
    moved.conductors[1].left += 1e-3;
    moved.plane_end += 1e-3;
    assert_int_equal(solved_of(&base, &moved), 1);
    bare.mask = bare.cover = 0;
    bare.plane = SECTION_PLANE;
    bare_too = bare;
    bare_too.mask_dk = bare_too.cover_dk = 2;
    bare_too.mask_flat = true;
    bare_too.plane_end = 7;
    assert_int_equal(solved_of(&bare, &bare_too), 1);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_no_field_is_solved_twice_also_with_threads),
        cmocka_unit_test(test_a_moved_section_is_the_same_section),
        cmocka_unit_test(test_a_failure_is_remembered_and_told_each_time),
        cmocka_unit_test(test_every_field_of_a_section_tells_it_apart),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
