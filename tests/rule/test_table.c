/* A row of a chapter's table is solved where it is asked for, not taken from beside it. */
#include "check.h"
#include "groundrules/guideline.h"

#include <string.h>

static const char text[] =
    "{\"document\": {\"number\": \"T\", \"title\": \"T\", \"revision\": \"A\", \"date\": "
    "\"2026-01-01\"},"
    "\"chapters\": [{\"id\": \"w\", \"question\": \"?\", \"model\": \"trace\","
    "\"given\": {\"height\": \"0.2 mm\", \"thickness\": \"35 um\", \"dk\": \"4.3\"},"
    "\"vary\": {\"width\": \"0.1 mm .. 4 mm in 4 points log\"}, \"show\": [\"impedance\"],"
    "\"table\": [\"0.1 mm\", \"0.25 mm\", \"0.7 mm\", \"4 mm\"]}]}";

static void test_the_rows_of_a_table_are_solved_exactly(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    assert_ok(arena != NULL);
    assert_ok(study_read_text("t", text, sizeof text - 1, arena, &study, &problems, &error));
    const struct study_chapter *chapter = &study.chapters[0];
    const struct study_vary *vary = &chapter->vary;
    /* Four points, four rows, both ends in common. */
    assert_int_equal(vary->point_count, 6);
    for (size_t i = 1; i < vary->point_count; i++)
        assert_true(vary->points[i] > vary->points[i - 1] * (1 + 1e-9));
    assert_ok(guideline_compute(&study, &(struct guideline_options){.jobs = 1}, arena, &guideline,
                                &error));
    struct model_memo *memo = model_memo_create(&error);
    struct model_worker *worker = model_worker_create(&error);
    assert_ok(memo != NULL && worker != NULL);
    size_t impedance = model_output_index(chapter->model, "impedance");
    const struct guideline_curve *curve =
        guideline_find_curve(&guideline.chapters[0], 0, impedance);
    assert_non_null(curve);
    for (size_t r = 0; r < chapter->table_point_count; r++) {
        double inputs[MODEL_MOST_INPUTS], outputs[MODEL_MOST_OUTPUTS], errors[MODEL_MOST_OUTPUTS];
        unsigned flags;
        size_t point = 0;
        while (point < vary->point_count &&
               fabs(vary->points[point] / chapter->table_points[r] - 1) > 1e-9)
            point++;
        assert_true(point < vary->point_count);
        for (size_t i = 0; i < chapter->model->input_count; i++)
            inputs[i] = chapter->variants[0].settings[i].value;
        inputs[vary->input] = chapter->table_points[r];
        assert_ok(model_resolve(chapter->model, inputs, &error));
        assert_ok(
            model_evaluate(chapter->model, inputs, memo, worker, outputs, errors, &flags, &error));
        assert_close(curve->y[point], outputs[impedance], 1e-6);
    }
    model_worker_free(worker);
    model_memo_free(memo);
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_rows_of_a_table_are_solved_exactly),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
