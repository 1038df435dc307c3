/* What the geometry inputs do to the section, below its solution: the problem that is posed. */
#include "board_inputs.h"
#include "point.h"

#include <string.h>

struct posed {
    struct section_problem problem;
    enum section_tie ties[SECTION_MOST_CONDUCTORS];
};

static void fill(const struct model *model, const struct named_value *values, size_t count,
                 double *inputs) {
    struct error error = {0};
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        inputs[i] = NAN;
    for (size_t i = 0; i < count; i++)
        inputs[model_input_index(model, values[i].name)] = values[i].value;
    assert_ok(model_resolve(model, inputs, &error));
}

static struct posed pose(const char *name, const struct named_value *values, size_t count) {
    const struct model *model = model_find(name);
    struct posed posed = {.problem = {.dk = 4.3, .mask_dk = 3.5, .cover_dk = 4.3}};
    double inputs[MODEL_MOST_INPUTS];
    struct sketch sketch;
    struct error error = {0};
    fill(model, values, count, inputs);
    assert_ok(model_check(model, inputs, &error));
    assert_ok(model->sketch(inputs, &sketch, &error));
    sketch_section(&sketch, &posed.problem, posed.ties);
    return posed;
}

static void test_a_trace_takes_mask_cover_etch_and_the_planes_end(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 0.5e-3}, {"width", 0.3e-3}, {"thickness", 35e-6},
                                   {"etch", 15e-6},    {"mask", 25e-6},   {"edge_distance", 1e-3}};
    struct section_problem problem = pose("trace", values, 6).problem;
    assert_int_equal(problem.count, 1);
    assert_close(problem.height, 0.5e-3, 1e-12);
    assert_close(problem.conductors[0].etch, 15e-6, 1e-12);
    assert_close(problem.mask, 25e-6, 1e-9);
    assert_false(problem.mask_flat);
    assert_int_equal(problem.plane, SECTION_PLANE_ENDS);
    double centre = problem.conductors[0].left + problem.conductors[0].width / 2;
    assert_close(problem.plane_end - centre, 1e-3, 1e-9);
    values[5] = (struct named_value){"cover", 0.4e-3};
    problem = pose("trace", values, 6).problem;
    assert_close(problem.cover, 0.4e-3, 1e-9);
    assert_int_equal(problem.plane, SECTION_PLANE);
    problem = pose("trace", values, 3).problem;
    assert_true(problem.mask == 0 && problem.cover == 0 && problem.conductors[0].etch == 0);
    assert_int_equal(problem.plane, SECTION_PLANE);
}

/* 1, 2, 4: one side, both, two on each; with strips only beside the victim; the plane's end counted
 * from the last trace on the right. */
static void test_aggressors_lie_as_they_are_declared(void **state) {
    (void)state;
    struct named_value values[] = {
        {"height", 0.5e-3},   {"width", 0.2e-3},        {"victim_width", 0.4e-3}, {"gap", 0.6e-3},
        {"thickness", 35e-6}, {"etch", 10e-6},          {"edge_distance", 1e-3},  {"aggressors", 0},
        {"between", 0},       {"between_width", 0.3e-3}};
    /* Left edges by hand, the first trace's is 0. */
    static const double want[2][3][7] = {
        {{0, 0.8}, {0, 0.8, 1.8}, {0, 0.8, 1.6, 2.6, 3.4}},
        {{0, 0.35, 0.8}, {0, 0.35, 0.8, 1.35, 1.8}, {0, 0.8, 1.15, 1.6, 2.15, 2.6, 3.4}}};
    static const size_t count[2][3] = {{2, 3, 5}, {3, 5, 7}};
    static const double last_centre[] = {1.0, 1.9, 3.5};
    for (size_t strip = 0; strip < 2; strip++)
        for (size_t a = 0; a < 3; a++) {
            values[7].value = (double)a;
            values[8].value = strip == 0 ? 0 : 3;
            struct posed posed = pose("coupled-traces", values, 10);
            const struct section_problem *problem = &posed.problem;
            assert_int_equal(problem->count, count[strip][a]);
            size_t wide = 0;
            for (size_t i = 0; i < problem->count; i++) {
                const struct section_conductor *conductor = &problem->conductors[i];
                assert_near(conductor->left - problem->conductors[0].left, 1e-3 * want[strip][a][i],
                            1e-12);
                assert_close(conductor->etch, 10e-6, 1e-12);
                bool tied = posed.ties[i] == SECTION_TIED;
                wide += !tied && fabs(conductor->width - 0.4e-3) < 1e-9;
                assert_close(conductor->width, tied ? 0.3e-3 : conductor->width, 1e-9);
            }
            assert_int_equal(wide, 1);
            assert_close(problem->plane_end - problem->conductors[0].left,
                         1e-3 * (last_centre[a] + 1), 1e-9);
        }
}

/* Sections solved for one value and then another. */
static size_t solved_for(const char *name, struct named_value *values, size_t count, size_t change,
                         double to) {
    const struct model *model = model_find(name);
    double inputs[MODEL_MOST_INPUTS], prepared[MODEL_MOST_PREPARED];
    struct error error = {0};
    struct model_memo *memo = model_memo_create(&error);
    assert_ok(memo != NULL);
    size_t resistivity = model_input_index(model, "copper_resistivity");
    fill(model, values, count, inputs);
    inputs[resistivity] = 0; /* loss asks for more sections */
    model->prepare(inputs, prepared, memo, &error);
    values[change].value = to;
    error = (struct error){0};
    fill(model, values, count, inputs);
    inputs[resistivity] = 0;
    model->prepare(inputs, prepared, memo, &error);
    size_t solved = model_memo_counts(memo).solved;
    assert_int_equal(model_memo_counts(memo).asked, 2);
    model_memo_free(memo);
    return solved;
}

static void test_every_input_of_the_board_makes_a_section_of_its_own(void **state) {
    (void)state;
    static const struct {
        const char *input;
        double from, to;
        bool matters;
    } cases[] = {
        {"etch", 0, 10e-6, true},         {"etch", 10e-6, 12e-6, true},
        {"mask", 0, 20e-6, true},         {"mask", 20e-6, 25e-6, true},
        {"mask_dk", 3.3, 3.5, true},      {"cover", 0, 0.3e-3, true},
        {"cover", 0.3e-3, 0.4e-3, true},  {"cover_dk", 4.2, 4.3, true},
        {"edge_distance", 0, 1e-3, true}, {"edge_distance", 1e-3, 1.1e-3, true},
        {"mask_dk", 3.3, 3.5, false},     {"cover_dk", 4.2, 4.3, false},
    };
    static const char *const models[] = {"trace", "coupled-traces"};
    for (size_t m = 0; m < 2; m++)
        for (size_t k = 0; k < sizeof cases / sizeof *cases; k++) {
            struct named_value values[] = {
                {"height", 0.2e-3}, {"width", 0.3e-3}, {NULL, 0}, {NULL, 0}, {NULL, 0}};
            size_t count = 2;
            if (m == 1)
                values[count++] = (struct named_value){"gap", 0.3e-3};
            size_t change = count;
            values[count++] = (struct named_value){cases[k].input, cases[k].from};
            if (cases[k].matters && strcmp(cases[k].input, "mask_dk") == 0)
                values[count++] = (struct named_value){"mask", 20e-6};
            if (cases[k].matters && strcmp(cases[k].input, "cover_dk") == 0)
                values[count++] = (struct named_value){"cover", 0.4e-3};
            assert_int_equal(solved_for(models[m], values, count, change, cases[k].to),
                             cases[k].matters ? 2 : 1);
        }
}

static void refused(const char *name, const struct named_value *values, size_t count,
                    const char *words) {
    const struct model *model = model_find(name);
    double inputs[MODEL_MOST_INPUTS];
    struct error error = {0};
    fill(model, values, count, inputs);
    assert_false(model_check(model, inputs, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    if (strstr(error.message, words) == NULL)
        print_error("message: %s\n", error.message);
    assert_non_null(strstr(error.message, words));
}

static void test_what_cannot_be_is_refused(void **state) {
    (void)state;
    struct named_value values[] = {{"height", 0.5e-3}, {"width", 0.1e-3}, {"gap", 0.5e-3},
                                   {"etch", 50e-6},    {"mask", 0},       {"cover", 0}};
    refused("trace", (struct named_value[]){values[0], values[1], values[3]}, 3, "etch");
    refused("coupled-traces", values, 4, "etch");
    values[3].value = 0;
    values[5].value = 30e-6;
    refused("coupled-traces", values, 6, "must clear the copper, which");
    values[4].value = 30e-6;
    values[5].value = 60e-6;
    refused("coupled-traces", values, 6, "and its mask");
    values[5].value = 70e-6;
    pose("coupled-traces", values, 6);
    /* The strip is copper too. */
    struct named_value strip[] = {{"height", 0.5e-3}, {"width", 0.3e-3},        {"gap", 0.5e-3},
                                  {"between", 3},     {"between_width", 40e-6}, {"etch", 20e-6}};
    refused("coupled-traces", strip, 6, "tenth");
}

static void test_a_plane_above_one_that_ends_is_not_yet(void **state) {
    (void)state;
    const struct model *model = model_find("trace");
    struct named_value values[] = {
        {"height", 0.5e-3}, {"width", 0.3e-3}, {"cover", 0.5e-3}, {"edge_distance", 1e-3}};
    double inputs[MODEL_MOST_INPUTS];
    struct error error = {0};
    fill(model, values, 4, inputs);
    assert_false(model_check(model, inputs, &error));
    assert_int_equal(error.kind, ERROR_NOT_YET);
}

static void test_the_flag_of_a_near_edge_informs(void **state) {
    (void)state;
    struct board board = {.height = 0.2e-3, .thickness = 35e-6, .dk = 4.3};
    unsigned bit = 1u << BOARD_FLAG_NEAR_EDGE;
    assert_int_equal(board_flags_of_section(&board), 0);
    board.edge_distance = 1.9e-3;
    assert_int_equal(board_flags_of_section(&board), bit);
    board.edge_distance = 2.1e-3;
    assert_int_equal(board_flags_of_section(&board), 0);
    for (size_t i = 0; i < BOARD_FLAG_COUNT; i++)
        assert_int_equal(board_flags[i].informs, i == BOARD_FLAG_NEAR_EDGE);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_trace_takes_mask_cover_etch_and_the_planes_end),
        cmocka_unit_test(test_aggressors_lie_as_they_are_declared),
        cmocka_unit_test(test_every_input_of_the_board_makes_a_section_of_its_own),
        cmocka_unit_test(test_what_cannot_be_is_refused),
        cmocka_unit_test(test_a_plane_above_one_that_ends_is_not_yet),
        cmocka_unit_test(test_the_flag_of_a_near_edge_informs),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
