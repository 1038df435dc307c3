#include "point.h"

#include <string.h>

static const char *const model = "coupled-traces";

static struct answer solve(const struct named_value *values, size_t count) {
    struct error error = {0};
    struct answer answer;
    assert_ok(try_point(model, values, count, &answer, &error));
    return answer;
}

static double at(const struct answer *answer, const char *output) {
    return output_of(model, answer, output);
}

/* Independent reference values: boundary elements and finite elements agree to 2e-6. */
static void test_a_pair_over_a_near_plane_agrees_with_independent_solutions(void **state) {
    (void)state;
    struct named_value values[] = {
        {"height", 0.19e-3}, {"width", 0.3e-3}, {"gap", 0.3e-3}, {"thickness", 35e-6}, {"dk", 4.3}};
    struct answer answer = solve(values, 5);
    assert_close(at(&answer, "even_impedance"), 58.52169, 1e-4);
    assert_close(at(&answer, "odd_impedance"), 48.063404, 1e-4);
    assert_close(at(&answer, "inductive_coefficient"), 0.13998092, 3e-4);
    assert_close(at(&answer, "capacitive_coefficient"), 0.055911911, 1e-3);
    assert_close(at(&answer, "backward_coefficient"), 0.048973209, 1e-3);
    /* Half of (K_C - K_L) times the delay of the quiet line. */
    assert_close(at(&answer, "forward_coefficient"),
                 0.5 * -0.084069012 * sqrt(311.84784e-9 * 109.94971e-12), 1e-3);
    assert_close(at(&answer, "mutual_capacitance"), 6.1474984e-12, 1e-3);
    assert_close(at(&answer, "mutual_inductance"), 43.652749e-9, 1e-3);
}

/* The same source; centre strip 0.5 mm in a gap of 1.1 mm over 1.6 mm, four ways. */
static void test_the_strip_between_four_ways(void **state) {
    (void)state;
    static const struct {
        double between, even, inductive, capacitive;
    } cases[] = {{1, 155.808, 0.29110829, 0.21687259},
                 {2, 131.165, 0.29110829, 0.048162905},
                 {3, 104.0413, 0.068004883, 0.048162905}};
    for (size_t i = 0; i < 3; i++) {
        struct named_value values[] = {
            {"height", 1.6e-3},       {"width", 0.3e-3}, {"gap", 1.1e-3},
            {"thickness", 35e-6},     {"dk", 4.3},       {"between", cases[i].between},
            {"between_width", 0.5e-3}};
        struct answer answer = solve(values, 7);
        assert_close(at(&answer, "even_impedance"), cases[i].even, 3e-4);
        assert_close(at(&answer, "inductive_coefficient"), cases[i].inductive, 1e-3);
        assert_close(at(&answer, "capacitive_coefficient"), cases[i].capacitive, 1e-3);
        /* In odd mode the strip lies on the plane of symmetry: its tie cannot matter. */
        assert_close(at(&answer, "odd_impedance"), 92.617, 3e-4);
    }
}

/* The same source: 0.2 mm and 1 mm wide, 0.4 mm apart, over 1.6 mm.  The inductive part is over the
 * aggressor's inductance, the capacitive part over the victim's capacitance. */
static void test_unequal_widths_both_ways(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 1.6e-3}, {"width", 0.2e-3},    {"victim_width", 1e-3},
                                   {"gap", 0.4e-3},    {"thickness", 35e-6}, {"dk", 4.3}};
    struct answer narrow = solve(values, 6);
    assert_close(at(&narrow, "inductive_coefficient"), 0.34738879, 1e-3);
    assert_close(at(&narrow, "capacitive_coefficient"), 0.27682042, 1e-3);
    assert_close(at(&narrow, "backward_coefficient"), 0.1560523, 1e-3);
    assert_true(isnan(at(&narrow, "even_impedance")));
    values[1].value = 1e-3;
    values[2].value = 0.2e-3;
    struct answer wide = solve(values, 6);
    assert_close(at(&wide, "inductive_coefficient"), 0.5238539, 1e-3);
    assert_close(at(&wide, "backward_coefficient"), 0.24341868, 1e-3);
}

static void test_a_receiver_at_the_other_end_sees_the_other_peak(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 1.6e-3}, {"width", 0.3e-3},     {"gap", 0.6e-3},
                                   {"receiver", 0},    {"victim_source", 50}, {"victim_load", 50}};
    struct answer far = solve(values, 6);
    values[3].value = 1;
    struct answer near = solve(values, 6);
    assert_close(at(&far, "receiver_peak"), at(&far, "far_end_peak"), 0.0);
    assert_close(at(&near, "receiver_peak"), at(&near, "near_end_peak"), 0.0);
    /* Equal resistances at both ends: turning the victim round changes nothing else. */
    assert_close(at(&near, "near_end_peak"), at(&far, "near_end_peak"), 1e-12);
}

static void test_overlapping_copper_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", 1.6e-3},
                                   {"width", 0.3e-3},
                                   {"gap", 0.3e-3},
                                   {"between", 3},
                                   {"between_width", 0.4e-3}};
    assert_false(try_point(model, values, 5, &answer, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "overlaps"));
    struct error second = {0};
    assert_false(try_point(model, values, 4, &answer, &second));
    assert_non_null(strstr(second.message, "between_width"));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_pair_over_a_near_plane_agrees_with_independent_solutions),
        cmocka_unit_test(test_the_strip_between_four_ways),
        cmocka_unit_test(test_unequal_widths_both_ways),
        cmocka_unit_test(test_a_receiver_at_the_other_end_sees_the_other_peak),
        cmocka_unit_test(test_overlapping_copper_is_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
