#include "check.h"
#include "groundrules/guideline.h"

#include <stdlib.h>
#include <string.h>
#include <unistd.h>

/* One rule on the quick model; FIRST and SECOND replace the height and the limit. */
static const char study_form[] =
    "{\"document\": {\"number\": \"T\", \"title\": \"T\", \"revision\": \"B\", \"date\": "
    "\"2026-01-01\"},"
    "%s \"chapters\": [{\"id\": \"w\", \"question\": \"?\", \"model\": \"trace\","
    "\"given\": {\"height\": \"%s\", \"thickness\": \"35 um\", \"dk\": \"4.3\"},"
    "\"vary\": {\"width\": \"0.1 mm .. 4 mm in 10 points log\"}, \"show\": [\"impedance\"],"
    "\"rules\": [{\"id\": \"%s\", \"strength\": \"must\", \"find\": \"smallest width\","
    "\"grid\": \"0.01 mm\", \"so_that\": \"impedance <= 60 ohm\"}]}]}";

static void computed(const char *previous, const char *height, const char *id, struct arena *arena,
                     struct guideline *guideline) {
    struct error error = {0};
    struct study *study = arena_new(arena, 1, struct study, &error);
    struct study_problems problems = {0};
    char text[1200];
    int length = snprintf(text, sizeof text, study_form, previous, height, id);
    if (!study_read_text("/tmp/changes-test.json", text, (size_t)length, arena, study, &problems,
                         &error)) {
        for (size_t i = 0; i < problems.count; i++)
            print_error("%s\n", problems.items[i].message);
        fail();
    }
    assert_ok(
        guideline_compute(study, &(struct guideline_options){.jobs = 1}, arena, guideline, &error));
}

static void write_manifest(const struct guideline *guideline, const char *path,
                           struct arena *arena) {
    struct error error = {0};
    struct guideline_file manifest;
    assert_ok(guideline_manifest(guideline, NULL, 0, arena, &manifest, &error));
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(manifest.bytes, 1, manifest.length, file), manifest.length);
    assert_int_equal(fclose(file), 0);
}

static void test_what_became_stricter_looser_new_and_gone_is_told_with_the_reason(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    char path[] = "/tmp/groundrules-changes-XXXXXX", previous[100];
    int handle = mkstemp(path);
    assert_true(handle >= 0);
    struct guideline before, after;
    computed("", "0.2 mm", "W-1", arena, &before);
    assert_int_equal(before.change_count, 0);
    assert_null(before.previous_revision);
    write_manifest(&before, path, arena);
    snprintf(previous, sizeof previous, "\"previous\": \"%s\",", path);

    computed(previous, "0.2 mm", "W-1", arena, &after);
    assert_int_equal(after.change_count, 1);
    assert_int_equal(after.changes[0].kind, GUIDELINE_SAME);
    assert_string_equal(after.previous_revision, "B");

    computed(previous, "0.3 mm", "W-1", arena, &after);
    assert_int_equal(after.changes[0].kind, GUIDELINE_STRICTER);
    assert_true(after.changes[0].after > after.changes[0].before);
    assert_string_equal(after.changes[0].why, "height 0.2\u2009mm → 0.3\u2009mm");

    computed(previous, "0.1 mm", "W-1", arena, &after);
    assert_int_equal(after.changes[0].kind, GUIDELINE_LOOSER);

    computed(previous, "0.2 mm", "W-2", arena, &after);
    assert_int_equal(after.change_count, 2);
    assert_int_equal(after.changes[0].kind, GUIDELINE_NEW);
    assert_int_equal(after.changes[1].kind, GUIDELINE_GONE);
    assert_int_equal(remove(path), 0);
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_what_became_stricter_looser_new_and_gone_is_told_with_the_reason),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
