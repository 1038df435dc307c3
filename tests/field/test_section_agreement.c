/* Two solvers that share only the problem: boundary elements on graded panels, and one mapped
 * expansion a face.  Random sections from a fixed seed. */
#include "check.h"
#include "groundrules/section.h"

static uint64_t seed = 20261201;

static double draw(void) {
    seed = seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(seed >> 11) / 9007199254740992.0;
}

static double between(double low, double high) {
    return low * pow(high / low, draw());
}

static struct section_problem random_problem(void) {
    struct section_problem problem = {.height = between(0.08e-3, 3e-3), .dk = between(1, 10)};
    problem.count = 1 + (size_t)(3 * draw());
    double thickness = draw() < 0.25 ? 0 : between(9e-6, 105e-6), x = 0;
    for (size_t i = 0; i < problem.count; i++) {
        double width = between(0.1e-3, 5e-3);
        problem.conductors[i] = (struct section_conductor){x, width, thickness, 0};
        x += width + between(0.08e-3, 8e-3);
    }
    return problem;
}

static void compare(const struct section_problem *problem, const double *got, const double *want,
                    double allowed, const char *what) {
    for (size_t i = 0; i < problem->count; i++)
        for (size_t j = 0; j < problem->count; j++) {
            /* A far mutual entry is judged against its geometric mean once it is below 1e-3 of it.
             */
            double own = sqrt(want[i * problem->count + i] * want[j * problem->count + j]);
            double entry = want[i * problem->count + j];
            double scale = fmax(fabs(entry), 1e-3 * own);
            if (!(fabs(got[i * problem->count + j] - entry) <= allowed * scale))
                print_error("%s[%zu][%zu]: %.9g and %.9g, allowed %.2g\n", what, i, j,
                            got[i * problem->count + j], entry, allowed);
            assert_true(fabs(got[i * problem->count + j] - entry) <= allowed * scale);
        }
}

static void test_random_sections_agree(void **state) {
    (void)state;
    struct error error = {0};
    double worst = 0;
    for (int k = 0; k < 30; k++) {
        struct section_problem problem = random_problem();
        struct section_solution fast, plain;
        assert_ok(section_solve(&problem, &fast, &error));
        assert_ok(section_solve_plain(&problem, &plain, &error));
        double allowed = fmin(fast.error + plain.error + 1e-6, 1e-3);
        compare(&problem, fast.capacitance, plain.capacitance, allowed, "capacitance");
        compare(&problem, fast.vacuum_capacitance, plain.vacuum_capacitance, allowed, "vacuum");
        compare(&problem, fast.inductance, plain.inductance, allowed, "inductance");
        worst = fmax(worst, fast.error);
    }
    assert_true(worst < 1e-3);
}

static void add_something(struct section_problem *problem, size_t kind) {
    double thickness = problem->conductors[0].thickness;
    const struct section_conductor *last = &problem->conductors[problem->count - 1];
    if (kind == 0 || (kind != 3 && draw() < 0.4)) {
        problem->mask = fmax(between(8e-6, 60e-6), 2e-3 * problem->height);
        problem->mask_dk = between(2.5, 5);
        problem->mask_flat = draw() < 0.4;
    }
    if (kind == 1) {
        problem->cover = thickness + problem->mask + between(0.08e-3, 3e-3);
        problem->cover_dk = draw() < 0.3 ? 1 : between(1.5, 6);
    }
    if (kind == 2) {
        problem->plane = SECTION_PLANE_ENDS;
        problem->plane_end = (last->left + last->width) * (3 * draw() - 1);
    }
    if (kind == 3 && problem->count > 1)
        problem->plane = SECTION_NO_PLANE;
    for (size_t i = 0; i < problem->count && thickness > 0; i++)
        if (kind == 4 || draw() < 0.4)
            problem->conductors[i].etch =
                fmin(0.4 * problem->conductors[i].width, 0.8 * thickness * draw());
}

/* The general solver: corner exponents on few pieces, and graded meshes without any. */
static void test_random_sections_with_additions_agree(void **state) {
    (void)state;
    struct error error = {0};
    for (size_t k = 0; k < 10; k++) {
        size_t wanted = k % 5 == 3 ? 2 : 1;
        struct section_problem problem = random_problem();
        while (problem.count < wanted)
            problem = random_problem();
        problem.count = wanted;
        for (size_t i = 0; i < problem.count; i++)
            problem.conductors[i].thickness = problem.conductors[0].thickness;
        add_something(&problem, k % 5);
        struct section_solution fast, plain;
        assert_ok(section_solve(&problem, &fast, &error));
        assert_ok(section_solve_plain(&problem, &plain, &error));
        size_t count = problem.count;
        problem.count = fast.count;
        double allowed = fmin(fast.error + plain.error + 1e-6, 1e-3);
        compare(&problem, fast.capacitance, plain.capacitance, allowed, "capacitance");
        compare(&problem, fast.vacuum_capacitance, plain.vacuum_capacitance, allowed, "vacuum");
        compare(&problem, fast.inductance, plain.inductance, allowed, "inductance");
        problem.count = count;
    }
}

/* A strip fifty heights wide between gaps of a tenth of a height asks for orders beyond the fast
 * solver's: what is stated must still cover what is wrong. */
static void test_a_section_beyond_the_fast_orders_is_not_claimed_to_be_right(void **state) {
    (void)state;
    struct error error = {0};
    struct section_problem problem = {
        .height = 1e-4,
        .dk = 4.3,
        .count = 3,
        .conductors = {{0, 2e-4, 35e-6, 0}, {2.1e-4, 5e-3, 35e-6, 0}, {5.22e-3, 2e-4, 35e-6, 0}}};
    struct section_solution solved, plain;
    assert_ok(section_solve(&problem, &solved, &error));
    assert_ok(section_solve_plain(&problem, &plain, &error));
    for (size_t i = 0; i < 9; i++)
        assert_close(solved.capacitance[i], plain.capacitance[i],
                     solved.error + plain.error + 1e-7);
    assert_true(solved.error < 1e-3);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_random_sections_agree),
        cmocka_unit_test(test_random_sections_with_additions_agree),
        cmocka_unit_test(test_a_section_beyond_the_fast_orders_is_not_claimed_to_be_right)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
