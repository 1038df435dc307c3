/* Single pieces against pieces_reference.h and handbook formulas. */
#include "check.h"

#include "bar.h"
#include "inductance_pieces.h"
#include "pieces_reference.h"

#define COUNT(table) (sizeof(table) / sizeof *(table))

/* Rosa, "The self and mutual inductances of linear conductors", Bull. Bur. Stand. 4, 1908; the
 * exact tube by mpmath quadrature of Neumann's integral. */
static void test_via_alone_is_rosas_formula_and_the_exact_tube(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(via_selves); i++) {
        const struct via_self *via = &via_selves[i];
        struct inductance_piece tube = upright_tube(0, 0, 0, via->height, via->diameter);
        assert_close(PICO * inductance_barrel(via->height * 1e-3, via->diameter * 1e-3), via->rosa,
                     1e-11);
        assert_close(PICO * inductance_self(&tube), via->tube, 1e-11);
    }
}

/* The same tube 1e5 times as long as wide and 1e4 times as wide as long: the long wire's limit
 * l (ln 2l/r - 1), and for a flat ring the average of 1/R over its band, (l^2/pi r) (ln(8 r/l) +
 * 3/2) (from memory; both leave out terms of order d/l or (l/d)^2). */
static void test_extreme_tubes_reach_their_limits(void **state) {
    (void)state;
    struct inductance_piece wire = upright_tube(0, 0, 0, 1e5, 1);
    assert_close(PICO * inductance_self(&wire), 200 * 1e5 * (log(4e5) - 1), 2e-6);
    struct inductance_piece ring = upright_tube(0, 0, 0, 1e-4, 1);
    double l = 1e-4, r = 0.5;
    assert_close(PICO * inductance_self(&ring), 100 * l * l / (M_PI * r) * (log(8 * r / l) + 1.5),
                 1e-6);
}

static void test_parallel_filaments_are_neumanns_integral(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(parallel_filaments); i++) {
        const struct filaments *pair = &parallel_filaments[i];
        struct inductance_piece a =
            filament_along(INDUCTANCE_Y, 1, pair->a0, 2, pair->a1 - pair->a0);
        struct inductance_piece b = filament_along(INDUCTANCE_Y, 1 + 0.6 * pair->spacing, pair->b0,
                                                   2 - 0.8 * pair->spacing, pair->b1 - pair->b0);
        assert_close(PICO * inductance_mutual(&a, &b), pair->mutual, 1e-11);
        assert_close(PICO * inductance_mutual(&b, &a), pair->mutual, 1e-11);
    }
}

/* Far apart 1/R is all that is left, with Taylor's next term: 1e-7 l m/R (1 + ...). */
static void test_far_filaments_do_not_cancel(void **state) {
    (void)state;
    for (double far = 1e2; far < 1e7; far *= 10) {
        struct inductance_piece a = filament_along(INDUCTANCE_X, -0.5, 0, 0, 1);
        struct inductance_piece beside = filament_along(INDUCTANCE_X, -0.5, far, 0, 1);
        struct inductance_piece ahead = filament_along(INDUCTANCE_X, far - 0.5, 0, 0, 1);
        struct inductance_piece both =
            filament_along(INDUCTANCE_X, 0.6 * far - 0.5, 0, 0.8 * far, 1);
        double square = 1 / (far * far);
        assert_close(PICO * inductance_mutual(&a, &beside), 100 / far * (1 - square / 12),
                     1e-7 * square * 1e2 + 1e-13);
        assert_close(PICO * inductance_mutual(&a, &ahead), 100 / far * (1 + square / 6),
                     1e-7 * square * 1e2 + 1e-13);
        assert_close(PICO * inductance_mutual(&a, &both),
                     100 / far * (1 + square / 12 * (3 * 0.36 - 1)), 1e-7 * square * 1e2 + 1e-13);
    }
}

static void test_filaments_that_meet_follow_grover(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(meetings); i++) {
        const struct meeting *pair = &meetings[i];
        double got = PICO * inductance_meeting(pair->first * 1e-3, pair->second * 1e-3,
                                               pair->degrees * M_PI / 180);
        assert_near(got, pair->mutual, 1e-9 * fabs(pair->mutual) + 1e-9);
    }
}

static struct inductance_piece bar_of(const double corner[3][2]) {
    struct inductance_piece bar = {.shape = INDUCTANCE_BAR, .axis = INDUCTANCE_Z};
    for (int k = 0; k < 2; k++) {
        bar.start[k] = (corner[k][0] + corner[k][1]) / 2 * 1e-3;
        bar.across[k] = (corner[k][1] - corner[k][0]) * 1e-3;
    }
    bar.start[2] = corner[2][0] * 1e-3;
    bar.length = (corner[2][1] - corner[2][0]) * 1e-3;
    return bar;
}

static void test_bars_and_tapes_are_hoer_and_loves(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(bar_pairs); i++) {
        struct inductance_piece a = bar_of(bar_pairs[i].first), b = bar_of(bar_pairs[i].second);
        assert_close(PICO * inductance_mutual(&a, &b), bar_pairs[i].mutual, 2e-10);
        assert_close(PICO * inductance_mutual(&b, &a), bar_pairs[i].mutual, 2e-10);
    }
}

/* Hoer and Love, J. Res. NBS 69C, 1965: their form evaluated apart in 50 digits and by quadrature
 * over both sections, nH; bars from 5:1 to 10000:1 in length. */
static void test_bars_of_many_shapes(void **state) {
    (void)state;
    const double cases[][4] = {{0.2, 0.035, 10, 9.89671914}, {1, 0.035, 10, 6.98638222},
                               {1, 1, 10, 5.70425359},       {5, 0.035, 10, 4.07083847},
                               {10, 0.035, 10, 2.9659361},   {0.3, 0.018, 2, 1.23190354},
                               {10, 10, 1000, 1021.72196},   {10, 10, 10, 1.88231264}};
    for (size_t i = 0; i < COUNT(cases); i++) {
        struct inductance_piece bar = level_bar(0, 0, cases[i][0], cases[i][1], cases[i][2]);
        assert_close(1e9 * inductance_self(&bar), cases[i][3], 5e-9);
    }
    struct inductance_piece bar = level_bar(0, 0, 1, 0.035, 10),
                            beside = level_bar(2, 0, 1, 0.035, 10),
                            above = level_bar(0, 1, 1, 0.035, 10);
    assert_close(1e9 * inductance_mutual(&bar, &beside), 3.02837223, 5e-9);
    assert_close(1e9 * inductance_mutual(&bar, &above), 4.0595171, 5e-9);
}

/* Ruehli, IBM J. Res. Dev. 16, 1972, the flat conductor; in long double, as it cancels. */
static double ruehli(double width, double length) {
    long double u = (long double)length / (long double)width;
    long double sum = 3 * logl(u + sqrtl(u * u + 1)) + u * u + 1 / u +
                      3 * u * logl(1 / u + sqrtl(1 / (u * u) + 1)) -
                      powl(powl(u, 4.0L / 3) + powl(u, -2.0L / 3), 1.5L);
    return (double)(200.0L * (long double)length / 3 * sum);
}

static void test_flat_bars_are_ruehlis_tape_at_any_shape(void **state) {
    (void)state;
    for (double ratio = 1e-3; ratio < 2e4; ratio *= 7) {
        struct inductance_piece tape = level_bar(0, 0, 1, 0, ratio);
        assert_close(PICO * inductance_self(&tape), ruehli(1, ratio), 1e-9);
    }
}

/* The closed form and the quadrature are two methods; both say the same where the first is good,
 * and the second goes on where it is not. */
static void test_closed_form_and_quadrature_agree(void **state) {
    (void)state;
    double sides[][2] = {{1, 1}, {0.3, 0.035}, {5, 0.1}, {0.2, 2}};
    int good = 0;
    for (size_t i = 0; i < 4; i++)
        for (size_t j = 0; j < 4; j++)
            for (double x = 0; x < 3; x += 0.7)
                for (double z = -2; z < 2; z += 0.9) {
                    struct bar_pair pair = {
                        .along = {0, 1.5, z, 2},
                        .side = {{sides[i][0], sides[i][1]}, {sides[j][0], sides[j][1]}},
                        .offset = {x, 0.4 * x}};
                    double closed;
                    if (!bar_closed_form(&pair, &closed))
                        continue;
                    good++;
                    assert_close(bar_quadrature(&pair), closed, 1e-9);
                }
    assert_true(good > 200);
}

/* A bar cut in two along its width: L = (L1 + L2 + 2 M)/4 for current shared alike, exactly, with
 * the halves touching; whatever its thickness. */
static void test_touching_halves_make_the_whole_bar(void **state) {
    (void)state;
    for (double thickness = 0; thickness < 1; thickness = thickness * 30 + 1e-4) {
        struct inductance_piece whole = level_bar(0, 0, 1, thickness, 30);
        struct inductance_piece left = level_bar(-0.25, 0, 0.5, thickness, 30);
        struct inductance_piece right = level_bar(0.25, 0, 0.5, thickness, 30);
        assert_close((inductance_self(&left) + inductance_mutual(&left, &right)) / 2,
                     inductance_self(&whole), 1e-9);
    }
}

/* Cut across its length: L = L1 + L2 + 2 M, pieces end to end. */
static void test_pieces_end_to_end_make_the_whole(void **state) {
    (void)state;
    struct inductance_piece whole = upright_tube(0, 0, 0, 3, 0.6);
    struct inductance_piece low = upright_tube(0, 0, 0, 1, 0.6),
                            high = upright_tube(0, 0, 1, 2, 0.6);
    assert_close(inductance_self(&low) + inductance_self(&high) +
                     2 * inductance_mutual(&low, &high),
                 inductance_self(&whole), 1e-11);
    struct inductance_piece bar = level_bar(0, 0, 0.3, 0.035, 10), first = bar, second = bar;
    first.length = 3e-3;
    second.length = 7e-3;
    second.start[0] += 3e-3;
    assert_close(inductance_self(&first) + inductance_self(&second) +
                     2 * inductance_mutual(&first, &second),
                 inductance_self(&bar), 1e-9);
}

/* A thin tube's flux through a filament outside it is that of its axis for long tubes (Maxwell's
 * geometric mean distance): tube with bar against filament with bar. */
static void test_tube_beside_a_bar_is_its_axis_when_long(void **state) {
    (void)state;
    struct inductance_piece tube = {.shape = INDUCTANCE_TUBE,
                                    .axis = INDUCTANCE_X,
                                    .start = {0, 2e-3, 0},
                                    .length = 100,
                                    .diameter = 1e-3};
    struct inductance_piece axis = tube, bar = level_bar(0, 0, 1, 0.1, 1e5);
    axis.shape = INDUCTANCE_FILAMENT;
    assert_close(inductance_mutual(&tube, &bar), inductance_mutual(&axis, &bar), 1e-7);
    struct inductance_piece upright = upright_tube(0, 0, 0, 1, 0.6);
    assert_true(inductance_mutual(&upright, &bar) == 0.0);
    assert_true(isinf(inductance_self(&axis)));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_via_alone_is_rosas_formula_and_the_exact_tube),
        cmocka_unit_test(test_extreme_tubes_reach_their_limits),
        cmocka_unit_test(test_parallel_filaments_are_neumanns_integral),
        cmocka_unit_test(test_far_filaments_do_not_cancel),
        cmocka_unit_test(test_filaments_that_meet_follow_grover),
        cmocka_unit_test(test_bars_and_tapes_are_hoer_and_loves),
        cmocka_unit_test(test_bars_of_many_shapes),
        cmocka_unit_test(test_flat_bars_are_ruehlis_tape_at_any_shape),
        cmocka_unit_test(test_closed_form_and_quadrature_agree),
        cmocka_unit_test(test_touching_halves_make_the_whole_bar),
        cmocka_unit_test(test_pieces_end_to_end_make_the_whole),
        cmocka_unit_test(test_tube_beside_a_bar_is_its_axis_when_long),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
