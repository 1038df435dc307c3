#include "point.h"

#include <string.h>

/* Loss in the two models of coupled traces. */

/* Independent reference, numerical inversion of the Laplace transform (Wilcox 1978), good to a
 * thousandth: 100 mm over 1.6 mm, gap 0.6 mm, thin strips, 3.3 V; 50 ohm at all ends, or 30 ohm and
 * 5 pF.  The reference has a mutual skin resistance too, and its mutual capacitance follows the
 * dielectric by less than its own does: what the model's inputs do not know, below half a percent
 * here. */
static void test_given_lines_agree_with_the_laplace_transform(void **state) {
    (void)state;
    static const double inductance[2] = {7.48386288e-07, 2.64395518e-07},
                        capacitance[2] = {4.72582941e-11, -1.4041591e-11};
    const double share = 3.92942433e-11 / capacitance[0];
    static const struct {
        int logic;
        double edge, near, far; /* s, mV */
    } peaks[] = {{0, 5e-10, 247.333, 218.356},
                 {0, 1e-09, 236.527, 201.85},
                 {1, 5e-10, 301.39, 940.573},
                 {1, 1e-09, 246.702, 863.954}};
    for (size_t k = 0; k < sizeof peaks / sizeof *peaks; k++) {
        struct error error = {0};
        struct answer answer;
        double driver = peaks[k].logic ? 30 : 50, load = peaks[k].logic ? INFINITY : 50;
        double input = peaks[k].logic ? 5e-12 : 0;
        struct named_value values[] = {{"inductance", inductance[0]},
                                       {"mutual_inductance", inductance[1]},
                                       {"capacitance", capacitance[0]},
                                       {"mutual_capacitance", -capacitance[1]},
                                       {"length", 0.1},
                                       {"edge", peaks[k].edge},
                                       {"dc_resistance", 1.638},
                                       {"skin_resistance", 0.00055},
                                       {"df", 0.02},
                                       {"dielectric_share", share},
                                       {"source", driver},
                                       {"victim_source", driver},
                                       {"load", load},
                                       {"victim_load", load},
                                       {"load_capacitance", input},
                                       {"victim_load_capacitance", input}};
        assert_ok(try_point("coupled-lines", values, 16, &answer, &error));
        assert_close(output_of("coupled-lines", &answer, "near_end_peak"), peaks[k].near * 1e-3,
                     5e-3);
        assert_close(output_of("coupled-lines", &answer, "far_end_peak"), peaks[k].far * 1e-3,
                     5e-3);
    }
}

static const struct named_value board[] = {
    {"height", 0.2e-3}, {"width", 0.3e-3}, {"gap", 0.2e-3}, {"length", 0.2}, {"edge", 0.3e-9}};
enum { BOARD = sizeof board / sizeof *board };

static double worst_with(const char *input, double value) {
    struct error error = {0};
    struct answer answer;
    struct named_value values[BOARD + 1];
    memcpy(values, board, sizeof board);
    values[BOARD] = (struct named_value){input, value};
    assert_ok(try_point("coupled-traces", values, BOARD + 1, &answer, &error));
    return output_of("coupled-traces", &answer, "far_end_peak");
}

/* Physics: loss only takes from a matched far end, the more of it the more; next to none is none,
 * within what both responses claim. */
static void test_loss_lowers_a_far_end_peak(void **state) {
    (void)state;
    double lossless = worst_with("copper_resistivity", 0);
    double before = lossless;
    static const double resistivity[] = {1.72e-8, 1e-7, 1e-6};
    for (size_t k = 0; k < 3; k++) {
        double with = worst_with("copper_resistivity", resistivity[k]);
        assert_true(with < before);
        before = with;
    }
    assert_true(worst_with("df", 0.02) < lossless);
    assert_close(worst_with("copper_resistivity", 1e-20), lossless, 5e-3);
    assert_close(worst_with("df", 1e-8), lossless, 5e-3);
}

/* Folding of a mirrored set keeps the power: two aggressors together, the victim between, give what
 * the unfolded set beside a far plane's edge gives. */
static void test_folded_and_unfolded_sets_lose_the_same(void **state) {
    (void)state;
    double peak[2];
    for (size_t k = 0; k < 2; k++) {
        struct error error = {0};
        struct answer answer;
        struct named_value values[BOARD + 4];
        memcpy(values, board, sizeof board);
        values[BOARD] = (struct named_value){"aggressors", 1};
        values[BOARD + 1] = (struct named_value){"copper_resistivity", 1.72e-8};
        values[BOARD + 2] = (struct named_value){"df", 0.02};
        values[BOARD + 3] = (struct named_value){"edge_distance", k == 0 ? 0 : 0.02};
        assert_ok(try_point("coupled-traces", values, BOARD + 4, &answer, &error));
        peak[k] = output_of("coupled-traces", &answer, "near_end_peak");
    }
    assert_close(peak[1], peak[0], 5e-3);
}

static void test_loss_of_a_sheet_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", 0.2e-3},
                                   {"width", 0.3e-3},
                                   {"gap", 0.2e-3},
                                   {"thickness", 0},
                                   {"copper_resistivity", 1.72e-8}};
    assert_false(try_point("coupled-traces", values, 5, &answer, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "thickness"));
}

/* Without loss no more fields are solved than before. */
static void test_loss_costs_fields_only_where_it_is_asked_for(void **state) {
    (void)state;
    const struct model *model = model_find("coupled-traces");
    size_t solved[2];
    for (size_t k = 0; k < 2; k++) {
        struct error error = {0};
        double inputs[MODEL_MOST_INPUTS], prepared[MODEL_MOST_PREPARED];
        for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
            inputs[i] = NAN;
        for (size_t i = 0; i < BOARD; i++)
            inputs[model_input_index(model, board[i].name)] = board[i].value;
        inputs[model_input_index(model, "copper_resistivity")] = k == 0 ? 0 : 1.72e-8;
        struct model_memo *memo = model_memo_create(&error);
        assert_ok(memo != NULL && model_resolve(model, inputs, &error));
        assert_ok(model->prepare(inputs, prepared, memo, &error));
        inputs[model_input_index(model, "dk")] = 3.5;
        assert_ok(model->prepare(inputs, prepared, memo, &error));
        solved[k] = model_memo_counts(memo).solved;
        model_memo_free(memo);
    }
    assert_int_equal(solved[0], 2);
    assert_int_equal(solved[1], 2 + 9);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_given_lines_agree_with_the_laplace_transform),
        cmocka_unit_test(test_loss_lowers_a_far_end_peak),
        cmocka_unit_test(test_folded_and_unfolded_sets_lose_the_same),
        cmocka_unit_test(test_loss_of_a_sheet_is_refused),
        cmocka_unit_test(test_loss_costs_fields_only_where_it_is_asked_for),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
