#include "point.h"

#include <string.h>

static const char *const model = "coupled-lines";

/* C. R. Paul, Analysis of Multiconductor Transmission Lines, 2nd ed., sec. 9.3.1: ribbon cable, 2
 * m, 50 ohm at all ends, 1 V, 20 ns.  The book's near-end peak is "around 110 mV"; the same
 * equations summed as a Fourier series of 1500 harmonics give 112.92 and -108.93 mV. */
static void test_pauls_ribbon_cable(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"inductance", 1.0154e-6},
                                   {"victim_inductance", 0.7485e-6},
                                   {"mutual_inductance", 0.5077e-6},
                                   {"capacitance", 24.982e-12},
                                   {"victim_capacitance", 37.432e-12},
                                   {"mutual_capacitance", 18.716e-12},
                                   {"length", 2.0},
                                   {"swing", 1.0},
                                   {"edge", 20e-9}};
    assert_ok(try_point(model, values, 9, &answer, &error));
    assert_close(output_of(model, &answer, "near_end_peak"), 112.92e-3, 5e-3);
    assert_close(output_of(model, &answer, "far_end_peak"), 108.93e-3, 5e-3);
}

/* By definition: without a bit time both sequences are the single edge; with one they are no less,
 * and the clocked one is no more than the free one. */
static void test_sequences_bound_the_single_edge(void **state) {
    (void)state;
    static const double bit_times[] = {0, 3e-9, 8e-9, 25e-9};
    for (size_t k = 0; k < 4; k++) {
        struct error error = {0};
        struct answer answer;
        struct named_value values[] = {{"inductance", 0.75e-6},
                                       {"mutual_inductance", 0.1e-6},
                                       {"capacitance", 43e-12},
                                       {"mutual_capacitance", 2e-12},
                                       {"length", 0.15},
                                       {"source", 25},
                                       {"victim_source", 25},
                                       {"load", INFINITY},
                                       {"victim_load", INFINITY},
                                       {"load_capacitance", 5e-12},
                                       {"victim_load_capacitance", 5e-12},
                                       {"edge", 1.5e-9},
                                       {"bit_time", bit_times[k]}};
        assert_ok(try_point(model, values, 13, &answer, &error));
        double single = output_of(model, &answer, "worst_peak");
        double pattern = output_of(model, &answer, "pattern_peak");
        double clocked = output_of(model, &answer, "clocked_peak");
        if (bit_times[k] == 0)
            assert_true(pattern == single && clocked == single);
        assert_true(pattern >= single * (1 - 2e-3));
        assert_true(clocked <= pattern * (1 + 1e-9));
    }
}

static void test_coupling_beyond_the_geometric_mean_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"inductance", 1e-6},
                                   {"mutual_inductance", 1.1e-6},
                                   {"capacitance", 25e-12},
                                   {"mutual_capacitance", 1e-12}};
    assert_false(try_point(model, values, 4, &answer, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "mutual_inductance"));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_pauls_ribbon_cable),
        cmocka_unit_test(test_sequences_bound_the_single_edge),
        cmocka_unit_test(test_coupling_beyond_the_geometric_mean_is_refused)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
