/* The general solver below the section's interface: corners, kernels, conductors anywhere. */
#include "section_reference.h"

#include "corner.h"
#include "outline_solve.h"
#include "section_general.h"
#include "section_outline.h"

#include <stdlib.h>

static const double pi = 3.14159265358979323846;

/* ---- exponents at corners ---- */

static void test_corner_exponents_known_in_closed_form(void **state) {
    (void)state;
    /* Metal of a right angle in air; a sheet's edge; half a plane. */
    assert_near(corner_exponent(&(struct corner_sector){1.5 * pi, 1}, 1, true), 2.0 / 3, 1e-12);
    assert_near(corner_exponent(&(struct corner_sector){2 * pi, 3}, 1, true), 0.5, 1e-12);
    assert_near(corner_exponent(&(struct corner_sector){pi, 1}, 1, true), 1, 1e-6);
    /* A sheet on a slab: 1/2 whatever the slab. */
    const struct corner_sector sheet[] = {{pi, 1}, {pi, 9}};
    assert_near(corner_exponent(sheet, 2, true), 0.5, 1e-12);
    /* A right angle of metal on a slab: (2/pi) atan sqrt(1 + 2/dk) (J. Meixner 1972). */
    static const double permittivities[] = {1.5, 4.3, 12};
    for (size_t i = 0; i < 3; i++) {
        double dk = permittivities[i];
        const struct corner_sector foot[] = {{pi / 2, 1}, {pi, dk}};
        assert_near(corner_exponent(foot, 2, true), 2 / pi * atan(sqrt(1 + 2 / dk)), 1e-12);
    }
    /* A right-angled edge of dielectric: even or odd about its bisector, so that
     * tan(3 nu pi/4) = -dk tan(nu pi/4) or -tan(nu pi/4)/dk. */
    for (size_t i = 0; i < 3; i++) {
        double dk = permittivities[i];
        const struct corner_sector edge[] = {{pi / 2, dk}, {1.5 * pi, 1}};
        double nu = corner_exponent(edge, 2, false);
        double inside = tan(nu * pi / 4), outside = tan(3 * nu * pi / 4);
        assert_true(nu > 0.5 && nu < 1);
        assert_near((outside + dk * inside) * (dk * outside + inside) / (outside * inside), 0,
                    1e-9);
    }
}

/* ---- exact capacitances ---- */

static struct outline *new_outline(enum plane_kind kind, size_t conductors) {
    struct outline *outline = calloc(1, sizeof *outline);
    assert_non_null(outline);
    outline->map.kind = kind;
    outline->conductors = conductors;
    return outline;
}

static void add(struct outline *outline, double complex from, double complex to, double left,
                double right, size_t conductor) {
    struct error error = {0};
    assert_ok(outline_add(outline, from, to, left, right, conductor, &error));
}

static struct outline_solution solve(struct outline *outline, int more) {
    struct error error = {0};
    struct outline_solution solution;
    struct piece_effort effort;
    section_general_effort(1 + more, &effort);
    outline_find_corners(outline);
    assert_ok(outline_solve(outline, false, true, NULL, &effort, &solution, &error));
    return solution;
}

/* A strip in the half-plane's own line, from a to b beyond its end: w = i sqrt(z) makes it upright
 * on a plane, with its image two strips in line: C = 2 eps0 K(k')/K(k), k = sqrt(a/b).  K by the
 * arithmetic-geometric mean. */
static double elliptic_k(double k) {
    double a = 1, b = sqrt(1 - k * k);
    for (int i = 0; i < 40; i++) {
        double mean = 0.5 * (a + b);
        b = sqrt(a * b);
        a = mean;
    }
    return pi / (2 * a);
}

static void test_a_strip_in_line_with_a_half_plane_is_exact(void **state) {
    (void)state;
    static const double ratios[] = {0.02, 0.1, 0.5, 0.9};
    for (size_t i = 0; i < 4; i++) {
        struct outline *outline = new_outline(PLANE_HALF, 1);
        outline->map.end = 0.3;
        add(outline, 0.3 + ratios[i], 1.3, 1, 1, 0);
        struct outline_solution s = solve(outline, 0);
        double k = sqrt(ratios[i]);
        double exact = 2 * SECTION_EPSILON_0 * elliptic_k(sqrt(1 - k * k)) / elliptic_k(k);
        assert_close(s.capacitance[0], exact, 1e-5);
        free(outline);
    }
}

/* A square stood on its corner has the same logarithmic capacity: slanted faces. */
static void test_a_slanted_square_high_over_the_plane(void **state) {
    (void)state;
    struct outline *outline = new_outline(PLANE_BELOW, 1);
    const double complex turn[] = {1, I, -1, -I};
    const double side = sqrt(2), height = 3000;
    for (size_t k = 0; k < 4; k++)
        add(outline, I * height + turn[k], I * height + turn[(k + 1) % 4], OUTLINE_METAL, 1, 0);
    struct outline_solution s = solve(outline, 0);
    double radius = 0.590170299508 * side;
    assert_close(s.capacitance[0], 2 * pi * SECTION_EPSILON_0 / log(2 * height / radius), 1e-6);
    free(outline);
}

/* Two bars in air, one in a square coat: turned as a whole nothing changes. */
static struct outline_solution coated_pair(double complex turn) {
    struct outline *outline = new_outline(PLANE_NONE, 2);
    static const double complex square[] = {1 + I, -1 + I, -1 - I, 1 - I};
    for (size_t k = 0; k < 4; k++) {
        double complex from = square[k], to = square[(k + 1) % 4];
        add(outline, turn * from, turn * to, OUTLINE_METAL, 4, 0);
        add(outline, turn * 1.4 * from, turn * 1.4 * to, 4, 1, OUTLINE_NOBODY);
        add(outline, turn * (5 + from), turn * (5 + to), OUTLINE_METAL, 1, 1);
    }
    struct outline_solution s = solve(outline, 1);
    free(outline);
    return s;
}

static void test_turning_a_coated_pair_changes_nothing(void **state) {
    (void)state;
    struct outline_solution straight = coated_pair(1);
    static const double angles[] = {0.3, 0.7853981634, 2.1, -1.2};
    for (size_t i = 0; i < 4; i++) {
        struct outline_solution turned = coated_pair(cexp(I * angles[i]));
        assert_close(turned.capacitance[0], straight.capacitance[0], 1e-9);
        assert_close(turned.air_share[0], straight.air_share[0], 1e-9);
    }
    /* Without a plane all rows sum to zero. */
    assert_close(straight.capacitance[1], -straight.capacitance[0], 1e-4);
    assert_close(straight.capacitance[3], straight.capacitance[0], 1e-4);
}

/* Square coaxial line 2:1: C / eps0 = 10.2340925694, from memory, confirmed by two methods. */
static void test_a_square_coaxial_line(void **state) {
    (void)state;
    struct outline *outline = new_outline(PLANE_NONE, 2);
    static const double complex square[] = {1 + I, -1 + I, -1 - I, 1 - I};
    for (size_t k = 0; k < 4; k++) {
        double complex from = square[k], to = square[(k + 1) % 4];
        add(outline, from, to, OUTLINE_METAL, 1, 0);
        add(outline, 2 * to, 2 * from, OUTLINE_METAL, 1, 1);
    }
    struct outline_solution s = solve(outline, 1);
    assert_close(s.capacitance[0], 10.2340925694 * SECTION_EPSILON_0, 1e-5);
    free(outline);
}

/* ---- the sections of the image solver ---- */

static bool by_total_charge(const struct section_problem *problem,
                            struct section_solution *solution, struct error *error) {
    struct piece_effort effort;
    section_general_effort(2, &effort);
    effort.images = false;
    return section_general(problem, &effort, false, solution, error);
}

static bool by_images(const struct section_problem *problem, struct section_solution *solution,
                      struct error *error) {
    struct piece_effort effort;
    section_general_effort(1, &effort);
    return section_general(problem, &effort, false, solution, error);
}

static void test_every_bare_section_agrees_with_the_independent_values(void **state) {
    (void)state;
    assert_references(by_total_charge, 1e-4);
    assert_reduced_references(by_total_charge, 1e-4);
    assert_references(by_images, 1e-5);
    assert_reduced_references(by_images, 1e-5);
}

static void test_a_thin_strip_in_air_is_exact(void **state) {
    (void)state;
    struct error error = {0};
    static const double love[][2] = {
        {0.1, 12.6947057628}, {1.0, 26.3845823182}, {10.0, 114.939324266}};
    for (size_t i = 0; i < 3; i++) {
        struct section_problem problem = {
            .height = 1e-3, .dk = 1, .count = 1, .conductors = {{0, love[i][0] * 1e-3, 0, 0}}};
        struct section_solution s;
        assert_ok(by_images(&problem, &s, &error));
        assert_close(s.capacitance[0], love[i][1] * 1e-12, 1e-5);
    }
}

/* ---- N. Delbare, D. De Zutter, MTT-37, 1989, 1562-1568, figures from memory ---- */

/* Lines 350 um wide, 70 um thick, 150 um apart; dk 4.3 up to 200 um, 3.2 up to 300 um; the first
 * stands on the lower border, the others on the upper. */
static void add_bar(struct outline *outline, double left, double foot, double below, double around,
                    size_t conductor) {
    double complex a = left + I * foot, b = a + 350, c = b + 70 * I, d = a + 70 * I;
    add(outline, a, b, OUTLINE_METAL, below, conductor);
    add(outline, b, c, OUTLINE_METAL, around, conductor);
    add(outline, c, d, OUTLINE_METAL, around, conductor);
    add(outline, d, a, OUTLINE_METAL, around, conductor);
}

static struct outline *three_lines_on_two_levels(void) {
    struct error error = {0};
    struct outline *outline = new_outline(PLANE_BELOW, 3);
    add_bar(outline, 0, 200, 4.3, 3.2, 0);
    add_bar(outline, 500, 300, 3.2, 1, 1);
    add_bar(outline, 1000, 300, 3.2, 1, 2);
    assert_ok(outline_add_endless(outline, 200 * I, -1, 4.3, 3.2, &error));
    assert_ok(outline_add_endless(outline, 350 + 200 * I, 1, 3.2, 4.3, &error));
    assert_ok(outline_add_endless(outline, 500 + 300 * I, -1, 3.2, 1, &error));
    add(outline, 850 + 300 * I, 1000 + 300 * I, 1, 3.2, OUTLINE_NOBODY);
    assert_ok(outline_add_endless(outline, 1350 + 300 * I, 1, 1, 3.2, &error));
    return outline;
}

static void test_three_lines_on_two_levels(void **state) {
    (void)state;
    static const double printed_c[9] = {142.09,  -21.765, -0.892,  -21.733, 93.529,
                                        -18.098, -0.89,   -18.097, 87.962};
    static const double printed_l[9] = {277.73, 87.763, 36.776, 87.763, 328.61,
                                        115.61, 36.776, 115.61, 337.98};
    /* Boundary elements on a uniform grid, 160 to a side. */
    static const double computed_l[9] = {277.7205, 87.75604, 36.76797, 87.75604, 328.6035,
                                         115.7698, 36.76797, 115.7698, 337.9793};
    struct error error = {0};
    struct outline *outline = three_lines_on_two_levels(), air;
    struct outline_solution s = solve(outline, 1), finer = solve(outline, 3), in_air;
    struct piece_effort effort;
    double inductance[9];
    outline_in_air(outline, &air);
    section_general_effort(2, &effort);
    assert_ok(outline_solve(&air, false, false, NULL, &effort, &in_air, &error));
    for (size_t i = 0; i < 9; i++) {
        assert_close(s.capacitance[i], finer.capacitance[i], 2e-4);
        assert_close(s.capacitance[i], printed_c[i] * 1e-12, 5e-3);
    }
    /* L = mu0 eps0 inverse(C0), by cofactors. */
    const double *c = in_air.capacitance;
    double determinant = c[0] * (c[4] * c[8] - c[5] * c[7]) - c[1] * (c[3] * c[8] - c[5] * c[6]) +
                         c[2] * (c[3] * c[7] - c[4] * c[6]);
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < 3; j++) {
            size_t p = (j + 1) % 3, q = (j + 2) % 3, r = (i + 1) % 3, t = (i + 2) % 3;
            inductance[i * 3 + j] = SECTION_MU_0 * SECTION_EPSILON_0 *
                                    (c[p * 3 + r] * c[q * 3 + t] - c[p * 3 + t] * c[q * 3 + r]) /
                                    determinant;
        }
    for (size_t i = 0; i < 9; i++) {
        assert_close(inductance[i], computed_l[i] * 1e-9, 1e-4);
        assert_close(inductance[i], printed_l[i] * 1e-9, 2e-3);
    }
    free(outline);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_corner_exponents_known_in_closed_form),
        cmocka_unit_test(test_a_strip_in_line_with_a_half_plane_is_exact),
        cmocka_unit_test(test_a_slanted_square_high_over_the_plane),
        cmocka_unit_test(test_turning_a_coated_pair_changes_nothing),
        cmocka_unit_test(test_a_square_coaxial_line),
        cmocka_unit_test(test_every_bare_section_agrees_with_the_independent_values),
        cmocka_unit_test(test_a_thin_strip_in_air_is_exact),
        cmocka_unit_test(test_three_lines_on_two_levels),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
