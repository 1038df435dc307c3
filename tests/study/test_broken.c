/* Whatever a study holds, reading it ends with a study, with problems in the order of the file or
 * with an error by value. */

#include "reading.h"

#include <dirent.h>

static const char *source_root = ".";
static char *whole;   /* tests/study/whole.json */
static char *minimal; /* studies/minimal.json */
static size_t whole_length, minimal_length;

static size_t columns_of_line(const char *text, size_t length, unsigned line) {
    size_t columns = 0;
    unsigned at = 1;
    for (size_t i = 0; i < length && at <= line; i++) {
        if (at == line && text[i] != '\n')
            columns += ((unsigned char)text[i] & 0xC0) != 0x80;
        at += text[i] == '\n';
    }
    return columns;
}

static unsigned lines_of(const char *text, size_t length) {
    unsigned lines = 1;
    for (size_t i = 0; i < length; i++)
        lines += text[i] == '\n';
    return lines;
}

static void assert_in_order(const struct reading *reading, const char *text, size_t length) {
    const struct study_problem *last = NULL;
    if (reading->error.kind != ERROR_NONE)
        print_error("%s\n", reading->error.message);
    assert_int_equal(reading->error.kind, ERROR_NONE);
    assert_true(reading->ok == (reading->problems.count == 0));
    for (size_t i = 0; i < reading->problems.count; i++) {
        const struct study_problem *problem = &reading->problems.items[i];
        assert_true(problem->line >= 1 && problem->line <= lines_of(text, length));
        assert_true(problem->column >= 1 &&
                    problem->column <= columns_of_line(text, length, problem->line) + 1);
        assert_true(problem->message[0] != '\0');
        assert_non_null(problem->path);
        if (last != NULL)
            assert_true(problem->line > last->line ||
                        (problem->line == last->line && problem->column >= last->column));
        last = problem;
    }
}

static bool check_text(const char *text, size_t length, bool must_fail) {
    struct reading reading = read_study_length(text, length);
    bool sound = reading.ok;
    assert_in_order(&reading, text, length);
    if (must_fail)
        assert_false(sound);
    reading_end(&reading);
    return sound;
}

static void test_every_broken_study_has_its_problems_in_the_order_of_the_file(void **state) {
    char path[1400];
    size_t count = 0;
    (void)state;
    snprintf(path, sizeof path, "%s/tests/study/bad", source_root);
    DIR *folder = opendir(path);
    assert_non_null(folder);
    for (struct dirent *entry; (entry = readdir(folder)) != NULL;) {
        size_t length = 0;
        if (strstr(entry->d_name, ".json") == NULL)
            continue;
        snprintf(path, sizeof path, "%s/tests/study/bad/%s", source_root, entry->d_name);
        char *text = read_bytes(path, &length);
        assert_non_null(text);
        check_text(text, length, true);
        free(text);
        count++;
    }
    closedir(folder);
    assert_true(count >= 60);
}

static void test_a_study_cut_anywhere_is_refused(void **state) {
    (void)state;
    size_t end = minimal_length;
    while (minimal[end - 1] != '}')
        end--;
    for (size_t i = 0; i < end; i++)
        check_text(minimal, i, true);
}

static void test_a_byte_changed_anywhere_does_no_harm(void **state) {
    static const char bytes[] = {'\0', '"', '\\', '{', '}', '[', ',', '0', '-', '/', '\xFF', '\n'};
    (void)state;
    char *text = malloc(minimal_length);
    assert_non_null(text);
    for (size_t i = 0; i < minimal_length; i++)
        for (size_t b = 0; b < sizeof bytes; b += 1 + i % 3) {
            memcpy(text, minimal, minimal_length);
            text[i] = bytes[b];
            check_text(text, minimal_length, false);
        }
    free(text);
}

/* The end of the value that starts here. */
static size_t value_end(const char *text, size_t at) {
    size_t depth = 0;
    do {
        if (text[at] == '"') {
            for (at++; text[at] != '"'; at++)
                at += text[at] == '\\';
        } else if (text[at] == '{' || text[at] == '[') {
            depth++;
        } else if (text[at] == '}' || text[at] == ']') {
            depth--;
        }
        at++;
    } while (depth > 0);
    return at;
}

static void test_a_value_of_another_kind_anywhere_does_no_harm(void **state) {
    static const char *const others[] = {"null",        "true",     "-1e999",
                                         "\"\"",        "[]",       "{}",
                                         "[[]]",        "[null]",   "{\"a\": {\"b\": null}}",
                                         "\"1e300 m\"", "\"open\"", "\"reference\""};
    (void)state;
    char *text = malloc(whole_length + 64);
    size_t changed = 0;
    assert_non_null(text);
    for (size_t i = 0; i < whole_length; i++) {
        /* Values follow a colon, a bracket or a comma; comments and keys do no harm either. */
        bool starts = i > 1 && strchr("\"{[", whole[i]) != NULL &&
                      (whole[i - 1] == '[' || (whole[i - 1] == ' ' && whole[i - 2] == ':') ||
                       (whole[i - 1] == ' ' && whole[i - 2] == ','));
        if (!starts)
            continue;
        size_t end = value_end(whole, i);
        for (size_t k = changed++ % 2; k < sizeof others / sizeof others[0]; k += 2) {
            int length = snprintf(text, whole_length + 64, "%.*s%s%s", (int)i, whole, others[k],
                                  whole + end);
            assert_true(length > 0 && (size_t)length < whole_length + 64);
            check_text(text, (size_t)length, false);
        }
    }
    free(text);
    assert_true(changed > 150);
}

static void test_another_key_anywhere_is_refused(void **state) {
    (void)state;
    char *text = malloc(whole_length + 1);
    size_t changed = 0;
    size_t sound = 0;
    assert_non_null(text);
    for (size_t i = 1; i < whole_length; i++) {
        if (whole[i] != '"' || strchr("{ ", whole[i - 1]) == NULL)
            continue;
        size_t end = value_end(whole, i);
        if (whole[end] != ':')
            continue;
        memcpy(text, whole, whole_length + 1);
        memset(text + i + 1, 'z', end - i - 2);
        sound += check_text(text, whole_length, false);
        changed++;
    }
    free(text);
    assert_true(changed > 100);
    /* The product and the signal "plain": identifiers that nothing else names. */
    assert_int_equal(sound, 2);
}

static void test_memory_that_runs_out_anywhere_is_told_as_such(void **state) {
    (void)state;
    static const char *const broken = "{\"document\": {\"nomber\": 1}, \"chapters\": [{}, 3]}";
    for (int which = 0; which < 2; which++) {
        const char *text = which == 0 ? minimal : broken;
        bool done = false;
        for (size_t calls = 1; !done; calls++) {
            struct error error = {0};
            struct study study = {0};
            struct study_problems problems = {0};
            struct arena *arena = arena_create(&error);
            assert_non_null(arena);
            arena_fail_after(calls);
            bool ok =
                study_read_text("t.json", text, strlen(text), arena, &study, &problems, &error);
            arena_fail_after(0);
            done = ok || error.kind == ERROR_NONE;
            if (!done) {
                assert_int_equal(error.kind, ERROR_MEMORY);
                assert_int_equal(problems.count, 0);
                assert_null(study.path);
            }
            assert_true(ok == (done && which == 0));
            arena_free(arena);
            assert_true(calls < 100000);
        }
    }
}

static void test_only_the_first_problems_are_kept_but_all_are_counted(void **state) {
    (void)state;
    char text[20000] = "{";
    size_t used = 1;
    for (int i = 0; i < 500; i++)
        used += (size_t)snprintf(text + used, sizeof text - used, "\"key%d\": 1,\n", i);
    snprintf(text + used, sizeof text - used, "\"chapters\": {}}");
    struct reading reading = read_study(text);
    assert_in_order(&reading, text, strlen(text));
    assert_int_equal(reading.problems.count, STUDY_MOST_PROBLEMS);
    /* 500 unknown keys, no document, chapters of the wrong kind */
    assert_int_equal(reading.problems.count + reading.problems.left_out, 502);
    reading_end(&reading);
}

static void test_columns_count_characters(void **state) {
    (void)state;
    struct reading reading = read_study("{\"\xC2\xB5\xE2\x84\xA6\": 1, \"document\": 2}");
    assert_in_order(&reading, "{\"..\": 1, \"document\": 2}", 24);
    assert_int_equal(reading.problems.count, 3);
    assert_int_equal(reading.problems.items[1].column, 2);
    assert_int_equal(reading.problems.items[2].column, 23);
    reading_end(&reading);
}

static char *read_at_root(const char *name, size_t *length) {
    char path[1024];
    snprintf(path, sizeof path, "%s/%s", source_root, name);
    return read_bytes(path, length);
}

int main(int argc, char **argv) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_broken_study_has_its_problems_in_the_order_of_the_file),
        cmocka_unit_test(test_a_study_cut_anywhere_is_refused),
        cmocka_unit_test(test_a_byte_changed_anywhere_does_no_harm),
        cmocka_unit_test(test_a_value_of_another_kind_anywhere_does_no_harm),
        cmocka_unit_test(test_another_key_anywhere_is_refused),
        cmocka_unit_test(test_memory_that_runs_out_anywhere_is_told_as_such),
        cmocka_unit_test(test_only_the_first_problems_are_kept_but_all_are_counted),
        cmocka_unit_test(test_columns_count_characters),
    };
    if (argc > 1)
        source_root = argv[1];
    whole = read_at_root("tests/study/whole.json", &whole_length);
    minimal = read_at_root("studies/minimal.json", &minimal_length);
    if (whole == NULL || minimal == NULL)
        return 1;
    int failed = cmocka_run_group_tests(tests, NULL, NULL);
    free(whole);
    free(minimal);
    return failed;
}
