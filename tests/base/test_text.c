#include "check.h"
#include "groundrules/text.h"

#include <string.h>

static void test_text_grows_and_ends_with_a_zero(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct text text = text_start(arena, &error);
    assert_string_equal(text_end(&text), "");
    for (int i = 0; i < 1000; i++) {
        text_add(&text, "ab");
        text_format(&text, "%d", i % 10);
        text_add_length(&text, "cdef", 1);
    }
    const char *whole = text_end(&text);
    assert_int_equal(strlen(whole), 4000);
    for (int i = 0; i < 1000; i++) {
        char want[5];
        snprintf(want, sizeof want, "ab%dc", i % 10);
        assert_memory_equal(whole + 4 * i, want, 4);
    }
    arena_free(arena);
}

static void test_characters_are_written_as_utf_8(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct text text = text_start(arena, &error);
    text_add_character(&text, 'A');
    text_add_character(&text, 0xB5);
    text_add_character(&text, 0x2126);
    text_add_character(&text, 0x1F600);
    assert_string_equal(text_end(&text), "A\xC2\xB5\xE2\x84\xA6\xF0\x9F\x98\x80");
    arena_free(arena);
}

static void test_a_failure_sticks(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct text text = text_start(arena, &error);
    arena_fail_after(1);
    text_add(&text, "lost");
    arena_fail_after(0);
    text_add(&text, "also lost");
    assert_null(text_end(&text));
    assert_int_equal(error.kind, ERROR_MEMORY);
    arena_free(arena);
}

static const char *const names[] = {"width",     "height",       "gap",           "dk",
                                    "thickness", "far_end_peak", "near_end_peak", "tied-one-end",
                                    "floating"};

static const char *nearest(const char *word) {
    return text_nearest(word, names, sizeof names / sizeof names[0]);
}

static void test_the_nearest_name_is_found(void **state) {
    (void)state;
    assert_string_equal(nearest("widht"), "width");
    assert_string_equal(nearest("Width"), "width");
    assert_string_equal(nearest("hight"), "height");
    assert_string_equal(nearest("gpa"), "gap");
    assert_string_equal(nearest("thicknes"), "thickness");
    assert_string_equal(nearest("far-end-peek"), "far_end_peak");
    assert_string_equal(nearest("tied_one_end"), "tied-one-end");
    assert_string_equal(nearest("near_peak"), "near_end_peak");
}

static void test_nothing_is_suggested_from_afar(void **state) {
    (void)state;
    assert_null(nearest("spacing"));
    assert_null(nearest("df"));
    assert_null(nearest(""));
    assert_null(nearest("completely different, and longer than any name that could be accepted"));
    assert_null(text_nearest("width", NULL, 0));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_text_grows_and_ends_with_a_zero),
        cmocka_unit_test(test_characters_are_written_as_utf_8),
        cmocka_unit_test(test_a_failure_sticks),
        cmocka_unit_test(test_the_nearest_name_is_found),
        cmocka_unit_test(test_nothing_is_suggested_from_afar),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
