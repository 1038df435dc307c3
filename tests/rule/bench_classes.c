/* Signal class against signal class on three boards, every cell proven: seconds, solutions and a
 * sum over the bounds that tells whether the answers are the same.  With a file name the cells are
 * written there, one a line.  usage: bench_classes STUDY [CELLS] */
#include "groundrules/guideline.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double now(clockid_t clock) {
    struct timespec time;
    clock_gettime(clock, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

struct totals {
    size_t cells, solutions, met, refused;
    double bounds; /* in steps of the grid */
};

static void write_cell(FILE *file, const struct model *model,
                       const struct guideline_finding *finding, size_t variant, size_t cell) {
    fprintf(file,
            "%zu %zu status %d multiple %ld worst %.6g limit %.6g error %.2g nearest %.6g "
            "solutions %zu",
            variant, cell, (int)finding->status, finding->multiple, finding->worst, finding->limit,
            finding->error, finding->nearest, finding->solutions);
    for (size_t i = 0; i < finding->remedy_count; i++)
        fprintf(file, " %s %.6g", model->inputs[finding->remedies[i].input].name,
                finding->remedies[i].value);
    fputc('\n', file);
}

static void add_cells(const struct guideline_chapter *chapter, FILE *file, struct totals *totals) {
    for (size_t r = 0; r < chapter->chapter->rule_count; r++) {
        const struct study_rule *rule = chapter->rules[r].rule;
        size_t cells = rule->rows.count * rule->columns.count;
        for (size_t i = 0; i < rule->variant_count * cells; i++) {
            const struct guideline_finding *finding = &chapter->rules[r].cells[i];
            totals->cells++;
            totals->solutions += finding->solutions;
            totals->met += finding->status == GUIDELINE_MET_EVERYWHERE;
            totals->refused += finding->status == GUIDELINE_CANNOT_BE_MET;
            totals->bounds += finding->status == GUIDELINE_FOUND ? (double)finding->multiple : 0.0;
            if (file != NULL)
                write_cell(file, chapter->chapter->model, finding, i / cells, i % cells);
        }
    }
}

static bool run(const char *path, FILE *file, struct error *error) {
    struct arena *arena = arena_create(error);
    struct study study;
    struct study_problems problems = {0};
    struct guideline guideline;
    struct totals totals = {0};
    double wall = now(CLOCK_MONOTONIC), busy = now(CLOCK_PROCESS_CPUTIME_ID);
    bool ok =
        arena != NULL && study_read(path, arena, &study, &problems, error) &&
        guideline_compute(&study, &(struct guideline_options){.jobs = 2}, arena, &guideline, error);
    wall = now(CLOCK_MONOTONIC) - wall;
    busy = now(CLOCK_PROCESS_CPUTIME_ID) - busy;
    if (ok) {
        for (size_t c = 0; c < study.chapter_count; c++)
            add_cells(&guideline.chapters[c], file, &totals);
        printf("%zu cells: %.2f s, %.2f s of both cores, %.1f ms a cell\n", totals.cells, wall,
               busy, 1e3 * busy / (double)totals.cells);
        printf("%zu solutions, %.0f a cell, %.1f us each\n", totals.solutions,
               (double)totals.solutions / (double)totals.cells,
               1e6 * busy / (double)guideline.cases_solved);
        printf("fields: %zu solved\n", guideline.fields_solved);
        printf("met everywhere %zu, cannot be met %zu, sum of the other bounds %.0f steps\n",
               totals.met, totals.refused, totals.bounds);
    }
    arena_free(arena);
    return ok;
}

int main(int count, char **arguments) {
    struct error error = {0};
    if (count < 2)
        return 2;
    FILE *file = count > 2 ? fopen(arguments[2], "w") : NULL;
    bool ok = run(arguments[1], file, &error);
    if (file != NULL && fclose(file) != 0)
        ok = false;
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    return ok ? 0 : 1;
}
