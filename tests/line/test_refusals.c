#include "check.h"
#include "groundrules/line.h"

#include <string.h>

static const struct line_problem sound = {.count = 2,
                                          .length = 0.1,
                                          .inductance = {3e-7, 5e-8, 5e-8, 3e-7},
                                          .capacitance = {1e-10, -1e-11, -1e-11, 1e-10},
                                          .near = {{30, 0, 1}, {30, 0, 0}},
                                          .far = {{INFINITY, 5e-12, 0}, {INFINITY, 5e-12, 0}}};

static void refused_with(const struct line_problem *problem, double edge, const char *expected) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    assert_null(line_response_create(problem, edge, arena, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    if (strstr(error.message, expected) == NULL)
        print_error("message: %s\nexpected: %s\n", error.message, expected);
    assert_non_null(strstr(error.message, expected));
    arena_free(arena);
}

static void test_what_is_no_line_is_refused_by_name(void **state) {
    (void)state;
    struct line_problem p = sound;
    p.count = 0;
    refused_with(&p, 1e-9, "0 conductors");
    p.count = LINE_MOST_CONDUCTORS + 1;
    refused_with(&p, 1e-9, "9 conductors");
    p = sound;
    p.length = 0;
    refused_with(&p, 1e-9, "length is 0");
    p.length = NAN;
    refused_with(&p, 1e-9, "length is");
    p = sound;
    p.inductance[0] = -3e-7;
    refused_with(&p, 1e-9, "inductance[0][0]");
    p = sound;
    p.inductance[1] = 6e-8;
    refused_with(&p, 1e-9, "not symmetric");
    p = sound;
    p.inductance[1] = p.inductance[2] = 4e-7;
    refused_with(&p, 1e-9, "inductance is not positive definite");
    p = sound;
    p.capacitance[1] = p.capacitance[2] = -2e-10;
    refused_with(&p, 1e-9, "capacitance is not positive definite");
    p.capacitance[1] = p.capacitance[2] = 1e-11;
    refused_with(&p, 1e-9, "Maxwell");
    p = sound;
    p.capacitance[3] = INFINITY;
    refused_with(&p, 1e-9, "capacitance[1][1]");
    p = sound;
    p.far[1].capacitance = -1e-12;
    refused_with(&p, 1e-9, "far[1]");
    p = sound;
    p.near[1].resistance = NAN;
    refused_with(&p, 1e-9, "near[1]");
    p = sound;
    p.near[0].resistance = INFINITY;
    refused_with(&p, 1e-9, "near[0]");
    p = sound;
    p.near[0].emf = 0;
    refused_with(&p, 1e-9, "no near end is driven");
    p.near[0].emf = INFINITY;
    refused_with(&p, 1e-9, "near[0]: EMF");
    p = sound;
    p.far[1].emf = 1;
    refused_with(&p, 1e-9, "far[1]");
    refused_with(&sound, 0, "edge");
    refused_with(&sound, NAN, "edge");
}

static void test_a_question_outside_what_was_prepared_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct line_response *response = line_response_create(&sound, 1e-9, arena, &error);
    assert_ok(response != NULL);
    struct line_peak near = {7, 7, 7}, far = {7, 7, 7};
    assert_false(line_response_peaks(response, 1, 0.5e-9, &near, &far, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    error = (struct error){0};
    assert_false(line_response_peaks(response, 2, 1e-9, &near, &far, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_true(near.highest == 7 && far.highest == 7);
    arena_free(arena);
}

/* A lossless line between two shorts resonates without bound. */
static void test_a_resonance_that_nothing_damps_has_no_answer(void **state) {
    (void)state;
    struct line_problem p = {.count = 1,
                             .length = 0.15,
                             .inductance = {2.5e-7},
                             .capacitance = {1e-10},
                             .near = {{0, 0, 1}},
                             .far = {{0, 0, 0}}};
    struct error error = {0};
    double complex near[1], far[1];
    assert_ok(line_frequency_response(&p, 3e8, near, far, &error));
    p.far[0].resistance = INFINITY;
    assert_false(line_frequency_response(&p, 2e8 / (4 * 0.15), near, far, &error));
    assert_int_equal(error.kind, ERROR_SINGULAR);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_what_is_no_line_is_refused_by_name),
        cmocka_unit_test(test_a_question_outside_what_was_prepared_is_refused),
        cmocka_unit_test(test_a_resonance_that_nothing_damps_has_no_answer),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
