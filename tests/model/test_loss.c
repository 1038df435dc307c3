#include "point.h"

#include <string.h>

/* Loss in the two models of coupled traces. */

/* Independent reference, numerical inversion of the Laplace transform (Wilcox 1978), good to a
 * thousandth: 100 mm over 0.19 mm, gap 0.6 mm, thin strips, 50 ohm at all ends, 3.3 V.  The
 * reference has a mutual skin resistance too, and its mutual capacitance follows the dielectric by
 * less than its own does: what the model's inputs do not know, together up to 3 %. */
static void test_given_lines_agree_with_the_laplace_transform(void **state) {
    (void)state;
    static const double inductance[2] = {3.37706697e-07, 1.75952077e-08},
                        capacitance[2] = {1.05813676e-10, -1.43492214e-12};
    const double share = 9.40334157e-11 / capacitance[0];
    static const double peaks[][3] = {
        {5e-10, 28.4154, 40.4489}, {1e-09, 27.436, 22.0983}, {5e-09, 7.19243, 4.84806}};
    for (size_t k = 0; k < sizeof peaks / sizeof *peaks; k++) {
        struct error error = {0};
        struct answer answer;
        struct named_value values[] = {{"inductance", inductance[0]},
                                       {"mutual_inductance", inductance[1]},
                                       {"capacitance", capacitance[0]},
                                       {"mutual_capacitance", -capacitance[1]},
                                       {"length", 0.1},
                                       {"edge", peaks[k][0]},
                                       {"dc_resistance", 1.638},
                                       {"skin_resistance", 0.00085},
                                       {"df", 0.02},
                                       {"dielectric_share", share}};
        assert_ok(try_point("coupled-lines", values, 10, &answer, &error));
        assert_close(output_of("coupled-lines", &answer, "near_end_peak"), peaks[k][1] * 1e-3,
                     3e-2);
        assert_close(output_of("coupled-lines", &answer, "far_end_peak"), peaks[k][2] * 1e-3, 3e-2);
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
