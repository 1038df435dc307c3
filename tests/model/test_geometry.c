/* Mask, a plane above, a plane that ends and etched copper through the models, solved. */
#include "point.h"

static struct answer solve(const char *model, const struct named_value *values, size_t count) {
    struct error error = {0};
    struct answer answer;
    assert_ok(try_point(model, values, count, &answer, &error));
    return answer;
}

static double pair_at(const struct answer *answer, const char *output) {
    return output_of("coupled-traces", answer, output);
}

/* Independent: boundary elements by total charge and finite elements agree to 1e-6. */
static void test_a_coated_pair_agrees_with_independent_solutions(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 0.8e-3},   {"width", 0.2e-3}, {"gap", 0.2e-3},
                                   {"thickness", 35e-6}, {"dk", 4.6},       {"mask", 25e-6},
                                   {"mask_dk", 3.5}};
    struct answer coated = solve("coupled-traces", values, 7);
    assert_close(pair_at(&coated, "even_impedance"), 153.95889, 1e-4);
    assert_close(pair_at(&coated, "odd_impedance"), 59.417896, 1e-4);
    assert_close(pair_at(&coated, "capacitance"), 67.687235e-12, 1e-4);
    assert_close(pair_at(&coated, "mutual_capacitance"), 28.417449e-12, 2e-4);
    assert_close(pair_at(&coated, "inductance"), 635.06067e-9, 1e-4);
    assert_close(pair_at(&coated, "mutual_inductance"), 295.76439e-9, 1e-4);
    struct answer bare = solve("coupled-traces", values, 5);
    assert_close(pair_at(&bare, "even_impedance"), 157.535, 1e-4);
    assert_close(pair_at(&bare, "odd_impedance"), 63.502, 1e-4);
}

/* The same source, two planes 0.5 mm apart; and exactly (Cohn 1954, Oberhettinger and Magnus): a
 * thin strip half as wide as the planes are apart has Z0 sqrt(er) = 100.432451 ohm. */
static void test_traces_between_planes(void **state) {
    (void)state;
    struct named_value pair[] = {{"height", 0.241e-3}, {"width", 0.15e-3}, {"gap", 0.2e-3},
                                 {"thickness", 18e-6}, {"dk", 4.2},        {"cover", 0.259e-3},
                                 {"cover_dk", 4.2}};
    struct answer answer = solve("coupled-traces", pair, 7);
    assert_close(pair_at(&answer, "even_impedance"), 64.410754, 1e-4);
    assert_close(pair_at(&answer, "odd_impedance"), 49.586712, 1e-4);
    assert_close(pair_at(&answer, "inductive_coefficient"), 0.13003835, 3e-4);
    /* One dielectric all round: no far end. */
    assert_near(pair_at(&answer, "forward_coefficient"), 0, 1e-13);
    struct named_value strip[] = {{"height", 0.5e-3}, {"width", 0.5e-3}, {"thickness", 0},
                                  {"dk", 2.2},        {"cover", 0.5e-3}, {"cover_dk", 2.2}};
    struct answer thin = solve("trace", strip, 6);
    assert_close(output_of("trace", &thin, "impedance"), 100.432451 / sqrt(2.2), 1e-4);
}

/* Far away the plane's edge is no edge; towards it inductance and coupling rise. */
static void test_a_plane_that_ends_goes_over_into_one_that_does_not(void **state) {
    (void)state;
    static const double distances[] = {20e-3, 2e-3, 0.6e-3, 0.2e-3};
    for (int aggressors = 0; aggressors < 3; aggressors++) {
        struct named_value values[] = {{"height", 0.2e-3}, {"width", 0.3e-3},
                                       {"gap", 0.4e-3},    {"aggressors", aggressors},
                                       {"length", 0.05},   {"edge_distance", 0}};
        struct answer whole = solve("coupled-traces", values, 6);
        double before = 0;
        for (size_t k = 0; k < sizeof distances / sizeof *distances; k++) {
            values[5].value = distances[k];
            struct answer ends = solve("coupled-traces", values, 6);
            double near = pair_at(&ends, "near_end_peak");
            if (k == 0) {
                assert_close(near, pair_at(&whole, "near_end_peak"), 2e-3);
                assert_close(pair_at(&ends, "impedance"), pair_at(&whole, "impedance"), 2e-4);
                assert_int_equal(ends.flags, whole.flags);
            } else if (k >= 2) {
                assert_int_not_equal(ends.flags, whole.flags);
            }
            assert_true(near > before * (1 - 1e-3));
            before = near;
        }
        assert_true(before > 1.02 * pair_at(&whole, "near_end_peak"));
    }
}

/* Less copper at the top: less capacitance, more inductance, less coupling; a little. */
static void test_etched_copper_is_a_little_less(void **state) {
    (void)state;
    struct named_value values[] = {
        {"height", 0.2e-3}, {"width", 0.15e-3}, {"gap", 0.15e-3}, {"etch", 0}};
    struct answer square = solve("coupled-traces", values, 4);
    values[3].value = 20e-6;
    struct answer etched = solve("coupled-traces", values, 4);
    assert_true(pair_at(&etched, "capacitance") < pair_at(&square, "capacitance"));
    assert_true(pair_at(&etched, "mutual_capacitance") < pair_at(&square, "mutual_capacitance"));
    assert_close(pair_at(&etched, "impedance"), pair_at(&square, "impedance"), 5e-2);
    assert_true(pair_at(&etched, "impedance") > pair_at(&square, "impedance"));
}

/* With a plane that ends far away the set is followed as it is, without one it is folded. */
static void test_folded_and_full_sets_agree_through_the_model(void **state) {
    (void)state;
    for (int independent = 0; independent < 2; independent++) {
        struct named_value values[] = {{"height", 0.2e-3},
                                       {"width", 0.3e-3},
                                       {"gap", 0.4e-3},
                                       {"aggressors", 2},
                                       {"mask", 20e-6},
                                       {"load", INFINITY},
                                       {"victim_source", 30},
                                       {"victim_load", 1e3},
                                       {"load_capacitance", 4e-12},
                                       {"bit_time", 4e-9},
                                       {"switching", independent},
                                       {"edge_distance", 0}};
        struct answer folded = solve("coupled-traces", values, 12);
        values[11].value = 50e-3;
        struct answer full = solve("coupled-traces", values, 12);
        assert_close(pair_at(&full, "near_end_peak"), pair_at(&folded, "near_end_peak"), 3e-3);
        assert_close(pair_at(&full, "far_end_peak"), pair_at(&folded, "far_end_peak"), 3e-3);
        assert_close(pair_at(&full, "pattern_peak"), pair_at(&folded, "pattern_peak"), 3e-3);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_coated_pair_agrees_with_independent_solutions),
        cmocka_unit_test(test_traces_between_planes),
        cmocka_unit_test(test_a_plane_that_ends_goes_over_into_one_that_does_not),
        cmocka_unit_test(test_etched_copper_is_a_little_less),
        cmocka_unit_test(test_folded_and_full_sets_agree_through_the_model),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
