/* Loops against loops_reference.h, Rosa's rectangle, exact two-dimensional sections, limits. */
#include "check.h"

#include "groundrules/section.h"
#include "inductance_pieces.h"
#include "loops_reference.h"

#include <stdlib.h>

#define COUNT(table) (sizeof(table) / sizeof *(table))

/* Series sum of pieces with signs: the loop inductance of one path. */
static double path(const struct inductance_piece *pieces, const int *signs, size_t count,
                   bool plane) {
    struct error error = {0};
    double matrix[64], sum = 0;
    assert_true(count <= 8);
    assert_ok(inductance_matrix(pieces, count, plane, matrix, &error));
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++)
            sum += signs[i] * signs[j] * matrix[i * count + j];
    return PICO * sum;
}

/* Even current: a tape or a bar centred on the height, two barrels. */
static double even_loop(double length, double height, double thickness) {
    struct inductance_piece pieces[3] = {level_bar(0, height, 0.3, thickness, length),
                                         upright_tube(0, 0, 0, height, 0.6),
                                         upright_tube(length, 0, 0, height, 0.6)};
    return path(pieces, (int[]){1, 1, -1}, 3, true);
}

static void test_loops_of_even_current(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(loops); i++) {
        assert_close(even_loop(loops[i].length, loops[i].height, 0), loops[i].t, 1e-9);
        assert_close(even_loop(loops[i].length, loops[i].height, 0.035), loops[i].thick_t, 2e-9);
    }
}

/* Closed forms: Ruehli's tape, Hoer and Love to its image, Rosa's barrels, filaments between them.
 */
static void test_loops_of_closed_forms(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(loops); i++) {
        double length = loops[i].length, height = loops[i].height;
        struct inductance_piece tape = level_bar(0, height, 0.3, 0, length);
        struct inductance_piece first = filament_along(INDUCTANCE_Z, 0, 0, 0, height),
                                second = first;
        second.start[0] = length * 1e-3;
        double got = inductance_self(&tape) + inductance_image(&tape, &tape) +
                     inductance_barrel(2e-3 * height, 0.6e-3) -
                     2 * (inductance_mutual(&first, &second) + inductance_image(&first, &second));
        assert_close(PICO * got, loops[i].f, 1e-9);
    }
}

/* Mutual inductance of two facing loops, filaments (F) and even current (T); twenty heights apart
 * and more among them. */
static double even_mutual(const struct loop_pair *pair, bool filaments) {
    struct inductance_piece piece[2][3];
    for (int k = 0; k < 2; k++) {
        double y = k * pair->separation;
        piece[k][0] = level_bar(y, pair->height, 0.3, 0, pair->length);
        piece[k][1] = upright_tube(0, y, 0, pair->height, 0.6);
        piece[k][2] = upright_tube(pair->length, y, 0, pair->height, 0.6);
        for (int i = 0; i < 3 && filaments; i++)
            piece[k][i].shape = INDUCTANCE_FILAMENT;
    }
    double sum = 0;
    for (int i = 0; i < 3; i++)
        for (int j = 0; j < 3; j++)
            sum += (i == 2 ? -1 : 1) * (j == 2 ? -1 : 1) *
                   (inductance_mutual(&piece[0][i], &piece[1][j]) +
                    inductance_image(&piece[0][i], &piece[1][j]));
    return PICO * sum;
}

static void test_mutual_inductance_of_two_loops(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(loop_pairs); i++) {
        assert_close(even_mutual(&loop_pairs[i], true), loop_pairs[i].f, 1e-8);
        assert_close(even_mutual(&loop_pairs[i], false), loop_pairs[i].t, 1e-8);
    }
}

static void test_two_rectangles_in_free_space(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(rectangle_pairs); i++) {
        const struct rectangles *pair = &rectangle_pairs[i];
        struct inductance_piece side[2][4];
        for (int k = 0; k < 2; k++) {
            side[k][0] = filament_along(INDUCTANCE_X, 0, k * pair->distance, 0, pair->a);
            side[k][1] = filament_along(INDUCTANCE_X, 0, k * pair->distance, pair->b, pair->a);
            side[k][2] = filament_along(INDUCTANCE_Z, 0, k * pair->distance, 0, pair->b);
            side[k][3] = filament_along(INDUCTANCE_Z, pair->a, k * pair->distance, 0, pair->b);
        }
        double sum = 0;
        for (int a = 0; a < 4; a++)
            for (int b = 0; b < 4; b++)
                sum += (((a ^ b) & 1) == 0 ? 1 : -1) * inductance_mutual(&side[0][a], &side[1][b]);
        assert_close(PICO * sum, pair->mutual, 1e-9);
    }
}

/* Rosa 1908, Grover ch. 8: rectangle of round wire, here without the wire's inside (l/4 per
 * length): (mu0/pi) [(a+b) ln(2ab/r) - a ln(a+d) - b ln(b+d) - 2 (a+b) + 2 (d+r)]; r << a, b (from
 * memory). */
static void test_rosas_rectangle(void **state) {
    (void)state;
    const double cases[][3] = {{100, 100, 0.5}, {50, 20, 0.25}, {1000, 2000, 1}};
    for (size_t i = 0; i < COUNT(cases); i++) {
        double a = cases[i][0], b = cases[i][1], r = cases[i][2], d = hypot(a, b);
        struct inductance_piece sides[4];
        for (int k = 0; k < 4; k++) {
            sides[k] = upright_tube(0, 0, 0, k < 2 ? a : b, 2 * r);
            sides[k].axis = k < 2 ? INDUCTANCE_X : INDUCTANCE_Z;
        }
        sides[1].start[2] = b * 1e-3;
        sides[3].start[0] = a * 1e-3;
        double rosa = 400 * ((a + b) * log(2 * a * b / r) - a * log(a + d) - b * log(b + d) -
                             2 * (a + b) + 2 * (d + r));
        /* Rosa takes r for the mean distance of the tube's surface from itself, 4 r/pi, and the
         * axes for the tubes across the loop. */
        rosa += 4 * 200 * r * (4 / M_PI - 1);
        assert_close(path(sides, (int[]){1, -1, -1, 1}, 4, false), rosa, 2e-5);
    }
}

static double strips(double length, double width, double thickness, double height,
                     double *estimate) {
    struct error error = {0};
    double inductance = NAN;
    struct inductance_trace trace = {0, width * 1e-3, thickness * 1e-3, height * 1e-3};
    struct inductance_traces traces = {1, &trace, length * 1e-3};
    assert_ok(inductance_traces_solve(&traces, &inductance, estimate, &error));
    *estimate *= PICO;
    return PICO * inductance;
}

/* What one more millimetre adds to a long trace is the exact inductance of the infinite one with
 * its free current (Chebyshev-Galerkin; Hammerstad and Jensen 1980 agree to 4e-7 at dk = 1). */
static void test_long_thin_traces_have_the_exact_inductance_per_length(void **state) {
    (void)state;
    for (size_t i = 0; i < 4; i++) {
        double e1, e2;
        double step = (strips(1000, 0.3, 0, loops[i].height, &e1) -
                       strips(500, 0.3, 0, loops[i].height, &e2)) /
                      500;
        assert_close(step, loops[i].per_mm, 4e-5);
    }
}

/* Thick ones against the section solver, an independent method (boundary elements on mapped faces).
 */
static void test_long_thick_traces_agree_with_the_section_solver(void **state) {
    (void)state;
    const double cases[][3] = {{0.3, 0.035, 0.19}, {0.3, 0.035, 0.1}, {0.15, 0.035, 1.6},
                               {1, 0.018, 0.4},    {3, 0.07, 0.2},    {0.2, 0.2, 0.3}};
    for (size_t i = 0; i < COUNT(cases); i++) {
        struct error error = {0};
        double width = cases[i][0], thickness = cases[i][1], height = cases[i][2], e1, e2;
        struct section_problem problem = {.height = height * 1e-3, .dk = 1, .count = 1};
        problem.conductors[0].width = width * 1e-3;
        problem.conductors[0].thickness = thickness * 1e-3;
        struct section_solution solution;
        assert_ok(section_solve(&problem, &solution, &error));
        double step = (strips(1000, width, thickness, height, &e1) -
                       strips(500, width, thickness, height, &e2)) /
                      500;
        double exact = PICO * 1e-3 * solution.inductance[0];
        assert_close(step, exact, 1e-4);
        assert_true(fabs(step - exact) < e1 / 1000);
    }
}

/* Parallel plates: mu0 h/w and the fringe, Love's exact strip (thin, w/h = 50): compare with the
 * section solver, and bounds 1 - 2 h/w .. 1. */
static void test_wide_traces_become_parallel_plates(void **state) {
    (void)state;
    double before = 0;
    for (double ratio = 10; ratio < 2000; ratio *= 4) {
        double e1, e2, height = 0.1;
        double step = (strips(1e5, ratio * height, 0, height, &e1) -
                       strips(5e4, ratio * height, 0, height, &e2)) /
                      5e4;
        double plates = 400 * M_PI / ratio;
        assert_true(step < plates && step > before * plates);
        before = step / plates;
    }
    assert_true(before > 0.99);
}

/* A plane far away changes nothing.  What is left of a thin trace is a strip in free space, whose
 * logarithmic capacity is a quarter of its width, exactly, and whose points are 4 w/pi^2 apart in
 * the mean: L = (mu0/2 pi) [l (ln(8 l/w) - 1) + 4 w/pi^2], next term of order w^2/l. */
static void test_a_far_plane_changes_nothing(void **state) {
    (void)state;
    double e, near = strips(3, 0.3, 0.035, 1e5, &e), far = strips(3, 0.3, 0.035, 1e6, &e);
    assert_close(near, far, 1e-5);
    for (double length = 3; length < 1e3; length *= 3) {
        double strip = 200 * (length * (log(8 * length / 0.3) - 1) + 4 * 0.3 / (M_PI * M_PI));
        double got = strips(length, 0.3, 0, 1e7, &e);
        assert_close(got, strip, 2e-4 + 0.03 * 0.01 / (length * length));
        assert_true(fabs(got - strip) < e + 200 * 0.03 / length);
    }
}

/* The shares' freedom only lowers the energy; even current is an upper bound, by the few percent of
 * the 2-D solutions (5.6 % at 0.19 mm). */
static void test_free_shares_lower_the_inductance(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(loops); i++) {
        double e, height = loops[i].height, length = loops[i].length;
        struct inductance_piece tape = level_bar(0, height, 0.3, 0, length);
        double even = PICO * (inductance_self(&tape) + inductance_image(&tape, &tape));
        double share = strips(length, 0.3, 0, height, &e) / even;
        assert_true(share < 1 && share > 0.94);
    }
}

/* Two traces: mutual against even current, for which the redistribution is a small correction. */
static void test_mutual_of_two_traces(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(loop_pairs); i++) {
        struct error error = {0};
        double height = loop_pairs[i].height, apart = loop_pairs[i].separation;
        struct inductance_trace trace[2] = {{0, 0.3e-3, 0, height * 1e-3},
                                            {apart * 1e-3, 0.3e-3, 0, height * 1e-3}};
        struct inductance_traces traces = {2, trace, loop_pairs[i].length * 1e-3};
        double inductance[4], estimate[4];
        assert_ok(inductance_traces_solve(&traces, inductance, estimate, &error));
        struct inductance_piece a = level_bar(0, height, 0.3, 0, loop_pairs[i].length), b = a;
        b.start[1] = apart * 1e-3;
        double even = inductance_mutual(&a, &b) + inductance_image(&a, &b);
        assert_close(inductance[1], even, 0.015);
        assert_close(inductance[1], inductance[2], 1e-12);
    }
}

/* 2 x 48 flat bars of the general pieces, graded alike, in one network: three times as fine,
 * another integration.  Self and mutual within what is stated. */
static void test_stated_errors_cover_a_finer_division(void **state) {
    (void)state;
    enum { EACH = 48, ALL = 2 * EACH };
    static double matrix[ALL * ALL];
    const double cases[][4] = {
        {5, 0.3, 0.4, 0.5}, {1, 0.3, 0.19, 0.33}, {20, 1, 0.1, 3}, {3, 0.3, 1.6, 2}};
    for (size_t c = 0; c < COUNT(cases); c++) {
        double length = cases[c][0], width = cases[c][1], height = cases[c][2], apart = cases[c][3];
        struct error error = {0};
        struct inductance_piece pieces[ALL];
        size_t from[ALL], to[ALL] = {0}, in[] = {1, 2}, out[] = {0, 0};
        for (int i = 0; i < ALL; i++) {
            double edge[2];
            for (int k = 0; k < 2; k++) {
                double t = 2.0 * (i % EACH + k) / EACH - 1;
                edge[k] = width / 2 * (t < 0 ? -1 : 1) * (1 - pow(1 - fabs(t), 4));
            }
            pieces[i] = level_bar((edge[0] + edge[1]) / 2 + (i < EACH ? 0 : apart), height,
                                  edge[1] - edge[0], 0, length);
            from[i] = i < EACH ? 1 : 2;
        }
        assert_ok(inductance_matrix(pieces, ALL, true, matrix, &error));
        struct inductance_network network = {ALL, matrix, from, to, 3, 2, in, out};
        double fine[4], got[4], stated[4];
        assert_ok(inductance_network_solve(&network, fine, NULL, &error));
        struct inductance_trace trace[2] = {{0, width * 1e-3, 0, height * 1e-3},
                                            {apart * 1e-3, width * 1e-3, 0, height * 1e-3}};
        struct inductance_traces traces = {2, trace, length * 1e-3};
        assert_ok(inductance_traces_solve(&traces, got, stated, &error));
        for (int i = 0; i < 2; i++) {
            assert_true(fabs(got[i] - fine[i]) < stated[i]);
            assert_true(stated[i] < 5e-4 * fine[i]);
        }
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_loops_of_even_current),
        cmocka_unit_test(test_loops_of_closed_forms),
        cmocka_unit_test(test_mutual_inductance_of_two_loops),
        cmocka_unit_test(test_two_rectangles_in_free_space),
        cmocka_unit_test(test_rosas_rectangle),
        cmocka_unit_test(test_long_thin_traces_have_the_exact_inductance_per_length),
        cmocka_unit_test(test_long_thick_traces_agree_with_the_section_solver),
        cmocka_unit_test(test_wide_traces_become_parallel_plates),
        cmocka_unit_test(test_a_far_plane_changes_nothing),
        cmocka_unit_test(test_free_shares_lower_the_inductance),
        cmocka_unit_test(test_mutual_of_two_traces),
        cmocka_unit_test(test_stated_errors_cover_a_finer_division),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
