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

/* Three and five thin strips as wide as the plane is deep: image series of the grounded slab
 * (Silvester 1968) with an edge-singular basis, converged to 1e-7; impedances of the victim from
 * the same matrices by inv(L) sqrt(L C). */
static void test_two_and_four_aggressors_agree_with_independent_solutions(void **state) {
    (void)state;
    static const struct {
        double aggressors, gap, l, victim_l, mutual_l, c, victim_c, mutual_c, even, odd;
    } cases[] = {{1, 1e-3, 419.48182e-9, 417.48897e-9, 75.68844e-9, 83.102996e-12, 84.225799e-12,
                  8.4645196e-12, 93.82569, 53.67688},
                 {2, 0.5e-3, 407.36142e-9, 406.87646e-9, 112.53619e-9, 90.867453e-12, 90.875872e-12,
                  16.533131e-12, 116.1228, 42.43399}};
    for (size_t i = 0; i < 2; i++) {
        struct named_value values[] = {{"height", 1e-3},      {"width", 1e-3},
                                       {"gap", cases[i].gap}, {"thickness", 0},
                                       {"dk", 4.3},           {"aggressors", cases[i].aggressors}};
        struct answer answer = solve(values, 6);
        assert_close(at(&answer, "inductance"), cases[i].l, 1e-4);
        assert_close(at(&answer, "victim_inductance"), cases[i].victim_l, 1e-4);
        assert_close(at(&answer, "mutual_inductance"), cases[i].mutual_l, 3e-4);
        assert_close(at(&answer, "capacitance"), cases[i].c, 1e-4);
        assert_close(at(&answer, "victim_capacitance"), cases[i].victim_c, 1e-4);
        assert_close(at(&answer, "mutual_capacitance"), cases[i].mutual_c, 1e-3);
        assert_close(at(&answer, "even_impedance"), cases[i].even, 3e-4);
        assert_close(at(&answer, "odd_impedance"), cases[i].odd, 3e-4);
        assert_close(at(&answer, "impedance"), sqrt(cases[i].l / cases[i].c), 1e-4);
    }
}

/* Weak coupling superposes (any book on crosstalk): far apart, two aggressors are twice one, four a
 * little more, whether they switch together or not. */
static void test_far_aggressors_add_up(void **state) {
    (void)state;
    double peak[3];
    for (int a = 0; a < 3; a++) {
        struct named_value values[] = {{"height", 0.2e-3}, {"width", 0.3e-3}, {"gap", 2e-3},
                                       {"aggressors", a},  {"length", 0.1},   {"edge", 1e-9}};
        struct answer answer = solve(values, 6);
        peak[a] = at(&answer, "near_end_peak");
    }
    assert_close(peak[1], 2 * peak[0], 1e-2);
    assert_true(peak[2] > peak[1] && peak[2] < 1.4 * peak[1]);
}

static const struct named_value ringing[] = {{"height", 1.6e-3},
                                             {"width", 0.3e-3},
                                             {"gap", 1e-3},
                                             {"length", 0.1},
                                             {"source", 30},
                                             {"load", INFINITY},
                                             {"load_capacitance", 5e-12},
                                             {"victim_source", 30},
                                             {"victim_load", INFINITY},
                                             {"victim_load_capacitance", 5e-12}};
enum { RINGING = sizeof ringing / sizeof *ringing };

/* By definition: edge-sensitive and one edge is the receiver's peak; later instants see no more, a
 * sequence no less; a receiver at the other end counts that end. */
static void test_a_settled_victim_counts_what_is_left(void **state) {
    (void)state;
    static const double settlings[] = {0, 2e-9, 5e-9, 10e-9, 20e-9, 60e-9};
    for (int receiver = 0; receiver < 2; receiver++)
        for (int aggressors = 0; aggressors < 3; aggressors++) {
            double before[2] = {INFINITY, INFINITY};
            for (size_t k = 0; k < sizeof settlings / sizeof *settlings; k++)
                for (int many = 0; many < 2; many++) {
                    struct named_value values[RINGING + 4];
                    memcpy(values, ringing, sizeof ringing);
                    values[RINGING] = (struct named_value){"settling", settlings[k]};
                    values[RINGING + 1] = (struct named_value){"bit_time", many ? 8e-9 : 0};
                    values[RINGING + 2] = (struct named_value){"receiver", receiver};
                    values[RINGING + 3] = (struct named_value){"aggressors", aggressors};
                    struct answer answer = solve(values, RINGING + 4);
                    double noise = at(&answer, "noise_peak");
                    if (k == 0 && !many)
                        assert_close(noise, at(&answer, "receiver_peak"), 0);
                    if (k == 0 && many)
                        assert_true(noise <= at(&answer, "pattern_peak") &&
                                    noise >= at(&answer, "receiver_peak"));
                    assert_true(noise <= before[many] * (1 + 2e-3));
                    assert_true(noise >= 0 && (!many || noise >= before[0] * (1 - 2e-3)));
                    before[many] = noise;
                }
            assert_true(before[0] < 0.02); /* after 60 ns a hundredth of the swing is not left */
        }
}

/* Independent aggressors are never better than a bus; one on each side, alike, the same. */
static void test_switching_matters_with_four(void **state) {
    (void)state;
    double noise[3][2];
    for (int aggressors = 0; aggressors < 3; aggressors++)
        for (int independent = 0; independent < 2; independent++) {
            struct named_value values[RINGING + 4];
            memcpy(values, ringing, sizeof ringing);
            values[RINGING] = (struct named_value){"settling", 3e-9};
            values[RINGING + 1] = (struct named_value){"bit_time", 8e-9};
            values[RINGING + 2] = (struct named_value){"aggressors", aggressors};
            values[RINGING + 3] = (struct named_value){"switching", independent};
            struct answer answer = solve(values, RINGING + 4);
            noise[aggressors][independent] = at(&answer, "noise_peak");
        }
    assert_true(noise[0][0] == noise[0][1]);
    assert_close(noise[1][1], noise[1][0], 1e-9);
    assert_true(noise[2][1] >= noise[2][0] * (1 - 1e-6));
    assert_true(noise[1][0] > noise[0][0] && noise[2][0] > noise[1][0]);
}

/* A strip that is tied everywhere stands on both sides of the victim and shields it on both. */
static void test_strips_stand_on_both_sides(void **state) {
    (void)state;
    double ratio[2];
    for (int aggressors = 0; aggressors < 2; aggressors++) {
        double peak[2];
        for (int tied = 0; tied < 2; tied++) {
            struct named_value values[] = {
                {"height", 1.6e-3},    {"width", 0.3e-3},         {"gap", 2e-3},
                {"between", 3 * tied}, {"between_width", 0.5e-3}, {"aggressors", aggressors}};
            struct answer answer = solve(values, 6);
            peak[tied] = at(&answer, "near_end_peak");
        }
        ratio[aggressors] = peak[1] / peak[0];
    }
    assert_true(ratio[0] < 0.7 && ratio[1] < 0.7);
    assert_close(ratio[1], ratio[0], 0.25); /* with a strip on one side only: 1.8 */
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_pair_over_a_near_plane_agrees_with_independent_solutions),
        cmocka_unit_test(test_the_strip_between_four_ways),
        cmocka_unit_test(test_unequal_widths_both_ways),
        cmocka_unit_test(test_a_receiver_at_the_other_end_sees_the_other_peak),
        cmocka_unit_test(test_overlapping_copper_is_refused),
        cmocka_unit_test(test_two_and_four_aggressors_agree_with_independent_solutions),
        cmocka_unit_test(test_far_aggressors_add_up),
        cmocka_unit_test(test_a_settled_victim_counts_what_is_left),
        cmocka_unit_test(test_switching_matters_with_four),
        cmocka_unit_test(test_strips_stand_on_both_sides),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
