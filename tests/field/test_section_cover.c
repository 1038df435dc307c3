/* A plane above. */
#include "section_reference.h"

static struct section_solution solved(const struct section_problem *problem) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(section_solve(problem, &solution, &error));
    return solution;
}

/* Two traces 0.15 mm wide, 0.2 mm apart, 18 um thick, between planes 0.5 mm apart, dk 4.2.  Same
 * source and accuracy as section_reference.h. */
static void test_a_pair_between_planes_agrees_with_the_independent_values(void **state) {
    (void)state;
    struct section_problem problem = {
        .height = 0.241e-3,
        .dk = 4.2,
        .cover = 0.259e-3,
        .cover_dk = 4.2,
        .count = 2,
        .conductors = {{-0.25e-3, 0.15e-3, 18e-6, 0}, {0.1e-3, 0.15e-3, 18e-6, 0}}};
    struct section_solution s = solved(&problem);
    static const double c[] = {121.99596, -15.864153, -15.864153, 121.99596};
    static const double c0[] = {29.046657, -3.7771793, -3.7771793, 29.046657};
    static const double l[] = {389.64503, 50.668797, 50.668797, 389.64503};
    assert_entries(s.capacitance, c, 4, 1e-12, 5e-6);
    assert_entries(s.vacuum_capacitance, c0, 4, 1e-12, 5e-6);
    assert_entries(s.inductance, l, 4, 1e-9, 5e-6);
    /* One dielectric: inductive and capacitive coupling are the same. */
    assert_close(s.inductance[1] / s.inductance[0], -s.capacitance[1] / s.capacitance[0], 1e-12);
}

/* S. B. Cohn, MTT-2, 1954: thin strip midway between planes b apart, exact, C = 4 eps0 K(k')/K(k),
 * k = sech(pi w / 2b). */
static void test_a_thin_strip_midway_between_planes_is_exact(void **state) {
    (void)state;
    static const double strips[][2] = {
        {0.1, 17.1739961541}, {0.25, 23.8401236577}, {0.5, 33.2127805895}, {1.0, 51.0398764346}};
    for (size_t i = 0; i < 4; i++) {
        struct section_problem problem = {.height = 0.5e-3,
                                          .dk = 1,
                                          .cover = 0.5e-3,
                                          .cover_dk = 1,
                                          .count = 1,
                                          .conductors = {{0, strips[i][0] * 1e-3, 0, 0}}};
        struct section_solution s = solved(&problem);
        assert_close(s.capacitance[0], strips[i][1] * 1e-12, 5e-6);
        assert_true(fabs(s.capacitance[0] / (strips[i][1] * 1e-12) - 1) < s.error);
    }
}

/* S. B. Cohn, MTT-3, 1955: two thin strips midway, dk 1, exact; ohms with 376.7303. */
static void test_two_thin_strips_midway_are_exact(void **state) {
    (void)state;
    static const double strips[][4] = {{0.25, 0.1, 183.125778, 89.3221473},
                                       {0.5, 0.25, 114.768174, 83.5229801},
                                       {1, 0.5, 68.195872, 62.1571273}};
    const double c0 = 1 / sqrt(SECTION_EPSILON_0 * SECTION_MU_0);
    for (size_t i = 0; i < 3; i++) {
        double w = strips[i][0] * 1e-3, gap = strips[i][1] * 1e-3;
        struct section_problem problem = {.height = 0.5e-3,
                                          .dk = 1,
                                          .cover = 0.5e-3,
                                          .cover_dk = 1,
                                          .count = 2,
                                          .conductors = {{0, w, 0, 0}, {w + gap, w, 0, 0}}};
        struct section_solution s = solved(&problem);
        double even = 1 / (c0 * (s.capacitance[0] + s.capacitance[1]));
        double odd = 1 / (c0 * (s.capacitance[0] - s.capacitance[1]));
        assert_close(even, strips[i][2], 5e-6);
        assert_close(odd, strips[i][3], 1e-5);
    }
}

/* Thick strips, boundary elements with the planes' exact kernel, 1e-5: sqrt(dk) times impedance. */
static void test_thick_strips_between_planes(void **state) {
    (void)state;
    static const double strips[][4] = {{0.5, 1, 0.1, 83.06633},
                                       {0.25, 1, 0.1, 111.0358},
                                       {1, 1, 0.05, 59.92231},
                                       {0.25, 0.6, 0.035, 97.23487},
                                       {0.3, 1, 0.2, 88.6706}};
    for (size_t i = 0; i < 5; i++) {
        double w = strips[i][0] * 1e-3, b = strips[i][1] * 1e-3, t = strips[i][2] * 1e-3;
        struct section_problem problem = {.height = 0.5 * (b - t),
                                          .dk = 3,
                                          .cover = 0.5 * (b + t),
                                          .cover_dk = 3,
                                          .count = 1,
                                          .conductors = {{0, w, t, 0}}};
        struct section_solution s = solved(&problem);
        assert_close(sqrt(3 * s.inductance[0] / s.capacitance[0]), strips[i][3], 2e-5);
    }
}

/* A thin strip midway has no field across the border beside it: each half holds its own share,
 * exactly. */
static void test_a_thin_strip_midway_between_two_dielectrics(void **state) {
    (void)state;
    struct section_problem problem = {.height = 0.5e-3,
                                      .dk = 4.3,
                                      .cover = 0.5e-3,
                                      .cover_dk = 2.1,
                                      .count = 2,
                                      .conductors = {{0, 0.4e-3, 0, 0}, {0.6e-3, 0.4e-3, 0, 0}}};
    struct section_solution s = solved(&problem);
    for (size_t i = 0; i < 4; i++)
        assert_close(s.capacitance[i], (4.3 + 2.1) / 2 * s.vacuum_capacitance[i], 2e-5);
}

/* Air under a cover far above is a board without one (image solver); the cover's share of a
 * narrow trace's capacitance falls as height / spacing squared. */
static void test_a_cover_far_above_is_none(void **state) {
    (void)state;
    const struct section_reference *r = reference_named("P5");
    struct section_problem open = reference_problem(r), covered = open;
    covered.cover = 600 * covered.height;
    covered.cover_dk = 1;
    struct section_solution o = solved(&open), c = solved(&covered);
    for (size_t i = 0; i < 4; i++) {
        assert_close(c.capacitance[i], o.capacitance[i], 5e-5);
        assert_close(c.inductance[i], o.inductance[i], 5e-5);
    }
}

/* Coating and cover together, against the graded mesh. */
static void test_a_coated_pair_under_a_cover(void **state) {
    (void)state;
    struct error error = {0};
    struct section_problem problem = {
        .height = 0.2e-3,
        .dk = 4.3,
        .mask = 20e-6,
        .mask_dk = 3.4,
        .cover = 0.4e-3,
        .cover_dk = 1,
        .count = 2,
        .conductors = {{0, 0.3e-3, 35e-6, 8e-6}, {0.6e-3, 0.3e-3, 35e-6, 8e-6}}};
    struct section_solution s = solved(&problem), plain;
    assert_ok(section_solve_plain(&problem, &plain, &error));
    for (size_t i = 0; i < 4; i++) {
        assert_close(s.capacitance[i], plain.capacitance[i], s.error + plain.error);
        assert_close(s.capacitance[i], plain.capacitance[i], 1e-4);
        assert_close(s.inductance[i], plain.inductance[i], 1e-5);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_pair_between_planes_agrees_with_the_independent_values),
        cmocka_unit_test(test_a_thin_strip_midway_between_planes_is_exact),
        cmocka_unit_test(test_two_thin_strips_midway_are_exact),
        cmocka_unit_test(test_thick_strips_between_planes),
        cmocka_unit_test(test_a_thin_strip_midway_between_two_dielectrics),
        cmocka_unit_test(test_a_cover_far_above_is_none),
        cmocka_unit_test(test_a_coated_pair_under_a_cover),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
