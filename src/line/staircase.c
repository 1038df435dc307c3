#include "staircase.h"

#include <math.h>
#include <stdlib.h>

struct order {
    double time;
    const double *voltage;
};

static int by_time(const void *left, const void *right) {
    const struct order *a = left, *b = right;
    if (a->time != b->time)
        return a->time < b->time ? -1 : 1;
    return 0;
}

bool staircase_build(const struct fronts *fronts, size_t count, bool near, struct arena *arena,
                     struct staircase *staircase, struct error *error) {
    size_t steps = 0;
    for (size_t k = 0; k < fronts->count; k++)
        steps += fronts->front[k].near == near;
    struct staircase built = {.count = count, .steps = steps};
    built.time = arena_new(arena, steps + 1, double, error);
    built.value = arena_new(arena, steps * count + 1, double, error);
    built.integral = arena_new(arena, steps * count + 1, double, error);
    struct order *order = arena_new(arena, steps + 1, struct order, error);
    if (!built.time || !built.value || !built.integral || !order)
        return false;
    size_t filled = 0;
    for (size_t k = 0; k < fronts->count; k++)
        if (fronts->front[k].near == near)
            order[filled++] = (struct order){fronts->front[k].time, fronts->front[k].voltage};
    qsort(order, steps, sizeof *order, by_time);
    for (size_t k = 0; k < steps; k++)
        built.time[k] = order[k].time;
    for (size_t i = 0; i < count; i++) {
        double value = 0, integral = 0;
        for (size_t k = 0; k < steps; k++) {
            if (k > 0)
                integral += value * (built.time[k] - built.time[k - 1]);
            value += order[k].voltage[i];
            built.value[i * steps + k] = value;
            built.integral[i * steps + k] = integral;
        }
    }
    *staircase = built;
    return true;
}

/* Integral of the step response up to t, with `*k` fronts at or before t; advances from *k. */
static double integral_at(const struct staircase *staircase, size_t conductor, double time,
                          size_t *k) {
    size_t steps = staircase->steps;
    while (*k < steps && staircase->time[*k] <= time)
        ++*k;
    if (*k == 0)
        return 0;
    size_t last = conductor * steps + *k - 1;
    return staircase->integral[last] + staircase->value[last] * (time - staircase->time[*k - 1]);
}

static size_t fronts_before(const struct staircase *staircase, double time) {
    size_t low = 0, high = staircase->steps;
    while (low < high) {
        size_t middle = low + (high - low) / 2;
        if (staircase->time[middle] <= time)
            low = middle + 1;
        else
            high = middle;
    }
    return low;
}

double staircase_at(const struct staircase *staircase, size_t conductor, double edge, double time) {
    size_t now = fronts_before(staircase, time), before = fronts_before(staircase, time - edge);
    return (integral_at(staircase, conductor, time, &now) -
            integral_at(staircase, conductor, time - edge, &before)) /
           edge;
}

struct line_peak staircase_peak(const struct staircase *staircase, size_t conductor, double edge,
                                double from) {
    struct line_peak peak = {.highest = fabs(staircase_at(staircase, conductor, edge, from)),
                             .time = from};
    size_t at = 0, before = 0, after = 0;
    for (size_t k = 0; k < staircase->steps; k++) {
        double time = staircase->time[k];
        double here = integral_at(staircase, conductor, time, &at);
        double rising = here - integral_at(staircase, conductor, time - edge, &before);
        double falling = integral_at(staircase, conductor, time + edge, &after) - here;
        if (time >= from && fabs(rising) > peak.highest * edge)
            peak = (struct line_peak){.highest = fabs(rising) / edge, .time = time};
        if (time + edge >= from && fabs(falling) > peak.highest * edge)
            peak = (struct line_peak){.highest = fabs(falling) / edge, .time = time + edge};
    }
    return peak;
}
