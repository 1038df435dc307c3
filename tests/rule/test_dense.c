/* A rule found on the real model, attacked with random cases that it permits.  usage: test_dense
 * STUDY */
#include "check.h"
#include "groundrules/guideline.h"

#include <string.h>

static const char *study_path;

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

static bool read_study(struct arena *arena, struct study *study, struct error *error) {
    struct study_problems problems = {0};
    return study_read(study_path, arena, study, &problems, error);
}

/* A case within the stated ranges and tolerances; one draw in four sits at an end. */
static double pick(uint64_t *seed, double low, double high) {
    double at = draw(seed);
    if (draw(seed) < 0.25)
        at = at < 0.5 ? 0 : 1;
    return low > 0 ? low * pow(high / low, at) : low + (high - low) * at;
}

static void test_no_permitted_case_breaks_the_rule_and_it_is_tight(void **state) {
    (void)state;
    enum { CASES = 600 };
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct study study;
    struct guideline guideline;
    assert_ok(arena != NULL);
    assert_ok(read_study(arena, &study, &error));
    assert_ok(guideline_compute(&study, &(struct guideline_options){.jobs = 2}, arena, &guideline,
                                &error));
    const struct guideline_rule *found = &guideline.chapters[0].rules[0];
    const struct study_rule *rule = found->rule;
    const struct guideline_finding *finding = &found->findings[0];
    const struct model *model = study.chapters[0].model;
    assert_int_equal(finding->status, GUIDELINE_FOUND);
    assert_true(finding->worst <= finding->limit);
    assert_true(finding->nearest > finding->limit * (1 - 2 * finding->error - 1e-3));

    struct model_memo *memo = model_memo_create(&error);
    struct model_worker *worker = model_worker_create(&error);
    assert_ok(memo != NULL && worker != NULL);
    uint64_t seed = 7;
    double worst = 0;
    for (int k = 0; k < CASES; k++) {
        double inputs[MODEL_MOST_INPUTS], outputs[MODEL_MOST_OUTPUTS], errors[MODEL_MOST_OUTPUTS];
        unsigned flags;
        for (size_t i = 0; i < model->input_count; i++) {
            const struct study_setting *setting = &rule->variants[0].settings[i];
            inputs[i] = setting->value;
            if (i == rule->find)
                inputs[i] =
                    k % 3 == 0 ? finding->value : pick(&seed, finding->value, rule->within.to);
            else if (model->inputs[i].kind == MODEL_CHOICE &&
                     setting->range.to > setting->range.from)
                inputs[i] = draw(&seed) < 0.5 ? setting->range.from : setting->range.to;
            else if (setting->range.to > setting->range.from)
                inputs[i] = pick(&seed, setting->range.from, setting->range.to);
            else if (setting->minus > 0 || setting->plus > 0)
                inputs[i] =
                    pick(&seed, setting->value - setting->minus, setting->value + setting->plus);
        }
        assert_ok(model_resolve(model, inputs, &error));
        assert_ok(model_evaluate(model, inputs, memo, worker, outputs, errors, &flags, &error));
        double value = outputs[rule->condition.output];
        assert_true(value <= finding->limit + errors[rule->condition.output]);
        /* Nor is any worse than the worst case that the proof names. */
        assert_true(value <= finding->worst * (1 + 2e-3) + errors[rule->condition.output]);
        worst = fmax(worst, value);
    }
    assert_true(worst > 0.9 * finding->worst); /* the attack was serious */
    model_worker_free(worker);
    model_memo_free(memo);
    arena_free(arena);
}

static void exports(int jobs, struct arena *arena, struct guideline_file **files, size_t *count,
                    struct guideline_file *manifest) {
    struct error error = {0};
    struct study *study = arena_new(arena, 1, struct study, &error);
    struct guideline *guideline = arena_new(arena, 1, struct guideline, &error);
    assert_ok(study != NULL && guideline != NULL);
    assert_ok(read_study(arena, study, &error));
    assert_ok(guideline_compute(study, &(struct guideline_options){.jobs = jobs}, arena, guideline,
                                &error));
    assert_ok(guideline_export(guideline, arena, files, count, &error));
    assert_ok(guideline_manifest(guideline, *files, *count, arena, manifest, &error));
}

static void test_threads_and_repetition_do_not_show_in_the_exports(void **state) {
    (void)state;
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    assert_ok(arena != NULL);
    struct guideline_file *one, *two, manifests[2];
    size_t counts[2];
    exports(1, arena, &one, &counts[0], &manifests[0]);
    exports(3, arena, &two, &counts[1], &manifests[1]);
    assert_int_equal(counts[0], counts[1]);
    for (size_t i = 0; i < counts[0]; i++) {
        assert_string_equal(one[i].name, two[i].name);
        assert_int_equal(one[i].length, two[i].length);
        assert_memory_equal(one[i].bytes, two[i].bytes, one[i].length);
    }
    assert_int_equal(manifests[0].length, manifests[1].length);
    assert_memory_equal(manifests[0].bytes, manifests[1].bytes, manifests[0].length);
    arena_free(arena);
}

int main(int count, char **arguments) {
    study_path = count > 1 ? arguments[1] : "studies/minimal.json";
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_no_permitted_case_breaks_the_rule_and_it_is_tight),
        cmocka_unit_test(test_threads_and_repetition_do_not_show_in_the_exports),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
