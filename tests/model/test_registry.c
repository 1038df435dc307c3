#include "point.h"

#include <string.h>

static void test_every_declaration_is_complete_and_names_are_unique(void **state) {
    (void)state;
    for (size_t m = 0; m < model_count(); m++) {
        const struct model *model = model_at(m);
        assert_ptr_equal(model_find(model->name), model);
        assert_non_null(model->prepare);
        assert_non_null(model->respond);
        assert_true(model->input_count <= MODEL_MOST_INPUTS);
        assert_true(model->output_count <= MODEL_MOST_OUTPUTS);
        assert_true(model->prepared_count <= MODEL_MOST_PREPARED);
        for (size_t i = 0; i < model->input_count; i++) {
            assert_int_equal(model_input_index(model, model->inputs[i].name), i);
            assert_non_null(model->inputs[i].meaning);
            assert_true(model->inputs[i].words != NULL ||
                        model->inputs[i].highest > model->inputs[i].lowest);
        }
        for (size_t i = 0; i < model->output_count; i++) {
            assert_int_equal(model_output_index(model, model->outputs[i].name), i);
            assert_non_null(model->outputs[i].title);
            assert_non_null(model->outputs[i].meaning);
        }
    }
    assert_null(model_find("no-such-model"));
}

static void test_a_missing_input_is_named(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    assert_false(try_point("coupled-traces", NULL, 0, &answer, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "height"));
    assert_non_null(strstr(error.message, "gap"));
}

static void test_an_input_of_a_later_version_is_refused_as_not_yet(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {
        {"height", 1.6e-3}, {"width", 0.3e-3}, {"gap", 1e-3}, {"frequency", 2e9}};
    assert_false(try_point("coupled-traces", values, 4, &answer, &error));
    assert_int_equal(error.kind, ERROR_NOT_YET);
    assert_non_null(strstr(error.message, "not yet"));
}

static void test_a_value_out_of_range_says_what_is_allowed(void **state) {
    (void)state;
    struct error error = {0};
    struct answer answer;
    struct named_value values[] = {{"height", -1.6e-3}, {"width", 0.3e-3}};
    assert_false(try_point("trace", values, 2, &answer, &error));
    assert_non_null(strstr(error.message, "allowed"));
    struct error second = {0};
    values[0].value = NAN;
    assert_false(try_point("trace", values, 2, &answer, &second));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_declaration_is_complete_and_names_are_unique),
        cmocka_unit_test(test_a_missing_input_is_named),
        cmocka_unit_test(test_an_input_of_a_later_version_is_refused_as_not_yet),
        cmocka_unit_test(test_a_value_out_of_range_says_what_is_allowed),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
