#include "check.h"
#include "groundrules/model.h"

#include <string.h>

/* Every model with a picture: its copper lies on the board, does not overlap, and dimensions
 * measure what they name. */
static void test_pictures_hold_what_the_inputs_say(void **state) {
    (void)state;
    struct error error = {0};
    const struct model *model = model_find("coupled-traces");
    double inputs[MODEL_MOST_INPUTS];
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        inputs[i] = NAN;
    inputs[model_input_index(model, "height")] = 0.2e-3;
    inputs[model_input_index(model, "width")] = 0.3e-3;
    inputs[model_input_index(model, "victim_width")] = 0.5e-3;
    inputs[model_input_index(model, "gap")] = 1e-3;
    inputs[model_input_index(model, "between")] = 3;
    inputs[model_input_index(model, "between_width")] = 0.4e-3;
    assert_ok(model_resolve(model, inputs, &error));
    struct sketch sketch;
    assert_ok(model->sketch(inputs, &sketch, &error));
    for (size_t i = 0; i < sketch.dimension_count; i++) {
        const struct sketch_dimension *dimension = &sketch.dimensions[i];
        assert_close(dimension->to - dimension->from, dimension->value, 1e-12);
        assert_close(inputs[model_input_index(model, dimension->input)], dimension->value, 1e-12);
    }
    struct section_problem problem = {.dk = 4.3};
    enum section_tie ties[SECTION_MOST_CONDUCTORS];
    sketch_section(&sketch, &problem, ties);
    assert_int_equal(problem.count, 3);
    assert_int_equal(ties[0], SECTION_SIGNAL);
    assert_int_equal(ties[1], SECTION_TIED);
    assert_int_equal(ties[2], SECTION_SIGNAL);
    assert_close(problem.height, 0.2e-3, 1e-12);
    assert_close(problem.conductors[2].left - problem.conductors[0].left - 0.3e-3, 1e-3, 1e-12);
    assert_close(problem.conductors[2].width, 0.5e-3, 1e-12);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_pictures_hold_what_the_inputs_say)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
