/* The dielectric part of C: sum of dk dC/ddk. */
#include "section_reference.h"

static struct section_solution solved(const struct section_problem *problem) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(section_solve(problem, &solution, &error));
    return solution;
}

static struct section_solution with_dielectric(const struct section_problem *problem) {
    struct error error = {0};
    struct section_solution solution = solved(problem);
    assert_true(isnan(solution.dielectric_capacitance[0]));
    assert_ok(section_dielectric_capacitance(problem, &solution, &error));
    return solution;
}

/* dk dC/ddk of one dielectric from the plain solver, a quotient over 8 %. */
static void add_quotient(const struct section_problem *problem, double *dk,
                         struct section_problem *changed, double *sum) {
    struct error error = {0};
    struct section_solution low, high;
    double nominal = *dk, step = 0.04;
    *dk = nominal * (1 - step);
    assert_ok(section_solve_plain(changed, &low, &error));
    *dk = nominal * (1 + step);
    assert_ok(section_solve_plain(changed, &high, &error));
    *dk = nominal;
    for (size_t i = 0; i < problem->count * problem->count; i++)
        sum[i] += (high.capacitance[i] - low.capacitance[i]) / (2 * step);
}

static void check_quotients(const struct section_problem *problem, double relative) {
    struct section_problem changed = *problem;
    struct section_solution s = with_dielectric(problem);
    double want[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS] = {0};
    add_quotient(problem, &changed.dk, &changed, want);
    if (problem->mask > 0)
        add_quotient(problem, &changed.mask_dk, &changed, want);
    if (problem->cover > 0 && problem->cover_dk > 1)
        add_quotient(problem, &changed.cover_dk, &changed, want);
    for (size_t i = 0; i < problem->count * problem->count; i++)
        assert_close(s.dielectric_capacitance[i], want[i], relative);
}

static void test_a_bare_board_s_part_is_the_change_with_dk(void **state) {
    (void)state;
    static const char *const names[] = {"P1", "P5", "P13"};
    for (size_t k = 0; k < 3; k++) {
        struct section_problem problem = reference_problem(reference_named(names[k]));
        check_quotients(&problem, 3e-4);
    }
    struct section_problem etched = reference_problem(reference_named("P1"));
    etched.conductors[0].etch = 12e-6;
    check_quotients(&etched, 3e-4);
}

static void test_with_coating_or_cover_it_is_the_sum_over_all(void **state) {
    (void)state;
    struct section_problem problem = {
        .height = 0.3e-3,
        .dk = 4.3,
        .mask = 25e-6,
        .mask_dk = 3.5,
        .count = 2,
        .conductors = {{-0.3e-3, 0.2e-3, 35e-6, 0}, {0.1e-3, 0.2e-3, 35e-6, 0}}};
    check_quotients(&problem, 3e-4);
    problem.mask = 0;
    problem.cover = 0.3e-3;
    problem.cover_dk = 2.5;
    check_quotients(&problem, 3e-4);
}

/* Without air all of C is in dielectrics. */
static void test_without_air_it_is_all_of_c(void **state) {
    (void)state;
    struct section_problem problem = {.height = 0.2e-3,
                                      .dk = 4.3,
                                      .cover = 0.3e-3,
                                      .cover_dk = 3,
                                      .count = 1,
                                      .conductors = {{0, 0.2e-3, 18e-6, 0}}};
    struct section_solution s = with_dielectric(&problem);
    assert_close(s.dielectric_capacitance[0], s.capacitance[0], 1e-4);
    problem.cover_dk = problem.dk;
    s = with_dielectric(&problem);
    assert_close(s.dielectric_capacitance[0], s.capacitance[0], 1e-12);
}

/* A thin strip midway: the lower half's share exactly. */
static void test_a_thin_strip_midway_under_air(void **state) {
    (void)state;
    struct section_problem problem = {.height = 0.5e-3,
                                      .dk = 4.3,
                                      .cover = 0.5e-3,
                                      .cover_dk = 1,
                                      .count = 2,
                                      .conductors = {{0, 0.4e-3, 0, 0}, {0.6e-3, 0.4e-3, 0, 0}}};
    struct section_solution s = with_dielectric(&problem);
    for (size_t i = 0; i < 4; i++)
        assert_close(s.dielectric_capacitance[i], 4.3 / 2 * s.vacuum_capacitance[i], 2e-5);
}

static void test_a_board_of_air_has_none(void **state) {
    (void)state;
    struct section_problem problem = reference_problem(reference_named("P4"));
    problem.dk = 1;
    struct section_solution s = with_dielectric(&problem);
    for (size_t i = 0; i < 4; i++)
        assert_true(s.dielectric_capacitance[i] == 0);
}

/* The other way to the same number: images of the slab, or energy outside the air. */
static void test_beside_a_far_end_of_the_plane_it_is_the_same(void **state) {
    (void)state;
    struct section_problem problem = reference_problem(reference_named("P4")), far = problem;
    far.plane = SECTION_PLANE_ENDS;
    far.plane_end = 0.3;
    struct section_solution s = with_dielectric(&problem), f = with_dielectric(&far);
    for (size_t i = 0; i < 4; i++)
        assert_close(f.dielectric_capacitance[i], s.dielectric_capacitance[i], 5e-5);
}

/* Reduced C is no linear function of C where copper floats: its derivative all the same. */
static void test_the_reduced_part_is_the_change_of_the_reduced_capacitance(void **state) {
    (void)state;
    struct error error = {0};
    static const enum section_tie middles[] = {SECTION_TIED, SECTION_FLOATING,
                                               SECTION_TIED_ONE_END};
    struct section_problem problem = reference_problem(reference_named("P9")), low = problem,
                           high = problem;
    low.dk *= 0.97;
    high.dk *= 1.03;
    for (size_t k = 0; k < 3; k++) {
        enum section_tie ties[] = {SECTION_SIGNAL, middles[k], SECTION_SIGNAL};
        struct section_solution s = with_dielectric(&problem), l, h;
        assert_ok(section_solve_plain(&low, &l, &error));
        assert_ok(section_solve_plain(&high, &h, &error));
        assert_ok(section_reduce(&s, ties, &s, &error));
        assert_ok(section_reduce(&l, ties, &l, &error));
        assert_ok(section_reduce(&h, ties, &h, &error));
        for (size_t i = 0; i < 4; i++)
            assert_close(s.dielectric_capacitance[i], (h.capacitance[i] - l.capacitance[i]) / 0.06,
                         5e-4);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_bare_board_s_part_is_the_change_with_dk),
        cmocka_unit_test(test_with_coating_or_cover_it_is_the_sum_over_all),
        cmocka_unit_test(test_without_air_it_is_all_of_c),
        cmocka_unit_test(test_a_thin_strip_midway_under_air),
        cmocka_unit_test(test_a_board_of_air_has_none),
        cmocka_unit_test(test_beside_a_far_end_of_the_plane_it_is_the_same),
        cmocka_unit_test(test_the_reduced_part_is_the_change_of_the_reduced_capacitance),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
