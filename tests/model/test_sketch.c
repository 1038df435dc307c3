#include "check.h"
#include "groundrules/model.h"
#include "point.h"

#include <math.h>
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

struct picture {
    const char *model;
    struct named_value values[8];
    size_t discs;
    double nearest; /* m, between axes */
};

static void assert_measured(const struct model *model, const double *inputs,
                            const struct sketch *sketch) {
    assert_true(sketch->dimension_count > 0);
    for (size_t i = 0; i < sketch->dimension_count; i++) {
        const struct sketch_dimension *dimension = &sketch->dimensions[i];
        assert_close(dimension->to - dimension->from, dimension->value, 1e-12);
        assert_close(inputs[model_input_index(model, dimension->input)], dimension->value, 1e-12);
    }
}

static double nearest_axes(const struct sketch *plan) {
    double nearest = INFINITY;
    for (size_t i = 0; i < plan->disc_count; i++)
        for (size_t j = 0; j < i; j++)
            nearest = fmin(nearest, hypot(plan->discs[i].x - plan->discs[j].x,
                                          plan->discs[i].y - plan->discs[j].y));
    return nearest;
}

#define GROUP(vias, arrangement)                                                                   \
    {                                                                                              \
        {"height", 1e-3}, {"via_diameter", 0.3e-3}, {"via_pitch", 0.8e-3}, {"vias", vias}, {       \
            "arrangement", arrangement                                                             \
        }                                                                                          \
    }
#define LOOP                                                                                       \
    {"height", 0.5e-3}, {"width", 2e-3}, {"length", 8e-3}, {"via_diameter", 0.3e-3}, {"vias", 3},  \
        {"via_pitch", 0.7e-3}, {                                                                   \
        "body", 0.4e-3                                                                             \
    }

/* Every via of every arrangement is seen from above, as far apart as it is solved. */
static void test_plans_show_every_via_where_it_stands(void **state) {
    (void)state;
    static const struct picture pictures[] = {
        {"ground-vias", GROUP(6, 0), 6, 0.8e-3},
        {"ground-vias", GROUP(6, 1), 6, 0.8e-3},
        {"ground-vias", GROUP(7, 2), 7, 0.8e-3},
        {"ground-vias", GROUP(64, 2), 64, 0.8e-3},
        {"signal-via",
         {{"height", 1e-3},
          {"via_diameter", 0.3e-3},
          {"return_distance", 1e-3},
          {"return_vias", 4}},
         5,
         1e-3},
        {"trace-loop", {LOOP}, 6, 0.7e-3},
        {"loop-pair", {LOOP, {"separation", 5e-3}}, 12, 0.7e-3},
    };
    for (size_t k = 0; k < sizeof pictures / sizeof *pictures; k++) {
        const struct model *model = model_find(pictures[k].model);
        struct error error = {0};
        double inputs[MODEL_MOST_INPUTS];
        for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
            inputs[i] = NAN;
        for (size_t i = 0; i < 8 && pictures[k].values[i].name != NULL; i++)
            inputs[model_input_index(model, pictures[k].values[i].name)] =
                pictures[k].values[i].value;
        struct sketch plan, section;
        assert_ok(model_resolve(model, inputs, &error));
        assert_ok(model->plan(inputs, &plan, &error));
        assert_ok(model->sketch(inputs, &section, &error));
        assert_true(plan.plan && !section.plan);
        assert_measured(model, inputs, &plan);
        assert_measured(model, inputs, &section);
        assert_int_equal(plan.disc_count, pictures[k].discs);
        assert_close(nearest_axes(&plan), pictures[k].nearest, 1e-9);
    }
}

static void test_the_body_of_a_part_is_measured(void **state) {
    (void)state;
    static const char *const names[] = {"trace-loop", "loop-pair"};
    static const struct named_value values[] = {LOOP, {"separation", 5e-3}};
    for (size_t k = 0; k < 2; k++) {
        const struct model *model = model_find(names[k]);
        struct error error = {0};
        double inputs[MODEL_MOST_INPUTS];
        for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
            inputs[i] = NAN;
        for (size_t i = 0; i < 7 + k; i++)
            inputs[model_input_index(model, values[i].name)] = values[i].value;
        struct sketch section;
        bool measured = false;
        assert_ok(model_resolve(model, inputs, &error));
        assert_ok(model->sketch(inputs, &section, &error));
        for (size_t i = 0; i < section.dimension_count; i++)
            measured = measured || strcmp(section.dimensions[i].input, "body") == 0;
        assert_true(measured);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_pictures_hold_what_the_inputs_say),
                                       cmocka_unit_test(test_plans_show_every_via_where_it_stands),
                                       cmocka_unit_test(test_the_body_of_a_part_is_measured)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
