/* A study becomes tasks that depend on nothing but their own inputs: a point of a variant's curves,
 * a rule for one variant, a cell of a rule's table.  Each has its numbered place for the answer, so
 * neither the order nor the number of threads can show in the result; solved fields are shared
 * through the memo. */

#include "task.h"

#include "changes.h"

#include "fingerprint.h"

#include <math.h>
#include <omp.h>
#include <stdlib.h>
#include <string.h>

/* ---- what there is to do ---- */

static size_t outputs_of(const struct study_chapter *chapter, size_t *outputs) {
    size_t count = 0;
    for (size_t c = 0; c < chapter->chart_count; c++)
        for (size_t o = 0; o < chapter->charts[c].output_count; o++) {
            bool seen = false;
            for (size_t i = 0; i < count; i++)
                seen = seen || outputs[i] == chapter->charts[c].outputs[o];
            if (!seen)
                outputs[count++] = chapter->charts[c].outputs[o];
        }
    return count;
}

static bool make_curves(const struct study_chapter *chapter, struct guideline_chapter *made,
                        struct arena *arena, struct error *error) {
    size_t outputs[MODEL_MOST_OUTPUTS];
    size_t count = outputs_of(chapter, outputs), points = chapter->vary.point_count;
    struct guideline_curve *curves =
        arena_new(arena, chapter->variant_count * count, struct guideline_curve, error);
    if (curves == NULL)
        return false;
    for (size_t v = 0; v < chapter->variant_count; v++)
        for (size_t o = 0; o < count; o++) {
            double *numbers = arena_new(arena, 3 * points, double, error);
            unsigned *flags = arena_new(arena, points, unsigned, error);
            if (numbers == NULL || flags == NULL)
                return false;
            curves[v * count + o] = (struct guideline_curve){.variant = v,
                                                             .output = outputs[o],
                                                             .y = numbers,
                                                             .low = numbers + points,
                                                             .high = numbers + 2 * points,
                                                             .flags = flags};
        }
    made->curves = curves;
    made->curve_count = chapter->variant_count * count;
    return true;
}

const struct guideline_curve *guideline_find_curve(const struct guideline_chapter *chapter,
                                                   size_t variant, size_t output) {
    for (size_t i = 0; i < chapter->curve_count; i++)
        if (chapter->curves[i].variant == variant && chapter->curves[i].output == output)
            return &chapter->curves[i];
    return NULL;
}

static size_t cell_count(const struct study_rule *rule) {
    if (rule->rows.count == 0)
        return 0;
    return rule->rows.count * (rule->columns.count > 0 ? rule->columns.count : 1);
}

static bool make_rules(const struct study_chapter *chapter, struct guideline_chapter *made,
                       struct arena *arena, struct error *error) {
    struct guideline_rule *rules =
        arena_new(arena, chapter->rule_count, struct guideline_rule, error);
    if (rules == NULL)
        return false;
    for (size_t r = 0; r < chapter->rule_count; r++) {
        const struct study_rule *rule = &chapter->rules[r];
        rules[r].rule = rule;
        rules[r].findings = arena_new(arena, rule->variant_count, struct guideline_finding, error);
        if (cell_count(rule) > 0)
            rules[r].cells = arena_new(arena, rule->variant_count * cell_count(rule),
                                       struct guideline_finding, error);
        if (rules[r].findings == NULL || (cell_count(rule) > 0 && rules[r].cells == NULL))
            return false;
    }
    made->rules = rules;
    return true;
}

static size_t count_tasks(const struct study *study) {
    size_t count = 0;
    for (size_t c = 0; c < study->chapter_count; c++) {
        const struct study_chapter *chapter = &study->chapters[c];
        count += chapter->variant_count * chapter->vary.point_count;
        for (size_t r = 0; r < chapter->rule_count; r++)
            count += chapter->rules[r].variant_count * (1 + cell_count(&chapter->rules[r]));
    }
    return count;
}

/* Rules first: they are the long ones, and threads that start them early end together. */
static size_t list_tasks(const struct guideline_chapter *chapters, size_t count,
                         struct task *tasks) {
    size_t listed = 0;
    for (size_t c = 0; c < count; c++)
        for (size_t r = 0; r < chapters[c].chapter->rule_count; r++) {
            const struct guideline_rule *rule = &chapters[c].rules[r];
            size_t cells = cell_count(rule->rule);
            for (size_t v = 0; v < rule->rule->variant_count; v++) {
                tasks[listed++] = (struct task){
                    .kind = TASK_RULE, .chapter = &chapters[c], .rule = rule, .variant = v};
                for (size_t i = 0; i < cells; i++)
                    tasks[listed++] = (struct task){.kind = TASK_CELL,
                                                    .chapter = &chapters[c],
                                                    .rule = rule,
                                                    .variant = v,
                                                    .index = i};
            }
        }
    for (size_t c = 0; c < count; c++)
        for (size_t v = 0; v < chapters[c].chapter->variant_count; v++)
            for (size_t i = 0; i < chapters[c].chapter->vary.point_count; i++)
                tasks[listed++] = (struct task){
                    .kind = TASK_POINT, .chapter = &chapters[c], .variant = v, .index = i};
    return listed;
}

/* ---- doing it ---- */

static void run_all(struct task *tasks, size_t count, struct model_memo *memo,
                    const struct guideline_options *options) {
    size_t done = 0;
    int jobs = options->jobs > 0 ? options->jobs : omp_get_num_procs();
#pragma omp parallel for schedule(dynamic, 1) num_threads(jobs)
    for (size_t i = 0; i < count; i++) {
        task_run(&tasks[i], memo);
#pragma omp critical(guideline_progress)
        {
            done++;
            if (options->progress != NULL)
                options->progress(options->context, "solving", done, count);
        }
    }
}

/* The first in the study's order, whichever thread met it. */
static bool first_error(const struct task *tasks, size_t count, struct error *error) {
    for (size_t i = 0; i < count; i++)
        if (tasks[i].error.kind != ERROR_NONE) {
            error_set(error, tasks[i].error.kind, "%s", tasks[i].error.message);
            return error_in(error, "chapter %s", tasks[i].chapter->chapter->id);
        }
    return true;
}

/* What is a hundredth of the curve's largest value or less is known to a share of that hundredth
 * only: nobody reads more out of a chart, and no budget is so small. */
static double floor_of(const struct guideline_curve *curve, size_t points) {
    double largest = 0.0;
    for (size_t i = 0; i < points; i++)
        if (fabs(curve->y[i]) > largest)
            largest = fabs(curve->y[i]);
    return GUIDELINE_SMALL_SHARE * largest;
}

static void set_curve_errors(const struct task *tasks, size_t count) {
    for (size_t i = 0; i < count; i++) {
        if (tasks[i].kind != TASK_POINT)
            continue;
        const struct study_chapter *chapter = tasks[i].chapter->chapter;
        size_t each = tasks[i].chapter->curve_count / chapter->variant_count;
        for (size_t o = 0; o < each; o++) {
            struct guideline_curve *curve =
                (struct guideline_curve *)&tasks[i].chapter->curves[tasks[i].variant * each + o];
            double size =
                fmax(fabs(curve->y[tasks[i].index]), floor_of(curve, chapter->vary.point_count));
            if (size > 0.0)
                curve->error = fmax(curve->error, tasks[i].error_at[o] / size);
        }
    }
}

bool guideline_compute(const struct study *study, const struct guideline_options *options,
                       struct arena *arena, struct guideline *guideline, struct error *error) {
    bool ok = false;
    struct guideline made = {.study = study};
    struct model_memo *memo = model_memo_create(error);
    struct task *tasks = NULL;
    struct guideline_chapter *chapters =
        arena_new(arena, study->chapter_count, struct guideline_chapter, error);
    if (memo == NULL || chapters == NULL)
        goto out;
    for (size_t c = 0; c < study->chapter_count; c++) {
        chapters[c].chapter = &study->chapters[c];
        if (!make_curves(&study->chapters[c], &chapters[c], arena, error) ||
            !make_rules(&study->chapters[c], &chapters[c], arena, error))
            goto out;
    }
    tasks = calloc(count_tasks(study) + 1, sizeof *tasks);
    if (tasks == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory");
        goto out;
    }
    size_t count = list_tasks(chapters, study->chapter_count, tasks);
    for (size_t i = 0; i < count; i++)
        tasks[i].study = study;
    run_all(tasks, count, memo, options);
    if (!first_error(tasks, count, error))
        goto out;
    set_curve_errors(tasks, count);
    for (size_t i = 0; i < count; i++) {
        made.cases_asked += tasks[i].asked;
        made.cases_solved += tasks[i].solved;
    }
    struct model_memo_counts counts = model_memo_counts(memo);
    made.fields_asked = counts.asked;
    made.fields_solved = counts.solved;
    made.chapters = chapters;
    if (!fingerprint_of(study, made.fingerprint, arena, error) ||
        !changes_find(&made, arena, error))
        goto out;
    *guideline = made;
    ok = true;
out:
    free(tasks);
    model_memo_free(memo);
    return ok;
}
