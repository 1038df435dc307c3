#include "sequence.h"

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

static const double LEFT_OVER = 3;

/* When the response to a ramp has come to rest. */
static double resting_time(const struct line_response *response, size_t end, size_t victim,
                           double edge) {
    if (!response->exact) {
        const struct curve *curve = &response->curve[end][victim];
        return (double)(curve->samples - 1) * curve->step + edge;
    }
    const struct staircase *staircase = &response->staircase[end];
    return (staircase->steps > 0 ? staircase->time[staircase->steps - 1] : 0) + edge;
}

static void worst_of_samples(const double *samples, size_t count, size_t apart, double *scratch,
                             struct line_sequence *worst) {
    worst->free = sequence_free(samples, count, apart, scratch);
    worst->clocked = sequence_clocked(samples, count, apart);
}

/* samples[count], scratch[2 (count + apart + 1)]; `apart` is even. */
static void worst_sequence(const struct line_response *response, size_t end, size_t victim,
                           double edge, double step, size_t count, size_t apart, double *samples,
                           double *scratch, struct line_sequence *worst) {
    struct line_sequence coarse, other;
    for (size_t i = 0; i < count; i++)
        samples[i] = response_coarse_at(response, end, victim, edge, (double)i * step);
    worst_of_samples(samples, count, apart, scratch, &other);
    for (size_t i = 0; i < count; i++)
        samples[i] = response_at(response, end, victim, edge, (double)i * step);
    worst_of_samples(samples, count, apart, scratch, worst);
    for (size_t i = 0; 2 * i < count; i++)
        samples[i] = samples[2 * i];
    worst_of_samples(samples, (count + 1) / 2, apart / 2, scratch, &coarse);
    /* What comes after the last window falls from one window to the next. */
    worst->error = response->rest_error[end][victim] + LEFT_OVER * response->late[end][victim];
    if (worst->free > 0)
        worst->error += (worst->free - coarse.free + fabs(worst->free - other.free)) / worst->free;
}

bool line_response_sequences(const struct line_response *response, size_t victim, double edge,
                             double bit_time, struct line_sequence *near, struct line_sequence *far,
                             struct error *error) {
    const double per_edge = 32, most = 1e6;
    if (!response_check(response, victim, edge, error))
        return false;
    if (!(bit_time > 0 && isfinite(bit_time)))
        return error_set(error, ERROR_INPUT, "bit time is %g s, must be above 0", bit_time);
    double longest =
        fmax(resting_time(response, 0, victim, edge), resting_time(response, 1, victim, edge));
    bit_time = fmin(bit_time, longest); /* further apart edges do not meet */
    double half = ceil(bit_time * per_edge / edge / 2);
    double step = bit_time / (2 * fmax(half, 2)), needed = ceil(longest / step) + 2;
    size_t apart = (size_t)(2 * fmax(half, 2));
    if (!(needed + (double)apart <= most))
        return error_set(error, ERROR_INPUT,
                         "a bit time of %g s against ringing of %g s needs %.0f samples, at most "
                         "%.0f are taken",
                         bit_time, longest, needed + (double)apart, most);
    size_t count = (size_t)needed;
    double *samples = malloc(count * sizeof *samples);
    double *scratch = malloc(2 * (count + apart + 1) * sizeof *scratch);
    bool ok = samples != NULL && scratch != NULL;
    if (ok) {
        worst_sequence(response, 0, victim, edge, step, count, apart, samples, scratch, near);
        worst_sequence(response, 1, victim, edge, step, count, apart, samples, scratch, far);
    } else {
        error_set(error, ERROR_MEMORY, "out of memory");
    }
    free(samples);
    free(scratch);
    return ok;
}
