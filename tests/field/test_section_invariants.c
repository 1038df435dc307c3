/* What any right answer obeys, whatever its digits. */
#include "check.h"
#include "groundrules/section.h"

#include <lapacke.h>
#include <string.h>

static struct section_problem three(double height, double dk, double gap) {
    return (struct section_problem){.height = height,
                                    .dk = dk,
                                    .count = 3,
                                    .conductors = {{-gap / 2 - 0.5e-3, 0.3e-3, 35e-6, 0},
                                                   {-0.1e-3, 0.2e-3, 35e-6, 0},
                                                   {gap / 2 + 0.2e-3, 0.3e-3, 35e-6, 0}}};
}

static const double heights[] = {0.15e-3, 0.7e-3, 1.6e-3}, gaps[] = {0.6e-3, 2e-3, 9e-3};

typedef void case_check(const struct section_problem *problem,
                        const struct section_solution *solution);

static void for_every_case(case_check *check) {
    struct error error = {0};
    for (size_t h = 0; h < 3; h++)
        for (size_t g = 0; g < 3; g++) {
            struct section_problem problem = three(heights[h], 4.3, gaps[g]);
            struct section_solution solution;
            assert_ok(section_solve(&problem, &solution, &error));
            check(&problem, &solution);
        }
}

static void row_sums(const struct section_problem *problem, const struct section_solution *s) {
    (void)problem;
    for (size_t i = 0; i < 3; i++) {
        double sum = 0;
        for (size_t j = 0; j < 3; j++) {
            assert_true(i == j ? s->capacitance[i * 3 + j] > 0 : s->capacitance[i * 3 + j] < 0);
            assert_true(s->inductance[i * 3 + j] > 0);
            assert_true(s->capacitance[i * 3 + j] == s->capacitance[j * 3 + i]);
            assert_true(s->inductance[i * 3 + j] == s->inductance[j * 3 + i]);
            sum += s->capacitance[i * 3 + j];
        }
        assert_true(sum > 0); /* something always goes to the plane */
    }
}

static void test_maxwell_signs_symmetry_and_row_sums(void **state) {
    (void)state;
    for_every_case(row_sums);
}

/* C v = lambda C0 v: each mode's effective permittivity lies between air and the board. */
static void effective_permittivities(const struct section_problem *problem,
                                     const struct section_solution *s) {
    double a[9], b[9], lambda[3];
    memcpy(a, s->capacitance, sizeof a);
    memcpy(b, s->vacuum_capacitance, sizeof b);
    assert_int_equal(LAPACKE_dsygv(LAPACK_ROW_MAJOR, 1, 'N', 'U', 3, a, 3, b, 3, lambda), 0);
    assert_true(lambda[0] > (1 + problem->dk) / 2 * 0.75 && lambda[0] > 1);
    assert_true(lambda[2] < problem->dk);
}

static void test_modes_lie_between_air_and_board(void **state) {
    (void)state;
    for_every_case(effective_permittivities);
}

/* The odd mode of two equal traces has no potential and no flux on the strip midway between them:
 * how the strip is tied cannot matter. */
static void odd_mode(const struct section_problem *problem, const struct section_solution *s) {
    (void)problem;
    static const enum section_tie middle[] = {SECTION_TIED, SECTION_FLOATING, SECTION_TIED_ONE_END};
    double capacitance = NAN, inductance = NAN;
    for (size_t k = 0; k < 3; k++) {
        enum section_tie ties[] = {SECTION_SIGNAL, middle[k], SECTION_SIGNAL};
        struct section_solution reduced;
        struct error error = {0};
        assert_ok(section_reduce(s, ties, &reduced, &error));
        double c = reduced.capacitance[0] - reduced.capacitance[1];
        double l = reduced.inductance[0] - reduced.inductance[1];
        if (k > 0) {
            assert_close(c, capacitance, 1e-10);
            assert_close(l, inductance, 1e-10);
        }
        capacitance = c;
        inductance = l;
    }
}

static void test_the_odd_mode_is_blind_to_the_strip_between(void **state) {
    (void)state;
    for_every_case(odd_mode);
}

/* Per metre: only ratios of lengths count. */
static void test_doubling_every_length_changes_nothing(void **state) {
    (void)state;
    struct error error = {0};
    struct section_problem small = three(0.7e-3, 4.3, 2e-3), large = small;
    large.height *= 2;
    for (size_t i = 0; i < 3; i++) {
        large.conductors[i].left *= 2;
        large.conductors[i].width *= 2;
        large.conductors[i].thickness *= 2;
    }
    struct section_solution a, b;
    assert_ok(section_solve(&small, &a, &error));
    assert_ok(section_solve(&large, &b, &error));
    for (size_t i = 0; i < 9; i++) {
        assert_close(a.capacitance[i], b.capacitance[i], 1e-9);
        assert_close(a.inductance[i], b.inductance[i], 1e-9);
    }
}

/* In air every velocity is that of light: L C = mu0 eps0. */
static void test_in_air_waves_travel_at_the_speed_of_light(void **state) {
    (void)state;
    struct error error = {0};
    struct section_problem problem = three(0.7e-3, 1, 2e-3);
    struct section_solution s;
    assert_ok(section_solve(&problem, &s, &error));
    for (size_t i = 0; i < 3; i++)
        for (size_t j = 0; j < 3; j++) {
            double sum = 0;
            for (size_t k = 0; k < 3; k++)
                sum += s.inductance[i * 3 + k] * s.capacitance[k * 3 + j];
            assert_near(sum / (SECTION_MU_0 * SECTION_EPSILON_0), i == j, 1e-4);
        }
}

/* Two traces far from each other are two single traces. */
static void test_far_traces_are_single_traces(void **state) {
    (void)state;
    struct error error = {0};
    struct section_problem single = {
        .height = 0.2e-3, .dk = 4.3, .count = 1, .conductors = {{0, 0.3e-3, 35e-6, 0}}};
    struct section_problem pair = single;
    pair.count = 2;
    pair.conductors[1] = (struct section_conductor){0.2, 0.3e-3, 35e-6, 0};
    struct section_solution one, two;
    assert_ok(section_solve(&single, &one, &error));
    assert_ok(section_solve(&pair, &two, &error));
    assert_close(two.capacitance[0], one.capacitance[0], 2e-6);
    assert_close(two.inductance[0], one.inductance[0], 2e-6);
    assert_true(two.inductance[1] < 1e-5 * two.inductance[0]);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_maxwell_signs_symmetry_and_row_sums),
        cmocka_unit_test(test_modes_lie_between_air_and_board),
        cmocka_unit_test(test_the_odd_mode_is_blind_to_the_strip_between),
        cmocka_unit_test(test_doubling_every_length_changes_nothing),
        cmocka_unit_test(test_in_air_waves_travel_at_the_speed_of_light),
        cmocka_unit_test(test_far_traces_are_single_traces),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
