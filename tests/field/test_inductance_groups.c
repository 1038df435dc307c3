/* Groups of vias against vias_reference.h, exact two-dimensional solutions and invariants. */
#include "check.h"

#include "inductance_pieces.h"
#include "vias_reference.h"

#include <stdlib.h>

#define COUNT(table) (sizeof(table) / sizeof *(table))

enum { MOST = 9 };

struct layout {
    double x[MOST], y[MOST];
    struct inductance_barrels barrels;
};

static void place(struct layout *layout, int count, enum arrangement arrangement, double pitch) {
    for (int i = 0; i < count; i++) {
        layout->x[i] = arrangement == GRID ? (i % 3) * pitch * 1e-3 : i * pitch * 1e-3;
        layout->y[i] = arrangement == GRID ? (i / 3) * pitch * 1e-3 : 0;
        if (arrangement == RING && count > 1) {
            double radius = pitch * 1e-3 / (2 * sin(M_PI / count));
            layout->x[i] = radius * cos(2 * M_PI * i / count);
            layout->y[i] = radius * sin(2 * M_PI * i / count);
        }
    }
    layout->barrels.count = (size_t)count;
    layout->barrels.x = layout->x;
    layout->barrels.y = layout->y;
}

/* All tops joined: 1/(1' inv(L) 1), through the network. */
static double joined(const double *matrix, size_t count) {
    struct error error = {0};
    size_t from[MOST], to[MOST] = {0}, in = 1, out = 0;
    for (size_t i = 0; i < count; i++)
        from[i] = 1;
    struct inductance_network network = {.branches = count,
                                         .matrix = matrix,
                                         .from = from,
                                         .to = to,
                                         .nodes = 2,
                                         .ports = 1,
                                         .port_in = &in,
                                         .port_out = &out};
    double inductance = NAN;
    assert_ok(inductance_network_solve(&network, &inductance, NULL, &error));
    return PICO * inductance;
}

static double group(struct layout *layout, enum inductance_ends ends, size_t harmonics) {
    struct error error = {0};
    double matrix[MOST * MOST];
    layout->barrels.ends = ends;
    layout->barrels.harmonics = harmonics;
    assert_ok(inductance_barrels_solve(&layout->barrels, matrix, NULL, NULL, &error));
    return joined(matrix, layout->barrels.count);
}

static void test_even_groups_are_the_tube_averages(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(via_groups); i++) {
        const struct via_group *via = &via_groups[i];
        struct layout layout = {
            .barrels = {.height = via->height * 1e-3, .diameter = via->diameter * 1e-3}};
        place(&layout, via->count, via->arrangement, via->pitch);
        assert_close(group(&layout, INDUCTANCE_FREE, 0), via->free_t, 2e-9);
        assert_close(group(&layout, INDUCTANCE_ON_PLANE, 0), via->plane_t, 2e-9);
    }
}

/* The energy is stationary: with some harmonics a group lies between even and free currents, and
 * with the number of harmonics that the models take within 2e-5 of the free ones. */
static void test_groups_lie_between_even_and_free_currents(void **state) {
    (void)state;
    double worst = 0;
    for (size_t i = 0; i < COUNT(via_groups); i++) {
        const struct via_group *via = &via_groups[i];
        if (via->count == 1)
            continue;
        struct layout layout = {
            .barrels = {.height = via->height * 1e-3, .diameter = via->diameter * 1e-3}};
        place(&layout, via->count, via->arrangement, via->pitch);
        size_t harmonics = inductance_barrel_harmonics(via->diameter, via->pitch);
        double alone = group(&layout, INDUCTANCE_FREE, harmonics);
        double plane = group(&layout, INDUCTANCE_ON_PLANE, harmonics);
        assert_true(alone < via->free_t * (1 + 1e-8) && alone > via->free_r * (1 - 2e-8));
        assert_true(plane < via->plane_t * (1 + 1e-8) && plane > via->plane_r * (1 - 2e-8));
        worst = fmax(worst, fmax(alone / via->free_r - 1, plane / via->plane_r - 1));
    }
    assert_true(worst < 2e-5);
}

/* The matrix from the general pieces with their images is the same as the group's. */
static void test_pieces_with_images_make_the_same_group(void **state) {
    (void)state;
    struct error error = {0};
    struct inductance_piece pieces[3];
    double matrix[9], row[9];
    struct layout layout = {
        .barrels = {.height = 1.6e-3, .diameter = 0.6e-3, .ends = INDUCTANCE_ON_PLANE}};
    place(&layout, 3, ROW, 0.8);
    for (int i = 0; i < 3; i++)
        pieces[i] = upright_tube(0.8 * i, 0, 0, 1.6, 0.6);
    assert_ok(inductance_matrix(pieces, 3, true, matrix, &error));
    assert_ok(inductance_barrels_solve(&layout.barrels, row, NULL, NULL, &error));
    for (int i = 0; i < 9; i++)
        assert_close(matrix[i], row[i], 1e-9);
}

/* Closed forms throughout: Rosa with the radius, filaments at the centre distance. */
static void test_groups_of_closed_forms(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(via_groups); i++) {
        const struct via_group *via = &via_groups[i];
        struct layout layout;
        double alone[MOST * MOST], plane[MOST * MOST];
        place(&layout, via->count, via->arrangement, via->pitch);
        for (int a = 0; a < via->count; a++)
            for (int b = 0; b < via->count; b++) {
                double x = (layout.x[a] - layout.x[b]) * 1e3, y = (layout.y[a] - layout.y[b]) * 1e3;
                struct inductance_piece here = filament_along(INDUCTANCE_Z, 0, 0, 0, via->height);
                struct inductance_piece there = filament_along(INDUCTANCE_Z, x, y, 0, via->height);
                int at = a * via->count + b;
                if (a == b)
                    alone[at] = inductance_barrel(via->height * 1e-3, via->diameter * 1e-3),
                    plane[at] = inductance_barrel(2e-3 * via->height, via->diameter * 1e-3) / 2;
                else
                    alone[at] = inductance_mutual(&here, &there),
                    plane[at] = alone[at] + inductance_image(&here, &there);
            }
        assert_close(joined(alone, (size_t)via->count), via->free_f, 2e-9);
        assert_close(joined(plane, (size_t)via->count), via->plane_f, 2e-9);
    }
}

/* The loop of a signal barrel (first) and returns joined at both ends. */
static double loop(struct layout *layout, enum inductance_ends ends, size_t harmonics) {
    struct error error = {0};
    double matrix[MOST * MOST], inductance = NAN;
    size_t count = layout->barrels.count, from[MOST], to[MOST], in = 1, out = 0;
    layout->barrels.ends = ends;
    layout->barrels.harmonics = harmonics;
    assert_ok(inductance_barrels_solve(&layout->barrels, matrix, NULL, NULL, &error));
    for (size_t i = 0; i < count; i++) {
        from[i] = i == 0 ? 1 : 0;
        to[i] = 2;
    }
    struct inductance_network network = {count, matrix, from, to, 3, 1, &in, &out};
    assert_ok(inductance_network_solve(&network, &inductance, NULL, &error));
    return PICO * inductance;
}

static void surround(struct layout *layout, int returns, double spacing) {
    layout->x[0] = layout->y[0] = 0;
    for (int i = 0; i < returns; i++) {
        layout->x[i + 1] = spacing * 1e-3 * cos(2 * M_PI * i / returns);
        layout->y[i + 1] = spacing * 1e-3 * sin(2 * M_PI * i / returns);
    }
    layout->barrels.count = (size_t)returns + 1;
    layout->barrels.x = layout->x;
    layout->barrels.y = layout->y;
}

static void test_signal_vias_with_returns(void **state) {
    (void)state;
    double worst = 0;
    for (size_t i = 0; i < COUNT(signal_vias); i++) {
        const struct signal_via *via = &signal_vias[i];
        struct layout layout = {
            .barrels = {.height = via->height * 1e-3, .diameter = via->diameter * 1e-3}};
        surround(&layout, via->returns, via->spacing);
        assert_close(loop(&layout, INDUCTANCE_FREE, 0), via->free_t, 5e-9);
        assert_close(loop(&layout, INDUCTANCE_ON_PLANE, 0), via->plane_t, 5e-9);
        assert_close(loop(&layout, INDUCTANCE_PLANES, 0), via->planes_uniform, 1e-9);
        double apart = fmin(via->spacing,
                            via->returns > 1 ? 2 * via->spacing * sin(M_PI / via->returns) : 1e3);
        size_t harmonics = inductance_barrel_harmonics(via->diameter, apart);
        double alone = loop(&layout, INDUCTANCE_FREE, harmonics);
        double plane = loop(&layout, INDUCTANCE_ON_PLANE, harmonics);
        assert_true(alone < via->free_t * (1 + 1e-8) && alone > via->free_r * (1 - 2e-8));
        assert_true(plane < via->plane_t * (1 + 1e-8) && plane > via->plane_r * (1 - 2e-8));
        worst = fmax(worst, fmax(alone / via->free_r - 1, plane / via->plane_r - 1));
        if (via->planes_proximity > 0)
            worst = fmax(worst,
                         loop(&layout, INDUCTANCE_PLANES, harmonics) / via->planes_proximity - 1);
    }
    assert_true(worst < 3e-4);
}

/* Two parallel cylinders, exact: (mu0/pi) h arcosh(s/d), however close. */
static void test_two_barrels_between_planes_are_the_two_wire_line(void **state) {
    (void)state;
    for (double ratio = 1.02; ratio < 30; ratio *= 1.5) {
        struct layout layout = {.barrels = {.height = 1e-3, .diameter = 1e-3}};
        surround(&layout, 1, ratio);
        size_t harmonics = inductance_barrel_harmonics(1, ratio);
        double exact = 400 * acosh(ratio);
        double got = loop(&layout, INDUCTANCE_PLANES, harmonics);
        assert_true(got > exact * (1 - 1e-9));
        assert_close(got, exact, ratio > 1.2 ? 3e-4 : 0.02);
    }
}

/* Thin vias: (mu0 h/2 pi) [(1 + 1/n) ln(s/r) - ln(n)/n]; a ring of many is a coaxial screen. */
static void test_thin_returns_follow_the_exact_formula(void **state) {
    (void)state;
    for (int n = 1; n <= 8; n++) {
        struct layout layout = {.barrels = {.height = 1.6e-3, .diameter = 0.02e-3}};
        surround(&layout, n, 2);
        double exact = 200 * 1.6 * ((1 + 1.0 / n) * log(200) - log(n) / n);
        assert_close(loop(&layout, INDUCTANCE_PLANES, 0), exact, 1e-10);
        assert_close(loop(&layout, INDUCTANCE_PLANES, 3), exact, 1e-3);
    }
}

static void test_all_lengths_doubled_double_the_inductance(void **state) {
    (void)state;
    for (int ends = 0; ends < 2; ends++) {
        struct layout small = {.barrels = {.height = 0.4e-3, .diameter = 0.3e-3}};
        struct layout large = {.barrels = {.height = 0.8e-3, .diameter = 0.6e-3}};
        place(&small, 5, RING, 0.5);
        place(&large, 5, RING, 1.0);
        assert_close(group(&large, (enum inductance_ends)ends, 4),
                     2 * group(&small, (enum inductance_ends)ends, 4), 1e-12);
    }
}

/* Turning the group moves numbers between cosines and sines and changes nothing. */
static void test_a_turned_group_is_the_same(void **state) {
    (void)state;
    struct layout straight = {.barrels = {.height = 1.6e-3, .diameter = 0.6e-3}}, turned = straight;
    place(&straight, 4, ROW, 0.8);
    place(&turned, 4, ROW, 0.8);
    for (int i = 0; i < 4; i++) {
        double x = turned.x[i];
        turned.x[i] = x * cos(0.7) + 3e-3;
        turned.y[i] = x * sin(0.7) - 1e-3;
    }
    assert_close(group(&turned, INDUCTANCE_ON_PLANE, 5), group(&straight, INDUCTANCE_ON_PLANE, 5),
                 1e-11);
}

static void test_more_vias_and_wider_ones_always_help(void **state) {
    (void)state;
    double before = INFINITY;
    for (int n = 1; n <= 6; n++) {
        struct layout layout = {.barrels = {.height = 1.6e-3, .diameter = 0.3e-3}};
        place(&layout, n, ROW, 0.5);
        double now = group(&layout, INDUCTANCE_ON_PLANE, 4);
        assert_true(now < before);
        before = now;
    }
    before = INFINITY;
    for (double d = 0.1; d < 0.9; d += 0.1) {
        struct layout layout = {.barrels = {.height = 1.6e-3, .diameter = d * 1e-3}};
        place(&layout, 3, ROW, 1);
        double now = group(&layout, INDUCTANCE_ON_PLANE, 4);
        assert_true(now < before);
        before = now;
    }
}

/* The coarser and the even matrix are those of problems with fewer harmonics. */
static void test_coarser_solutions_come_along(void **state) {
    (void)state;
    struct error error = {0};
    double fine[16], coarser[16], even[16], alone[16];
    struct layout layout = {.barrels = {.height = 1e-3, .diameter = 0.6e-3, .harmonics = 5}};
    place(&layout, 4, RING, 0.7);
    assert_ok(inductance_barrels_solve(&layout.barrels, fine, coarser, even, &error));
    layout.barrels.harmonics = 3;
    assert_ok(inductance_barrels_solve(&layout.barrels, alone, NULL, NULL, &error));
    for (int i = 0; i < 16; i++)
        assert_close(coarser[i], alone[i], 1e-12);
    layout.barrels.harmonics = 0;
    assert_ok(inductance_barrels_solve(&layout.barrels, alone, NULL, NULL, &error));
    for (int i = 0; i < 16; i++)
        assert_close(even[i], alone[i], 1e-12);
    assert_true(fine[0] < coarser[0] && coarser[0] < even[0]);
}

static void test_touching_barrels_are_refused(void **state) {
    (void)state;
    struct error error = {0};
    double matrix[4] = {1, 2, 3, 4};
    struct layout layout = {.barrels = {.height = 1e-3, .diameter = 0.6e-3}};
    place(&layout, 2, ROW, 0.6);
    assert_false(inductance_barrels_solve(&layout.barrels, matrix, NULL, NULL, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_true(matrix[0] == 1 && matrix[3] == 4);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_even_groups_are_the_tube_averages),
        cmocka_unit_test(test_groups_lie_between_even_and_free_currents),
        cmocka_unit_test(test_pieces_with_images_make_the_same_group),
        cmocka_unit_test(test_groups_of_closed_forms),
        cmocka_unit_test(test_signal_vias_with_returns),
        cmocka_unit_test(test_two_barrels_between_planes_are_the_two_wire_line),
        cmocka_unit_test(test_thin_returns_follow_the_exact_formula),
        cmocka_unit_test(test_all_lengths_doubled_double_the_inductance),
        cmocka_unit_test(test_a_turned_group_is_the_same),
        cmocka_unit_test(test_more_vias_and_wider_ones_always_help),
        cmocka_unit_test(test_coarser_solutions_come_along),
        cmocka_unit_test(test_touching_barrels_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
