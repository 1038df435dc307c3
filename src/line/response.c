#include "response.h"

#include "problem.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

/* Shares of the EMF below which a front no longer matters: as exact bounces every front is kept
 * that could still add up to a visible crosstalk; on the grid a front only sharpens what the
 * samples already contain. */
static const double EXACT_FRONT = 1e-10, GRID_FRONT = 1e-5;
enum { MOST_EXACT_FRONTS = 20000, MOST_GRID_FRONTS = 4000, MOST_STEPS = 200000 };
/* A passage is followed while its strongest front is above this share of the EMF: all its fronts or
 * none, since crosstalk is the small difference of modes. */
static const double GRID_PASSAGE = 1e-2;
/* Grid steps of the coarsest grid per fastest time constant of the ends, per shortest edge and per
 * passage of the fastest mode. */
/* One conductor alone has no crosstalk to tell how good its waves are, and a single peak does not
 * tell how good the late ringing is. */
static const double STEPS_PER_CONSTANT_FINE = 8, STEPS_PER_PASSAGE_FINE = 6;
static const double STEPS_PER_CONSTANT = 2, STEPS_PER_EDGE = 6, STEPS_PER_PASSAGE = 3;
/* Of a peak: where sequences of edges are to be added up the march goes on until no more is left.
 */
static const double LATEST = 1e-3;
/* The grid is halved, at most so many times, until two agree within a share of the peak and a share
 * of the EMF. */
enum { MOST_RUNGS = 5 };
/* Of the peak and of the EMF: what fronts too weak to be followed may leave on both grids alike. */
static const double ALIKE = 1e-4, ALIKE_OF_EMF = 1e-7;
static const double ENOUGH = 2e-4, ENOUGH_OF_EMF = 1e-6;
/* A capacitance this much faster than the shortest edge is left out. */
static const double NEGLIGIBLE = 1e-4;

struct line_setup {
    const struct line_problem *problem;
    struct line_modes modes;
    size_t driven;
    bool lasting; /* late ringing counts too */
    struct end_system near, far;
};

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

/* The lines are wires in the end: the EMF divides between the resistances of its conductor.  One
 * with none at either end keeps a charge that only the march knows. */
static double final_voltage(const struct line_problem *problem, size_t driven, size_t conductor) {
    double near = problem->near[conductor].resistance, far = problem->far[conductor].resistance;
    if (isinf(near) && isinf(far))
        return NAN;
    if (conductor != driven || isinf(near))
        return 0;
    return isinf(far) ? 1 : near + far > 0 ? far / (near + far) : NAN;
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
    struct fronts_limit limit = {.smallest = GRID_FRONT,
                                 .weakest = GRID_PASSAGE,
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
                                      .latest = setup->lasting ? LATEST : INFINITY,
                                      .most_steps = MOST_STEPS};
    if (coarser != NULL)
        march_setup.exact_steps = coarser->march.samples * steps / coarser->steps;
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < modes->count; k++)
            march_setup.final[end][k] = final_voltage(problem, setup->driven, k);
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

static void find_peaks(const struct line_setup *setup, double edge, struct rung *rung) {
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < setup->problem->count; k++)
            if (k != setup->driven || setup->problem->count == 1)
                rung->peak[end][k] = curve_peak(&rung->curve[end][k], edge);
}

/* Whether both grids agree on the peaks of the shortest edge. */
static bool agree(const struct line_setup *setup, const struct rung *fine,
                  const struct rung *coarse) {
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < setup->problem->count; k++) {
            double peak = fine->peak[end][k].highest, other = coarse->peak[end][k].highest;
            if (!(fabs(peak - other) <= ENOUGH * peak + ENOUGH_OF_EMF))
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

/* Grids, each of half the step of the one before, until two agree. */
static bool build_curves(const struct line_setup *setup, struct arena *arena,
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
            agree(setup, &rungs[fine], &rungs[1 - fine]))
            break;
    }
    for (size_t end = 0; end < 2; end++) {
        memcpy(response->curve[end], rungs[fine].curve[end], sizeof response->curve[end]);
        memcpy(response->coarse[end], rungs[1 - fine].curve[end], sizeof response->coarse[end]);
        for (size_t k = 0; k < setup->problem->count; k++) {
            response->rest_error[end][k] = rungs[fine].march.rest[end][k].error;
            response->late[end][k] = rungs[fine].march.rest[end][k].late;
            response->shortest[end][k] = rungs[fine].peak[end][k];
            response->difference[end][k] =
                fabs(rungs[fine].peak[end][k].highest - rungs[1 - fine].peak[end][k].highest);
        }
    }
    return true;
}

static struct line_response *create(const struct line_problem *problem, size_t driven, bool lasting,
                                    double shortest_edge, struct arena *arena,
                                    struct error *error) {
    struct line_setup setup = {.problem = problem, .driven = driven, .lasting = lasting};
    if (!problem_check(problem, driven, error) || !line_modes(problem, &setup.modes, error))
        return NULL;
    if (!(shortest_edge > 0 && shortest_edge <= 1e6)) {
        error_set(error, ERROR_INPUT, "shortest edge is %g s, must be above 0, at most 1e6",
                  shortest_edge);
        return NULL;
    }
    struct line_response *response = arena_new(arena, 1, struct line_response, error);
    if (response == NULL)
        return NULL;
    response->count = problem->count;
    response->shortest_edge = shortest_edge;
    double negligible = NEGLIGIBLE * shortest_edge;
    if (!end_system_build(problem, &setup.modes, problem->near, driven, negligible, &setup.near,
                          error) ||
        !end_system_build(problem, &setup.modes, problem->far, SIZE_MAX, negligible, &setup.far,
                          error))
        return NULL;
    if (setup.near.states + setup.far.states == 0) {
        struct fronts_limit limit = {
            .smallest = EXACT_FRONT, .most = MOST_EXACT_FRONTS, .latest = INFINITY, .scale = 0};
        struct fronts fronts;
        if (!fronts_follow(&setup.modes, problem->length, &setup.near, &setup.far, &limit, arena,
                           &fronts, error))
            return NULL;
        if (isinf(fronts.complete_until)) {
            response->exact = true;
            for (size_t k = 0; k < problem->count; k++)
                response->rest_error[0][k] = response->rest_error[1][k] = 1e-6;
            if (!staircase_build(&fronts, problem->count, true, arena, &response->staircase[0],
                                 error) ||
                !staircase_build(&fronts, problem->count, false, arena, &response->staircase[1],
                                 error))
                return NULL;
            return response;
        }
    }
    return build_curves(&setup, arena, response, error) ? response : NULL;
}

struct line_response *line_response_create(const struct line_problem *problem, size_t driven,
                                           double shortest_edge, struct arena *arena,
                                           struct error *error) {
    return create(problem, driven, false, shortest_edge, arena, error);
}

struct line_response *line_response_create_lasting(const struct line_problem *problem,
                                                   size_t driven, double shortest_edge,
                                                   struct arena *arena, struct error *error) {
    return create(problem, driven, true, shortest_edge, arena, error);
}

bool response_check(const struct line_response *response, size_t victim, double edge,
                    struct error *error) {
    if (victim >= response->count)
        return error_set(error, ERROR_INPUT, "conductor is %zu, there are %zu (from 0)", victim,
                         response->count);
    if (!(edge >= response->shortest_edge * (1 - 1e-12) && edge <= 1e9))
        return error_set(error, ERROR_INPUT,
                         "edge is %g s, must be within %g (prepared for) and %g", edge,
                         response->shortest_edge, 1e9);
    return true;
}

double response_at(const struct line_response *response, size_t end, size_t victim, double edge,
                   double time) {
    return response->exact ? staircase_at(&response->staircase[end], victim, edge, time)
                           : curve_response(&response->curve[end][victim], edge, time);
}

double response_coarse_at(const struct line_response *response, size_t end, size_t victim,
                          double edge, double time) {
    return response->exact ? response_at(response, end, victim, edge, time)
                           : curve_response(&response->coarse[end][victim], edge, time);
}

/* Peaks of both ends on the finer grid; differences[2]: by how much the coarser one's are others.
 */
static void peaks_at(const struct line_response *response, size_t victim, double edge,
                     struct line_peak peaks[2], double differences[2]) {
    for (size_t end = 0; end < 2; end++) {
        peaks[end] = response->shortest[end][victim];
        differences[end] = response->difference[end][victim];
        if (edge == response->shortest_edge && peaks[end].highest > 0)
            continue;
        peaks[end] = curve_peak(&response->curve[end][victim], edge);
        differences[end] =
            fabs(peaks[end].highest - curve_peak(&response->coarse[end][victim], edge).highest);
    }
}

/* Fourth order would leave a fifteenth of the difference, fronts that blur all of it.  Two peaks
 * may agree by chance; both ends, and the shortest edge, whose error falls with the edge, hardly
 * do. */
static void add_errors(const struct line_response *response, size_t victim, double edge,
                       const double differences[2], struct line_peak peaks[2]) {
    for (size_t end = 0; end < 2; end++) {
        double shortest = response->difference[end][victim] * response->shortest_edge / edge;
        double own = fmax(differences[end], fmax(0.5 * differences[1 - end], shortest));
        peaks[end].error = response->rest_error[end][victim] + ALIKE;
        if (peaks[end].highest > 0)
            peaks[end].error += (own + ALIKE_OF_EMF) / peaks[end].highest;
    }
}

bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error) {
    struct line_peak peaks[2];
    double differences[2];
    if (!response_check(response, victim, edge, error))
        return false;
    if (response->exact) {
        for (size_t end = 0; end < 2; end++) {
            peaks[end] = staircase_peak(&response->staircase[end], victim, edge);
            peaks[end].error = response->rest_error[end][victim];
        }
    } else {
        peaks_at(response, victim, edge, peaks, differences);
        add_errors(response, victim, edge, differences, peaks);
    }
    *near = peaks[0];
    *far = peaks[1];
    return true;
}

bool line_response_samples(const struct line_response *response, size_t victim, double edge,
                           double step, size_t samples, double *near, double *far,
                           struct error *error) {
    if (!response_check(response, victim, edge, error))
        return false;
    if (!(step > 0 && isfinite(step)))
        return error_set(error, ERROR_INPUT, "sample step is %g s, must be above 0", step);
    for (size_t end = 0; end < 2; end++) {
        double *out = end == 0 ? near : far;
        for (size_t i = 0; i < samples; i++)
            out[i] = response_at(response, end, victim, edge, (double)i * step);
    }
    return true;
}
