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

/* Samples from `from` on; `apart` is even, so that every other sample makes a sequence too. */
struct plan {
    double from, step;
    size_t count, apart;
    double *samples; /* [count] */
    double *scratch; /* [2 (count + apart + 1)] */
};

/* 32 samples an edge; as many as the ringing needs, which the march resolves, while that is not
 * too dear. */
static double sample_step(const struct line_response *response, double edge, double longest) {
    const double per_edge = 32, march_steps = 2, dear = 1e4;
    double step = edge / per_edge;
    if (response->exact)
        return step;
    double resolved = response->lossy != NULL ? response->lossy->end[0][0].band[0].step
                                              : march_steps * response->curve[0][0].step;
    return fmin(step, fmax(resolved, longest / dear));
}

static bool plan_create(const struct line_response *response, size_t victim, double edge,
                        double bit_time, double from, struct plan *plan, struct error *error) {
    const double most = 1e6;
    double rest =
        fmax(resting_time(response, 0, victim, edge), resting_time(response, 1, victim, edge));
    double longest = fmax(rest - from, edge);
    double apart = fmin(bit_time, longest); /* further apart edges do not meet */
    double half = fmax(ceil(apart / sample_step(response, edge, longest) / 2), 2);
    double step = apart / (2 * half), needed = ceil(longest / step) + 2;
    if (!(needed + 2 * half <= most))
        return error_set(error, ERROR_INPUT,
                         "a bit time of %g s against ringing of %g s needs %.0f samples, at most "
                         "%.0f are taken",
                         bit_time, longest, needed + 2 * half, most);
    *plan = (struct plan){
        .from = from, .step = step, .count = (size_t)needed, .apart = (size_t)(2 * half)};
    plan->samples = malloc(plan->count * sizeof *plan->samples);
    plan->scratch = malloc(2 * (plan->count + plan->apart + 1) * sizeof *plan->scratch);
    if (plan->samples != NULL && plan->scratch != NULL)
        return true;
    free(plan->samples);
    free(plan->scratch);
    return error_set(error, ERROR_MEMORY, "out of memory");
}

static void plan_free(struct plan *plan) {
    free(plan->samples);
    free(plan->scratch);
}

struct found {
    double free, clocked;
    double change; /* of free on every other sample, V */
};

static struct found search(const struct line_response *response, size_t end, size_t victim,
                           double edge, struct plan *plan) {
    double *samples = plan->samples;
    for (size_t i = 0; i < plan->count; i++)
        samples[i] = response_at(response, end, victim, edge, plan->from + (double)i * plan->step);
    struct found found = {
        .free = sequence_free(samples, plan->count, plan->apart, plan->scratch),
        .clocked = sequence_clocked(samples, plan->count, plan->apart),
    };
    for (size_t i = 0; 2 * i < plan->count; i++)
        samples[i] = samples[2 * i];
    found.change =
        found.free - sequence_free(samples, (plan->count + 1) / 2, plan->apart / 2, plan->scratch);
    return found;
}

/* V: what edges `bit_time` apart can add up to after the end of the march, each at most its last
 * swing over the edge, less and less as the ringing has fallen so far. */
static double tail(const struct line_response *response, size_t end, size_t victim, double edge,
                   double bit_time) {
    double late = response->late[end][victim], range = response->range[end][victim];
    if (!(late > 0))
        return 0;
    double fallen =
        log(fmax(range / late, 1.01)) * bit_time / resting_time(response, end, victim, edge);
    return late / edge / -expm1(-fallen);
}

bool line_response_sequences(const struct line_response *response, size_t victim, double edge,
                             double bit_time, struct line_sequence *near, struct line_sequence *far,
                             struct error *error) {
    struct plan plan;
    if (!response_check(response, victim, edge, error))
        return false;
    if (!(bit_time > 0 && isfinite(bit_time)))
        return error_set(error, ERROR_INPUT, "bit time is %g s, must be above 0", bit_time);
    if (!plan_create(response, victim, edge, bit_time, 0, &plan, error))
        return false;
    for (size_t end = 0; end < 2; end++) {
        double single = response_peak(response, end, victim, edge, 0).highest;
        struct found found = search(response, end, victim, edge, &plan);
        struct line_sequence worst = {fmax(found.free, single), fmax(found.clocked, single),
                                      response->rest_error[end][victim]};
        if (worst.free > 0)
            worst.error += (fmax(found.free + found.change - worst.free, 0) +
                            tail(response, end, victim, edge, bit_time)) /
                           worst.free;
        *(end == 0 ? near : far) = worst;
    }
    plan_free(&plan);
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
    struct plan plan = {0};
    if (!response_check(response, victim, edge, error) ||
        !check_instants(bit_time, settling, error))
        return false;
    if (bit_time > 0 && !plan_create(response, victim, edge, bit_time, settling, &plan, error))
        return false;
    for (size_t end = 0; end < 2; end++) {
        struct line_settled worst = settled_single(response, end, victim, edge, settling);
        if (bit_time > 0) {
            struct found found = search(response, end, victim, edge, &plan);
            worst.free = fmax(worst.single, found.free);
            worst.error += fmax(found.free + found.change - worst.free, 0) +
                           tail(response, end, victim, edge, bit_time);
        }
        *(end == 0 ? near : far) = worst;
    }
    plan_free(&plan);
    return true;
}
