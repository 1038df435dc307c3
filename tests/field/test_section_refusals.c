#include "check.h"
#include "groundrules/section.h"

#include <string.h>

static const struct section_problem sound = {
    .height = 1e-3,
    .dk = 4.3,
    .count = 2,
    .conductors = {{0, 0.3e-3, 35e-6, 0}, {0.6e-3, 0.3e-3, 35e-6, 0}}};

static void refused(const struct section_problem *problem, const char *expected) {
    struct error error = {0};
    struct section_solution solution = {.count = 7};
    assert_false(section_solve(problem, &solution, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    if (strstr(error.message, expected) == NULL)
        print_error("message: %s\nexpected: %s\n", error.message, expected);
    assert_non_null(strstr(error.message, expected));
    assert_int_equal(solution.count, 7);
    struct error plain = {0};
    assert_false(section_solve_plain(problem, &solution, &plain));
    assert_string_equal(plain.message, error.message);
}

static void test_what_is_no_section_is_refused_by_name(void **state) {
    (void)state;
    static const double wrong[] = {0, -1e-3, NAN, INFINITY};
    struct section_problem p;
    for (size_t i = 0; i < 4; i++) {
        p = sound;
        p.height = wrong[i];
        refused(&p, "height");
        p = sound;
        p.conductors[1].width = wrong[i];
        refused(&p, "conductor 2: ");
    }
    p = sound;
    p.dk = 0.5;
    refused(&p, "dk is 0.5");
    p.dk = NAN;
    refused(&p, "dk");
    p = sound;
    p.count = 0;
    refused(&p, "0 conductors");
    p.count = SECTION_MOST_CONDUCTORS + 1;
    refused(&p, "17 conductors");
    p = sound;
    p.conductors[0].thickness = -1e-6;
    refused(&p, "conductor 1: thickness");
    p.conductors[0].thickness = 1e-12;
    refused(&p, "use 0 for a sheet");
    p = sound;
    p.conductors[1].left = 0.2e-3;
    refused(&p, "overlap by 0.0001 m");
    p.conductors[1].left = 0.3e-3;
    refused(&p, "touch or nearly");
    p.conductors[1].left = -0.5e-3;
    refused(&p, "not in order");
    p = sound;
    p.conductors[0].width = 1e3;
    refused(&p, "of the height");
}

static void test_what_cannot_be_added_is_refused_by_name(void **state) {
    (void)state;
    struct section_problem p = sound;
    p.conductors[1].etch = -1e-6;
    refused(&p, "conductor 2: etch is -1e-06 m");
    p.conductors[1].etch = 0.14e-3;
    refused(&p, "leaves no top");
    p.conductors[1].etch = 0.1e-3;
    p.conductors[1].thickness = 5e-6;
    refused(&p, "at most 10 of it");
    p.conductors[1].thickness = 0;
    refused(&p, "etch");
    p = sound;
    p.mask = -1e-6;
    refused(&p, "mask is -1e-06 m");
    p.mask = NAN;
    refused(&p, "mask is nan m");
    p.mask = 1e-9;
    refused(&p, "of the height");
    p.mask = 20e-6;
    refused(&p, "mask_dk is 0");
    p = sound;
    p.cover = -1;
    refused(&p, "cover is -1 m");
    p.cover = 35e-6;
    refused(&p, "must be more than 3.5e-05 m");
    p.cover = 1e-3;
    refused(&p, "cover_dk is 0");
    p.cover_dk = 3;
    p.conductors[1].left = 1;
    refused(&p, "copper reaches over");
    p = sound;
    p.cover = 1e-3;
    p.cover_dk = 1;
    p.plane = SECTION_PLANE_ENDS;
    refused(&p, "needs an endless plane");
    p = sound;
    p.plane = SECTION_PLANE_ENDS;
    p.plane_end = INFINITY;
    refused(&p, "plane_end is at inf m");
    p.plane = (enum section_plane)7;
    refused(&p, "plane is 7");
    p.plane = SECTION_NO_PLANE;
    p.count = 1;
    refused(&p, "needs 2");
}

static void test_a_coating_that_buries_thin_copper_between_thick_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct section_solution solution = {.count = 7};
    struct section_problem p = {.height = 1e-3,
                                .dk = 4.3,
                                .mask = 0.4e-3,
                                .mask_dk = 3,
                                .count = 3,
                                .conductors = {{0, 0.3e-3, 70e-6, 0},
                                               {0.4e-3, 0.1e-3, 35e-6, 0},
                                               {0.6e-3, 0.3e-3, 70e-6, 0}}};
    assert_false(section_solve(&p, &solution, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "thinner copper between thicker"));
    assert_int_equal(solution.count, 7);
}

static void test_every_failing_allocation_is_reported(void **state) {
    (void)state;
    struct section_problem p = sound;
    p.mask = 25e-6;
    p.mask_dk = 3.5;
    bool solved = false;
    size_t calls = 0;
    while (!solved && calls < 1000) {
        struct error error = {0};
        struct section_solution solution = {.count = 7};
        arena_fail_after(++calls);
        solved = section_solve(&p, &solution, &error);
        arena_fail_after(0);
        assert_int_equal(error.kind, solved ? ERROR_NONE : ERROR_MEMORY);
        assert_int_equal(solution.count, solved ? 2 : 7);
    }
    assert_true(solved && calls > 10);
}

static void test_a_section_without_signals_cannot_be_reduced(void **state) {
    (void)state;
    struct error error = {0};
    struct section_solution solution, reduced = {.count = 7};
    assert_ok(section_solve(&sound, &solution, &error));
    static const enum section_tie ties[] = {SECTION_TIED, SECTION_FLOATING};
    assert_false(section_reduce(&solution, ties, &reduced, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_int_equal(reduced.count, 7);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_what_is_no_section_is_refused_by_name),
        cmocka_unit_test(test_what_cannot_be_added_is_refused_by_name),
        cmocka_unit_test(test_a_coating_that_buries_thin_copper_between_thick_is_refused),
        cmocka_unit_test(test_every_failing_allocation_is_reported),
        cmocka_unit_test(test_a_section_without_signals_cannot_be_reduced),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
