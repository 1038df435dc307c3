#include "section_reference.h"

static void test_every_entry_agrees_with_the_independent_values(void **state) {
    (void)state;
    assert_references(section_solve_plain, 2e-6);
}

static void test_every_reduced_entry_agrees_with_the_independent_values(void **state) {
    (void)state;
    assert_reduced_references(section_solve_plain, 2e-6);
}

static void test_a_thin_strip_in_air_is_exact(void **state) {
    (void)state;
    assert_love(section_solve_plain, 2e-6);
}

/* The estimate is the change under refinement. */
static void test_the_error_estimate_covers_the_true_error(void **state) {
    (void)state;
    assert_error_covers(section_solve_plain, 1e-5);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_entry_agrees_with_the_independent_values),
        cmocka_unit_test(test_every_reduced_entry_agrees_with_the_independent_values),
        cmocka_unit_test(test_a_thin_strip_in_air_is_exact),
        cmocka_unit_test(test_the_error_estimate_covers_the_true_error),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
