/* A section by the general solver: C, then the conductors alone in air. */

#include "section_general.h"

#include "outline_solve.h"
#include "section_outline.h"
#include "section_parts.h"

#include <math.h>
#include <string.h>

bool section_is_bare(const struct section_problem *problem) {
    for (size_t i = 0; i < problem->count; i++)
        if (problem->conductors[i].etch > 0)
            return false;
    return problem->plane == SECTION_PLANE && !(problem->mask > 0) && !(problem->cover > 0);
}

void section_general_effort(int effort, struct piece_effort *chosen) {
    size_t more = (size_t)effort;
    *chosen = (struct piece_effort){.terms = 3 + more,
                                    .more_tests = 1,
                                    .far_nodes = 6 + 2 * more,
                                    .near_nodes = 10 + 2 * more,
                                    .reach = 4};
}

void section_general_graded(int effort, struct piece_effort *chosen) {
    *chosen = (struct piece_effort){.terms = effort > 0 ? 6 : 5,
                                    .more_tests = 3,
                                    .far_nodes = 12,
                                    .near_nodes = 20,
                                    .reach = effort > 0 ? 3 : 4,
                                    .graded = true};
}

/* Without a plane the first conductor is the reference. */
static void keep_matrix(const struct section_problem *problem, const double *from, double *to) {
    size_t n = problem->count, first = problem->plane == SECTION_NO_PLANE ? 1 : 0;
    for (size_t i = first; i < n; i++)
        for (size_t j = first; j < n; j++)
            to[(i - first) * (n - first) + j - first] = from[i * n + j];
}

/* The energy that is in no air; without air all of it. */
static void keep_share(const struct section_problem *problem, const struct outline_solution *all,
                       struct section_solution *result) {
    double share[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    keep_matrix(problem, all->air_share, share);
    for (size_t i = 0; i < result->count * result->count; i++)
        result->dielectric_capacitance[i] = result->capacitance[i] - share[i];
}

static bool solve(const struct section_problem *problem, const struct piece_effort *effort,
                  bool share, struct outline *outline, struct outline *air,
                  struct section_solution *result, struct error *error) {
    struct outline_solution solved;
    bool mirrored = section_outline_mirrored(problem);
    if (!section_outline(problem, outline, error))
        return false;
    outline_in_air(outline, air);
    if (!outline_solve(air, mirrored, false, effort, &solved, error))
        return false;
    keep_matrix(problem, solved.capacitance, result->vacuum_capacitance);
    result->unknowns = solved.unknowns;
    if (section_outline_homogeneous(problem)) {
        for (size_t i = 0; i < result->count * result->count; i++) {
            result->capacitance[i] = problem->dk * result->vacuum_capacitance[i];
            result->dielectric_capacitance[i] = problem->dk > 1 ? result->capacitance[i] : 0;
        }
    } else {
        if (!outline_solve(outline, mirrored, share, effort, &solved, error))
            return false;
        keep_matrix(problem, solved.capacitance, result->capacitance);
        keep_share(problem, &solved, result);
        result->unknowns = solved.unknowns;
    }
    return section_inductance(result->count, result->vacuum_capacitance, result->inductance, error);
}

bool section_general(const struct section_problem *problem, const struct piece_effort *effort,
                     bool share, struct section_solution *solution, struct error *error) {
    struct section_solution result = {.error = NAN};
    result.count = problem->count - (problem->plane == SECTION_NO_PLANE ? 1 : 0);
    struct arena *arena = arena_create(error);
    struct outline *outlines = arena == NULL ? NULL : arena_new(arena, 2, struct outline, error);
    bool ok =
        outlines != NULL && solve(problem, effort, share, outlines, outlines + 1, &result, error);
    arena_free(arena);
    if (ok)
        *solution = result;
    return ok;
}
