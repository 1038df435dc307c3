/* dL/dn by central differences of the inductance in air with walls moved out and in by d and 2 d,
 * extrapolated (Richardson): d is a sixteenth of the smallest feature beside the walls, so that the
 * extrapolated difference is good to (1/16)^4 and the solver's own error, which is in part common
 * to all four, enters with L/(2 d L') of itself. */
#include "groundrules/section_loss.h"

#include "section_parts.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

enum { ENTRIES = SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS };

struct differences {
    section_solver *solve;
    void *context;
    double error; /* largest stated by the solver */
};

static bool plainly(void *context, const struct section_problem *problem,
                    struct section_solution *solution, struct error *error) {
    (void)context;
    return section_solve(problem, solution, error);
}

/* Inward by d on all sides: what is slanted keeps its slope, and the foot is the plane's distance
 * further up. */
static void shrink_copper(struct section_problem *problem, double d) {
    for (size_t i = 0; i < problem->count; i++) {
        struct section_conductor *c = &problem->conductors[i];
        double slope = c->etch / c->thickness, inward = d * (sqrt(1 + slope * slope) + slope);
        c->left += inward;
        c->width -= 2 * inward;
        c->thickness -= 2 * d;
        c->etch = slope * c->thickness;
    }
    problem->height += d;
    if (problem->cover > 0)
        problem->cover -= d;
}

static void recede_plane(struct section_problem *problem, double d) {
    problem->height += d;
    if (problem->cover > 0)
        problem->cover += d;
}

static double smallest_feature(const struct section_problem *problem) {
    double smallest = problem->plane == SECTION_NO_PLANE ? INFINITY : problem->height;
    for (size_t i = 0; i < problem->count; i++) {
        const struct section_conductor *c = &problem->conductors[i];
        smallest = fmin(smallest, fmin(c->thickness, c->width - 2 * c->etch));
        if (i > 0)
            smallest = fmin(smallest, c->left - c[-1].left - c[-1].width);
        if (problem->cover > 0)
            smallest = fmin(smallest, problem->cover - c->thickness);
    }
    return smallest;
}

typedef void mover(struct section_problem *problem, double d);

/* difference[] = (L(d) - L(-d)) / (2 d mu0), 1/m */
static bool difference(struct differences *with, const struct section_problem *problem, mover *move,
                       double d, double *slope, struct error *error) {
    struct section_problem out = *problem, in = *problem;
    struct section_solution far, near;
    move(&out, d);
    move(&in, -d);
    if (!with->solve(with->context, &out, &far, error) ||
        !with->solve(with->context, &in, &near, error))
        return false;
    for (size_t k = 0; k < far.count * far.count; k++)
        slope[k] = (far.inductance[k] - near.inductance[k]) / (2 * d * SECTION_MU_0);
    with->error = fmax(with->error, fmax(far.error, near.error));
    return true;
}

/* slope[] extrapolated; error of the diagonal, absolute, added to own_error[]. */
static bool extrapolated(struct differences *with, const struct section_problem *problem,
                         mover *move, double d, size_t count, double *slope, double *own_error,
                         struct error *error) {
    double wide[ENTRIES];
    if (!difference(with, problem, move, d, slope, error) ||
        !difference(with, problem, move, 2 * d, wide, error))
        return false;
    for (size_t k = 0; k < count * count; k++) {
        double better = (4 * slope[k] - wide[k]) / 3;
        if (k % (count + 1) == 0)
            own_error[k / (count + 1)] += fabs(better - slope[k]);
        slope[k] = better;
    }
    return true;
}

static void fill_dc(const struct section_problem *problem, struct section_loss *loss) {
    size_t first = problem->plane == SECTION_NO_PLANE ? 1 : 0;
    const struct section_conductor *c = problem->conductors;
    for (size_t i = 0; i < loss->count; i++)
        for (size_t j = 0; j < loss->count; j++) {
            const struct section_conductor *own = &c[first + i];
            double *entry = &loss->dc[i * loss->count + j];
            *entry = i == j ? 1 / (own->thickness * (own->width - own->etch)) : 0;
            if (first > 0)
                *entry += 1 / (c->thickness * (c->width - c->etch));
        }
}

static bool check(const struct section_problem *problem, struct error *error) {
    if (!section_check(problem, error))
        return false;
    for (size_t i = 0; i < problem->count; i++)
        if (!(problem->conductors[i].thickness > 0))
            return error_set(error, ERROR_INPUT,
                             "conductor %zu is a sheet: its thickness must be above 0, the skin "
                             "effect's current has no finite loss at a sheet's edges",
                             i + 1);
    return true;
}

bool section_loss(const struct section_problem *problem, section_solver *solve, void *context,
                  struct section_loss *loss, struct error *error) {
    if (!check(problem, error))
        return false;
    struct section_problem air = *problem;
    air.dk = air.cover_dk = 1;
    air.mask = air.mask_dk = 0;
    air.mask_flat = false;
    struct section_problem infinite = air;
    if (infinite.plane == SECTION_PLANE_ENDS)
        infinite.plane = SECTION_PLANE;
    struct differences with = {solve == NULL ? plainly : solve, context, 0};
    struct section_loss made = {.count =
                                    problem->count - (problem->plane == SECTION_NO_PLANE ? 1 : 0)};
    struct section_solution own;
    double feature = smallest_feature(problem), height = problem->height;
    double room = problem->cover > 0 ? fmin(height, problem->cover) : height;
    double own_error[SECTION_MOST_CONDUCTORS] = {0};
    if (!with.solve(with.context, &air, &own, error) ||
        !extrapolated(&with, &air, shrink_copper, feature / 16, made.count, made.copper, own_error,
                      error) ||
        (problem->plane != SECTION_NO_PLANE &&
         !extrapolated(&with, &infinite, recede_plane, room / 16, made.count, made.plane, own_error,
                       error)))
        return error_in(error, "loss in the copper");
    for (size_t i = 0; i < made.count; i++) {
        size_t at = i * (made.count + 1);
        double noise = with.error * own.inductance[at] / SECTION_MU_0 * 16 / (2 * feature);
        made.error = fmax(made.error, (own_error[i] + noise) / (made.copper[at] + made.plane[at]));
    }
    fill_dc(problem, &made);
    *loss = made;
    return true;
}

struct parts {
    size_t kept_count, tied_count;
    size_t kept[SECTION_MOST_CONDUCTORS], tied[SECTION_MOST_CONDUCTORS];
};

/* currents[n][kept]: of all conductors for 1 A in each signal, -inverse(L_tt) L_tk in the tied. */
static bool currents_of(const struct section_solution *solution, const struct parts *parts,
                        double *currents, struct error *error) {
    size_t n = solution->count, kept = parts->kept_count, tied = parts->tied_count;
    double among[ENTRIES], across[ENTRIES];
    memset(currents, 0, n * kept * sizeof *currents);
    for (size_t k = 0; k < kept; k++)
        currents[parts->kept[k] * kept + k] = 1;
    for (size_t i = 0; i < tied; i++) {
        for (size_t j = 0; j < tied; j++)
            among[i * tied + j] = solution->inductance[parts->tied[i] * n + parts->tied[j]];
        for (size_t k = 0; k < kept; k++)
            across[i * kept + k] = -solution->inductance[parts->tied[i] * n + parts->kept[k]];
    }
    if (tied > 0 && LAPACKE_dposv(LAPACK_ROW_MAJOR, 'U', (lapack_int)tied, (lapack_int)kept, among,
                                  (lapack_int)tied, across, (lapack_int)kept) != 0)
        return error_set(error, ERROR_SINGULAR, "section: inductance is not positive definite");
    for (size_t i = 0; i < tied; i++)
        for (size_t k = 0; k < kept; k++)
            currents[parts->tied[i] * kept + k] = across[i * kept + k];
    return true;
}

static void congruence(size_t n, size_t kept, const double *matrix, const double *currents,
                       double *result) {
    for (size_t a = 0; a < kept; a++)
        for (size_t b = 0; b < kept; b++) {
            double sum = 0;
            for (size_t i = 0; i < n; i++)
                for (size_t j = 0; j < n; j++)
                    sum += currents[i * kept + a] * matrix[i * n + j] * currents[j * kept + b];
            result[a * kept + b] = sum;
        }
}

bool section_loss_reduce(const struct section_loss *loss, const struct section_solution *solution,
                         const enum section_tie *ties, struct section_loss *reduced,
                         struct error *error) {
    struct parts parts = {0};
    for (size_t i = 0; i < loss->count; i++) {
        if (ties[i] == SECTION_SIGNAL)
            parts.kept[parts.kept_count++] = i;
        else if (ties[i] == SECTION_TIED)
            parts.tied[parts.tied_count++] = i;
    }
    if (parts.kept_count == 0)
        return error_set(error, ERROR_INPUT, "section: no conductor is a signal");
    struct section_loss result = {.count = parts.kept_count, .error = loss->error};
    double currents[ENTRIES];
    if (!currents_of(solution, &parts, currents, error))
        return false;
    congruence(loss->count, result.count, loss->copper, currents, result.copper);
    congruence(loss->count, result.count, loss->plane, currents, result.plane);
    for (size_t a = 0; a < result.count; a++)
        for (size_t b = 0; b < result.count; b++)
            result.dc[a * result.count + b] = loss->dc[parts.kept[a] * loss->count + parts.kept[b]];
    *reduced = result;
    return true;
}

double section_surface_resistance(double resistivity) {
    return sqrt(3.14159265358979323846 * SECTION_MU_0 * resistivity);
}
