/* Every bound here is exact by algebra: the model is a formula of the test's own. */
#include "analytic.h"

static double peak_at_gap(analytic *formula, double gap) {
    return formula((double[ANALYTIC_INPUTS]){[GAP] = gap});
}

/* ---- rounding to the grid ---- */

static double falling(const double *x) {
    return 0.1 * 1.23e-3 / x[GAP];
}

static void test_a_minimum_is_rounded_up_to_the_grid(void **state) {
    (void)state;
    struct question q = smallest_gap(falling);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 13);
    assert_close(q.finding.worst, peak_at_gap(falling, 1.3e-3), 1e-12);
    assert_close(q.finding.nearest, peak_at_gap(falling, 1.2e-3), 1e-12);
    assert_close(q.finding.margin, 1 - 1.23 / 1.3, 1e-9);
}

static double rising(const double *x) {
    return x[LENGTH];
}

static struct question largest_length(analytic *formula, double limit) {
    struct question q = smallest_gap(formula);
    q.rule.find = LENGTH;
    q.rule.find_smallest = false;
    q.rule.within = (struct interval){5e-3, 0.3};
    q.rule.grid = 1e-3;
    q.rule.condition.limit = limit;
    return q;
}

static void test_a_maximum_is_rounded_down_to_the_grid(void **state) {
    (void)state;
    struct question q = largest_length(rising, 0.0879);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 87);
    assert_close(q.finding.nearest, 0.088, 1e-12);
}

static double on_grid;
static double falling_to_grid(const double *x) {
    return 0.1 * (on_grid * 0.1e-3) / x[GAP];
}

static void test_a_bound_that_lies_on_the_grid_is_not_moved(void **state) {
    (void)state;
    for (int multiple = 2; multiple < 200; multiple += 3) {
        struct question q = smallest_gap(falling_to_grid);
        on_grid = multiple;
        ask(&q);
        assert_int_equal(q.finding.status, GUIDELINE_FOUND);
        assert_int_equal(q.finding.multiple, multiple);
    }
    struct question q = largest_length(rising, 0.087);
    ask(&q);
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
    assert_close(q.finding.margin, 2.1 / 2.04 - 1, 1e-9);
}

static void test_the_error_of_a_solution_counts_against_the_rule(void **state) {
    (void)state;
    struct question q = smallest_gap(falling);
    analytic_error = 0.012;
    ask(&q);
    /* 0.123 mV m / gap + 12 mV <= 100 mV: gap >= 1.3977 mm */
    assert_int_equal(q.finding.multiple, 14);
    q = smallest_gap(at_least_rising);
    q.rule.condition = (struct study_condition){.at_most = false, .limit = 50};
    analytic_error = 2;
    ask(&q);
    /* 50 gap / 2.04 mm - 2 >= 50: gap >= 2.1216 mm */
    assert_int_equal(q.finding.multiple, 22);
}

/* ---- where there is nothing to find ---- */

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
    assert_close(q.finding.worst, peak_at_gap(falling, 20e-3), 1e-12);
}

static double without_answer(const double *x) {
    return x[LENGTH] > 0.05 ? NAN : 0.01;
}

static void test_a_case_without_an_answer_does_not_hold(void **state) {
    (void)state;
    struct question q = smallest_gap(without_answer);
    range(&q, LENGTH, 1e-3, 0.04);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_MET_EVERYWHERE);
    range(&q, LENGTH, 1e-3, 0.06);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_CANNOT_BE_MET);
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
    board = (struct study_stackup){.smallest_width = 0.31e-3};
    ask(&q);
    /* The width that is given is 0.3 mm. */
    assert_int_equal(q.finding.status, GUIDELINE_BELOW_FAB);
}

static double rising_with_gap(const double *x) {
    return 0.1 * x[GAP] / 1.05e-3;
}

static void test_a_largest_value_below_the_fabs_smallest_is_said_to_be_that(void **state) {
    (void)state;
    struct question q = smallest_gap(rising_with_gap);
    struct study_stackup board = {.smallest_gap = 0.5e-3};
    q.rule.find_smallest = false;
    q.variant.stackup = &board;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 10);
    board.smallest_gap = 2e-3;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_BELOW_FAB);
    q.rule.condition.limit = 1e-3; /* not even the smallest gap of the range would do */
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_CANNOT_BE_MET);
}

/* ---- islands and humps of what is found ---- */

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

/* Holds up to 30 mm, fails up to 45 mm, holds up to 100 mm, fails beyond. */
static double two_islands(const double *x) {
    double length = x[LENGTH] * 1e3;
    return length < 30.5 ? 0.05 : length < 45 ? 0.15 : length < 100 ? 0.05 : 0.2;
}

static void test_the_largest_value_lies_before_the_first_failure(void **state) {
    (void)state;
    struct question q = largest_length(two_islands, 0.1);
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 30);
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
    while (peak_at_gap(hump, beyond * 1e-3) > 0.1)
        beyond += 0.001;
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, (long)ceil(beyond * 10 - 1e-9));
}

/* Humps beside the ends of the range, between the last two samples. */
static double hump_place;
static double low_hump(const double *x) {
    double gap = x[GAP] * 1e3;
    return 0.1 * (0.8 + 0.3 * exp(-pow((gap - hump_place) / 0.3, 2)));
}

static void test_humps_beside_the_ends_of_the_range_are_seen(void **state) {
    (void)state;
    struct question q = smallest_gap(low_hump);
    q.rule.within = (struct interval){10e-3, 20e-3};
    hump_place = 19.6; /* fails up to 19.6 mm + 0.3 mm sqrt(ln 1.5) = 19.791 mm */
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 198);
    hump_place = 10.3; /* up to 10.491 mm */
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 105);
}

/* The worst gap that a rule permits need not be its bound. */
static double later_hump(const double *x) {
    double gap = x[GAP] * 1e3;
    return 0.1 * (1.17 / gap + 0.8 * exp(-pow((gap - 6.5) / 2, 2)));
}

static void test_the_worst_case_named_is_the_worst_of_all_that_is_permitted(void **state) {
    (void)state;
    struct question q = smallest_gap(later_hump);
    q.rule.condition.limit = 0.12;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 10);
    assert_close(q.finding.worst, peak_at_gap(later_hump, 1e-3), 1e-9);
    q.rule.within.from = 2e-3;
    ask(&q);
    double worst = 0;
    for (int multiple = 20; multiple <= 200; multiple++)
        worst = fmax(worst, peak_at_gap(later_hump, multiple * 0.1e-3));
    assert_int_equal(q.finding.status, GUIDELINE_MET_EVERYWHERE);
    assert_close(q.finding.worst, worst, 1e-3);
}

/* ---- inside the ranges ---- */

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

/* A resonance an eighth wide (e to the -1 at 12 %), wherever it lies in a range of 200 to 1. */
static double resonance;
static double narrow(const double *x) {
    return 0.1e-3 * (1 + 2 * exp(-pow(log(x[LENGTH] / resonance) / 0.12, 2))) / x[GAP];
}

static void test_a_narrow_maximum_is_found_wherever_it_lies(void **state) {
    (void)state;
    for (resonance = 1.3e-3; resonance < 0.2; resonance *= 1.09) {
        struct question q = smallest_gap(narrow);
        range(&q, LENGTH, 1e-3, 0.2);
        q.rule.grid = 0.01e-3;
        ask(&q);
        assert_int_equal(q.finding.status, GUIDELINE_FOUND);
        /* 3 * 0.1e-3 / gap <= 0.1; a grid step is 0.3 % of it */
        assert_in_range(q.finding.multiple, 299, 301);
        assert_close(q.finding.worst_inputs[LENGTH], resonance, 0.02);
    }
}

/* Linear and not from zero: 25 ohm to 30 ohm; linear from zero; logarithmic. */
static double best_source;
static double bent_source(const double *x) {
    return 0.1e-3 * (4 - pow((x[SOURCE] - best_source) / 100, 2)) / x[GAP];
}

static void test_linear_and_logarithmic_ranges_are_searched_inside(void **state) {
    (void)state;
    const struct {
        double from, to, worst;
    } ranges[] = {{25, 30, 27.2}, {0, 80, 31}, {10, 1000, 130}, {10, 1000, 10}, {25, 30, 30}};
    for (size_t i = 0; i < sizeof ranges / sizeof *ranges; i++) {
        struct question q = smallest_gap(bent_source);
        best_source = ranges[i].worst;
        range(&q, SOURCE, ranges[i].from, ranges[i].to);
        q.rule.grid = 0.01e-3;
        ask(&q);
        assert_int_equal(q.finding.status, GUIDELINE_FOUND);
        assert_in_range(q.finding.multiple, 399, 401);
    }
}

static double by_receiver(const double *x) {
    /* At the near receiver the weak driver is the worse one. */
    double driver = x[RECEIVER] == 1 ? 2.55 * x[SOURCE] / 100 : 25 / x[SOURCE];
    return 0.1 * 1e-3 / x[GAP] * driver;
}

static void test_either_receiver_end_is_tried_with_its_own_worst_driver(void **state) {
    (void)state;
    struct question q = smallest_gap(by_receiver);
    range(&q, SOURCE, 25, 100);
    ask(&q);
    assert_int_equal(q.finding.multiple, 10);
    q.variant.settings[RECEIVER].range = (struct interval){0, 1};
    ask(&q);
    assert_int_equal(q.finding.multiple, 26);
    assert_true(q.finding.worst_inputs[RECEIVER] == 1);
    assert_true(q.finding.worst_inputs[SOURCE] == 100);
}

/* ---- tolerances ---- */

static double with_height(const double *x) {
    return 0.1 * 2e-3 / x[GAP] * x[HEIGHT] / 1e-3;
}

static void test_the_tolerance_is_held_at_its_worse_end(void **state) {
    (void)state;
    struct question q = smallest_gap(with_height);
    tolerance(&q, HEIGHT, 1e-3, 0.1e-3);
    ask(&q);
    assert_int_equal(q.finding.multiple, 22);
    assert_close(q.finding.worst_inputs[HEIGHT], 1.1e-3, 1e-9);
    q.rule.nominal = true;
    ask(&q);
    assert_int_equal(q.finding.multiple, 20);
}

/* The worse permittivity changes sides with the length. */
static double with_both(const double *x) {
    double side = x[LENGTH] < 0.05 ? 4 / x[DK] : x[DK] / 4 * 0.99;
    return 0.1 * 2e-3 / x[GAP] * x[HEIGHT] / 1e-3 * side;
}

static void test_the_worst_of_all_corners_of_two_tolerances_is_found(void **state) {
    (void)state;
    struct question q = smallest_gap(with_both);
    tolerance(&q, HEIGHT, 1e-3, 0.1e-3);
    tolerance(&q, DK, 4, 0.2);
    range(&q, LENGTH, 1e-3, 0.1);
    q.rule.grid = 0.01e-3;
    ask(&q);
    /* 2 mm * 1.1 * 4 / 3.8 = 2.3158 mm against 2 mm * 1.1 * 1.05 * 0.99 = 2.2869 mm */
    assert_int_equal(q.finding.multiple, 232);
    assert_close(q.finding.worst_inputs[DK], 3.8, 1e-9);
    assert_true(q.finding.worst_inputs[LENGTH] < 0.05);
}

static double inside_tolerance(const double *x) {
    return 0.1e-3 * (2 - pow((x[DK] - 4.07) / 0.2, 2)) / x[GAP];
}

static void test_a_maximum_inside_a_tolerance_is_found(void **state) {
    (void)state;
    struct question q = smallest_gap(inside_tolerance);
    tolerance(&q, DK, 4, 0.2);
    q.rule.grid = 0.01e-3;
    ask(&q);
    assert_in_range(q.finding.multiple, 199, 201);
    assert_close(q.finding.worst_inputs[DK], 4.07, 2e-3);
}

/* ---- references ---- */

/* "No worse than 0.3 mm over a plane 0.19 mm down": height/gap alone counts, in every situation. */
static double over_height(const double *x) {
    return x[LENGTH] * x[HEIGHT] / x[GAP];
}

static void test_a_reference_board_is_compared_in_the_same_situation(void **state) {
    (void)state;
    struct question q = smallest_gap(over_height);
    struct study_stackup near;
    range(&q, LENGTH, 1e-3, 0.1);
    tolerance(&q, HEIGHT, 0.7e-3, 0.07e-3);
    against(&q, &near, 0.19e-3);
    q.rule.reference.values[GAP] = 0.3e-3;
    ask(&q);
    /* gap >= 0.3 mm * 0.77 / 0.19 = 1.2158 mm, the reference at its nominal value */
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 13);
    /* 0.8 of it: 1.5197 mm */
    q.rule.condition.share = 0.8;
    ask(&q);
    assert_int_equal(q.finding.multiple, 16);
}

static void test_a_reference_on_the_same_board_stands_at_its_nominal_value(void **state) {
    (void)state;
    struct question q = smallest_gap(over_height);
    range(&q, LENGTH, 1e-3, 0.1);
    tolerance(&q, HEIGHT, 0.7e-3, 0.07e-3);
    q.rule.condition.against = STUDY_REFERENCE;
    q.rule.reference.values[GAP] = 1e-3;
    ask(&q);
    assert_int_equal(q.finding.status, GUIDELINE_FOUND);
    assert_int_equal(q.finding.multiple, 11);
}

/* Against the reference board (plane at 0.2 mm) there is a sharp ridge where edge and length agree;
 * along it the ratio rises slowly to 1 at `crest`.  Off the ridge it falls faster than it rises
 * along it, so a search along the axes stands still wherever it meets it. */
static double crest;
static double ridged(const double *x) {
    double off = fabs(log(x[LENGTH] / x[EDGE] / 2.3e7));
    double along = 3 * pow(log(x[EDGE] / crest), 2);
    return x[HEIGHT] < 0.5e-3 ? 1 + 2 * off + along : 3e-3 / x[GAP];
}

static void test_a_ridge_across_the_axes_is_followed(void **state) {
    (void)state;
    for (crest = 1.2e-9; crest < 2.8e-9; crest *= 1.07) {
        struct question q = smallest_gap(ridged);
        struct study_stackup near;
        range(&q, LENGTH, 1e-3, 0.1);
        range(&q, EDGE, 1e-9, 3e-9);
        against(&q, &near, 0.2e-3);
        q.rule.grid = 3e-6;
        ask(&q);
        /* gap >= 3 mm: 1000 steps of the grid */
        assert_int_equal(q.finding.status, GUIDELINE_FOUND);
        assert_in_range(q.finding.multiple, 998, 1001);
    }
}

/* ---- counts ---- */

static double worst_count;
static bool split; /* a formula was asked for a part of a via */

static double counted(const double *x) {
    split = split || x[VIAS] != floor(x[VIAS]);
    return 0.1e-3 * (1 + 9 / (1 + fabs(x[VIAS] - worst_count))) / x[GAP];
}

/* The worst count lies within the range, at neither end; past the number of samples of an axis the
 * climb finds it. */
static void test_a_range_of_a_count_is_searched_in_whole_numbers(void **state) {
    (void)state;
    static const double cases[][3] = {{2, 4, 3}, {2, 4, 4}, {1, 24, 17}, {1, 90, 52}, {3, 4, 3}};
    for (size_t i = 0; i < sizeof cases / sizeof *cases; i++) {
        struct question q = smallest_gap(counted);
        worst_count = cases[i][2];
        split = false;
        range(&q, VIAS, cases[i][0], cases[i][1]);
        q.variant.settings[VIAS].value = cases[i][0];
        ask(&q);
        assert_false(split);
        assert_int_equal(q.finding.status, GUIDELINE_FOUND);
        assert_int_equal(q.finding.multiple, 100);
        assert_close(q.finding.worst_inputs[VIAS], worst_count, 1e-12);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_minimum_is_rounded_up_to_the_grid),
        cmocka_unit_test(test_a_maximum_is_rounded_down_to_the_grid),
        cmocka_unit_test(test_a_bound_that_lies_on_the_grid_is_not_moved),
        cmocka_unit_test(test_a_condition_may_ask_for_at_least),
        cmocka_unit_test(test_the_error_of_a_solution_counts_against_the_rule),
        cmocka_unit_test(test_met_everywhere_and_cannot_be_met_are_said),
        cmocka_unit_test(test_a_case_without_an_answer_does_not_hold),
        cmocka_unit_test(test_what_the_fab_cannot_make_is_no_answer),
        cmocka_unit_test(test_a_largest_value_below_the_fabs_smallest_is_said_to_be_that),
        cmocka_unit_test(test_an_island_is_never_the_answer),
        cmocka_unit_test(test_the_largest_value_lies_before_the_first_failure),
        cmocka_unit_test(test_a_hump_between_samples_is_climbed),
        cmocka_unit_test(test_humps_beside_the_ends_of_the_range_are_seen),
        cmocka_unit_test(test_the_worst_case_named_is_the_worst_of_all_that_is_permitted),
        cmocka_unit_test(test_a_maximum_inside_a_range_is_found),
        cmocka_unit_test(test_a_narrow_maximum_is_found_wherever_it_lies),
        cmocka_unit_test(test_linear_and_logarithmic_ranges_are_searched_inside),
        cmocka_unit_test(test_either_receiver_end_is_tried_with_its_own_worst_driver),
        cmocka_unit_test(test_the_tolerance_is_held_at_its_worse_end),
        cmocka_unit_test(test_the_worst_of_all_corners_of_two_tolerances_is_found),
        cmocka_unit_test(test_a_maximum_inside_a_tolerance_is_found),
        cmocka_unit_test(test_a_reference_board_is_compared_in_the_same_situation),
        cmocka_unit_test(test_a_reference_on_the_same_board_stands_at_its_nominal_value),
        cmocka_unit_test(test_a_ridge_across_the_axes_is_followed),
        cmocka_unit_test(test_a_range_of_a_count_is_searched_in_whole_numbers),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
