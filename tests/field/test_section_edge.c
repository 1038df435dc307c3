/* A plane that ends, and boards without one. */
#include "section_reference.h"

#include <complex.h>

static const double pi = 3.14159265358979323846;

static struct section_solution solved(const struct section_problem *problem) {
    struct error error = {0};
    struct section_solution solution;
    assert_ok(section_solve(problem, &solution, &error));
    return solution;
}

static struct section_problem pair_beside(double end) {
    return (struct section_problem){
        .height = 1.6e-3,
        .dk = 4.3,
        .plane = SECTION_PLANE_ENDS,
        .plane_end = end,
        .count = 2,
        .conductors = {{-0.45e-3, 0.3e-3, 35e-6, 0}, {0.15e-3, 0.3e-3, 35e-6, 0}}};
}

/* Wires in air over a half-plane, exact for wires thin against all distances: by w = i sqrt(z) the
 * half-plane becomes a plane; potential coefficients ln|(w - conj w')/(w - w')| / (2 pi eps0), of a
 * wire itself ln(2 Im w / (|dw/dz| r)).  A square bar's radius is side Gamma(1/4)^2 / (4 pi^1.5).
 */
static void test_thin_wires_beside_the_plane_s_end_are_exact(void **state) {
    (void)state;
    static const double ends[] = {3e-3, 1e-3, 0.2e-3, 0, -0.5e-3, -2e-3};
    const double side = 1.2e-6, height = 1e-3, apart = 0.7e-3, radius = 0.590170299508 * side;
    for (size_t i = 0; i < 6; i++) {
        struct section_problem problem = {
            .height = height - side / 2,
            .dk = 1,
            .plane = SECTION_PLANE_ENDS,
            .plane_end = ends[i],
            .count = 2,
            .conductors = {{-side / 2, side, side, 0}, {apart - side / 2, side, side, 0}}};
        double complex w[2];
        double p[2][2];
        for (size_t k = 0; k < 2; k++)
            w[k] = I * csqrt((double)k * apart - ends[i] + I * height);
        for (size_t k = 0; k < 2; k++)
            p[k][k] = log(2 * cimag(w[k]) * 2 * cabs(w[k]) / radius);
        p[0][1] = p[1][0] = log(cabs((w[0] - conj(w[1])) / (w[0] - w[1])));
        double scale = 2 * pi * SECTION_EPSILON_0 / (p[0][0] * p[1][1] - p[0][1] * p[0][1]);
        struct section_solution s = solved(&problem);
        assert_close(s.capacitance[0], scale * p[1][1], 1e-5);
        assert_close(s.capacitance[1], -scale * p[0][1], 1e-5);
        assert_close(s.capacitance[3], scale * p[0][0], 1e-5);
    }
}

static void test_far_from_its_end_the_plane_is_endless(void **state) {
    (void)state;
    const struct section_reference *r = reference_named("P4");
    struct section_problem problem = pair_beside(0.3);
    struct section_solution s = solved(&problem);
    assert_entries(s.capacitance, r->capacitance, 4, 1e-12, 2e-5);
    assert_entries(s.inductance, r->inductance, 4, 1e-9, 2e-5);
}

/* As the plane comes nearer, each trace gains capacitance to it. */
static void test_capacitance_to_the_plane_grows_with_the_plane(void **state) {
    (void)state;
    static const double ends[] = {-20e-3, -5e-3, -1e-3, 0, 1e-3, 3e-3, 10e-3};
    double before = 0;
    for (size_t i = 0; i < 7; i++) {
        struct section_problem problem = pair_beside(ends[i]);
        struct section_solution s = solved(&problem);
        double ground = s.capacitance[0] + s.capacitance[1];
        assert_true(ground > before && s.capacitance[2] + s.capacitance[3] > 0);
        /* The left trace has more of it. */
        assert_true(s.capacitance[0] + s.capacitance[1] > s.capacitance[2] + s.capacitance[3]);
        before = ground;
    }
}

/* With the plane out of reach only charge between the two is left: C of a board without a plane. */
static void test_beyond_reach_of_the_plane_there_is_none(void **state) {
    (void)state;
    struct section_problem problem = pair_beside(-10), none = problem;
    none.plane = SECTION_NO_PLANE;
    struct section_solution s = solved(&problem), n = solved(&none);
    assert_int_equal(n.count, 1);
    assert_close((s.capacitance[0] - s.capacitance[1]) / 2, n.capacitance[0], 3e-5);
    assert_close(2 * (s.inductance[0] - s.inductance[1]), n.inductance[0], 3e-5);
}

static void test_beside_the_end_two_meshes_agree(void **state) {
    (void)state;
    struct error error = {0};
    static const double ends[] = {2.5e-3, 0.45e-3, -1e-3};
    for (size_t i = 0; i < 3; i++) {
        struct section_problem problem = pair_beside(ends[i]);
        problem.count = 1;
        if (i == 1) {
            problem.mask = 25e-6;
            problem.mask_dk = 3.5;
        }
        struct section_solution s = solved(&problem), plain;
        assert_ok(section_solve_plain(&problem, &plain, &error));
        assert_close(s.capacitance[0], plain.capacitance[0], s.error + plain.error);
        assert_close(s.capacitance[0], plain.capacitance[0], 1e-4);
        assert_close(s.inductance[0], plain.inductance[0], 1e-5);
        assert_true(s.error < 1e-3);
    }
}

/* C. R. Paul, Analysis of Multiconductor Transmission Lines, 2nd ed., sec. 9.3.2: three thin lands
 * 15 mil wide, 45 mil apart, on 47 mil of dk 4.7, an outer land is the reference.  Printed values
 * from coarse moments, 0.3 %; recomputed ones by boundary elements. */
static void test_three_lands_without_a_plane(void **state) {
    (void)state;
    const double mil = 25.4e-6;
    struct section_problem problem = {.height = 47 * mil,
                                      .dk = 4.7,
                                      .plane = SECTION_NO_PLANE,
                                      .count = 3,
                                      .conductors = {{0, 15 * mil, 0, 0},
                                                     {60 * mil, 15 * mil, 0, 0},
                                                     {120 * mil, 15 * mil, 0, 0}}};
    static const double c[] = {40.7137, -20.35685, -20.35685, 29.803967};
    static const double l[] = {1102.2276, 689.13429, 689.13429, 1378.2686};
    static const double printed_c[] = {40.5985, -20.2992, -20.2992, 29.7378};
    static const double printed_l[] = {1105.15, 690.613, 690.613, 1381.23};
    struct section_solution s = solved(&problem);
    assert_int_equal(s.count, 2);
    assert_entries(s.capacitance, c, 4, 1e-12, 5e-6);
    assert_entries(s.inductance, l, 4, 1e-9, 5e-6);
    assert_entries(s.capacitance, printed_c, 4, 1e-12, 5e-3);
    assert_entries(s.inductance, printed_l, 4, 1e-9, 5e-3);
}

/* Exact, two coplanar strips in air: C = eps0 K(k')/K(k), k = s/(s + 2w).  On a very deep slab
 * half of all space is dielectric. */
static void test_two_strips_without_a_plane_are_exact(void **state) {
    (void)state;
    static const double strips[][3] = {{0.3, 0.3, 13.8426542504},
                                       {0.3, 1.0, 9.79783429637},
                                       {1.0, 0.1, 24.9722127694},
                                       {0.2, 3.0, 6.68996804959}};
    for (size_t i = 0; i < 4; i++) {
        double w = strips[i][0] * 1e-3, gap = strips[i][1] * 1e-3;
        struct section_problem problem = {.height = 1,
                                          .dk = 5,
                                          .plane = SECTION_NO_PLANE,
                                          .count = 2,
                                          .conductors = {{0, w, 0, 0}, {w + gap, w, 0, 0}}};
        struct section_solution s = solved(&problem);
        assert_close(s.vacuum_capacitance[0], strips[i][2] * 1e-12, 1e-5);
        assert_close(s.capacitance[0], 3 * strips[i][2] * 1e-12, 2e-5);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_thin_wires_beside_the_plane_s_end_are_exact),
        cmocka_unit_test(test_far_from_its_end_the_plane_is_endless),
        cmocka_unit_test(test_capacitance_to_the_plane_grows_with_the_plane),
        cmocka_unit_test(test_beyond_reach_of_the_plane_there_is_none),
        cmocka_unit_test(test_beside_the_end_two_meshes_agree),
        cmocka_unit_test(test_three_lands_without_a_plane),
        cmocka_unit_test(test_two_strips_without_a_plane_are_exact),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
