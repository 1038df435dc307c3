/* A cell of a table over signal classes is the rule that gives these two signals. */
#include "check.h"
#include "groundrules/guideline.h"

#include <string.h>

static const char text[] =
    "{\"document\": {\"number\": \"T\", \"title\": \"T\", \"revision\": \"A\", \"date\": "
    "\"2026-01-01\"},\n"
    "\"stackups\": {\"near\": {\"layers\": [{\"copper\": \"35 um\", \"role\": \"signal\"},\n"
    " {\"dielectric\": \"0.3 mm ± 10 %\", \"dk\": \"4.2\"}, {\"copper\": \"35 um\", \"role\": "
    "\"plane\"}]}},\n"
    "\"signals\": {\n"
    " \"quick\": {\"swing\": \"3.3 V\", \"edge\": \"0.8 ns .. 2 ns\", \"source\": \"30 ohm\",\n"
    "  \"load\": \"100 ohm\", \"victim\": {\"noise_margin\": \"0.4 V\", \"share\": \"40 %\"}},\n"
    " \"slow\": {\"swing\": \"1.8 V\", \"edge\": \"4 ns\", \"source\": \"60 ohm\",\n"
    "  \"load\": \"1 kohm\", \"victim\": {\"noise_margin\": \"0.2 V\", \"share\": \"10 %\",\n"
    "  \"receiver\": \"near\"}}},\n"
    "\"chapters\": [{\"id\": \"c\", \"question\": \"?\", \"model\": \"coupled-traces\",\n"
    " \"given\": {\"stackup\": \"near\", \"aggressor\": \"quick\", \"victim\": \"quick\",\n"
    "  \"width\": \"0.3 mm\", \"length\": \"up to 60 mm\"},\n"
    " \"vary\": {\"gap\": \"0.2 mm .. 8 mm in 5 points log\"}, \"show\": [\"worst_peak\"],\n"
    " \"rules\": [\n"
    "  {\"id\": \"ALL\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\", \"table\": {\"rows\": {\"aggressor\": [\"quick\", "
    "\"slow\"]},\n"
    "   \"columns\": {\"victim\": [\"quick\", \"slow\"]}}},\n"
    "  {\"id\": \"QS\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\", \"given\": {\"victim\": \"slow\"}},\n"
    "  {\"id\": \"SQ\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\", \"given\": {\"aggressor\": \"slow\"}},\n"
    "  {\"id\": \"SS\", \"strength\": \"must\", \"find\": \"smallest gap\", \"grid\": \"0.05 "
    "mm\",\n"
    "   \"so_that\": \"worst_peak <= budget\",\n"
    "   \"given\": {\"aggressor\": \"slow\", \"victim\": \"slow\"}}]}]}";

static void test_a_cell_is_the_rule_for_its_two_classes(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    assert_ok(arena != NULL);
    if (!study_read_text("cells.json", text, sizeof text - 1, arena, &study, &problems, &error)) {
        for (size_t i = 0; i < problems.count; i++)
            print_error("%u:%u %s\n", problems.items[i].line, problems.items[i].column,
                        problems.items[i].message);
        fail();
    }
    assert_ok(guideline_compute(&study, &(struct guideline_options){.jobs = 2}, arena, &guideline,
                                &error));
    const struct guideline_rule *rules = guideline.chapters[0].rules;
    const struct guideline_finding *cells = rules[0].cells;
    assert_non_null(cells);
    const struct guideline_finding *alone[] = {&rules[0].findings[0], &rules[1].findings[0],
                                               &rules[2].findings[0], &rules[3].findings[0]};
    for (size_t i = 0; i < 4; i++) {
        assert_int_equal(cells[i].status, alone[i]->status);
        assert_int_equal(cells[i].multiple, alone[i]->multiple);
        assert_true(cells[i].worst == alone[i]->worst && cells[i].limit == alone[i]->limit);
    }
    /* The budgets are 160 and 20 mV. */
    assert_close(cells[0].limit, 0.16, 1e-12);
    assert_close(cells[1].limit, 0.02, 1e-12);
    assert_true(cells[1].multiple > cells[0].multiple);
    arena_free(arena);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_a_cell_is_the_rule_for_its_two_classes)};
    return cmocka_run_group_tests(tests, NULL, NULL);
}
