/* Copper narrower at its top. */
#include "section_reference.h"

static struct section_solution solved(const struct section_problem *problem,
                                      section_solver *solver) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(solver(problem, &solution, &error));
    return solution;
}

static struct section_problem etched(const char *name, double etch) {
    struct section_problem problem = reference_problem(reference_named(name));
    for (size_t i = 0; i < problem.count; i++)
        problem.conductors[i].etch = etch;
    return problem;
}

/* The image solver knows upright walls only. */
static void test_without_etch_it_is_the_rectangle(void **state) {
    (void)state;
    static const char *const names[] = {"P1", "P4", "P5", "P9", "P11", "P13"};
    for (size_t k = 0; k < 6; k++) {
        const struct section_reference *r = reference_named(names[k]);
        struct section_problem problem = etched(names[k], 1e-11);
        struct section_solution s = solved(&problem, section_solve);
        size_t n = r->count * r->count;
        assert_entries(s.capacitance, r->capacitance, n, 1e-12, 1e-4);
        assert_entries(s.vacuum_capacitance, r->vacuum_capacitance, n, 1e-12, 2e-5);
        assert_entries(s.inductance, r->inductance, n, 1e-9, 2e-5);
        assert_entries(s.capacitance, r->capacitance, n, 1e-12, s.error);
    }
}

/* Copper taken away takes capacitance with it; a rectangle of the top's width has less still. */
static void test_etch_lies_between_two_rectangles(void **state) {
    (void)state;
    static const double etches[] = {2e-6, 10e-6, 17e-6, 30e-6, 60e-6};
    struct section_problem full = etched("P3", 0);
    double before = solved(&full, section_solve).capacitance[0];
    for (size_t i = 0; i < 5; i++) {
        struct section_problem problem = etched("P3", etches[i]), narrow = full;
        narrow.conductors[0].left += etches[i];
        narrow.conductors[0].width -= 2 * etches[i];
        double now = solved(&problem, section_solve).capacitance[0];
        assert_true(now < before);
        assert_true(now > solved(&narrow, section_solve).capacitance[0]);
        before = now;
    }
}

/* Two formulations: images of the slab on mapped pieces, total charge on a graded mesh. */
static void test_two_discretisations_agree(void **state) {
    (void)state;
    static const double etches[] = {5e-6, 20e-6, 120e-6};
    for (size_t i = 0; i < 3; i++) {
        struct section_problem problem = etched(i == 2 ? "P1" : "P5", etches[i]);
        struct section_solution s = solved(&problem, section_solve);
        struct section_solution plain = solved(&problem, section_solve_plain);
        for (size_t k = 0; k < problem.count * problem.count; k++) {
            assert_close(s.capacitance[k], plain.capacitance[k], s.error + plain.error);
            assert_close(s.capacitance[k], plain.capacitance[k], 1e-4);
            assert_close(s.inductance[k], plain.inductance[k], 1e-5);
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_without_etch_it_is_the_rectangle),
        cmocka_unit_test(test_etch_lies_between_two_rectangles),
        cmocka_unit_test(test_two_discretisations_agree),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
