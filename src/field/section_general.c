/* A section by the general solver: C, then the conductors alone in air. */

#include "section_general.h"

#include "outline_solve.h"
#include "section_outline.h"
#include "section_parts.h"

#include <math.h>
#include <string.h>

/* Of the reweighted images, over all wave numbers. */
static const double image_error = 5e-6;

static bool is_on_slab(const struct section_problem *problem) {
    return problem->plane == SECTION_PLANE && !(problem->mask > 0) && !(problem->cover > 0);
}

bool section_is_bare(const struct section_problem *problem) {
    for (size_t i = 0; i < problem->count; i++)
        if (problem->conductors[i].etch > 0)
            return false;
    return is_on_slab(problem);
}

void section_general_effort(int effort, struct piece_effort *chosen) {
    size_t more = (size_t)effort;
    *chosen = (struct piece_effort){.terms = 3 + more,
                                    .more_tests = 1,
                                    .far_nodes = 6 + 2 * more,
                                    .near_nodes = 10 + 2 * more,
                                    .reach = 4,
                                    .images = true};
}

void section_general_graded(int effort, struct piece_effort *chosen) {
    *chosen = (struct piece_effort){.terms = effort > 0 ? 6 : 5,
                                    .more_tests = 3,
                                    .far_nodes = 12,
                                    .near_nodes = 20,
                                    .reach = effort > 0 ? 3 : 4,
                                    .smallest = effort > 0 ? 1e-8 : 1e-6};
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

struct outlines {
    struct outline all, free;
};

/* Only free charge on conductors, a slab of `dk` in the kernel (1: air). */
static bool solve_free(const struct section_problem *problem, double dk,
                       const struct piece_effort *effort, const struct outline *conductors,
                       double *capacitance, size_t *unknowns, struct error *error) {
    struct outline_solution solved;
    struct slab_kernel slab;
    double reflection = section_reflection(dk);
    slab_kernel_set(&slab, reflection, section_image_count(reflection, image_error));
    if (!outline_solve(conductors, section_outline_mirrored(problem), false, dk == 1 ? NULL : &slab,
                       effort, &solved, error))
        return false;
    keep_matrix(problem, solved.capacitance, capacitance);
    *unknowns = solved.unknowns;
    return true;
}

/* C by the slab's images and, if `share`, its change with dk over the same functions. */
static bool solve_on_slab(const struct section_problem *problem, const struct piece_effort *effort,
                          bool share, struct outlines *outlines, struct section_solution *result,
                          struct error *error) {
    double low[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double high[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    outline_of_free_charge(&outlines->all, &outlines->free);
    if (!solve_free(problem, problem->dk, effort, &outlines->free, result->capacitance,
                    &result->unknowns, error))
        return false;
    if (!share)
        return true;
    if (!solve_free(problem, problem->dk * (1 - SECTION_DK_STEP), effort, &outlines->free, low,
                    &result->unknowns, error) ||
        !solve_free(problem, problem->dk * (1 + SECTION_DK_STEP), effort, &outlines->free, high,
                    &result->unknowns, error))
        return false;
    for (size_t i = 0; i < result->count * result->count; i++)
        result->dielectric_capacitance[i] = (high[i] - low[i]) / (2 * SECTION_DK_STEP);
    return true;
}

static bool solve_total(const struct section_problem *problem, const struct piece_effort *effort,
                        bool share, const struct outline *outline, struct section_solution *result,
                        struct error *error) {
    struct outline_solution solved;
    if (!outline_solve(outline, section_outline_mirrored(problem), share, NULL, effort, &solved,
                       error))
        return false;
    keep_matrix(problem, solved.capacitance, result->capacitance);
    if (share)
        keep_share(problem, &solved, result);
    result->unknowns = solved.unknowns;
    return true;
}

static void solve_homogeneous(const struct section_problem *problem,
                              struct section_solution *result) {
    for (size_t i = 0; i < result->count * result->count; i++) {
        result->capacitance[i] = problem->dk * result->vacuum_capacitance[i];
        result->dielectric_capacitance[i] = problem->dk > 1 ? result->capacitance[i] : 0;
    }
}

static bool solve(const struct section_problem *problem, const struct piece_effort *effort,
                  bool share, struct outlines *outlines, struct section_solution *result,
                  struct error *error) {
    if (!section_outline(problem, &outlines->all, error))
        return false;
    outline_in_air(&outlines->all, &outlines->free);
    if (!solve_free(problem, 1, effort, &outlines->free, result->vacuum_capacitance,
                    &result->unknowns, error))
        return false;
    bool ok = true;
    if (section_outline_homogeneous(problem))
        solve_homogeneous(problem, result);
    else if (is_on_slab(problem) && effort->images)
        ok = solve_on_slab(problem, effort, share, outlines, result, error);
    else
        ok = solve_total(problem, effort, share, &outlines->all, result, error);
    return ok &&
           section_inductance(result->count, result->vacuum_capacitance, result->inductance, error);
}

bool section_general(const struct section_problem *problem, const struct piece_effort *effort,
                     bool share, struct section_solution *solution, struct error *error) {
    struct section_solution result = {.error = NAN};
    result.count = problem->count - (problem->plane == SECTION_NO_PLANE ? 1 : 0);
    struct arena *arena = arena_create(error);
    struct outlines *outlines = arena == NULL ? NULL : arena_new(arena, 1, struct outlines, error);
    bool ok = outlines != NULL && solve(problem, effort, share, outlines, &result, error);
    arena_free(arena);
    if (ok)
        *solution = result;
    return ok;
}
