#include "section_reference.h"

static void test_every_entry_agrees_with_the_independent_values(void **state) {
    (void)state;
    assert_references(section_solve, 2e-5);
}

static void test_every_reduced_entry_agrees_with_the_independent_values(void **state) {
    (void)state;
    assert_reduced_references(section_solve, 2e-5);
}

/* The single solve that the benchmark times. */
static void test_one_solve_is_within_a_ten_thousandth(void **state) {
    (void)state;
    assert_references(section_solve_once, 1e-4);
}

/* A. E. H. Love 1923, exact; see the plain solver's test. */
static void test_a_thin_strip_in_air_is_exact(void **state) {
    (void)state;
    static const double love[][2] = {
        {0.1, 12.6947057628}, {0.1875, 14.8174993187}, {0.5, 20.0098678978},
        {1.0, 26.3845823182}, {1.875, 36.1372987525},  {3.0, 47.8022662687},
        {6.0, 77.2076595191}, {10.0, 114.939324266},
    };
    struct error error = {0};
    for (size_t i = 0; i < sizeof love / sizeof *love; i++) {
        struct section_problem problem = {
            .height = 1e-3, .dk = 1, .count = 1, .conductors = {{0, love[i][0] * 1e-3, 0}}};
        struct section_solution solution;
        assert_ok(section_solve(&problem, &solution, &error));
        assert_close(solution.capacitance[0], love[i][1] * 1e-12, 1e-5);
        assert_close(solution.inductance[0],
                     SECTION_MU_0 * SECTION_EPSILON_0 / (love[i][1] * 1e-12), 1e-5);
    }
}

/* The estimate is the change under refinement; the finer result that is returned must lie within
 * it. */
static void test_the_error_estimate_covers_the_true_error(void **state) {
    (void)state;
    struct error error = {0};
    for (size_t i = 0; i < sizeof references / sizeof *references; i++) {
        const struct section_reference *r = &references[i];
        struct section_problem problem = reference_problem(r);
        struct section_solution solution;
        assert_ok(section_solve(&problem, &solution, &error));
        /* The reference has eight printed digits. */
        for (size_t j = 0; j < r->count * r->count; j++)
            assert_close(solution.capacitance[j], r->capacitance[j] * 1e-12, solution.error + 5e-8);
        assert_true(solution.error < 1e-4);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_entry_agrees_with_the_independent_values),
        cmocka_unit_test(test_every_reduced_entry_agrees_with_the_independent_values),
        cmocka_unit_test(test_one_solve_is_within_a_ten_thousandth),
        cmocka_unit_test(test_a_thin_strip_in_air_is_exact),
        cmocka_unit_test(test_the_error_estimate_covers_the_true_error),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
