/* Coating over board and copper. */
#include "section_reference.h"

/* Two traces 0.2 mm wide and apart, 35 um thick, on 0.8 mm of dk 4.6; coating 25 um of dk 3.5, in
 * steps over the copper or as one flat layer.  Same source and accuracy as section_reference.h. */
static const struct section_problem pair = {
    .height = 0.8e-3,
    .dk = 4.6,
    .mask = 25e-6,
    .mask_dk = 3.5,
    .count = 2,
    .conductors = {{-0.3e-3, 0.2e-3, 35e-6, 0}, {0.1e-3, 0.2e-3, 35e-6, 0}}};
static const double conformal_c[] = {67.687235, -28.417449, -28.417449, 67.687235};
static const double flat_c[] = {71.324247, -31.144406, -31.144406, 71.324247};
static const double bare_c[] = {60.823266, -23.316095, -23.316095, 60.823266};
static const double air_c[] = {22.373125, -10.41975, -10.41975, 22.373125};
static const double all_l[] = {635.06067, 295.76439, 295.76439, 635.06067};

static struct section_solution solved(const struct section_problem *problem,
                                      section_solver *solver) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(solver(problem, &solution, &error));
    return solution;
}

static void check_pair(const struct section_problem *problem, const double *capacitance,
                       section_solver *solver, double relative) {
    struct section_solution s = solved(problem, solver);
    assert_entries(s.capacitance, capacitance, 4, 1e-12, relative);
    assert_entries(s.vacuum_capacitance, air_c, 4, 1e-12, relative);
    assert_entries(s.inductance, all_l, 4, 1e-9, relative);
    if (!isnan(s.error))
        assert_entries(s.capacitance, capacitance, 4, 1e-12, s.error);
}

static void test_a_conformal_coating_agrees_with_the_independent_values(void **state) {
    (void)state;
    check_pair(&pair, conformal_c, section_solve, 2e-5);
    check_pair(&pair, conformal_c, section_solve_once, 1e-4);
    check_pair(&pair, conformal_c, section_solve_plain, 2e-6);
}

static void test_a_flat_coating_agrees_with_the_independent_values(void **state) {
    (void)state;
    struct section_problem flat = pair;
    flat.mask_flat = true;
    check_pair(&flat, flat_c, section_solve, 2e-5);
    check_pair(&flat, flat_c, section_solve_once, 1e-4);
    check_pair(&flat, flat_c, section_solve_plain, 2e-6);
}

static void test_a_coating_of_air_is_none(void **state) {
    (void)state;
    struct section_problem air = pair;
    air.mask_dk = 1;
    check_pair(&air, bare_c, section_solve, 1e-4);
}

static void test_unknowns_of_the_coated_pair_are_few(void **state) {
    (void)state;
    /* Even and odd system together. */
    assert_true(solved(&pair, section_solve_once).unknowns <= 280);
}

/* Coating of the slab's dielectric, ever thicker: C -> dk C0. */
static void test_deep_inside_one_dielectric_the_capacitance_is_dk_times_that_in_air(void **state) {
    (void)state;
    struct section_problem deep = pair;
    deep.mask_flat = true;
    deep.mask_dk = deep.dk;
    deep.mask = 80e-3;
    struct section_solution s = solved(&deep, section_solve);
    for (size_t i = 0; i < 4; i++)
        assert_close(s.capacitance[i], deep.dk * s.vacuum_capacitance[i], 3e-4);
}

/* Dielectric added anywhere raises every mode's capacitance. */
static void test_more_coating_means_more_capacitance(void **state) {
    (void)state;
    static const double thickness[] = {5e-6, 10e-6, 25e-6, 60e-6, 140e-6};
    double even = bare_c[0] + bare_c[1], odd = bare_c[0] - bare_c[1];
    for (size_t i = 0; i < 5; i++) {
        struct section_problem problem = pair, flat;
        problem.mask = thickness[i];
        flat = problem;
        flat.mask_flat = true;
        struct section_solution s = solved(&problem, section_solve),
                                f = solved(&flat, section_solve);
        double now_even = (s.capacitance[0] + s.capacitance[1]) * 1e12;
        double now_odd = (s.capacitance[0] - s.capacitance[1]) * 1e12;
        assert_true(now_even > even && now_odd > odd);
        assert_true(f.capacitance[0] - f.capacitance[1] >= s.capacitance[0] - s.capacitance[1]);
        even = now_even;
        odd = now_odd;
    }
}

/* Flanks of neighbouring coatings just apart, touching, just merged: no jump but what the sliver
 * itself brings. */
static void test_coatings_that_meet_become_one(void **state) {
    (void)state;
    struct section_problem apart = pair, touching = pair, merged = pair;
    apart.mask = 99.9e-6;
    touching.mask = 100e-6;
    merged.mask = 100.1e-6;
    struct section_solution a = solved(&apart, section_solve);
    struct section_solution t = solved(&touching, section_solve);
    struct section_solution m = solved(&merged, section_solve);
    assert_close(a.capacitance[1], t.capacitance[1], 2e-3);
    assert_close(m.capacitance[1], t.capacitance[1], 2e-3);
}

static void test_unequal_copper_under_one_coating(void **state) {
    (void)state;
    struct section_problem unequal = pair;
    unequal.mask = 120e-6;
    unequal.conductors[1].thickness = 70e-6;
    unequal.conductors[1].etch = 20e-6;
    struct section_solution fast = solved(&unequal, section_solve);
    struct section_solution plain = solved(&unequal, section_solve_plain);
    for (size_t i = 0; i < 4; i++)
        assert_close(fast.capacitance[i], plain.capacitance[i], 1e-4);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_conformal_coating_agrees_with_the_independent_values),
        cmocka_unit_test(test_a_flat_coating_agrees_with_the_independent_values),
        cmocka_unit_test(test_a_coating_of_air_is_none),
        cmocka_unit_test(test_unknowns_of_the_coated_pair_are_few),
        cmocka_unit_test(test_deep_inside_one_dielectric_the_capacitance_is_dk_times_that_in_air),
        cmocka_unit_test(test_more_coating_means_more_capacitance),
        cmocka_unit_test(test_coatings_that_meet_become_one),
        cmocka_unit_test(test_unequal_copper_under_one_coating),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
