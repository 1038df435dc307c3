/* Rules found on the real model, attacked with random cases that they permit; one case in three
 * stays near the worst seen.  usage: test_dense FOLDER */
#include "check.h"
#include "groundrules/guideline.h"

#include "judge.h"
#include "region.h"

#include <string.h>

static const char *folder;

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

static double place(const struct region_axis *axis, double at) {
    if (axis->kind == REGION_CHOICE)
        return at < 0.5 ? axis->low : axis->high;
    return axis->low > 0 ? axis->low * pow(axis->high / axis->low, at)
                         : axis->low + (axis->high - axis->low) * at;
}

/* 0 .. 1 within the stated ranges and tolerances; one draw in four sits at an end. */
static double pick(uint64_t *seed) {
    double at = draw(seed);
    return draw(seed) < 0.25 ? round(at) : at;
}

struct attack {
    struct judge judge;
    struct region region;
    double bound, end; /* of the found input */
    size_t found;
    uint64_t seed;
};

/* The worst of `cases` by judging them like the rule; its error is added to its badness. */
static void run(struct attack *attack, int cases, struct verdict *worst) {
    struct error error = {0};
    double best[MODEL_MOST_INPUTS + 1] = {0}, at[MODEL_MOST_INPUTS + 1];
    const struct region *region = &attack->region;
    size_t axes = region->axis_count;
    worst->badness = -INFINITY;
    for (int k = 0; k < cases; k++) {
        bool local = k > cases / 3 && k % 2 == 0;
        double step = pow(10, -3 * draw(&attack->seed)), inputs[MODEL_MOST_INPUTS];
        memcpy(inputs, region->base, sizeof inputs);
        for (size_t i = 0; i <= axes; i++) {
            at[i] = pick(&attack->seed);
            if (local)
                at[i] = fmin(1, fmax(0, best[i] + (draw(&attack->seed) < 0.5) * step *
                                                      (draw(&attack->seed) - 0.5)));
        }
        if (draw(&attack->seed) < 0.5)
            at[axes] = 0; /* the bound itself */
        for (size_t i = 0; i < axes; i++)
            inputs[region->axes[i].input] = place(&region->axes[i], at[i]);
        inputs[attack->found] = attack->bound * pow(attack->end / attack->bound, at[axes]);
        struct verdict verdict;
        assert_ok(judge_case(&attack->judge, inputs, &verdict, &error));
        if (verdict.badness > worst->badness) {
            *worst = verdict;
            memcpy(best, at, sizeof best);
        }
    }
}

static void attack_rule(size_t number, int cases) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    struct solver solver;
    char path[500];
    assert_ok(arena != NULL);
    snprintf(path, sizeof path, "%s/attacked.json", folder);
    assert_ok(study_read(path, arena, &study, &problems, &error));
    assert_ok(guideline_compute(&study, &(struct guideline_options){.jobs = 2}, arena, &guideline,
                                &error));
    const struct guideline_rule *ruled = &guideline.chapters[0].rules[number];
    const struct study_rule *rule = ruled->rule;
    const struct guideline_finding *finding = &ruled->findings[0];
    assert_int_equal(finding->status, GUIDELINE_FOUND);

    struct model_memo *memo = model_memo_create(&error);
    struct attack attack = {
        .bound = finding->value, .end = rule->within.to, .found = rule->find, .seed = 7};
    assert_ok(memo != NULL && solver_start(&solver, study.chapters[0].model, memo, &error));
    region_of(solver.model, &rule->variants[0], rule->find, rule->nominal, &attack.region);
    const struct study_signal *victim = rule->variants[0].victim;
    attack.judge = (struct judge){
        .solver = &solver,
        .region = &attack.region,
        .output = rule->condition.output,
        .at_most = true,
        .limit = victim->noise_margin * victim->share,
        .reference = rule->condition.against == STUDY_REFERENCE ? &rule->reference : NULL};
    struct verdict worst;
    run(&attack, cases, &worst);
    double claimed = -finding->margin + finding->error * fabs(finding->worst / finding->limit);
    /* Nothing that is permitted fails, nor is it noticeably worse than what the proof names. */
    assert_true(worst.badness <= 1e-9);
    assert_true(worst.badness <= claimed + 5e-3);
    assert_true(worst.badness > claimed - 0.1); /* the attack was serious */

    /* One grid step less and something fails: the rule is tight. */
    attack.bound = attack.end = finding->value - rule->grid;
    assert_true(finding->nearest > 0);
    memcpy(attack.region.base, finding->worst_inputs, sizeof attack.region.base);
    run(&attack, cases, &worst);
    assert_true(worst.badness > -0.01);
    solver_end(&solver);
    model_memo_free(memo);
    arena_free(arena);
}

static void test_no_permitted_case_breaks_a_budget_and_it_is_tight(void **state) {
    (void)state;
    attack_rule(0, 800);
}

static void test_no_permitted_case_breaks_a_reference_and_it_is_tight(void **state) {
    (void)state;
    attack_rule(1, 800);
}

int main(int count, char **arguments) {
    folder = count > 1 ? arguments[1] : "tests/rule";
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_no_permitted_case_breaks_a_budget_and_it_is_tight),
        cmocka_unit_test(test_no_permitted_case_breaks_a_reference_and_it_is_tight),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
