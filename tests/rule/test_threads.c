/* The same study gives the same bytes.  usage: test_threads FOLDER */
#include "check.h"
#include "groundrules/guideline.h"

#include <string.h>

static const char *folder;

static void exports(int jobs, struct arena *arena, struct guideline_file **files, size_t *count) {
    struct error error = {0};
    struct study_problems problems = {0};
    struct guideline_file *made, manifest;
    struct study *study = arena_new(arena, 1, struct study, &error);
    struct guideline *guideline = arena_new(arena, 1, struct guideline, &error);
    char path[500];
    snprintf(path, sizeof path, "%s/attacked.json", folder);
    assert_ok(study != NULL && guideline != NULL);
    assert_ok(study_read(path, arena, study, &problems, &error));
    assert_ok(guideline_compute(study, &(struct guideline_options){.jobs = jobs}, arena, guideline,
                                &error));
    assert_ok(guideline_export(guideline, arena, &made, count, &error));
    assert_ok(guideline_manifest(guideline, made, *count, arena, &manifest, &error));
    *files = arena_new(arena, *count + 1, struct guideline_file, &error);
    assert_ok(*files != NULL);
    memcpy(*files, made, *count * sizeof *made);
    (*files)[(*count)++] = manifest;
}

static void compare_runs(int first_jobs, int second_jobs) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct guideline_file *first, *second;
    size_t first_count, second_count;
    assert_ok(arena != NULL);
    exports(first_jobs, arena, &first, &first_count);
    exports(second_jobs, arena, &second, &second_count);
    assert_int_equal(first_count, second_count);
    assert_true(first_count >= 3); /* rules.csv, a curve, rules.json */
    for (size_t i = 0; i < first_count; i++) {
        assert_string_equal(first[i].name, second[i].name);
        assert_int_equal(first[i].length, second[i].length);
        assert_memory_equal(first[i].bytes, second[i].bytes, first[i].length);
    }
    arena_free(arena);
}

static void test_the_number_of_threads_does_not_show_in_the_exports(void **state) {
    (void)state;
    compare_runs(1, 2);
}

static void test_a_second_run_gives_the_same_bytes(void **state) {
    (void)state;
    compare_runs(2, 2);
}

int main(int count, char **arguments) {
    folder = count > 1 ? arguments[1] : "tests/rule";
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_number_of_threads_does_not_show_in_the_exports),
        cmocka_unit_test(test_a_second_run_gives_the_same_bytes),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
