#include "check.h"
#include "groundrules/section_loss.h"

#include <string.h>

static const double pi = 3.14159265358979323846;

static struct section_loss lost(const struct section_problem *problem) {
    struct error error = {0};
    struct section_loss loss;
    assert_ok(section_loss(problem, NULL, NULL, &loss, &error));
    return loss;
}

/* Copper of 5.80e7 S/m (IEC 60028), R = 1/(sigma delta); textbook, recomputed. */
static void test_the_surface_of_copper(void **state) {
    (void)state;
    assert_close(section_surface_resistance(1 / 5.80e7) * sqrt(1e9), 0.008250226, 1e-6);
    assert_close(section_surface_resistance(1 / 5.80e7) * sqrt(10e6), 0.0008250226, 1e-6);
}

/* A bar of square section far from everything: L = mu0/(2 pi) ln(2 H/r) with r in proportion to the
 * side a, so g = 1/(pi a), and the plane's share is 1/(2 pi H); exact for H -> infinity. */
static void test_a_square_bar_high_over_the_plane(void **state) {
    (void)state;
    const double side = 1e-3, height = 1;
    struct section_problem problem = {
        .height = height, .dk = 1, .count = 1, .conductors = {{0, side, side, 0}}};
    struct section_loss loss = lost(&problem);
    assert_close(loss.copper[0], 1 / (pi * side), 1e-3);
    assert_close(loss.copper[0], 1 / (pi * side), loss.error);
    assert_close(loss.plane[0], 1 / (2 * pi * (height + side / 2)), 1e-3);
    assert_close(loss.dc[0], 1e6, 1e-12);
}

/* A strip much wider than high over its plane: current on facing sides only, Rs/w each, less what
 * flows round the edges. */
static void test_a_wide_strip_is_two_plates(void **state) {
    (void)state;
    double before = 0;
    for (size_t k = 0; k < 3; k++) {
        double width = 30e-3 * pow(3, (double)k);
        struct section_problem problem = {
            .height = 1e-3, .dk = 4.3, .count = 1, .conductors = {{0, width, 1e-4, 0}}};
        struct section_loss loss = lost(&problem);
        double share = loss.copper[0] * width, plane = loss.plane[0] * width;
        assert_true(plane < 1 && share < 1 && share > before);
        before = share;
        if (k == 2) {
            assert_close(share, 1, 2.5e-2);
            assert_close(plane, 1, 4e-2);
        }
    }
}

/* R. A. Pucel, D. J. Masse, C. P. Hartwig, "Losses in microstrip", MTT-16, 1968, 342-350 (from
 * memory): Wheeler's rule on Wheeler's approximate impedance, w' = w + (t/pi) (ln(2h/t) + 1),
 *     R h/(2 Rs) = F (1 + h/w' + (h/(pi w')) (ln(2h/t) - t/h)),
 *     F = (1 - (w'/4h)^2)/(2 pi),   1/(2 pi) < w/h <= 2,
 *     F = (w'/h + (w'/pi h)/(w'/2h + 0.94)) / (w'/h + (2/pi) ln(2 pi e (w'/2h + 0.94)))^2,  above.
 * Good to some percent: the two leave a step of 9 % where they meet. */
static double pucel(double height, double width, double thickness) {
    double wide = width + thickness / pi * (log(2 * height / thickness) + 1);
    double u = wide / height, t = thickness / height, v = u / 2 + 0.94;
    double narrow_factor = (1 - u * u / 16) / (2 * pi);
    double wide_factor = (u + u / pi / v) / pow(u + 2 / pi * log(2 * pi * exp(1) * v), 2);
    double factor = width / height <= 2 ? narrow_factor : wide_factor;
    return factor * (1 + 1 / u + (log(2 / t) - t) / (pi * u)) * 2 / height;
}

static void test_microstrips_by_pucel_masse_and_hartwig(void **state) {
    (void)state;
    static const double cases[][3] = {
        {0.5e-3, 0.483e-3, 18e-6}, {0.19e-3, 0.6e-3, 18e-6}, {1.6e-3, 0.6e-3, 35e-6}};
    for (size_t k = 0; k < 3; k++) {
        struct section_problem problem = {
            .height = cases[k][0],
            .dk = 4.3,
            .count = 1,
            .conductors = {{-cases[k][1] / 2, cases[k][1], cases[k][2], 0}}};
        struct section_loss loss = lost(&problem);
        assert_close(loss.copper[0] + loss.plane[0], pucel(cases[k][0], cases[k][1], cases[k][2]),
                     0.1);
    }
}

/* Where the sheet of copper is cut in two halves that lie close, the current of both together finds
 * nearly the same way. */
static void test_two_halves_carry_what_the_whole_does(void **state) {
    (void)state;
    struct section_problem whole = {
        .height = 1e-3, .dk = 1, .count = 1, .conductors = {{0, 2e-3, 0.2e-3, 0}}};
    struct section_problem halves = {
        .height = 1e-3,
        .dk = 1,
        .count = 2,
        .conductors = {{0, 0.99e-3, 0.2e-3, 0}, {1.01e-3, 0.99e-3, 0.2e-3, 0}}};
    struct section_loss one = lost(&whole), two = lost(&halves);
    double together = (two.copper[0] + two.copper[1] + two.plane[0] + two.plane[1]) / 2;
    assert_close(together, one.copper[0] + one.plane[0], 2e-2);
    /* Against each other the current crowds into the gap and costs much more. */
    assert_true(two.copper[0] - two.copper[1] > 4 * (two.copper[0] + two.copper[1]));
}

/* The plain solver shares nothing with the fast one but the problem. */
static bool plainly(void *context, const struct section_problem *problem,
                    struct section_solution *solution, struct error *error) {
    ++*(int *)context;
    return section_solve_plain(problem, solution, error);
}

static struct section_problem three_strips(double inward) {
    double w = 0.3e-3 - 2 * inward, t = 35e-6 - 2 * inward;
    return (struct section_problem){.height = 0.4e-3 + inward,
                                    .dk = 1,
                                    .count = 3,
                                    .conductors = {{inward, w, t, 0},
                                                   {0.5e-3 + inward, 0.5e-3 - 2 * inward, t, 0},
                                                   {1.2e-3 + inward, w, t, 0}}};
}

static void test_both_solvers_agree_within_the_stated_error(void **state) {
    (void)state;
    struct section_problem problem = three_strips(0);
    struct section_loss fast = lost(&problem), plain;
    struct error error = {0};
    int solved = 0;
    assert_ok(section_loss(&problem, plainly, &solved, &plain, &error));
    assert_int_equal(solved, 9);
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < 3; j++) {
            double scale = sqrt(fast.copper[i * 4] * fast.copper[j * 4]);
            assert_near(fast.copper[i * 3 + j], plain.copper[i * 3 + j],
                        scale * (fast.error + plain.error));
            assert_near(fast.plane[i * 3 + j], plain.plane[i * 3 + j],
                        scale * (fast.error + plain.error));
            assert_close(fast.copper[i * 3 + j], fast.copper[j * 3 + i], 1e-9);
        }
    assert_true(fast.error < 5e-3);
}

/* Power is never made: all principal minors of the total are positive. */
static void test_the_matrix_is_positive(void **state) {
    (void)state;
    struct section_problem problem = three_strips(0);
    struct section_loss loss = lost(&problem);
    double r[9];
    for (size_t k = 0; k < 9; k++)
        r[k] = loss.copper[k] + loss.plane[k];
    assert_true(r[0] > 0 && r[0] * r[4] > r[1] * r[1] && r[0] * r[8] > r[2] * r[2]);
    assert_true(r[0] * (r[4] * r[8] - r[5] * r[5]) - r[1] * (r[1] * r[8] - r[5] * r[2]) +
                    r[2] * (r[1] * r[5] - r[4] * r[2]) >
                0);
}

/* The derivative of the reduced inductance is the reduced derivative, whatever the tie. */
static void test_ties_reduce_as_the_inductance_does(void **state) {
    (void)state;
    static const enum section_tie tied[] = {SECTION_TIED, SECTION_FLOATING, SECTION_TIED_ONE_END};
    struct section_problem problem = three_strips(0);
    struct error error = {0};
    struct section_solution whole;
    assert_ok(section_solve_plain(&problem, &whole, &error));
    struct section_loss loss = lost(&problem);
    for (size_t k = 0; k < 3; k++) {
        const enum section_tie ties[3] = {SECTION_SIGNAL, tied[k], SECTION_SIGNAL};
        struct section_loss reduced;
        assert_ok(section_loss_reduce(&loss, &whole, ties, &reduced, &error));
        assert_int_equal(reduced.count, 2);
        const double d = 1e-6;
        struct section_problem out = three_strips(d), in = three_strips(-d);
        struct section_solution far, near;
        assert_ok(section_solve_plain(&out, &far, &error));
        assert_ok(section_solve_plain(&in, &near, &error));
        assert_ok(section_reduce(&far, ties, &far, &error));
        assert_ok(section_reduce(&near, ties, &near, &error));
        for (size_t i = 0; i < 4; i++) {
            double want = (far.inductance[i] - near.inductance[i]) / (2 * d * SECTION_MU_0);
            assert_near(reduced.copper[i], want, 3e-3 * reduced.copper[0]);
        }
        assert_close(reduced.dc[0], 1 / (0.3e-3 * 35e-6), 1e-12);
        assert_true(reduced.dc[1] == 0);
    }
}

static void test_loss_scales_with_the_section(void **state) {
    (void)state;
    struct section_problem problem = three_strips(0), large = problem;
    large.height *= 7;
    for (size_t i = 0; i < 3; i++) {
        large.conductors[i].left *= 7;
        large.conductors[i].width *= 7;
        large.conductors[i].thickness *= 7;
    }
    struct section_loss one = lost(&problem), seven = lost(&large);
    for (size_t k = 0; k < 9; k++) {
        assert_close(seven.copper[k], one.copper[k] / 7, 1e-6);
        assert_close(seven.plane[k], one.plane[k] / 7, 1e-6);
    }
}

static void test_sheets_are_refused(void **state) {
    (void)state;
    struct section_problem problem = {
        .height = 1e-3, .dk = 4.3, .count = 1, .conductors = {{0, 1e-3, 0, 0}}};
    struct section_loss loss;
    struct error error = {0};
    assert_false(section_loss(&problem, NULL, NULL, &loss, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "sheet"));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_surface_of_copper),
        cmocka_unit_test(test_a_square_bar_high_over_the_plane),
        cmocka_unit_test(test_a_wide_strip_is_two_plates),
        cmocka_unit_test(test_microstrips_by_pucel_masse_and_hartwig),
        cmocka_unit_test(test_two_halves_carry_what_the_whole_does),
        cmocka_unit_test(test_both_solvers_agree_within_the_stated_error),
        cmocka_unit_test(test_the_matrix_is_positive),
        cmocka_unit_test(test_ties_reduce_as_the_inductance_does),
        cmocka_unit_test(test_loss_scales_with_the_section),
        cmocka_unit_test(test_sheets_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
