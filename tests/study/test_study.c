/* What a study says arrives as it was said.  The expected values are the written ones, converted by
 * hand with the definitions of the SI and of the inch (25.4 mm exactly). */

#include "reading.h"

#include <unistd.h>

static const char *source_root = ".";
static char *whole; /* tests/study/whole.json: every form of a value that docs/study.md names */

static size_t input_of(const struct study_chapter *chapter, const char *name) {
    size_t index = model_input_index(chapter->model, name);
    assert_true(index != SIZE_MAX);
    return index;
}

static const struct study_setting *setting_of(const struct study_chapter *chapter,
                                              const struct study_variant *variant,
                                              const char *name) {
    return &variant->settings[input_of(chapter, name)];
}

static void assert_range(struct interval range, double from, double to) {
    assert_close(range.from, from, 1e-15);
    assert_close(range.to, to, 1e-15);
}

static void test_the_shipped_studies_have_nothing_wrong(void **state) {
    static const char *const names[] = {"minimal", "family"};
    (void)state;
    for (size_t i = 0; i < 2; i++) {
        struct error error = {0};
        struct study study;
        struct study_problems problems = {0};
        char path[1024];
        snprintf(path, sizeof path, "%s/studies/%s.json", source_root, names[i]);
        struct arena *arena = arena_create(&error);
        assert_ok(study_read(path, arena, &study, &problems, &error));
        assert_int_equal(problems.count, 0);
        assert_string_equal(study.path, path);
        assert_true(study.chapter_count > 0);
        for (size_t c = 0; c < study.chapter_count; c++)
            assert_true(study.chapters[c].variant_count > 0 && study.chapters[c].chart_count > 0);
        arena_free(arena);
    }
}

static void test_the_cover_is_read_with_its_escapes_and_without_comments(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_document *document = &reading.study.document;
    assert_string_equal(document->number, "N-1");
    assert_string_equal(document->title, "See http://a.example/*b*/");
    assert_string_equal(document->subtitle, "\xC2\xB1 and \xF0\x9F\x98\x80");
    assert_string_equal(document->date, "2024-02-29");
    assert_null(document->status);
    assert_int_equal(document->reviewer_count, 2);
    assert_string_equal(document->reviewers[1], "B. Sedge");
    assert_int_equal(document->page, STUDY_LETTER);
    assert_int_equal(document->lengths, QUANTITY_MILS);
    reading_end(&reading);
}

static void test_a_board_adds_up_its_layers_with_their_tolerances(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    assert_int_equal(reading.study.stackup_count, 2);
    const struct study_stackup *a = study_find_stackup(&reading.study, "a");
    assert_string_equal(a->name, "Board A");
    assert_string_equal(a->fab, "sheet 1");
    assert_int_equal(a->layer_count, 4);
    assert_string_equal(a->layers[1].name, "core");
    assert_true(a->layers[3].plane && !a->layers[0].plane);
    assert_true(a->layers[2].thickness.value == 0.2e-3);
    assert_close(a->layers[2].thickness.plus, 0.03e-3, 1e-15);
    assert_close(a->layers[2].thickness.minus, 0.01e-3, 1e-15);
    assert_close(a->height.value, 1.2e-3, 1e-15);
    assert_close(a->height.plus, 0.13e-3, 1e-15);
    assert_close(a->height.minus, 0.11e-3, 1e-15);
    assert_true(a->thickness.value == 35e-6 && a->thickness.minus == 5e-6);
    assert_true(a->dk.value == 4.3);
    /* The adverse side of each layer counts for the mix of equal materials. */
    assert_true(a->dk.minus == 0.3 && a->dk.plus == 0.2);
    assert_true(a->smallest_width == 152.4e-6); /* 6 mil */
    assert_true(a->smallest_gap == 0.15e-3 && a->smallest_drill == 0.0);
    assert_int_equal(a->line, 9);
    const struct study_stackup *b = study_find_stackup(&reading.study, "b");
    assert_string_equal(b->name, "b");
    assert_null(b->fab);
    assert_true(b->height.value == 0.19e-3 && b->height.plus == 0.0 && b->dk.value == 4.0);
    assert_null(study_find_stackup(&reading.study, "c"));
    assert_string_equal(reading.study.products[0].stackup, "b");
    reading_end(&reading);
}

static void test_a_board_fills_only_what_is_not_known(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct model *model = model_find("trace");
    double inputs[MODEL_MOST_INPUTS];
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        inputs[i] = NAN;
    inputs[model_input_index(model, "dk")] = 3.0;
    study_apply_stackup(study_find_stackup(&reading.study, "b"), model, inputs);
    assert_true(inputs[model_input_index(model, "height")] == 0.19e-3);
    assert_true(inputs[model_input_index(model, "thickness")] == 35e-6);
    assert_true(inputs[model_input_index(model, "dk")] == 3.0);
    assert_true(isnan(inputs[model_input_index(model, "width")]));
    reading_end(&reading);
}

static void test_an_edge_is_converted_to_a_full_ramp(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_signal *signals = reading.study.signals;
    assert_int_equal(reading.study.signal_count, 3);
    /* 10-90 % of a linear ramp is 0.8 of it, 20-80 % is 0.6. */
    assert_range(signals[0].edge, 1.5e-9, 3.75e-9);
    assert_string_equal(signals[0].edge_text, "1.2 ns .. 3 ns 10-90");
    assert_close(signals[0].edge_low, 0.1, 1e-15);
    assert_close(signals[0].edge_high, 0.9, 1e-15);
    assert_close(signals[1].edge.to, 10e-9, 1e-15);
    assert_range(signals[2].edge, 2e-9, 2e-9);
    assert_true(signals[2].edge_low == 0.0 && signals[2].edge_high == 1.0);
    reading_end(&reading);
}

static void test_half_open_ranges_of_a_signal_end_where_the_models_do(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_signal *signals = reading.study.signals;
    const struct model *model = model_find("coupled-traces");
    const struct model_input *edge = &model->inputs[model_input_index(model, "edge")];
    const struct model_input *source = &model->inputs[model_input_index(model, "source")];
    assert_true(signals[1].edge.from == edge->lowest);
    assert_true(signals[2].source.from == 10.0 && signals[2].source.to == source->highest);
    reading_end(&reading);
}

static void test_signals_hold_their_values_and_budgets(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_signal *fast = &reading.study.signals[0];
    const struct study_signal *slow = &reading.study.signals[1];
    const struct study_signal *plain = &reading.study.signals[2];
    assert_true(fast->swing == 3.3 && isinf(fast->load) && fast->load_capacitance == 5e-12);
    assert_range(fast->source, 25.0, 45.0);
    assert_true(fast->is_victim && fast->noise_margin == 0.8 && fast->share == 0.25);
    assert_int_equal(fast->receiver, STUDY_RECEIVER_NEAR);
    assert_range(slow->source, 45.0, 55.0); /* a tolerance is a range here */
    assert_true(slow->load == 10e3 && slow->load_capacitance == 0.0 && slow->share == 0.5);
    assert_int_equal(slow->receiver, STUDY_RECEIVER_EITHER);
    assert_string_equal(slow->name, "Slow one");
    assert_string_equal(plain->name, "plain");
    assert_false(plain->is_victim);
    reading_end(&reading);
}

static void test_variants_are_all_combinations_in_the_order_written(void **state) {
    static const char *const labels[] = {"Board A, nothing", "Board A, tied", "b, nothing",
                                         "b, tied"};
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *chapter = &reading.study.chapters[0];
    assert_string_equal(chapter->compared, "stackup and between");
    assert_int_equal(chapter->variant_count, 4);
    for (size_t i = 0; i < 4; i++) {
        const struct study_variant *variant = &chapter->variants[i];
        const struct study_setting *between = setting_of(chapter, variant, "between");
        assert_string_equal(variant->label, labels[i]);
        assert_string_equal(variant->stackup->id, i < 2 ? "a" : "b");
        assert_int_equal(between->origin, STUDY_COMPARED);
        assert_true(between->value == (i % 2 == 0 ? 0.0 : 3.0));
    }
    assert_string_equal(reading.study.chapters[1].variants[0].label, "Board A");
    assert_null(reading.study.chapters[1].compared);
    reading_end(&reading);
}

static void test_settings_say_where_they_come_from(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *chapter = &reading.study.chapters[0];
    const struct study_variant *variant = &chapter->variants[0];
    const struct study_setting *height = setting_of(chapter, variant, "height");
    assert_int_equal(height->origin, STUDY_FROM_STACKUP);
    assert_close(height->value, 1.2e-3, 1e-15);
    assert_close(height->plus, 0.13e-3, 1e-15);
    const struct study_setting *width = setting_of(chapter, variant, "width");
    assert_int_equal(width->origin, STUDY_GIVEN);
    assert_true(width->value == 355.6e-6); /* 14 mil */
    const struct study_setting *length = setting_of(chapter, variant, "length");
    assert_range(length->range, 1e-3, 80e-3); /* from the lowest that the model takes */
    assert_close(length->value, sqrt(80e-6), 1e-15);
    const struct study_setting *source = setting_of(chapter, variant, "source");
    assert_int_equal(source->origin, STUDY_FROM_SIGNAL);
    assert_range(source->range, 25.0, 45.0);
    assert_close(source->value, 35.0, 1e-15);
    assert_range(setting_of(chapter, variant, "victim_source")->range, 45.0, 55.0);
    assert_true(setting_of(chapter, variant, "victim_load")->value == 10e3);
    assert_range(setting_of(chapter, variant, "receiver")->range, 0.0, 1.0); /* either */
    const struct study_setting *gap = setting_of(chapter, variant, "gap");
    assert_int_equal(gap->origin, STUDY_VARIED);
    assert_true(gap->value == 0.1e-3);
    assert_int_equal(setting_of(chapter, variant, "aggressors")->origin, STUDY_STANDARD);
    reading_end(&reading);
}

static void test_an_input_that_follows_another_stays_open_until_it_is_resolved(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *chapter = &reading.study.chapters[0];
    const struct study_variant *variant = &chapter->variants[0];
    struct error error = {0};
    double inputs[MODEL_MOST_INPUTS];
    assert_true(isnan(setting_of(chapter, variant, "victim_width")->value));
    for (size_t i = 0; i < chapter->model->input_count; i++)
        inputs[i] = variant->settings[i].value;
    assert_ok(model_resolve(chapter->model, inputs, &error));
    assert_true(inputs[input_of(chapter, "victim_width")] == 355.6e-6);
    reading_end(&reading);
}

static void test_sweeps_charts_limits_and_tables_are_as_written(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *one = &reading.study.chapters[0];
    const struct study_chapter *two = &reading.study.chapters[1];
    assert_true(one->vary.logarithmic && one->vary.point_count == 3);
    assert_true(one->vary.points[0] == 0.1e-3 && one->vary.points[2] == 10e-3);
    assert_close(one->vary.points[1], 1e-3, 1e-15);
    assert_int_equal(one->chart_count, 3);
    assert_true(one->charts[0].x_logarithmic && !one->charts[0].y_logarithmic);
    assert_int_equal(one->charts[1].output_count, 2);
    assert_true(!one->charts[2].x_logarithmic && one->charts[2].y_logarithmic);
    assert_string_equal(one->charts[2].title, "Z");
    assert_int_equal(one->limit_count, 2);
    assert_true(one->limits[0].value == 0.2 && one->limits[1].value == -40.0);
    assert_int_equal(one->table_point_count, 2);
    assert_true(one->table_points[1] == 10e-3);
    assert_string_equal(one->sayings[0], "Three widths.");
    assert_string_equal(one->title, one->model->title);
    assert_string_equal(two->title, "Second");
    /* Without a table: eight of the points, both ends among them. */
    assert_false(two->vary.logarithmic);
    assert_int_equal(two->table_point_count, 8);
    assert_true(two->table_points[0] == 1e-3 && two->table_points[7] == 20e-3);
    for (size_t i = 1; i < 8; i++)
        assert_true(two->table_points[i] > two->table_points[i - 1]);
    reading_end(&reading);
}

static void test_a_rule_searches_the_sweep_or_its_own_range(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *chapter = &reading.study.chapters[0];
    const struct study_rule *rules = chapter->rules;
    assert_int_equal(chapter->rule_count, 3);
    assert_true(rules[0].find_smallest && rules[0].find == input_of(chapter, "gap"));
    assert_true(rules[0].within.from == 0.1e-3 && rules[0].within.to == 10e-3);
    assert_true(rules[0].grid == 0.05e-3 && !rules[0].nominal);
    assert_int_equal(rules[0].strength, STUDY_MUST);
    assert_int_equal(rules[0].condition.against, STUDY_BUDGET);
    assert_string_equal(rules[0].why, "w");
    assert_null(rules[0].title);
    assert_true(!rules[1].find_smallest && rules[1].find == input_of(chapter, "width"));
    assert_range(rules[1].within, 127e-6, 508e-6);
    assert_true(rules[1].grid == 25.4e-6 && rules[1].nominal);
    assert_true(rules[1].condition.at_most && rules[1].condition.limit == -20.0);
    /* What the rule gives comes before what the chapter gives; what the chapter sweeps is a range.
     */
    const struct study_variant *variant = &rules[1].variants[0];
    assert_string_equal(variant->victim->id, "fast");
    assert_range(setting_of(chapter, variant, "edge")->range, 4e-9, 10e-6);
    assert_range(setting_of(chapter, variant, "gap")->range, 0.1e-3, 10e-3);
    assert_int_equal(rules[1].variant_count, 4);
    reading_end(&reading);
}

static void test_a_reference_and_a_table_are_read(void **state) {
    (void)state;
    struct reading reading = read_sound(whole);
    const struct study_chapter *chapter = &reading.study.chapters[0];
    const struct study_rule *rule = &chapter->rules[2];
    const struct study_reference *reference = &rule->reference;
    assert_false(rule->condition.at_most);
    assert_int_equal(rule->condition.against, STUDY_REFERENCE);
    assert_int_equal(reference->kept, STUDY_KEEP_IMPEDANCE);
    assert_string_equal(reference->stackup->id, "b");
    assert_true(reference->values[input_of(chapter, "gap")] == 0.3e-3);
    assert_true(reference->values[input_of(chapter, "height")] == 0.19e-3);
    assert_true(isnan(reference->values[input_of(chapter, "width")]));
    assert_string_equal(reference->text, "b at a gap of 0.3 mm and an infinite plane");
    assert_int_equal(rule->rows.count, 2);
    assert_int_equal(rule->rows.input, input_of(chapter, "length"));
    assert_range(rule->rows.ranges[0], 1e-3, 50e-3);
    assert_range(rule->rows.ranges[1], 80e-3, 80e-3);
    assert_string_equal(rule->rows.labels[0], "up to 50 mm");
    assert_close(rule->columns.ranges[0].from, 1e-9 / 0.6, 1e-15);
    assert_range(rule->columns.ranges[1], 2e-9, 2e-9);
    reading_end(&reading);
}

/* ---- manifests ---- */

static void write_text(const char *path, const char *text) {
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(text, 1, strlen(text), file), strlen(text));
    assert_int_equal(fclose(file), 0);
}

static void test_a_manifest_gives_the_names_of_its_files(void **state) {
    static const char *const none[] = {
        "",
        "{",
        "[]",
        "{\"files\": [{\"name\": \"a\"}]}",
        "{\"format\": \"another 1\", \"files\": [{\"name\": \"a\"}]}",
        "{\"format\": \"groundrules-rules 1\"}",
        "{\"format\": \"groundrules-rules 1\", \"files\": [{\"nome\": \"a\"}, 3, null]}"};
    (void)state;
    char folder[] = "/tmp/manifest-XXXXXX";
    char path[64];
    struct error error = {0};
    const char *const *names = NULL;
    size_t count = 99;
    assert_non_null(mkdtemp(folder));
    snprintf(path, sizeof path, "%s/rules.json", folder);
    struct arena *arena = arena_create(&error);
    assert_ok(study_manifest_files(path, arena, &names, &count, &error));
    assert_int_equal(count, 0);
    for (size_t i = 0; i < sizeof none / sizeof none[0]; i++) {
        write_text(path, none[i]);
        assert_ok(study_manifest_files(path, arena, &names, &count, &error));
        assert_int_equal(count, 0);
    }
    write_text(path, "{\"format\": \"groundrules-rules 1\", \"rules\": [],\n"
                     " \"files\": [{\"name\": \"a.pdf\", \"bytes\": 1}, {\"name\": \"f/b.svg\"}]}");
    assert_ok(study_manifest_files(path, arena, &names, &count, &error));
    assert_int_equal(count, 2);
    assert_string_equal(names[0], "a.pdf");
    assert_string_equal(names[1], "f/b.svg");
    remove(path);
    rmdir(folder);
    arena_free(arena);
}

static void test_the_previous_issue_is_looked_for_beside_the_study(void **state) {
    static const char text[] =
        "{\"document\": {\"number\": \"1\", \"title\": \"t\", \"revision\": \"A\",\n"
        " \"date\": \"2026-01-31\"}, \"previous\": \"old.json\", \"chapters\": [\n"
        " {\"id\": \"c\", \"question\": \"q\", \"model\": \"trace\", \"given\": {\"height\": \"1 "
        "mm\"},\n"
        "  \"vary\": {\"width\": [\"1 mm\", \"2 mm\"]}, \"show\": [\"impedance\"]}]}\n";
    (void)state;
    char folder[] = "/tmp/previous-XXXXXX";
    char study_path[64];
    char old_path[64];
    struct error error = {0};
    struct study study;
    struct study_problems problems = {0};
    assert_non_null(mkdtemp(folder));
    snprintf(study_path, sizeof study_path, "%s/study.json", folder);
    snprintf(old_path, sizeof old_path, "%s/old.json", folder);
    write_text(study_path, text);
    struct arena *arena = arena_create(&error);
    assert_false(study_read(study_path, arena, &study, &problems, &error));
    assert_int_equal(error.kind, ERROR_NONE);
    assert_int_equal(problems.count, 1);
    assert_string_equal(problems.items[0].path, "previous");
    write_text(old_path, "{\"format\": \"groundrules-rules 1\", \"rules\": [],\n"
                         " \"files\": [{\"name\": \"a.pdf\"}]}");
    assert_ok(study_read(study_path, arena, &study, &problems, &error));
    assert_string_equal(study.previous, old_path);
    remove(study_path);
    remove(old_path);
    rmdir(folder);
    arena_free(arena);
}

static void test_a_study_that_cannot_be_opened_is_a_system_error(void **state) {
    (void)state;
    struct error error = {0};
    struct error second = {0};
    struct study study;
    struct study_problems problems = {0};
    struct arena *arena = arena_create(&error);
    assert_false(study_read("/tmp/no-such-folder/s.json", arena, &study, &problems, &error));
    assert_int_equal(error.kind, ERROR_SYSTEM);
    assert_false(study_read("/tmp", arena, &study, &problems, &second));
    assert_int_equal(second.kind, ERROR_SYSTEM);
    arena_free(arena);
}

int main(int argc, char **argv) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_shipped_studies_have_nothing_wrong),
        cmocka_unit_test(test_the_cover_is_read_with_its_escapes_and_without_comments),
        cmocka_unit_test(test_a_board_adds_up_its_layers_with_their_tolerances),
        cmocka_unit_test(test_a_board_fills_only_what_is_not_known),
        cmocka_unit_test(test_an_edge_is_converted_to_a_full_ramp),
        cmocka_unit_test(test_half_open_ranges_of_a_signal_end_where_the_models_do),
        cmocka_unit_test(test_signals_hold_their_values_and_budgets),
        cmocka_unit_test(test_variants_are_all_combinations_in_the_order_written),
        cmocka_unit_test(test_settings_say_where_they_come_from),
        cmocka_unit_test(test_an_input_that_follows_another_stays_open_until_it_is_resolved),
        cmocka_unit_test(test_sweeps_charts_limits_and_tables_are_as_written),
        cmocka_unit_test(test_a_rule_searches_the_sweep_or_its_own_range),
        cmocka_unit_test(test_a_reference_and_a_table_are_read),
        cmocka_unit_test(test_a_manifest_gives_the_names_of_its_files),
        cmocka_unit_test(test_the_previous_issue_is_looked_for_beside_the_study),
        cmocka_unit_test(test_a_study_that_cannot_be_opened_is_a_system_error),
    };
    char path[1024];
    size_t length = 0;
    if (argc > 1)
        source_root = argv[1];
    snprintf(path, sizeof path, "%s/tests/study/whole.json", source_root);
    whole = read_bytes(path, &length);
    if (whole == NULL)
        return 1;
    int failed = cmocka_run_group_tests(tests, NULL, NULL);
    free(whole);
    return failed;
}
