/* Microseconds for one pair of thick traces, warm, and what that accuracy is; beside LAPACK's dposv
 * for the same number of unknowns, once for the board and once for air. */
#include "groundrules/section.h"

#include <lapacke.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

/* Two symmetric positive definite systems of n with two right sides. */
static double dposv_micro(int n) {
    enum { ROUNDS = 2000 };
    double *matrix = malloc((size_t)(n * n) * sizeof *matrix);
    double *right = malloc((size_t)(2 * n) * sizeof *right);
    double total = 0;
    for (int k = 0; matrix != NULL && right != NULL && k < 2 * ROUNDS; k++) {
        for (int i = 0; i < n; i++)
            for (int j = 0; j < n; j++)
                matrix[i * n + j] = i == j ? 2.0 : 1.0 / (1 + abs(i - j)) / 4;
        for (int i = 0; i < 2 * n; i++)
            right[i] = 1;
        double start = now();
        LAPACKE_dposv(LAPACK_COL_MAJOR, 'U', n, 2, matrix, n, right, n);
        total += now() - start;
    }
    free(matrix);
    free(right);
    return total / ROUNDS * 1e6;
}

/* Additions: against a finer solve's stated error. */
static bool run_general(const char *name, const struct section_problem *problem) {
    enum { ROUNDS = 100 };
    struct error error = {0};
    struct section_solution once, refined;
    for (int k = 0; k < ROUNDS / 5; k++)
        if (!section_solve_once(problem, &once, &error)) {
            fprintf(stderr, "%s\n", error.message);
            return false;
        }
    double start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!section_solve_once(problem, &once, &error))
            return false;
    double micro_once = (now() - start) / ROUNDS * 1e6;
    start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!section_solve(problem, &refined, &error))
            return false;
    double micro_refined = (now() - start) / ROUNDS * 1e6;
    start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!section_dielectric_capacitance(problem, &refined, &error))
            return false;
    printf("%-24s once %6.0f us (%zu unknowns), with refinement %6.0f us (stated error %.0e), "
           "dielectric part %6.0f us\n",
           name, micro_once, once.unknowns, micro_refined, refined.error,
           (now() - start) / ROUNDS * 1e6);
    return true;
}

static bool run_additions(const struct section_problem *pair) {
    struct section_problem etched = *pair, coated = *pair, flat, covered = *pair, ending = *pair,
                           without = *pair;
    etched.conductors[0].etch = etched.conductors[1].etch = 12e-6;
    coated.mask = 25e-6;
    coated.mask_dk = 3.5;
    flat = coated;
    flat.mask_flat = true;
    covered.cover = covered.height;
    covered.cover_dk = 1;
    ending.plane = SECTION_PLANE_ENDS;
    ending.plane_end = 3e-3;
    without.plane = SECTION_NO_PLANE;
    return run_general("etched", &etched) && run_general("coated", &coated) &&
           run_general("coated flat", &flat) && run_general("covered", &covered) &&
           run_general("beside the plane's end", &ending) && run_general("without plane", &without);
}

static bool run(const char *name, const struct section_problem *problem) {
    enum { ROUNDS = 2000 };
    struct error error = {0};
    struct section_solution once, refined, plain;
    if (!section_solve_plain(problem, &plain, &error)) {
        fprintf(stderr, "%s\n", error.message);
        return false;
    }
    for (int k = 0; k < ROUNDS; k++) /* warm up */
        if (!section_solve_once(problem, &once, &error))
            return false;
    double start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!section_solve_once(problem, &once, &error))
            return false;
    double micro_once = (now() - start) / ROUNDS * 1e6;
    start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!section_solve(problem, &refined, &error))
            return false;
    double micro_refined = (now() - start) / ROUNDS * 1e6, worst = 0;
    for (size_t i = 0; i < 4; i++)
        worst = fmax(worst, fabs(once.capacitance[i] / plain.capacitance[i] - 1));
    printf("%-24s once %5.1f us (%zu unknowns, error %.0e), with refinement %5.1f us, dposv %5.1f "
           "us\n",
           name, micro_once, once.unknowns, worst, micro_refined, dposv_micro((int)once.unknowns));
    return true;
}

int main(void) {
    struct section_problem far = {
        .height = 1.6e-3,
        .dk = 4.3,
        .count = 2,
        .conductors = {{0, 0.3e-3, 35e-6, 0}, {0.6e-3, 0.3e-3, 35e-6, 0}}};
    struct section_problem near = far, wide = far, thin = far;
    near.height = 0.19e-3;
    wide.conductors[1].left = 5e-3;
    thin.conductors[0].thickness = thin.conductors[1].thickness = 0;
    return !(run("far plane, gap 0.3 mm", &far) && run("near plane, gap 0.3 mm", &near) &&
             run("far plane, gap 4.7 mm", &wide) && run("far plane, thin", &thin) &&
             run_additions(&far) && run_additions(&near));
}
