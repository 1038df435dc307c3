/* Every finding of a study's tables attacked: random cases that a cell permits, then climbs from
 * the worst of them.  Slow; by hand.  usage: attack_classes STUDY CASES EVERY [FIRST] */
#include "groundrules/guideline.h"

#include "judge.h"
#include "region.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { CLIMBS = 6 };

struct attack {
    struct judge judge;
    struct region region;
    size_t found;
    double bound, end;
    uint64_t seed;
};

struct hit {
    double at[MODEL_MOST_INPUTS + 1];
    struct verdict verdict;
};

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

static bool judge_at(const struct attack *attack, struct hit *hit, struct error *error) {
    double inputs[MODEL_MOST_INPUTS];
    const struct region *region = &attack->region;
    memcpy(inputs, region->base, sizeof inputs);
    for (size_t i = 0; i < region->axis_count; i++)
        inputs[region->axes[i].input] = place(&region->axes[i], hit->at[i]);
    inputs[attack->found] =
        attack->bound * pow(attack->end / attack->bound, hit->at[region->axis_count]);
    return judge_case(&attack->judge, inputs, &hit->verdict, error);
}

/* One draw in four sits at an end; half of all at the bound, most others near it. */
static void draw_case(struct attack *attack, struct hit *hit) {
    size_t axes = attack->region.axis_count;
    for (size_t i = 0; i < axes; i++) {
        hit->at[i] = draw(&attack->seed);
        if (draw(&attack->seed) < 0.25)
            hit->at[i] = round(hit->at[i]);
    }
    hit->at[axes] = draw(&attack->seed) < 0.5 ? 0 : pow(draw(&attack->seed), 3);
}

/* Random steps, shorter after failures, from a hit. */
static bool climb(struct attack *attack, struct hit *hit, int steps, struct error *error) {
    size_t axes = attack->region.axis_count;
    double size = 0.2;
    for (int k = 0; k < steps; k++) {
        struct hit tried = *hit;
        for (size_t i = 0; i <= axes; i++)
            if (draw(&attack->seed) < 0.5)
                tried.at[i] = fmin(1, fmax(0, tried.at[i] + size * (2 * draw(&attack->seed) - 1)));
        if (!judge_at(attack, &tried, error))
            return false;
        bool worse = tried.verdict.badness > hit->verdict.badness;
        if (worse)
            *hit = tried;
        size = fmin(0.5, fmax(1e-4, size * (worse ? 1.5 : 0.93)));
    }
    return true;
}

static bool run(struct attack *attack, int cases, double *worst, struct error *error) {
    struct hit best[CLIMBS];
    for (size_t i = 0; i < CLIMBS; i++)
        best[i].verdict.badness = -INFINITY;
    for (int k = 0; k < cases; k++) {
        struct hit hit;
        draw_case(attack, &hit);
        if (!judge_at(attack, &hit, error))
            return false;
        size_t mildest = 0;
        for (size_t i = 1; i < CLIMBS; i++)
            if (best[i].verdict.badness < best[mildest].verdict.badness)
                mildest = i;
        if (hit.verdict.badness > best[mildest].verdict.badness)
            best[mildest] = hit;
    }
    *worst = -INFINITY;
    for (size_t i = 0; i < CLIMBS; i++) {
        if (!climb(attack, &best[i], cases / 10, error))
            return false;
        *worst = fmax(*worst, best[i].verdict.badness);
    }
    return true;
}

static bool attack_cell(const struct guideline_chapter *chapter, const struct guideline_rule *ruled,
                        size_t place_of, int cases, struct model_memo *memo, struct error *error) {
    const struct study_rule *rule = ruled->rule;
    const struct guideline_finding *finding = &ruled->cells[place_of];
    const struct study_variant *variant = &rule->cells[place_of];
    struct solver solver;
    if (finding->status != GUIDELINE_FOUND && finding->status != GUIDELINE_MET_EVERYWHERE)
        return true;
    if (!solver_start(&solver, chapter->chapter->model, memo, error))
        return false;
    struct attack attack = {.found = rule->find,
                            .bound = finding->value,
                            .end = rule->find_smallest ? rule->within.to : rule->within.from,
                            .seed = 11 + place_of};
    region_of(solver.model, variant, rule->find, rule->nominal, &attack.region);
    attack.judge = (struct judge){.solver = &solver,
                                  .region = &attack.region,
                                  .output = rule->condition.output,
                                  .at_most = rule->condition.at_most,
                                  .limit = variant->victim->noise_margin * variant->victim->share};
    double worst, claimed = -finding->margin + finding->error * finding->worst / finding->limit;
    bool ok = run(&attack, cases, &worst, error);
    if (ok)
        printf("%3zu found %d %4ld claimed %9.6f attacked %9.6f %s%s\n", place_of,
               (int)finding->status, finding->multiple, claimed, worst,
               worst > 1e-9 ? "BROKEN" : "", worst > claimed + 2e-3 ? " worse than named" : "");
    fflush(stdout);
    solver_end(&solver);
    return ok;
}

static bool attack_study(const char *path, int cases, size_t every, size_t first,
                         struct error *error) {
    struct arena *arena = arena_create(error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    struct model_memo *memo = model_memo_create(error);
    bool ok =
        arena != NULL && memo != NULL && study_read(path, arena, &study, &problems, error) &&
        guideline_compute(&study, &(struct guideline_options){.jobs = 1}, arena, &guideline, error);
    for (size_t c = 0; ok && c < study.chapter_count; c++)
        for (size_t r = 0; ok && r < study.chapters[c].rule_count; r++) {
            const struct guideline_rule *ruled = &guideline.chapters[c].rules[r];
            const struct study_rule *rule = ruled->rule;
            size_t cells = rule->variant_count * rule->rows.count * rule->columns.count;
            for (size_t i = first; ok && rule->cells != NULL && i < cells; i += every)
                ok = attack_cell(&guideline.chapters[c], ruled, i, cases, memo, error);
        }
    model_memo_free(memo);
    arena_free(arena);
    return ok;
}

int main(int count, char **arguments) {
    struct error error = {0};
    if (count < 4)
        return 2;
    size_t every = (size_t)atol(arguments[3]), first = count > 4 ? (size_t)atol(arguments[4]) : 0;
    bool ok = attack_study(arguments[1], atoi(arguments[2]), every > 0 ? every : 1, first, &error);
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    return ok ? 0 : 1;
}
