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
    assert_ok(remedies_find(&(struct remedy_question){NULL, &q.rule, &q.variant, &judge, &region},
                            &q.finding, &error));
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

/* The rule A fails up to its largest gap on the far board; B and C ask for what it may offer. */
static const char text[] =
    "{\"document\": {\"number\": \"T\", \"title\": \"T\", \"revision\": \"A\", \"date\": "
    "\"2026-01-01\"},\n"
    "\"stackups\": {\n"
    " \"far\": {\"layers\": [{\"copper\": \"35 um\", \"role\": \"signal\"},\n"
    "  {\"dielectric\": \"1.5 mm ± 10 %\", \"dk\": \"4.3\"}, {\"copper\": \"35 um\", \"role\": "
    "\"plane\"}]},\n"
    " \"near\": {\"layers\": [{\"copper\": \"35 um\", \"role\": \"signal\"},\n"
    "  {\"dielectric\": \"0.3 mm ± 10 %\", \"dk\": \"4.2 ± 0.2\"}, {\"copper\": \"18 um\", "
    "\"role\": \"plane\"}],\n"
    "  \"smallest\": {\"gap\": \"0.15 mm\"}}},\n"
    "\"signals\": {\"bus\": {\"swing\": \"3.3 V\", \"edge\": \"1 ns .. 2 ns\", \"source\": \"30 "
    "ohm\",\n"
    "  \"load\": \"100 ohm\", \"victim\": {\"noise_margin\": \"0.4 V\", \"share\": \"16 "
    "%\"}}},\n"
    "\"chapters\": [{\"id\": \"c\", \"question\": \"?\", \"model\": \"coupled-traces\",\n"
    " \"given\": {\"stackup\": \"far\", \"aggressor\": \"bus\", \"victim\": \"bus\",\n"
    "  \"width\": \"0.3 mm\", \"length\": \"up to 60 mm\"},\n"
    " \"vary\": {\"gap\": \"0.6 mm .. 2 mm in 3 points log\"}, \"show\": [\"worst_peak\"],\n"
    " \"rules\": [\n"
    "  {\"id\": \"A\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\"},\n"
    "  {\"id\": \"B\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\",\n"
    "   \"given\": {\"between\": \"tied\", \"between_width\": \"0.3 mm\"}},\n"
    "  {\"id\": \"C\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\", \"given\": {\"stackup\": \"near\"}}]}]}";

static const struct guideline_remedy *remedy_of(const struct guideline_finding *finding,
                                                enum guideline_remedy_kind kind) {
    for (size_t i = 0; i < finding->remedy_count; i++)
        if (finding->remedies[i].kind == kind)
            return &finding->remedies[i];
    return NULL;
}

static void
test_tied_copper_and_another_board_are_offered_as_their_own_rules_find_them(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    assert_ok(arena != NULL);
    if (!study_read_text("remedy.json", text, sizeof text - 1, arena, &study, &problems, &error)) {
        print_error("%s\n", problems.count > 0 ? problems.items[0].message : error.message);
        fail();
    }
    assert_ok(guideline_compute(&study, &(struct guideline_options){.jobs = 2}, arena, &guideline,
                                &error));
    const struct guideline_rule *rules = guideline.chapters[0].rules;
    const struct guideline_finding *refused = &rules[0].findings[0];
    assert_int_equal(refused->status, GUIDELINE_CANNOT_BE_MET);
    const struct guideline_remedy *strip = remedy_of(refused, GUIDELINE_TIED_COPPER);
    const struct guideline_remedy *board = remedy_of(refused, GUIDELINE_OTHER_BOARD);
    assert_non_null(strip);
    assert_close(strip->strip_width, 0.3e-3, 1e-12);
    assert_true(strip->value == rules[1].findings[0].value);
    assert_non_null(board);
    assert_string_equal(board->stackup->id, "near");
    assert_true(board->value == rules[2].findings[0].value);
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_shorter_run_or_a_slower_edge_is_offered),
        cmocka_unit_test(
            test_tied_copper_and_another_board_are_offered_as_their_own_rules_find_them)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
