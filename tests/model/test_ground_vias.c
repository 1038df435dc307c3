/* ground-vias and signal-via against vias_reference.h and the figures of the trade. */
#include "point.h"

#include "../field/vias_reference.h"

#include <string.h>

#define COUNT(table) (sizeof(table) / sizeof *(table))
#define OF(output) output_of("ground-vias", &answer, output)

static struct answer vias(double height, double diameter, double count, double pitch,
                          double arrangement, double far_end) {
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {
        {"height", height * 1e-3},   {"via_diameter", diameter * 1e-3}, {"vias", count},
        {"via_pitch", pitch * 1e-3}, {"arrangement", arrangement},      {"far_end", far_end}};
    assert_ok(try_point("ground-vias", values, 6, &answer, &error));
    return answer;
}

static void test_groups_lie_between_even_and_free_currents(void **state) {
    (void)state;
    size_t compared = 0;
    for (size_t i = 0; i < COUNT(via_groups); i++) {
        const struct via_group *via = &via_groups[i];
        if (via->arrangement == GRID || via->count == 1)
            continue;
        for (int free = 0; free < 2; free++) {
            struct answer answer = vias(via->height, via->diameter, via->count, via->pitch,
                                        via->arrangement == RING, free);
            double even = free ? via->free_t : via->plane_t,
                   least = free ? via->free_r : via->plane_r;
            double got = 1e12 * OF("inductance");
            assert_true(got < even * (1 + 1e-8) && got > least * (1 - 2e-8));
            assert_close(1e12 * OF("uniform_inductance"), even, 1e-8);
            size_t index = model_output_index(model_find("ground-vias"), "inductance");
            assert_true(got - least <= 1e12 * answer.errors[index] + 1e-8 * got);
            compared++;
        }
    }
    assert_true(compared > 400);
}

/* A grid of six is two rows of three; of four a square, which is a ring. */
static void test_grids(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(via_groups); i++) {
        const struct via_group *via = &via_groups[i];
        if (via->arrangement != GRID)
            continue;
        struct answer answer = vias(via->height, via->diameter, 6, via->pitch, 2, 0);
        assert_close(1e12 * OF("uniform_inductance"), via->plane_t, 1e-8);
    }
    struct answer answer = vias(1.6, 0.3, 4, 1, 2, 0), ring = vias(1.6, 0.3, 4, 1, 1, 0);
    assert_close(OF("inductance"), output_of("ground-vias", &ring, "inductance"), 1e-9);
}

/* Common practice, no source: 500 and 12 pH for 0.6 mm; Rosa 1908 gives 495 and 11.7.  What a
 * circuit sees beside them. */
static void test_figures_of_the_trade_are_the_barrel_formula(void **state) {
    (void)state;
    struct answer answer = vias(1.6, 0.6, 3, 1, 0, 0);
    assert_close(1e12 * OF("barrel_inductance"), 495, 0.002);
    assert_near(1e12 * OF("single_inductance"), 690, 10);
    assert_near(1e12 * OF("inductance"), 440, 15);
    answer = vias(0.19, 0.6, 1, 1, 0, 0);
    assert_close(1e12 * OF("barrel_inductance"), 11.7, 0.005);
    assert_near(1e12 * OF("single_inductance"), 25, 1);
    answer = vias(1.6, 0.6, 3, 1, 0, 1);
    assert_near(1e12 * OF("inductance"), 290, 10);
}

static void test_benefits_are_what_is_taken_off(void **state) {
    (void)state;
    struct answer three = vias(1.6, 0.3, 3, 1, 0, 0), answer = vias(1.6, 0.3, 2, 1, 0, 0);
    double after = output_of("ground-vias", &three, "inductance");
    assert_close(OF("next_benefit"), 1 - after / OF("inductance"), 1e-9);
    assert_close(OF("benefit"), 1 - OF("inductance") / OF("single_inductance"), 1e-12);
    assert_close(OF("ideal_benefit"), 0.5, 1e-12);
    assert_close(OF("largest_share"), 0.5, 1e-9);
    assert_close(OF("reactance"), 2 * M_PI * 100e6 * OF("inductance"), 1e-12);
    double middle = output_of("ground-vias", &three, "smallest_share");
    double outer = output_of("ground-vias", &three, "largest_share");
    assert_close(2 * outer + middle, 1, 1e-9);
    assert_true(outer > middle);
    answer =
        vias(1.6, 0.3, 4, 100, 0, 1); /* far apart in free space they are all but independent */
    assert_close(OF("benefit"), OF("ideal_benefit"), 0.02);
}

static void test_one_via_has_no_neighbours(void **state) {
    (void)state;
    struct answer answer = vias(1.6, 0.6, 1, 0.3, 0, 0); /* a pitch without room for a second one */
    assert_close(OF("inductance"), OF("single_inductance"), 1e-9);
    assert_true(isnan(OF("next_benefit")));
    assert_true(OF("benefit") == 0.0 || fabs(OF("benefit")) < 1e-12);
}

static void refuse(const char *model, const struct named_value *values, size_t count,
                   const char *said) {
    struct error error = {0};
    struct answer answer;
    assert_false(try_point(model, values, count, &answer, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    if (strstr(error.message, said) == NULL) {
        print_error("\"%s\" lacks \"%s\"\n", error.message, said);
        fail();
    }
}

static void test_impossible_groups_are_refused_with_the_smallest_legal_value(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 1.6e-3},
                                   {"via_diameter", 0.6e-3},
                                   {"vias", 3},
                                   {"via_pitch", 0.6e-3},
                                   {"arrangement", 0}};
    refuse("ground-vias", values, 5, "smallest allowed is 0.63 mm");
    values[3].value = 0.63e-3;
    struct error error = {0};
    struct answer answer;
    assert_ok(try_point("ground-vias", values, 5, &answer, &error));
    values[2].value = 2.5;
    refuse("ground-vias", values, 5, "whole number");
    values[2].value = 1;
    values[4].value = 1;
    refuse("ground-vias", values, 5, "smallest allowed is 2");
    values[0].value = 0;
    refuse("ground-vias", values, 5, "height is 0 mm; allowed: 10 um");
    struct named_value around[] = {{"height", 1.6e-3},
                                   {"via_diameter", 0.6e-3},
                                   {"return_vias", 8},
                                   {"return_distance", 0.8e-3}};
    refuse("signal-via", around, 4, "smallest allowed is 0.823135 mm");
    around[2].value = 1;
    around[3].value = 0.5e-3;
    refuse("signal-via", around, 4, "smallest allowed is 0.63 mm");
}

static double loop_of(const struct signal_via *via, double planes, const char *output,
                      double *error_of) {
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", via->height * 1e-3},
                                   {"via_diameter", via->diameter * 1e-3},
                                   {"return_vias", via->returns},
                                   {"return_distance", via->spacing * 1e-3},
                                   {"planes", planes}};
    assert_ok(try_point("signal-via", values, 5, &answer, &error));
    *error_of = 1e12 * answer.errors[model_output_index(model_find("signal-via"), output)];
    return 1e12 * output_of("signal-via", &answer, output);
}

static void test_signal_vias(void **state) {
    (void)state;
    for (size_t i = 0; i < COUNT(signal_vias); i++) {
        const struct signal_via *via = &signal_vias[i];
        double stated, unused;
        double open = loop_of(via, 0, "loop_inductance", &stated);
        assert_true(open < via->free_t * (1 + 1e-8) && open > via->free_r * (1 - 2e-8));
        assert_true(open - via->free_r < stated + 1e-8 * open);
        assert_close(loop_of(via, 0, "uniform_inductance", &unused), via->free_t, 1e-8);
        /* (mu0 h/2 pi) [(1 + 1/n) ln(s/r) - ln(n)/n], exact for thin vias. */
        double between = loop_of(via, 1, "loop_inductance", &stated);
        assert_close(loop_of(via, 1, "uniform_inductance", &unused), via->planes_uniform, 1e-8);
        assert_true(between < via->planes_uniform);
        if (via->planes_proximity > 0) { /* two cylinders, exact */
            assert_close(between, via->planes_proximity, 3e-4);
            assert_true(between - via->planes_proximity < stated);
        }
    }
}

/* Two cylinders that all but touch: (mu0/pi) h arcosh(s/d), within what is stated. */
static void test_stated_error_covers_the_exact_pair_at_any_distance(void **state) {
    (void)state;
    for (double ratio = 1.05; ratio < 40; ratio *= 1.1) {
        struct signal_via via = {
            .returns = 1, .spacing = 0.6 * ratio, .diameter = 0.6, .height = 1};
        double stated, got = loop_of(&via, 1, "loop_inductance", &stated);
        double exact = 400 * acosh(ratio);
        assert_true(got > exact * (1 - 1e-9) && got - exact < stated);
        assert_true(stated < (ratio > 1.3 ? 5e-3 : 0.03) * exact);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_groups_lie_between_even_and_free_currents),
        cmocka_unit_test(test_grids),
        cmocka_unit_test(test_figures_of_the_trade_are_the_barrel_formula),
        cmocka_unit_test(test_benefits_are_what_is_taken_off),
        cmocka_unit_test(test_one_via_has_no_neighbours),
        cmocka_unit_test(test_impossible_groups_are_refused_with_the_smallest_legal_value),
        cmocka_unit_test(test_signal_vias),
        cmocka_unit_test(test_stated_error_covers_the_exact_pair_at_any_distance),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
