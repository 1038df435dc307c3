#include "response.h"

#include "loss.h"
#include "problem.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

/* Shares of the EMF below which a front no longer matters: as exact bounces every front is kept
 * that could still add up to a visible crosstalk; on the grid a front only sharpens what the
 * samples already contain. */
static const double EXACT_FRONT = 1e-10, GRID_FRONT = 3e-6;
enum { MOST_EXACT_FRONTS = 20000, MOST_GRID_FRONTS = 4000, MOST_STEPS = 200000 };
/* Grid steps per fastest time constant of the ends, and per passage of the fastest mode. */
static const double STEPS_PER_CONSTANT = 16;
enum { STEPS_PER_PASSAGE = 12, STEPS_PER_SHORT_PASSAGE = 6 };
/* A passage is short when the shortest edge takes so many of them: hardly more than a lump. */
static const double SHORT_PASSAGE = 30;
/* Steps per shortest edge where fronts that no longer are followed blur over a step. */
static const double STEPS_PER_EDGE = 16;
/* Share of its range by which the integral may still swing when the march ends: where one edge is
 * asked for, and where late ringing counts by itself or adds up. */
static const double SETTLED_FOR_PEAKS = 0.02, SETTLED_FOR_SEQUENCES = 0.001;
/* A capacitance this much faster than the shortest edge is left out. */
static const double NEGLIGIBLE = 1e-4;

struct line_setup {
    const struct line_problem *problem;
    struct line_modes modes;
    struct end_system near, far;
    double settled;
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

static double largest_emf(const struct line_problem *problem) {
    double largest = 0;
    for (size_t i = 0; i < problem->count; i++)
        largest = fmax(largest, fabs(problem->near[i].emf));
    return largest;
}

static bool grid_at(const struct line_setup *setup, const struct fronts *fronts, size_t passage,
                    double window, double edge, size_t exact_steps, struct arena *arena,
                    struct march *march, struct error *error) {
    const struct line_modes *modes = &setup->modes;
    double step = modes->slowness[0] * setup->problem->length / (double)passage;
    double steps = fmin(ceil(window / step), MOST_STEPS / 2);
    struct march_setup march_setup = {.modes = modes,
                                      .length = setup->problem->length,
                                      .end = {&setup->near, &setup->far},
                                      .fronts = fronts,
                                      .step = step,
                                      .window = (size_t)steps,
                                      .edge = edge,
                                      .most_steps = MOST_STEPS,
                                      .settled = setup->settled,
                                      .exact_steps = exact_steps};
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < modes->count; k++)
            march_setup.final[end][k] = final_voltage(setup->problem, k);
    return march_run(&march_setup, arena, march, error);
}

static bool build_curves(const struct line_setup *setup, struct arena *arena,
                         struct line_response *response, struct error *error) {
    const struct line_problem *problem = setup->problem;
    double passage = setup->modes.slowness[0] * problem->length;
    double slowest = setup->modes.slowness[problem->count - 1] * problem->length;
    double fastest = fmin(setup->near.fastest, setup->far.fastest);
    size_t steps = passage * SHORT_PASSAGE < response->shortest_edge ? STEPS_PER_SHORT_PASSAGE
                                                                     : STEPS_PER_PASSAGE;
    double per_passage = ceil(passage * STEPS_PER_CONSTANT / fastest);
    double scale = fmin(fastest / STEPS_PER_CONSTANT, passage / (double)steps);
    /* A front that is dropped is late or early by part of a step; one that is kept with a series
     * that does not converge is wrong by its last term: the lesser evil of the two. */
    double converged = fmin(fmax(scale / response->shortest_edge, 0.05), 0.2);
    struct fronts_limit limit = {.smallest = GRID_FRONT * largest_emf(problem),
                                 .most = MOST_GRID_FRONTS,
                                 .latest = INFINITY,
                                 .scale = scale,
                                 .converged = converged};
    struct fronts fronts;
    if (!fronts_follow(&setup->modes, problem->length, &setup->near, &setup->far, &limit, arena,
                       &fronts, error))
        return false;
    if (isfinite(fronts.complete_until))
        per_passage = fmax(per_passage, ceil(passage * STEPS_PER_EDGE / response->shortest_edge));
    if (per_passage > (double)steps)
        steps = (size_t)fmin(per_passage, 1e5);
    steps += steps % 2;
    double window = fmax(4 * slowest, 2 * settling_time(problem));
    struct march fine, coarse;
    if (!grid_at(setup, &fronts, steps, window, response->shortest_edge, 0, arena, &fine, error) ||
        !grid_at(setup, &fronts, steps / 2, window, response->shortest_edge, fine.samples / 2,
                 arena, &coarse, error))
        return false;
    for (size_t end = 0; end < 2; end++) {
        if (!curves_build(&fine, fine.rest[end], &fronts, end == 0, arena, response->curve[end],
                          error) ||
            !curves_build(&coarse, fine.rest[end], &fronts, end == 0, arena, response->coarse[end],
                          error))
            return false;
        for (size_t k = 0; k < problem->count; k++) {
            response->rest_error[end][k] = fine.rest[end][k].error;
            response->range[end][k] = fine.rest[end][k].range * fine.step;
            response->late[end][k] = fine.rest[end][k].late * fine.step;
        }
    }
    return true;
}

static struct line_response *create(const struct line_problem *problem, double shortest_edge,
                                    double settled, struct arena *arena, struct error *error) {
    struct line_setup setup = {.problem = problem, .settled = settled};
    if (!problem_check(problem, error) || !line_modes(problem, &setup.modes, error))
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
    if (loss_present(problem)) {
        response->lossy = arena_new(arena, 1, struct lossy, error);
        if (response->lossy == NULL ||
            !lossy_build(problem, shortest_edge, settled < SETTLED_FOR_PEAKS, arena,
                         response->lossy, error))
            return NULL;
        memcpy(response->late, response->lossy->late, sizeof response->late);
        memcpy(response->range, response->lossy->range, sizeof response->range);
        return response;
    }
    double negligible = NEGLIGIBLE * shortest_edge;
    if (!end_system_build(problem, &setup.modes, problem->near, negligible, &setup.near, error) ||
        !end_system_build(problem, &setup.modes, problem->far, negligible, &setup.far, error))
        return NULL;
    if (setup.near.states + setup.far.states == 0) {
        struct fronts_limit limit = {.smallest = EXACT_FRONT * largest_emf(problem),
                                     .most = MOST_EXACT_FRONTS,
                                     .latest = INFINITY,
                                     .scale = 0};
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

struct line_response *line_response_create(const struct line_problem *problem, double shortest_edge,
                                           struct arena *arena, struct error *error) {
    return create(problem, shortest_edge, SETTLED_FOR_PEAKS, arena, error);
}

struct line_response *line_response_create_long(const struct line_problem *problem,
                                                double shortest_edge, struct arena *arena,
                                                struct error *error) {
    return create(problem, shortest_edge, SETTLED_FOR_SEQUENCES, arena, error);
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
    if (response->lossy != NULL)
        return smooth_response(&response->lossy->end[end][victim], edge, time);
    return response->exact ? staircase_at(&response->staircase[end], victim, edge, time)
                           : curve_response(&response->curve[end][victim], edge, time);
}

double response_step(const struct line_response *response) {
    return response->exact ? INFINITY : response->curve[0][0].step;
}

size_t response_corners(const struct line_response *response, size_t end, size_t victim) {
    return response->exact ? response->staircase[end].steps : response->curve[end][victim].fronts;
}

double response_corner(const struct line_response *response, size_t end, size_t victim,
                       size_t index, double *jump) {
    if (!response->exact) {
        const struct curve_front *front = &response->curve[end][victim].front[index];
        *jump = front->jump[0];
        return front->time;
    }
    const struct staircase *staircase = &response->staircase[end];
    const double *value = staircase->value + victim * staircase->steps + index;
    *jump = index > 0 ? value[0] - value[-1] : value[0];
    return staircase->time[index];
}

struct line_peak response_peak(const struct line_response *response, size_t end, size_t victim,
                               double edge, double from) {
    if (response->lossy != NULL)
        return smooth_peak(&response->lossy->end[end][victim], edge, from);
    return response->exact ? staircase_peak(&response->staircase[end], victim, edge, from)
                           : curve_peak(&response->curve[end][victim], edge, from);
}

/* Fourth order would leave a fifteenth of the difference, fronts that blur all of it. */
double response_peak_error(const struct line_response *response, size_t end, size_t victim,
                           double edge, double from) {
    if (response->exact)
        return 0;
    if (response->lossy != NULL) {
        struct line_peak peak = response_peak(response, end, victim, edge, from);
        return peak.error * peak.highest;
    }
    return fabs(curve_peak(&response->curve[end][victim], edge, from).highest -
                curve_peak(&response->coarse[end][victim], edge, from).highest);
}

static struct line_peak peak_at(const struct line_response *response, size_t end, size_t victim,
                                double edge) {
    struct line_peak peak = response_peak(response, end, victim, edge, 0);
    if (response->lossy != NULL)
        return peak;
    peak.error = response->rest_error[end][victim];
    if (peak.highest > 0 && !response->exact)
        peak.error +=
            fabs(peak.highest - curve_peak(&response->coarse[end][victim], edge, 0).highest) /
            peak.highest;
    return peak;
}

bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error) {
    if (!response_check(response, victim, edge, error))
        return false;
    *near = peak_at(response, 0, victim, edge);
    *far = peak_at(response, 1, victim, edge);
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
