/* From a rule to its finding: budgets, references that keep the impedance, cells, curves; on a
 * model whose answers are algebra. */
#include "analytic.h"

struct answers {
    struct arena *arena;
    struct guideline guideline;
    struct study study;
    struct study_chapter chapter;
    size_t outputs[1];
    struct study_chart chart;
    double points[3];
};

static bool computed(struct question *q, struct answers *answers, struct error *error) {
    *answers = (struct answers){.outputs = {PEAK}, .points = {0.5e-3, 2e-3, 8e-3}};
    answers->arena = arena_create(error);
    answers->chart = (struct study_chart){.outputs = answers->outputs, .output_count = 1};
    q->rule.variants = &q->variant;
    q->rule.variant_count = 1;
    answers->chapter = (struct study_chapter){.id = "c",
                                              .model = &analytic_model,
                                              .vary = {GAP, answers->points, 3, true},
                                              .variants = &q->variant,
                                              .variant_count = 1,
                                              .charts = &answers->chart,
                                              .chart_count = 1,
                                              .rules = &q->rule,
                                              .rule_count = 1};
    answers->study = (struct study){.chapters = &answers->chapter, .chapter_count = 1};
    return answers->arena != NULL &&
           guideline_compute(&answers->study, &(struct guideline_options){.jobs = 1},
                             answers->arena, &answers->guideline, error);
}

static const struct guideline_finding *finding_of(const struct answers *answers) {
    return &answers->guideline.chapters[0].rules[0].findings[0];
}

static double by_gap(const double *x) {
    return 0.1e-3 / x[GAP];
}

static void test_a_budget_is_the_victims_share_of_its_margin(void **state) {
    (void)state;
    struct error error = {0};
    struct answers answers;
    struct question q = smallest_gap(by_gap);
    struct study_signal victim = {.is_victim = true, .noise_margin = 0.2, .share = 0.25};
    q.variant.victim = &victim;
    q.rule.condition.against = STUDY_BUDGET;
    assert_ok(computed(&q, &answers, &error));
    /* 0.1 mV m / gap <= 50 mV: gap >= 2 mm */
    assert_int_equal(finding_of(&answers)->status, GUIDELINE_FOUND);
    assert_int_equal(finding_of(&answers)->multiple, 20);
    assert_close(finding_of(&answers)->limit, 0.05, 1e-12);
    arena_free(answers.arena);
}

/* The wider the traces, the more they couple; 60 ohm sqrt(height / width) is their impedance. */
static double by_widths(const double *x) {
    return x[HEIGHT] * (x[WIDTH] + 2 * x[VICTIM_WIDTH]) / x[GAP];
}

static void test_a_kept_width_stays_and_a_kept_impedance_takes_its_width(void **state) {
    (void)state;
    struct error error = {0};
    struct answers answers;
    struct study_stackup near;
    struct question q = smallest_gap(by_widths);
    fix(&q, HEIGHT, 0.8e-3);
    fix(&q, WIDTH, 0.3e-3);
    fix(&q, VICTIM_WIDTH, NAN);
    against(&q, &near, 0.2e-3);
    q.rule.reference.values[GAP] = 0.33e-3;
    assert_ok(computed(&q, &answers, &error));
    /* Width kept: gap >= 0.33 mm * 0.8 / 0.2 = 1.32 mm. */
    assert_int_equal(finding_of(&answers)->multiple, 14);
    assert_close(finding_of(&answers)->worst_inputs[WIDTH], 0.3e-3, 1e-12);
    arena_free(answers.arena);

    q.rule.reference.kept = STUDY_KEEP_IMPEDANCE;
    assert_ok(computed(&q, &answers, &error));
    /* Four times the height, four times the width: gap >= 0.33 mm * 4 * 4 = 5.28 mm. */
    assert_int_equal(finding_of(&answers)->multiple, 53);
    assert_close(finding_of(&answers)->worst_inputs[WIDTH], 1.2e-3, 1e-6);
    assert_close(finding_of(&answers)->worst_inputs[VICTIM_WIDTH], 1.2e-3, 1e-6);
    arena_free(answers.arena);

    /* A victim of its own width keeps its own impedance. */
    fix(&q, VICTIM_WIDTH, 0.15e-3);
    assert_ok(computed(&q, &answers, &error));
    assert_close(finding_of(&answers)->worst_inputs[WIDTH], 1.2e-3, 1e-6);
    assert_close(finding_of(&answers)->worst_inputs[VICTIM_WIDTH], 0.6e-3, 1e-6);
    assert_int_equal(finding_of(&answers)->multiple, 53);
    arena_free(answers.arena);
}

static void test_an_impedance_that_no_width_gives_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    struct answers answers;
    struct study_stackup near;
    struct question q = smallest_gap(by_widths);
    fix(&q, HEIGHT, 0.5);
    against(&q, &near, 0.2e-3);
    q.rule.reference.kept = STUDY_KEEP_IMPEDANCE;
    assert_false(computed(&q, &answers, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_non_null(strstr(error.message, "T-1"));
    assert_non_null(strstr(error.message, "impedance"));
    arena_free(answers.arena);
}

static void test_a_kept_impedance_that_the_fab_cannot_etch_is_below_the_fab(void **state) {
    (void)state;
    struct error error = {0};
    struct answers answers;
    struct study_stackup far, board = {.smallest_width = 0.1e-3};
    struct question q = smallest_gap(by_widths);
    q.variant.stackup = &board;
    fix(&q, HEIGHT, 0.2e-3);
    fix(&q, VICTIM_WIDTH, NAN);
    against(&q, &far, 0.8e-3); /* 0.3 mm there is 0.075 mm here */
    q.rule.reference.kept = STUDY_KEEP_IMPEDANCE;
    assert_ok(computed(&q, &answers, &error));
    assert_int_equal(finding_of(&answers)->status, GUIDELINE_BELOW_FAB);
    arena_free(answers.arena);
}

static double by_length(const double *x) {
    double side = x[RECEIVER] == 1 ? 2 : 1, driver = x[SOURCE] < 30 ? 1.5 : 1;
    return 0.1e-3 / x[GAP] * x[LENGTH] / 0.1 * side * driver * x[HEIGHT] / 1e-3;
}

static void test_a_curve_is_the_worst_of_its_ranges_with_its_tolerance_beside_it(void **state) {
    (void)state;
    struct error error = {0};
    struct answers answers;
    struct question q = smallest_gap(by_length);
    range(&q, LENGTH, 1e-3, 0.1);
    range(&q, SOURCE, 25, 50);
    tolerance(&q, HEIGHT, 1e-3, 0.1e-3);
    q.variant.settings[RECEIVER].range = (struct interval){0, 1};
    assert_ok(computed(&q, &answers, &error));
    const struct guideline_curve *curve = &answers.guideline.chapters[0].curves[0];
    for (size_t i = 0; i < 3; i++) {
        double worst = 3 * 0.1e-3 / answers.points[i];
        assert_close(curve->y[i], worst, 1e-9);
        assert_close(curve->low[i], 0.9 * worst, 1e-9);
        assert_close(curve->high[i], 1.1 * worst, 1e-9);
    }
    arena_free(answers.arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_budget_is_the_victims_share_of_its_margin),
        cmocka_unit_test(test_a_kept_width_stays_and_a_kept_impedance_takes_its_width),
        cmocka_unit_test(test_an_impedance_that_no_width_gives_is_refused),
        cmocka_unit_test(test_a_kept_impedance_that_the_fab_cannot_etch_is_below_the_fab),
        cmocka_unit_test(test_a_curve_is_the_worst_of_its_ranges_with_its_tolerance_beside_it),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
