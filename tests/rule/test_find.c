#include "analytic.h"

static double falling(const double *x) {
    return 0.1 * 1.23e-3 / x[GAP];
}

static void test_a_minimum_is_rounded_up_to_the_grid(void **state) {
    (void)state;
    struct question q = smallest_gap(falling);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 13);
    assert_close(q.finding.worst, falling((double[]){1.3e-3}), 1e-12);
    assert_close(q.finding.nearest, falling((double[]){1.2e-3}), 1e-12);
    assert_close(q.finding.margin, 1 - 1.23 / 1.3, 1e-9);
}

static double rising(const double *x) {
    return x[LENGTH];
}

static void test_a_maximum_is_rounded_down_to_the_grid(void **state) {
    (void)state;
    struct question q = smallest_gap(rising);
    q.rule.find = LENGTH;
    q.rule.find_smallest = false;
    q.rule.within = (struct interval){5e-3, 0.3};
    q.rule.grid = 1e-3;
    q.rule.condition.limit = 0.0879;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 87);
}

static double at_least_rising(const double *x) {
    return 50 * x[GAP] / 2.04e-3;
}

static void test_a_condition_may_ask_for_at_least(void **state) {
    (void)state;
    struct question q = smallest_gap(at_least_rising);
    q.rule.condition = (struct study_condition){.at_most = false, .limit = 50};
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 21);
}

static void test_met_everywhere_and_cannot_be_met_are_said(void **state) {
    (void)state;
    struct question q = smallest_gap(falling);
    q.rule.condition.limit = 5;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_MET_EVERYWHERE);
    assert_int_equal(q.finding.multiple, 1);
    q.rule.condition.limit = 1e-3;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_CANNOT_BE_MET);
    assert_close(q.finding.worst, falling((double[]){20e-3}), 1e-12);
}

/* Holds between 1 and 2 mm, fails between 2 and 4.3 mm, holds again. */
static double island(const double *x) {
    double gap = x[GAP] * 1e3;
    return gap < 1 ? 0.3 : gap < 2 ? 0.05 : gap < 4.3 ? 0.2 : 0.05 / gap;
}

static void test_an_island_is_never_the_answer(void **state) {
    (void)state;
    struct question q = smallest_gap(island);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 43);
}

/* A smooth hump at 6.5 mm that just fails, far beyond the first place that holds. */
static double hump(const double *x) {
    double gap = x[GAP] * 1e3;
    return 0.1 * (1.2 / gap + 0.93 * exp(-pow((gap - 6.5) / 0.8, 2)));
}

static void test_a_hump_between_samples_is_climbed(void **state) {
    (void)state;
    struct question q = smallest_gap(hump);
    ask(&q);
    double beyond = 6.5;
    while (hump((double[]){beyond * 1e-3}) > 0.1)
        beyond += 0.001;
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, (long)ceil(beyond * 10 - 1e-9));
}

/* The worst length lies inside its range, the worst edge too. */
static double inside(const double *x) {
    double length = 1 + 2 * exp(-pow(log(x[LENGTH] / 37e-3) / 0.6, 2));
    double edge = 1 + exp(-pow(log(x[EDGE] / 2.2e-9) / 0.7, 2));
    return 0.1e-3 * length * edge / x[GAP];
}

static void test_a_maximum_inside_a_range_is_found(void **state) {
    (void)state;
    struct question q = smallest_gap(inside);
    range(&q, LENGTH, 1e-3, 0.2);
    range(&q, EDGE, 0.5e-9, 10e-9);
    q.rule.grid = 0.01e-3;
    ask(&q);
    /* 3 * 2 * 0.1e-3 / gap <= 0.1 */
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_in_range(q.finding.multiple, 600, 601);
    assert_close(q.finding.worst_inputs[LENGTH], 37e-3, 0.02);
    assert_close(q.finding.worst_inputs[EDGE], 2.2e-9, 0.02);
}

static double with_height(const double *x) {
    return 0.1 * 2e-3 / x[GAP] * x[HEIGHT] / 1e-3;
}

static void test_the_tolerance_is_held_at_its_worse_end(void **state) {
    (void)state;
    struct question q = smallest_gap(with_height);
    q.variant.settings[HEIGHT].minus = q.variant.settings[HEIGHT].plus = 0.1e-3;
    ask(&q);
    assert_int_equal(q.finding.multiple, 22);
    assert_close(q.finding.worst_inputs[HEIGHT], 1.1e-3, 1e-9);
    q.rule.nominal = true;
    ask(&q);
    assert_int_equal(q.finding.multiple, 20);
}

static double by_receiver(const double *x) {
    return 0.1 * 1e-3 / x[GAP] * (x[RECEIVER] == 1 ? 2.55 : 1);
}

static void test_either_receiver_end_is_tried(void **state) {
    (void)state;
    struct question q = smallest_gap(by_receiver);
    ask(&q);
    assert_int_equal(q.finding.multiple, 10);
    q.variant.settings[RECEIVER].range = (struct interval){0, 1};
    ask(&q);
    assert_int_equal(q.finding.multiple, 26);
    assert_true(q.finding.worst_inputs[RECEIVER] == 1);
}

/* "No worse than 0.3 mm over a plane 0.19 mm down": height/gap alone counts, in every situation. */
static double over_height(const double *x) {
    return x[LENGTH] * x[HEIGHT] / x[GAP];
}

static void test_a_reference_board_is_compared_in_the_same_situation(void **state) {
    (void)state;
    struct question q = smallest_gap(over_height);
    struct study_stackup near = {.height = {.value = 0.19e-3}};
    range(&q, LENGTH, 1e-3, 0.1);
    fix(&q, HEIGHT, 0.7e-3);
    q.variant.settings[HEIGHT].minus = q.variant.settings[HEIGHT].plus = 0.07e-3;
    q.rule.condition = (struct study_condition){.at_most = true, .against = STUDY_REFERENCE};
    q.rule.reference.stackup = &near;
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        q.rule.reference.values[i] = NAN;
    q.rule.reference.values[GAP] = 0.3e-3;
    ask(&q);
    /* gap >= 0.3 mm * 0.77 / 0.19 = 1.2158 mm, the reference at its nominal value */
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 13);
}

static void test_what_the_fab_cannot_make_is_no_answer(void **state) {
    (void)state;
    struct question q = smallest_gap(falling);
    struct study_stackup board = {.smallest_gap = 2.05e-3};
    q.variant.stackup = &board;
    ask(&q);
    /* Met by everything that the fab can make: from 2.1 mm on the grid. */
    assert_int_equal(q.finding.status, GUIDELINE_MET_EVERYWHERE);
    assert_int_equal(q.finding.multiple, 21);
    board.smallest_gap = 30e-3;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_BELOW_FAB);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_minimum_is_rounded_up_to_the_grid),
        cmocka_unit_test(test_a_maximum_is_rounded_down_to_the_grid),
        cmocka_unit_test(test_a_condition_may_ask_for_at_least),
        cmocka_unit_test(test_met_everywhere_and_cannot_be_met_are_said),
        cmocka_unit_test(test_an_island_is_never_the_answer),
        cmocka_unit_test(test_a_hump_between_samples_is_climbed),
        cmocka_unit_test(test_a_maximum_inside_a_range_is_found),
        cmocka_unit_test(test_the_tolerance_is_held_at_its_worse_end),
        cmocka_unit_test(test_either_receiver_end_is_tried),
        cmocka_unit_test(test_a_reference_board_is_compared_in_the_same_situation),
        cmocka_unit_test(test_what_the_fab_cannot_make_is_no_answer),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
