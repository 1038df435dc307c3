#include "curve.h"
#include "problem.h"
#include "staircase.h"

#include <math.h>
#include <stdint.h>

/* Shares of the EMF below which a front no longer matters: as exact bounces every front is kept
 * that could still add up to a visible crosstalk; on the grid a front only sharpens what the
 * samples already contain. */
static const double EXACT_FRONT = 1e-10, GRID_FRONT = 3e-5;
enum { MOST_EXACT_FRONTS = 20000, MOST_GRID_FRONTS = 4000, MOST_STEPS = 200000 };
/* Grid steps per fastest time constant of the ends, and per passage of the fastest mode. */
static const double STEPS_PER_CONSTANT = 10;
enum { STEPS_PER_PASSAGE = 6 };
/* Steps per shortest edge where fronts that no longer are followed blur over a step. */
static const double STEPS_PER_EDGE = 16;
static const double AT_REST = 1e-4;
/* A capacitance this much faster than the shortest edge is left out. */
static const double NEGLIGIBLE = 1e-4;

struct line_response {
    size_t count;
    double shortest_edge;
    bool exact;
    struct staircase staircase[2];
    struct curve curve[2][LINE_MOST_CONDUCTORS];
    double value_error[2][LINE_MOST_CONDUCTORS];    /* V, of the step response */
    double integral_error[2][LINE_MOST_CONDUCTORS]; /* V s */
    double rest_error;                              /* relative: what may follow the window */
};

struct line_setup {
    const struct line_problem *problem;
    struct line_modes modes;
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
            slowest = fmax(slowest, problem->inductance[i * problem->count + i] *
                                        problem->length / series);
    }
    return slowest;
}

static bool grid_at(const struct line_setup *setup, const struct fronts *fronts, size_t passage,
                    double window, size_t exact_steps, struct arena *arena, struct march *march,
                    struct error *error) {
    const struct line_modes *modes = &setup->modes;
    double step = modes->slowness[0] * setup->problem->length / (double)passage;
    double steps = fmin(ceil(window / step), MOST_STEPS / 2);
    struct march_setup march_setup = {.modes = modes,
                                      .length = setup->problem->length,
                                      .end = {&setup->near, &setup->far},
                                      .fronts = fronts,
                                      .step = step,
                                      .window = (size_t)steps,
                                      .rest = AT_REST,
                                      .most_steps = MOST_STEPS,
                                      .exact_steps = exact_steps};
    return march_run(&march_setup, arena, march, error);
}

/* The same on twice the step: fourth order would leave a fifteenth of the difference; a quarter is
 * claimed, because fronts that blur leave lower orders. */
static void compare(const struct march *fine, const struct march *coarse,
                    struct line_response *response) {
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < fine->count; k++) {
            const double *value = fine->value[end] + k * fine->samples;
            const double *integral = fine->integral[end] + k * fine->samples;
            const double *value2 = coarse->value[end] + k * coarse->samples;
            const double *integral2 = coarse->integral[end] + k * coarse->samples;
            double of_value = 0, of_integral = 0;
            for (size_t i = 0; i + 1 < coarse->samples && 2 * i < fine->samples; i++) {
                of_value = fmax(of_value, fabs(value[2 * i] - value2[i]));
                of_integral = fmax(of_integral, fabs(integral[2 * i] - integral2[i]));
            }
            response->value_error[end][k] = of_value / 4;
            response->integral_error[end][k] = of_integral / 4;
        }
}

static bool build_curves(const struct line_setup *setup, struct arena *arena,
                         struct line_response *response, struct error *error) {
    const struct line_problem *problem = setup->problem;
    double passage = setup->modes.slowness[0] * problem->length;
    double slowest = setup->modes.slowness[problem->count - 1] * problem->length;
    double fastest = fmin(setup->near.fastest, setup->far.fastest);
    double per_passage = ceil(passage * STEPS_PER_CONSTANT / fastest);
    struct fronts_limit limit = {.smallest = GRID_FRONT,
                                 .most = MOST_GRID_FRONTS,
                                 .latest = INFINITY,
                                 .scale = fmin(fastest / STEPS_PER_CONSTANT,
                                               passage / STEPS_PER_PASSAGE)};
    struct fronts fronts;
    if (!fronts_follow(&setup->modes, problem->length, &setup->near, &setup->far, &limit, arena,
                       &fronts, error))
        return false;
    if (isfinite(fronts.complete_until))
        per_passage = fmax(per_passage,
                           ceil(passage * STEPS_PER_EDGE / response->shortest_edge));
    size_t steps = STEPS_PER_PASSAGE;
    if (per_passage > (double)steps)
        steps = (size_t)fmin(per_passage, 1e5);
    steps += steps % 2;
    double window = fmax(4 * slowest, 2 * settling_time(problem));
    struct march fine, coarse;
    if (!grid_at(setup, &fronts, steps, window, 0, arena, &fine, error) ||
        !grid_at(setup, &fronts, steps / 2, window, fine.samples / 2, arena, &coarse, error))
        return false;
    compare(&fine, &coarse, response);
    response->rest_error = fine.at_rest ? AT_REST : 1;
    return curves_build(&fine, &fronts, true, arena, response->curve[0], error) &&
           curves_build(&fine, &fronts, false, arena, response->curve[1], error);
}

struct line_response *line_response_create(const struct line_problem *problem, size_t driven,
                                           double shortest_edge, struct arena *arena,
                                           struct error *error) {
    struct line_setup setup = {.problem = problem};
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
            response->rest_error = 1e-6;
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

static bool check_question(const struct line_response *response, size_t victim, double edge,
                           struct error *error) {
    if (victim >= response->count)
        return error_set(error, ERROR_INPUT, "conductor is %zu, there are %zu (from 0)", victim,
                         response->count);
    if (!(edge >= response->shortest_edge * (1 - 1e-12) && edge <= 1e9))
        return error_set(error, ERROR_INPUT, "edge is %g s, must be within %g (prepared for) and %g",
                         edge, response->shortest_edge, 1e9);
    return true;
}

static struct line_peak peak_at(const struct line_response *response, size_t end, size_t victim,
                                double edge) {
    if (response->exact) {
        struct line_peak peak = staircase_peak(&response->staircase[end], victim, edge);
        peak.error = response->rest_error;
        return peak;
    }
    struct line_peak peak = curve_peak(&response->curve[end][victim], edge);
    double absolute = fmin(response->value_error[end][victim],
                           2 * response->integral_error[end][victim] / edge);
    peak.error = response->rest_error + (peak.highest > 0 ? absolute / peak.highest : 0);
    return peak;
}

bool line_response_peaks(const struct line_response *response, size_t victim, double edge,
                         struct line_peak *near, struct line_peak *far, struct error *error) {
    if (!check_question(response, victim, edge, error))
        return false;
    *near = peak_at(response, 0, victim, edge);
    *far = peak_at(response, 1, victim, edge);
    return true;
}

bool line_response_samples(const struct line_response *response, size_t victim, double edge,
                           double step, size_t samples, double *near, double *far,
                           struct error *error) {
    if (!check_question(response, victim, edge, error))
        return false;
    if (!(step > 0 && isfinite(step)))
        return error_set(error, ERROR_INPUT, "sample step is %g s, must be above 0", step);
    for (size_t end = 0; end < 2; end++) {
        double *out = end == 0 ? near : far;
        for (size_t i = 0; i < samples; i++)
            out[i] = response->exact
                         ? staircase_at(&response->staircase[end], victim, edge, (double)i * step)
                         : curve_response(&response->curve[end][victim], edge, (double)i * step);
    }
    return true;
}
