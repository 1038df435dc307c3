#include "check.h"
#include "groundrules/error.h"

#include <string.h>

static void test_the_first_error_wins(void **state) {
    (void)state;
    struct error error = {0};
    assert_false(error_set(&error, ERROR_INPUT, "width is %d", 3));
    error_set(&error, ERROR_MEMORY, "second");
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_string_equal(error.message, "width is 3");
}

static void test_context_is_put_in_front_going_up(void **state) {
    (void)state;
    struct error error = {0};
    error_set(&error, ERROR_INPUT, "too wide");
    error_in(&error, "bars[%d]", 3);
    error_in(&error, "section");
    assert_string_equal(error.message, "section: bars[3]: too wide");
}

static void test_no_error_takes_no_context(void **state) {
    (void)state;
    struct error error = {0};
    assert_false(error_in(&error, "section"));
    assert_string_equal(error.message, "");
    assert_false(error_set(NULL, ERROR_INPUT, "nobody listens"));
    assert_false(error_in(NULL, "nobody"));
}

static void test_a_long_reason_is_cut_at_its_end_not_its_context(void **state) {
    (void)state;
    struct error error = {0};
    char reason[2000];
    memset(reason, 'x', sizeof reason);
    reason[sizeof reason - 1] = '\0';
    error_set(&error, ERROR_INPUT, "%s", reason);
    error_in(&error, "here");
    assert_memory_equal(error.message, "here: xxx", 9);
    assert_int_equal(strlen(error.message), sizeof error.message - 1);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_first_error_wins),
        cmocka_unit_test(test_context_is_put_in_front_going_up),
        cmocka_unit_test(test_no_error_takes_no_context),
        cmocka_unit_test(test_a_long_reason_is_cut_at_its_end_not_its_context),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
