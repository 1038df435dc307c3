#include "analytic.h"
#include "remedy.h"

/* peak = 0.1 (length / 40 mm) (2 ns / edge) (1 mm / gap) */
static double product(const double *x) {
    return 0.1 * x[LENGTH] / 40e-3 * 2e-9 / x[EDGE] * 1e-3 / x[GAP];
}

/* With the gap at 2 mm and 50.1 mV allowed: length / 40 mm * 2 ns / edge <= 1.002 over the stated
 * rest.
 */
static void test_a_shorter_run_or_a_slower_edge_is_offered(void **state) {
    (void)state;
    struct question q = smallest_gap(product);
    range(&q, LENGTH, 1e-3, 0.2);
    range(&q, EDGE, 1e-9, 3e-9);
    q.rule.within = (struct interval){0.5e-3, 2e-3};
    q.rule.condition.limit = 0.0501;
    struct error error = {0};
    struct solver solver;
    struct model_memo *memo = model_memo_create(&error);
    struct region region;
    assert_ok(memo != NULL && solver_start(&solver, &analytic_model, memo, &error));
    region_of(&analytic_model, &q.variant, GAP, false, &region);
    struct judge judge = {.solver = &solver, .region = &region, .at_most = true, .limit = 0.0501};
    region.base[GAP] = q.rule.within.to;
    assert_ok(find_bound(&q.rule, &q.variant, &judge, &region, &q.finding, &error));
    assert_int_equal(q.finding.status, GUIDELINE_CANNOT_BE_MET);
    assert_ok(remedies_find(&q.rule, &q.variant, &judge, &region, &q.finding, &error));
    assert_int_equal(q.finding.remedy_count, 2);
    /* Edges down to 1 ns: length <= 20 mm.  Lengths up to 200 mm: edge >= 10 ns. */
    assert_int_equal(q.finding.remedies[0].input, LENGTH);
    assert_false(q.finding.remedies[0].at_least);
    assert_close(q.finding.remedies[0].value, 20e-3, 1e-9);
    assert_int_equal(q.finding.remedies[1].input, EDGE);
    assert_true(q.finding.remedies[1].at_least);
    assert_close(q.finding.remedies[1].value, 10e-9, 1e-9);
    solver_end(&solver);
    model_memo_free(memo);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_shorter_run_or_a_slower_edge_is_offered)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
