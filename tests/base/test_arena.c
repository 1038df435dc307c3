#include "check.h"
#include "groundrules/arena.h"

#include <string.h>

static void test_memory_is_zeroed_and_aligned_also_after_a_rewind(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_non_null(arena);
    struct arena_mark mark = arena_mark(arena);
    for (int round = 0; round < 3; round++) {
        for (size_t n = 1; n < 40000; n = n * 3 + 1) {
            double *numbers = arena_new(arena, n, double, &error);
            assert_non_null(numbers);
            assert_int_equal((uintptr_t)numbers % 64, 0);
            for (size_t i = 0; i < n; i++) {
                assert_true(numbers[i] == 0.0);
                numbers[i] = 1.0;
            }
        }
        arena_rewind(arena, mark);
    }
    arena_free(arena);
}

static void test_a_product_that_overflows_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_null(arena_take(arena, SIZE_MAX / 4, 8, &error));
    assert_int_equal(error.kind, ERROR_MEMORY);
    arena_free(arena);
}

static void test_a_call_can_be_made_to_fail(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    arena_fail_after(2);
    assert_non_null(arena_copy(arena, "one", &error));
    assert_null(arena_copy(arena, "two", &error));
    assert_null(arena_print(arena, &error, "%d", 3));
    arena_fail_after(0);
    assert_non_null(arena_copy(arena, "four", &error));
    arena_free(arena);
    arena_free(NULL);
}

static void test_text_is_copied_and_printed(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_string_equal(arena_copy_length(arena, "abcdef", 3, &error), "abc");
    assert_string_equal(arena_print(arena, &error, "%s-%d", "x", 7), "x-7");
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_memory_is_zeroed_and_aligned_also_after_a_rewind),
        cmocka_unit_test(test_a_product_that_overflows_is_refused),
        cmocka_unit_test(test_a_call_can_be_made_to_fail),
        cmocka_unit_test(test_text_is_copied_and_printed),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
