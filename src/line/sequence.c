#include "sequence.h"

#include "comb.h"
#include "response.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

double sequence_free(const double *response, size_t count, size_t apart, double *scratch) {
    size_t room = count + apart + 1;
    double *rising = scratch, *falling = scratch + room;
    memset(scratch, 0, 2 * room * sizeof *scratch);
    for (size_t i = count; i-- > 0;) {
        double after_rising = falling[i + apart], after_falling = rising[i + apart];
        double with_rising = response[i] + (after_rising > 0 ? after_rising : 0);
        double with_falling = -response[i] + (after_falling > 0 ? after_falling : 0);
        rising[i] = with_rising > rising[i + 1] ? with_rising : rising[i + 1];
        falling[i] = with_falling > falling[i + 1] ? with_falling : falling[i + 1];
    }
    return rising[0] > falling[0] ? rising[0] : falling[0];
}

double sequence_clocked(const double *response, size_t count, size_t period) {
    double worst = 0;
    for (size_t start = 0; start < period && start < count; start++) {
        double variation = 0, before = 0;
        for (size_t i = start; i < count; i += period) {
            variation += fabs(response[i] - before);
            before = response[i];
        }
        variation += fabs(before);
        worst = variation > worst ? variation : worst;
    }
    return worst / 2;
}

/* When the response to a ramp has come to rest. */
static double resting_time(const struct line_response *response, size_t end, size_t victim,
                           double edge) {
    if (response->lossy != NULL)
        return response->lossy->window + edge;
    if (!response->exact) {
        const struct curve *curve = &response->curve[end][victim];
        return (double)(curve->samples - 1) * curve->step + edge;
    }
    const struct staircase *staircase = &response->staircase[end];
    return (staircase->steps > 0 ? staircase->time[staircase->steps - 1] : 0) + edge;
}

/* Blurred fronts, which late ringing is made of, fall with the step alone: what is left on the
 * finer grid is as much as the change, or more where the coarser one is far off. */
static const double LEFT_OF_CHANGE = 2;

struct found {
    double free, clocked;
    double change; /* without every other uniform phase, and on the response's coarser grid, V */
};

static bool search(const struct line_response *response, size_t end, size_t victim, double edge,
                   double bit_time, double from, struct found *found, struct error *error) {
    struct comb comb;
    double rest = resting_time(response, end, victim, edge);
    if (!comb_create(response, end, victim, edge, bit_time, from, fmax(rest - from, edge), &comb,
                     error))
        return false;
    size_t count = comb.teeth * comb.phases;
    double *scratch = malloc(2 * (count + comb.phases + 1) * sizeof *scratch);
    if (scratch == NULL) {
        comb_free(&comb);
        return error_set(error, ERROR_MEMORY, "out of memory");
    }
    struct found all = {.free = sequence_free(comb.samples, count, comb.phases, scratch),
                        .clocked = sequence_clocked(comb.samples, count, comb.phases)};
    comb_thin(&comb);
    count = comb.teeth * comb.phases;
    double thin_free = sequence_free(comb.samples, count, comb.phases, scratch);
    double thin_clocked = sequence_clocked(comb.samples, count, comb.phases);
    comb_coarse(response, end, victim, edge, &comb);
    double coarse_free = sequence_free(comb.samples, count, comb.phases, scratch);
    double coarse_clocked = sequence_clocked(comb.samples, count, comb.phases);
    double of_grid = fmax(fabs(coarse_free - thin_free), fabs(coarse_clocked - thin_clocked));
    all.change = fmax(all.free - thin_free, all.clocked - thin_clocked) + LEFT_OF_CHANGE * of_grid;
    *found = all;
    free(scratch);
    comb_free(&comb);
    return true;
}

/* V: what edges `bit_time` apart can add up to after the end of the march, each at most its last
 * swing over the edge, less and less as the ringing has fallen so far; twice that, for what rings
 * last falls more slowly than the whole did. */
static double tail(const struct line_response *response, size_t end, size_t victim, double edge,
                   double bit_time) {
    double late = response->late[end][victim], range = response->range[end][victim];
    if (!(late > 0))
        return 0;
    double fallen =
        log(fmax(range / late, 1.01)) * bit_time / resting_time(response, end, victim, edge);
    return 2 * late / edge / -expm1(-fallen);
}

/* The response itself is as good as its peak. */
static double relative_error(const struct line_response *response, size_t end, size_t victim,
                             double edge, double single) {
    double error = response->rest_error[end][victim];
    if (single > 0)
        error += response_peak_error(response, end, victim, edge, 0) / single;
    return error;
}

bool line_response_sequences(const struct line_response *response, size_t victim, double edge,
                             double bit_time, struct line_sequence *near, struct line_sequence *far,
                             struct error *error) {
    struct line_sequence worst[2];
    if (!response_check(response, victim, edge, error))
        return false;
    if (!(bit_time > 0 && isfinite(bit_time)))
        return error_set(error, ERROR_INPUT, "bit time is %g s, must be above 0", bit_time);
    for (size_t end = 0; end < 2; end++) {
        struct found found;
        if (!search(response, end, victim, edge, bit_time, 0, &found, error))
            return false;
        double single = response_peak(response, end, victim, edge, 0).highest;
        worst[end] = (struct line_sequence){fmax(found.free, single), fmax(found.clocked, single),
                                            relative_error(response, end, victim, edge, single)};
        if (worst[end].free > 0)
            worst[end].error +=
                (found.change + tail(response, end, victim, edge, bit_time)) / worst[end].free;
    }
    *near = worst[0];
    *far = worst[1];
    return true;
}

/* What rings on after the march is at most its last swing over the edge. */
static struct line_settled settled_single(const struct line_response *response, size_t end,
                                          size_t victim, double edge, double settling) {
    struct line_peak late = response_peak(response, end, victim, edge, settling);
    struct line_peak any = response_peak(response, end, victim, edge, 0);
    double left = response->exact ? response->rest_error[end][victim] * any.highest
                                  : response->late[end][victim] / edge;
    return (struct line_settled){
        .single = late.highest,
        .time = late.time,
        .free = late.highest,
        .error = response_peak_error(response, end, victim, edge, settling) +
                 response->rest_error[end][victim] * late.highest +
                 (response->exact ? left : fmax(left - late.highest, 0)),
    };
}

static bool check_instants(double bit_time, double settling, struct error *error) {
    if (!(bit_time >= 0 && isfinite(bit_time)))
        return error_set(error, ERROR_INPUT, "bit time is %g s, must be 0 or above", bit_time);
    if (!(settling >= 0 && isfinite(settling)))
        return error_set(error, ERROR_INPUT, "settling is %g s, must be 0 or above", settling);
    return true;
}

bool line_response_settled(const struct line_response *response, size_t victim, double edge,
                           double bit_time, double settling, struct line_settled *near,
                           struct line_settled *far, struct error *error) {
    struct line_settled worst[2];
    if (!response_check(response, victim, edge, error) ||
        !check_instants(bit_time, settling, error))
        return false;
    for (size_t end = 0; end < 2; end++) {
        struct found found;
        worst[end] = settled_single(response, end, victim, edge, settling);
        if (!(bit_time > 0))
            continue;
        if (!search(response, end, victim, edge, bit_time, settling, &found, error))
            return false;
        double more = fmax(found.free - worst[end].single, 0);
        worst[end].free = worst[end].single + more;
        /* Each further edge adds with what it is off itself. */
        if (worst[end].single > 0)
            worst[end].error *= worst[end].free / worst[end].single;
        worst[end].error += found.change + tail(response, end, victim, edge, bit_time);
    }
    *near = worst[0];
    *far = worst[1];
    return true;
}
