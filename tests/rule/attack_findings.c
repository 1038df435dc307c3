/* Every finding of a study's rules attacked, cards and cells: random cases of all that it permits,
 * then climbs from the worst of them.  Broken is what lies beyond the limit; what only its stated
 * error puts there is named apart.  Slow; by hand.
 * usage: attack_findings STUDY CASES CHAPTER [EVERY [FIRST [SECONDS [SEED]]]] ("all": every
 * chapter) */
#include "groundrules/guideline.h"

#include "judge.h"
#include "region.h"
#include "task.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

/* Draws that share a section: fields cost more than responses. */
enum { CLIMBS = 6, SHARED = 4 };
static const double ROUNDING = 1e-9;

struct attack {
    struct judge judge;
    struct region region;
    size_t found;
    double bound, end, plain; /* plain: worst badness without errors */
    uint64_t seed;
    int cases;
    clock_t until;
};

struct hit {
    double at[MODEL_MOST_INPUTS + 1], inputs[MODEL_MOST_INPUTS];
    struct verdict verdict;
};

struct options {
    int cases;
    const char *chapter;
    size_t every, first;
    double seconds; /* a finding */
    uint64_t seed;
};

static double draw(uint64_t *seed) {
    *seed = *seed * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*seed >> 11) / 9007199254740992.0;
}

static double between(double low, double high, double at) {
    return low > 0 && high > 0 ? low * pow(high / low, at) : low + (high - low) * at;
}

static double place(const struct region_axis *axis, double at) {
    if (axis->kind == REGION_CHOICE)
        return fmin(axis->high, axis->low + floor(at * (axis->high - axis->low + 1)));
    return between(axis->low, axis->high, at);
}

static double beyond(const struct attack *attack, const struct verdict *verdict) {
    double by = verdict->value - verdict->limit;
    return (attack->judge.at_most ? by : -by) / fmax(fabs(verdict->limit), 1e-30);
}

static bool judge_at(struct attack *attack, struct hit *hit, struct error *error) {
    const struct region *region = &attack->region;
    memcpy(hit->inputs, region->base, sizeof hit->inputs);
    for (size_t i = 0; i < region->axis_count; i++)
        hit->inputs[region->axes[i].input] = place(&region->axes[i], hit->at[i]);
    hit->inputs[attack->found] = between(attack->bound, attack->end, hit->at[region->axis_count]);
    if (!judge_case(&attack->judge, hit->inputs, &hit->verdict, error))
        return false;
    attack->plain = fmax(attack->plain, beyond(attack, &hit->verdict));
    return true;
}

static bool is_drawn_anew(const struct attack *attack, size_t i, int k) {
    if (k % SHARED == 0)
        return true;
    const char *name = attack->region.model->inputs[attack->region.axes[i].input].name;
    return attack->region.axes[i].kind != REGION_TOLERANCE && strcmp(name, "gap") != 0 &&
           strcmp(name, "edge_distance") != 0 && strcmp(name, "width") != 0;
}

/* One draw in three sits at an end; half of all at the bound, most others near it. */
static void draw_case(struct attack *attack, int k, struct hit *hit) {
    size_t axes = attack->region.axis_count;
    for (size_t i = 0; i < axes; i++) {
        if (!is_drawn_anew(attack, i, k))
            continue;
        hit->at[i] = draw(&attack->seed);
        if (draw(&attack->seed) < 0.33)
            hit->at[i] = round(hit->at[i]);
    }
    if (k % SHARED == 0)
        hit->at[axes] = draw(&attack->seed) < 0.5 ? 0 : pow(draw(&attack->seed), 3);
}

/* Random steps, shorter after failures, from a hit; every second step leaves the section alone. */
static bool climb(struct attack *attack, struct hit *hit, int steps, struct error *error) {
    size_t axes = attack->region.axis_count;
    double size = 0.2;
    for (int k = 0; k < steps && clock() < attack->until; k++) {
        struct hit tried = *hit;
        for (size_t i = 0; i <= axes; i++) {
            bool still = k % 2 != 0 && (i == axes || !is_drawn_anew(attack, i, 1));
            if (!still && draw(&attack->seed) < 0.5)
                tried.at[i] = fmin(1, fmax(0, tried.at[i] + size * (2 * draw(&attack->seed) - 1)));
        }
        if (!judge_at(attack, &tried, error))
            return false;
        bool worse = tried.verdict.badness > hit->verdict.badness;
        if (worse)
            *hit = tried;
        size = fmin(0.5, fmax(1e-4, size * (worse ? 1.5 : 0.93)));
    }
    return true;
}

static bool run(struct attack *attack, struct hit *worst, struct error *error) {
    struct hit best[CLIMBS] = {0}, hit = {0};
    for (size_t i = 0; i < CLIMBS; i++)
        best[i].verdict.badness = -INFINITY;
    for (int k = 0; k < attack->cases && (k < 1000 || clock() < attack->until); k++) {
        draw_case(attack, k, &hit);
        if (!judge_at(attack, &hit, error))
            return false;
        size_t mildest = 0;
        for (size_t i = 1; i < CLIMBS; i++)
            if (best[i].verdict.badness < best[mildest].verdict.badness)
                mildest = i;
        if (hit.verdict.badness > best[mildest].verdict.badness)
            best[mildest] = hit;
    }
    worst->verdict.badness = -INFINITY;
    for (size_t i = 0; i < CLIMBS; i++) {
        if (!isinf(best[i].verdict.badness) && !climb(attack, &best[i], attack->cases / 10, error))
            return false;
        if (best[i].verdict.badness > worst->verdict.badness)
            *worst = best[i];
    }
    return true;
}

static void print_case(const struct attack *attack, const struct hit *hit) {
    const struct model *model = attack->region.model;
    printf("    value %.9g limit %.9g error %.3g at %s=%.17g", hit->verdict.value,
           hit->verdict.limit, hit->verdict.error, model->inputs[attack->found].name,
           hit->inputs[attack->found]);
    for (size_t i = 0; i < attack->region.axis_count; i++)
        printf(" %s=%.17g", model->inputs[attack->region.axes[i].input].name,
               hit->inputs[attack->region.axes[i].input]);
    printf("\n");
}

static void print_named(const struct attack *attack, const struct guideline_finding *finding) {
    struct hit named = {.verdict = {.value = finding->worst,
                                    .limit = finding->limit,
                                    .error = finding->error * fabs(finding->worst)}};
    memcpy(named.inputs, finding->worst_inputs, sizeof named.inputs);
    printf("    named:\n");
    print_case(attack, &named);
}

static double limit_of(const struct study_rule *rule, const struct study_variant *variant) {
    if (rule->condition.against == STUDY_BUDGET && variant->victim != NULL)
        return rule->condition.share * variant->victim->noise_margin * variant->victim->share;
    return rule->condition.limit;
}

static double permitted_end(const struct study_rule *rule,
                            const struct guideline_finding *finding) {
    return rule->find_smallest ? rule->within.to : fmax(rule->within.from, finding->fab_smallest);
}

static double shortest_edge(const struct region *region) {
    size_t edge = model_input_index(region->model, "edge");
    double shortest = edge < region->model->input_count ? region->base[edge] : 0;
    for (size_t i = 0; i < region->axis_count; i++)
        if (region->axes[i].input == edge)
            shortest = region->axes[i].low;
    return shortest;
}

static void region_for(const struct task *task, struct region *region,
                       const struct study_variant **variant) {
    const struct study_rule *rule = task->rule->rule;
    size_t columns = rule->columns.count > 0 ? rule->columns.count : 1;
    bool cell = task->kind == TASK_CELL;
    *variant = &rule->variants[task->variant];
    if (cell && rule->cells != NULL)
        *variant = &rule->cells[task->variant * rule->rows.count * columns + task->index];
    region_of(task->chapter->chapter->model, *variant, rule->find, rule->nominal, region);
    if (cell && rule->rows.ranges != NULL)
        region_restrict(region, rule->rows.input, rule->rows.ranges[task->index / columns]);
    if (cell && rule->columns.count > 0 && rule->columns.ranges != NULL)
        region_restrict(region, rule->columns.input, rule->columns.ranges[task->index % columns]);
}

static bool attack_finding(const struct task *task, const struct guideline_finding *finding,
                           const struct options *options, struct solver *solver,
                           struct error *error) {
    const struct study_rule *rule = task->rule->rule;
    const struct study_variant *variant;
    struct attack attack = {.found = rule->find,
                            .bound = finding->value,
                            .end = permitted_end(rule, finding),
                            .plain = -INFINITY,
                            .seed = options->seed + task->index + 1000 * task->variant,
                            .cases = options->cases,
                            .until = clock() + (clock_t)(options->seconds * CLOCKS_PER_SEC)};
    region_for(task, &attack.region, &variant);
    bool refers = rule->condition.against == STUDY_REFERENCE;
    attack.judge = (struct judge){.solver = solver,
                                  .region = &attack.region,
                                  .output = rule->condition.output,
                                  .at_most = rule->condition.at_most,
                                  .limit = limit_of(rule, variant),
                                  .share = rule->condition.share,
                                  .reference = refers ? &rule->reference : NULL};
    struct hit worst = {0};
    solver_expect(solver, shortest_edge(&attack.region));
    if (!run(&attack, &worst, error))
        return false;
    double claimed = -finding->margin + finding->error * finding->worst / finding->limit;
    printf("claimed %9.6f attacked %9.6f without error %9.6f cases %zu %s%s%s\n", claimed,
           worst.verdict.badness, attack.plain, solver->solved,
           attack.plain > ROUNDING            ? "BROKEN"
           : worst.verdict.badness > ROUNDING ? "ONLY-BY-ERROR"
                                              : "",
           worst.verdict.badness > claimed + 2e-3 ? " worse than named" : "",
           clock() >= attack.until ? " (cut short)" : "");
    if (worst.verdict.badness > fmin(ROUNDING, claimed + 2e-3))
        print_case(&attack, &worst), print_named(&attack, finding);
    return true;
}

/* Finds, then attacks with a solver of its own. */
static bool attack_task(struct task *task, const struct options *options, struct model_memo *memo,
                        struct error *error) {
    const struct study_rule *rule = task->rule->rule;
    size_t cells = rule->rows.count * (rule->columns.count > 0 ? rule->columns.count : 1);
    const struct guideline_finding *finding =
        task->kind == TASK_RULE ? &task->rule->findings[task->variant]
                                : &task->rule->cells[task->variant * cells + task->index];
    struct solver solver = {0};
    task_run(task, memo);
    if (task->error.kind != ERROR_NONE) {
        *error = task->error;
        return false;
    }
    printf("%-6s %s %zu.%-2zu status %d %5ld ", rule->id, task->kind == TASK_RULE ? "card" : "cell",
           task->variant, task->index, (int)finding->status, finding->multiple);
    bool kept =
        rule->condition.against == STUDY_REFERENCE && rule->reference.kept == STUDY_KEEP_IMPEDANCE;
    bool bounds = finding->status == GUIDELINE_FOUND || finding->status == GUIDELINE_MET_EVERYWHERE;
    bool ok = true;
    if (!bounds || kept) {
        printf("%s\n", kept ? "not attacked: keeps impedance" : "");
    } else {
        ok = solver_start(&solver, task->chapter->chapter->model, memo, error) &&
             attack_finding(task, finding, options, &solver, error);
        solver_end(&solver);
    }
    fflush(stdout);
    return ok;
}

static bool attack_rule(const struct study *study, const struct guideline_chapter *chapter,
                        const struct study_rule *rule, const struct options *options,
                        struct model_memo *memo, struct arena *arena, struct error *error) {
    size_t cells = rule->rows.count * (rule->columns.count > 0 ? rule->columns.count : 1);
    size_t each = 1 + cells, total = rule->variant_count * each;
    struct guideline_rule ruled = {
        .rule = rule,
        .findings = arena_new(arena, rule->variant_count, struct guideline_finding, error),
        .cells =
            arena_new(arena, rule->variant_count * cells + 1, struct guideline_finding, error)};
    bool ok = ruled.findings != NULL && ruled.cells != NULL;
    for (size_t i = options->first; ok && i < total; i += options->every) {
        struct task task = {.kind = i % each == 0 ? TASK_RULE : TASK_CELL,
                            .study = study,
                            .chapter = chapter,
                            .rule = &ruled,
                            .variant = i / each,
                            .index = i % each == 0 ? 0 : i % each - 1};
        ok = attack_task(&task, options, memo, error);
    }
    return ok;
}

static bool attack_study(const char *path, const struct options *options, struct error *error) {
    struct arena *arena = arena_create(error);
    struct study study;
    struct study_problems problems = {0};
    struct model_memo *memo = model_memo_create(error);
    bool ok = arena != NULL && memo != NULL && study_read(path, arena, &study, &problems, error);
    for (size_t c = 0; ok && c < study.chapter_count; c++) {
        struct guideline_chapter chapter = {.chapter = &study.chapters[c]};
        bool wanted = strcmp(options->chapter, "all") == 0 ||
                      strcmp(options->chapter, chapter.chapter->id) == 0;
        for (size_t r = 0; ok && wanted && r < chapter.chapter->rule_count; r++)
            ok = attack_rule(&study, &chapter, &chapter.chapter->rules[r], options, memo, arena,
                             error);
    }
    model_memo_free(memo);
    arena_free(arena);
    return ok;
}

int main(int count, char **arguments) {
    struct error error = {0};
    if (count < 4)
        return 2;
    struct options options = {.cases = atoi(arguments[2]),
                              .chapter = arguments[3],
                              .every = count > 4 ? (size_t)atol(arguments[4]) : 1,
                              .first = count > 5 ? (size_t)atol(arguments[5]) : 0,
                              .seconds = count > 6 ? atof(arguments[6]) : 1e6,
                              .seed = count > 7 ? (uint64_t)atol(arguments[7]) : 11};
    if (options.every == 0)
        options.every = 1;
    bool ok = attack_study(arguments[1], &options, &error);
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    return ok ? 0 : 1;
}
