#include "rungs.h"

#include "loss.h"
#include "problem.h"

#include <math.h>
#include <string.h>

/* Share of the EMF below which a front no longer matters: as exact bounces every front is kept that
 * could still add up to a visible crosstalk. */
static const double EXACT_FRONT = 1e-10;
enum { MOST_EXACT_FRONTS = 20000 };
/* Of the peak and of the EMF: what fronts too weak to be followed may leave on both grids alike. */
static const double ALIKE = 1e-4, ALIKE_OF_EMF = 1e-7;
/* A capacitance this much faster than the shortest edge is left out. */
static const double NEGLIGIBLE = 1e-4;

static struct line_response *create(const struct line_problem *problem, double shortest_edge,
                                    bool lasting, struct arena *arena, struct error *error) {
    struct line_setup setup = {.problem = problem, .lasting = lasting};
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
    response->emf = problem_largest_emf(problem);
    if (loss_present(problem)) {
        response->lossy = arena_new(arena, 1, struct lossy, error);
        if (response->lossy == NULL ||
            !lossy_build(problem, shortest_edge, lasting, arena, response->lossy, error))
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
        struct fronts_limit limit = {.smallest = EXACT_FRONT * response->emf,
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
    return rungs_climb(&setup, arena, response, error) ? response : NULL;
}

struct line_response *line_response_create(const struct line_problem *problem, double shortest_edge,
                                           struct arena *arena, struct error *error) {
    return create(problem, shortest_edge, false, arena, error);
}

struct line_response *line_response_create_long(const struct line_problem *problem,
                                                double shortest_edge, struct arena *arena,
                                                struct error *error) {
    return create(problem, shortest_edge, true, arena, error);
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

double response_coarse_at(const struct line_response *response, size_t end, size_t victim,
                          double edge, double time) {
    return response->exact || response->lossy != NULL
               ? response_at(response, end, victim, edge, time)
               : curve_response(&response->coarse[end][victim], edge, time);
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

static bool is_kept(const struct line_response *response, size_t end, size_t victim, double edge,
                    double from) {
    return edge == response->shortest_edge && from == 0 &&
           response->shortest[end][victim].highest > 0;
}

struct line_peak response_peak(const struct line_response *response, size_t end, size_t victim,
                               double edge, double from) {
    if (response->lossy != NULL)
        return smooth_peak(&response->lossy->end[end][victim], edge, from);
    if (response->exact)
        return staircase_peak(&response->staircase[end], victim, edge, from);
    return is_kept(response, end, victim, edge, from)
               ? response->shortest[end][victim]
               : curve_peak(&response->curve[end][victim], edge, from);
}

/* Peaks of both ends on the finer grid; differences[2]: by how much the coarser one's are others.
 */
static void peaks_on_grids(const struct line_response *response, size_t victim, double edge,
                           double from, struct line_peak peaks[2], double differences[2]) {
    for (size_t end = 0; end < 2; end++) {
        peaks[end] = response_peak(response, end, victim, edge, from);
        differences[end] =
            is_kept(response, end, victim, edge, from)
                ? response->difference[end][victim]
                : fabs(peaks[end].highest -
                       curve_peak(&response->coarse[end][victim], edge, from).highest);
    }
}

/* V.  Fourth order would leave a fifteenth of the difference, fronts that blur all of it.  Two
 * peaks may agree by chance; both ends, and the shortest edge, whose error falls with the edge,
 * hardly do. */
static double error_on_grids(const struct line_response *response, size_t end, size_t victim,
                             double edge, double peak, const double differences[2]) {
    double shortest = response->difference[end][victim] * response->shortest_edge / edge;
    return fmax(differences[end], fmax(0.5 * differences[1 - end], shortest)) + ALIKE * peak +
           ALIKE_OF_EMF * response->emf;
}

double response_peak_error(const struct line_response *response, size_t end, size_t victim,
                           double edge, double from) {
    struct line_peak peaks[2];
    double differences[2];
    if (response->lossy != NULL) {
        struct line_peak peak = response_peak(response, end, victim, edge, from);
        return peak.error * peak.highest;
    }
    if (response->exact)
        return 0;
    peaks_on_grids(response, victim, edge, from, peaks, differences);
    return error_on_grids(response, end, victim, edge, peaks[end].highest, differences);
}

bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error) {
    struct line_peak peaks[2];
    double differences[2] = {0, 0};
    bool on_grids = !response->exact && response->lossy == NULL;
    if (!response_check(response, victim, edge, error))
        return false;
    if (on_grids)
        peaks_on_grids(response, victim, edge, 0, peaks, differences);
    for (size_t end = 0; end < 2; end++) {
        if (!on_grids)
            peaks[end] = response_peak(response, end, victim, edge, 0);
        if (response->lossy == NULL)
            peaks[end].error = response->rest_error[end][victim];
        if (on_grids && peaks[end].highest > 0)
            peaks[end].error +=
                error_on_grids(response, end, victim, edge, peaks[end].highest, differences) /
                peaks[end].highest;
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
