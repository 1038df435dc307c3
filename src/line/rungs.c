/* The response on grids: each of half the step of the one before, until two agree. */

#include "rungs.h"

#include "problem.h"

#include <math.h>
#include <string.h>

/* Share of the EMF below which a front is not followed: on the grid it only sharpens what the
 * samples already contain. */
static const double GRID_FRONT = 1e-5;
enum { MOST_GRID_FRONTS = 4000, MOST_STEPS = 200000 };
/* A passage is followed while its strongest front is above this share of the EMF: all its fronts or
 * none, since crosstalk is the small difference of modes. */
static const double GRID_PASSAGE = 1e-2;
/* Grid steps of the coarsest grid per fastest time constant of the ends, per shortest edge and per
 * passage of the fastest mode. */
static const double STEPS_PER_CONSTANT = 2, STEPS_PER_EDGE = 6, STEPS_PER_PASSAGE = 3;
/* One conductor alone has no crosstalk to tell how good its waves are, and a single peak does not
 * tell how good the late ringing is. */
static const double STEPS_PER_CONSTANT_FINE = 8, STEPS_PER_PASSAGE_FINE = 6;
/* Share of its range by which the integral may still swing when the march ends: where one edge is
 * asked for, and where late ringing counts by itself or adds up. */
static const double SETTLED_FOR_PEAKS = 0.02, SETTLED_FOR_SEQUENCES = 0.001;
/* The grid is halved, at most so many times, until two agree within a share of the peak and a share
 * of the EMF. */
enum { MOST_RUNGS = 5 };
static const double ENOUGH = 2e-4, ENOUGH_OF_EMF = 1e-6;

/* The slowest way the whole structure can settle once waves have died: capacitances through both
 * resistances of a conductor, inductance through their sum. */
static double settling_time(const struct line_problem *problem) {
    double slowest = 0;
    for (size_t i = 0; i < problem->count; i++) {
        const struct line_end *near = &problem->near[i], *far = &problem->far[i];
        double own = problem->capacitance[i * problem->count + i] * problem->length;
        double conductance = 1 / near->resistance + 1 / far->resistance;
        double series = near->resistance + far->resistance;
        if (conductance > 0 && isfinite(conductance))
            slowest = fmax(slowest, (own + near->capacitance + far->capacitance) / conductance);
        if (series > 0 && isfinite(series))
            slowest = fmax(slowest,
                           problem->inductance[i * problem->count + i] * problem->length / series);
    }
    return slowest;
}

/* The lines are wires in the end: an EMF divides between the resistances of its conductor.  One
 * with none at either end keeps a charge that only the march knows. */
static double final_voltage(const struct line_problem *problem, size_t conductor) {
    double emf = problem->near[conductor].emf;
    double near = problem->near[conductor].resistance, far = problem->far[conductor].resistance;
    if (isinf(near) && isinf(far))
        return NAN;
    if (emf == 0)
        return 0;
    return isinf(far) ? emf : near + far > 0 ? emf * far / (near + far) : NAN;
}

/* One grid and the curves on it. */
struct rung {
    size_t steps; /* per passage of the fastest mode */
    struct march march;
    struct curve curve[2][LINE_MOST_CONDUCTORS];
    struct line_peak peak[2][LINE_MOST_CONDUCTORS]; /* of the shortest edge; 0 for what is driven */
};

static bool follow_fronts(const struct line_setup *setup, size_t steps, double edge,
                          struct arena *arena, struct fronts *fronts, struct error *error) {
    double passage = setup->modes.slowness[0] * setup->problem->length;
    double scale = passage / (double)steps;
    /* A front that is dropped is late or early by part of a step; one that is kept with a series
     * that does not converge is wrong by its last term: the lesser evil of the two. */
    double converged = fmin(fmax(scale / edge, 0.05), 0.2);
    double emf = problem_largest_emf(setup->problem);
    struct fronts_limit limit = {.smallest = GRID_FRONT * emf,
                                 .weakest = GRID_PASSAGE * emf,
                                 .most = MOST_GRID_FRONTS,
                                 .latest = INFINITY,
                                 .scale = scale,
                                 .converged = converged};
    return fronts_follow(&setup->modes, setup->problem->length, &setup->near, &setup->far, &limit,
                         arena, fronts, error);
}

/* `coarser`: a rung that has told when to end and where all comes to rest; NULL for the first. */
static bool climb_to(const struct line_setup *setup, size_t steps, double edge,
                     const struct rung *coarser, struct arena *arena, struct rung *rung,
                     struct error *error) {
    const struct line_problem *problem = setup->problem;
    const struct line_modes *modes = &setup->modes;
    double slowest = modes->slowness[problem->count - 1] * problem->length;
    double window = fmax(4 * slowest, 2 * settling_time(problem));
    double step = modes->slowness[0] * problem->length / (double)steps;
    struct fronts fronts;
    if (!follow_fronts(setup, steps, edge, arena, &fronts, error))
        return false;
    struct march_setup march_setup = {.modes = modes,
                                      .length = problem->length,
                                      .end = {&setup->near, &setup->far},
                                      .fronts = &fronts,
                                      .step = step,
                                      .window = (size_t)fmin(ceil(window / step), MOST_STEPS / 2),
                                      .edge = edge,
                                      .settled = setup->lasting ? SETTLED_FOR_SEQUENCES
                                                                : SETTLED_FOR_PEAKS,
                                      .most_steps = MOST_STEPS};
    if (coarser != NULL)
        march_setup.exact_steps = coarser->march.samples * steps / coarser->steps;
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < modes->count; k++)
            march_setup.final[end][k] = final_voltage(problem, k);
    rung->steps = steps;
    if (!march_run(&march_setup, arena, &rung->march, error))
        return false;
    for (size_t end = 0; end < 2; end++) {
        if (coarser != NULL)
            memcpy(rung->march.rest[end], coarser->march.rest[end], sizeof rung->march.rest[end]);
        if (!curves_build(&rung->march, rung->march.rest[end], &fronts, end == 0, arena,
                          rung->curve[end], error))
            return false;
    }
    return true;
}

/* What is driven shows its EMF, to which crosstalk is nothing; where all is driven all counts. */
static bool tells(const struct line_problem *problem, size_t conductor) {
    bool quiet = false;
    for (size_t k = 0; k < problem->count; k++)
        quiet = quiet || problem->near[k].emf == 0;
    return !quiet || problem->near[conductor].emf == 0;
}

static void find_peaks(const struct line_setup *setup, double edge, struct rung *rung) {
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < setup->problem->count; k++)
            if (tells(setup->problem, k))
                rung->peak[end][k] = curve_peak(&rung->curve[end][k], edge, 0);
}

static bool is_enough(double peak, double other, double emf) {
    return fabs(peak - other) <= ENOUGH * peak + ENOUGH_OF_EMF * emf;
}

/* Two peaks may agree by chance, not those of other edges as well. */
static bool agree_elsewhere(const struct line_setup *setup, double edge, const struct rung *fine,
                            const struct rung *coarse) {
    static const double longer[] = {1.23, 1.61};
    double emf = problem_largest_emf(setup->problem);
    for (size_t i = 0; i < sizeof longer / sizeof *longer; i++)
        for (size_t end = 0; end < 2; end++)
            for (size_t k = 0; k < setup->problem->count; k++)
                if (tells(setup->problem, k) &&
                    !is_enough(curve_peak(&fine->curve[end][k], longer[i] * edge, 0).highest,
                               curve_peak(&coarse->curve[end][k], longer[i] * edge, 0).highest,
                               emf))
                    return false;
    return true;
}

/* Whether both grids agree on the peaks of the shortest edge. */
static bool agree(const struct line_setup *setup, const struct rung *fine,
                  const struct rung *coarse) {
    double emf = problem_largest_emf(setup->problem);
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < setup->problem->count; k++) {
            if (!is_enough(fine->peak[end][k].highest, coarse->peak[end][k].highest, emf))
                return false;
        }
    return true;
}

/* The coarsest grid: a passage needs three steps (stepper.c). */
static size_t first_steps(const struct line_setup *setup, double edge) {
    double passage = setup->modes.slowness[0] * setup->problem->length;
    double fastest = fmin(setup->near.fastest, setup->far.fastest);
    bool finely = setup->lasting || setup->problem->count == 1;
    double per_constant = finely ? STEPS_PER_CONSTANT_FINE : STEPS_PER_CONSTANT;
    double per_passage = setup->lasting ? STEPS_PER_PASSAGE_FINE : STEPS_PER_PASSAGE;
    double steps = fmax(passage * per_constant / fastest, passage * STEPS_PER_EDGE / edge);
    return (size_t)fmin(fmax(ceil(steps), per_passage), 1e5);
}

bool rungs_climb(const struct line_setup *setup, struct arena *arena,
                 struct line_response *response, struct error *error) {
    struct rung rungs[2] = {0};
    double edge = response->shortest_edge;
    size_t steps = first_steps(setup, edge), fine = 1;
    if (!climb_to(setup, steps, edge, NULL, arena, &rungs[0], error))
        return false;
    for (size_t rung = 1;; rung++) {
        steps *= 2;
        fine = rung % 2;
        if (rung == 1)
            find_peaks(setup, edge, &rungs[0]);
        if (!climb_to(setup, steps, edge, &rungs[1 - fine], arena, &rungs[fine], error))
            return false;
        find_peaks(setup, edge, &rungs[fine]);
        if (rung == MOST_RUNGS || 2 * rungs[fine].march.samples > MOST_STEPS ||
            (agree(setup, &rungs[fine], &rungs[1 - fine]) &&
             agree_elsewhere(setup, edge, &rungs[fine], &rungs[1 - fine])))
            break;
    }
    for (size_t end = 0; end < 2; end++) {
        memcpy(response->curve[end], rungs[fine].curve[end], sizeof response->curve[end]);
        memcpy(response->coarse[end], rungs[1 - fine].curve[end], sizeof response->coarse[end]);
        for (size_t k = 0; k < setup->problem->count; k++) {
            response->rest_error[end][k] = rungs[fine].march.rest[end][k].error;
            response->range[end][k] = rungs[fine].march.rest[end][k].range * rungs[fine].march.step;
            response->late[end][k] = rungs[fine].march.rest[end][k].late * rungs[fine].march.step;
            response->shortest[end][k] = rungs[fine].peak[end][k];
            response->difference[end][k] =
                fabs(rungs[fine].peak[end][k].highest - rungs[1 - fine].peak[end][k].highest);
        }
    }
    return true;
}
