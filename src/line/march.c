#include "grid.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = GRID_STENCIL };

static bool grid_reserve(struct grid *grid, size_t room, struct arena *arena, struct error *error) {
    size_t old = grid->room, pad = grid->pad;
    bool watched = grid->setup->exact_steps == 0;
    if (room <= old)
        return true;
    for (size_t end = 0; end < 2; end++) {
        double *leaving = arena_new_unset(arena, grid->count * (pad + room), double, error);
        double *value = arena_new_unset(arena, grid->count * room, double, error);
        double *sum = watched ? arena_new_unset(arena, grid->count * room, double, error) : NULL;
        if (leaving == NULL || value == NULL || (watched && sum == NULL))
            return false;
        for (size_t m = 0; m < grid->count && old == 0; m++)
            memset(leaving + m * (pad + room), 0, pad * sizeof(double));
        for (size_t m = 0; m < grid->count && old > 0; m++) {
            memcpy(leaving + m * (pad + room), grid->leaving[end] + m * (pad + old),
                   (pad + old) * sizeof(double));
            memcpy(value + m * room, grid->value[end] + m * old, old * sizeof(double));
            if (watched)
                memcpy(sum + m * room, grid->sum[end] + m * old, old * sizeof(double));
        }
        grid->leaving[end] = leaving;
        grid->value[end] = value;
        grid->sum[end] = sum;
    }
    grid->room = room;
    return true;
}

/* Running sums by trapezoids, from where they ended before. */
static void add_up(struct grid *grid, size_t samples) {
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < grid->count; k++) {
            const double *value = grid->value[end] + k * grid->room;
            double *sum = grid->sum[end] + k * grid->room;
            if (grid->summed == 0)
                sum[0] = 0;
            for (size_t i = grid->summed > 0 ? grid->summed : 1; i < samples; i++)
                sum[i] = sum[i - 1] + 0.5 * (value[i] + value[i - 1]);
        }
    grid->summed = samples;
}

static bool all_at_rest(struct grid *grid, size_t samples, struct march *march) {
    const struct march_setup *setup = grid->setup;
    double width = ceil(setup->edge / setup->step);
    size_t edge = width < (double)samples ? (size_t)width : samples;
    bool reached = true;
    add_up(grid, samples);
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < grid->count; k++) {
            const double *sum = grid->sum[end] + k * grid->room;
            march->rest[end][k] = rest_of(sum, samples, setup->window, edge, setup->final[end][k],
                                          setup->settled, &grid->seen[end][k]);
            reached = reached && march->rest[end][k].reached;
        }
    return reached;
}

/* Most lines have come to rest within so many windows. */
enum { FIRST_WINDOWS = 6 };

static bool step_on(struct grid *grid, struct arena *arena, struct march *march,
                    struct error *error) {
    const struct march_setup *setup = grid->setup;
    size_t exact = setup->exact_steps, next_check = 2 * setup->window, samples = 0;
    size_t most = exact > 0 ? exact : setup->most_steps;
    while (samples < most) {
        if (samples == grid->room) {
            size_t room = samples > 0 ? 2 * samples
                          : exact > 0 ? exact
                                      : FIRST_WINDOWS * setup->window;
            if (!grid_reserve(grid, room < most ? room : most, arena, error))
                return false;
        }
        size_t to = grid->room < most ? grid->room : most;
        if (exact == 0 && next_check < to)
            to = next_check;
        steps_take(grid, samples, to);
        samples = to;
        if (exact == 0 && (samples == next_check || samples == most)) {
            if (samples > setup->window && all_at_rest(grid, samples, march))
                break;
            next_check = samples + (setup->window > samples / 4 ? setup->window : samples / 4);
        }
    }
    march->samples = samples;
    return true;
}

/* Integral of the cubic through four samples, fourth order, over what fronts have added.  The last
 * sample has no successor and gets the trapezoid. */
static void integrate(const struct grid *grid, size_t end, size_t k, size_t samples,
                      double *integral) {
    const double *value = grid->value[end] + k * grid->room;
    double h = grid->setup->step, sum = integral[0];
    for (size_t i = 1; i + 1 < samples; i++) {
        double before = i >= 2 ? value[i - 2] : 0;
        sum += integral[i] + h / 24 * (13 * (value[i - 1] + value[i]) - before - value[i + 1]);
        integral[i] = sum;
    }
    if (samples > 1)
        integral[samples - 1] += sum + h / 2 * (value[samples - 1] + value[samples - 2]);
}

static double series_integral(const double *jump, size_t stride, size_t orders, double t) {
    double sum = 0, power = 1;
    for (size_t p = 0; p < orders; p++) {
        power *= t / (double)(p + 1);
        sum += power * jump[p * stride];
    }
    return sum;
}

/* Of the three steps whose samples lie on both sides of the front. */
static void correct_integral(const struct grid *grid, const struct front *front, size_t samples,
                             double *integral) {
    static const double middle = 13.0 / 24, outer = -1.0 / 24;
    size_t count = grid->count, orders = grid->setup->fronts->orders;
    double h = grid->setup->step;
    size_t first = front_sample(front->time, h);
    if (first + 2 >= samples)
        return;
    double after = fmax((double)first * h - front->time, 0);
    for (size_t k = 0; k < count; k++) {
        const double *jump = front->voltage + k;
        double s0 = front_series(jump, count, orders, after);
        double s1 = front_series(jump, count, orders, after + h);
        double s2 = front_series(jump, count, orders, after + 2 * h);
        double r0 = series_integral(jump, count, orders, after);
        double r1 = series_integral(jump, count, orders, after + h);
        double *at = integral + k * samples + first;
        if (first > 1)
            at[-1] -= h * outer * s0;
        if (first > 0)
            at[0] += r0 - h * (middle * s0 + outer * s1);
        at[1] += r1 - r0 - h * (middle * (s0 + s1) + outer * s2);
    }
}

static bool finish(const struct grid *grid, struct arena *arena, struct march *march,
                   struct error *error) {
    size_t samples = march->samples, count = grid->count;
    const struct fronts *fronts = grid->setup->fronts;
    march->stride = grid->room;
    for (size_t end = 0; end < 2; end++) {
        march->value[end] = grid->value[end];
        march->integral[end] = arena_new(arena, count * samples, double, error);
        if (!march->integral[end])
            return false;
        for (size_t f = 0; f < fronts->count; f++)
            if (fronts->front[f].near == (end == 0))
                correct_integral(grid, &fronts->front[f], samples, march->integral[end]);
        for (size_t k = 0; k < count; k++)
            integrate(grid, end, k, samples, march->integral[end] + k * samples);
    }
    return true;
}

bool march_run(const struct march_setup *setup, struct arena *arena, struct march *march,
               struct error *error) {
    struct grid grid = {.setup = setup, .count = setup->modes->count};
    for (size_t m = 0; m < grid.count; m++) {
        grid.delay[m] = delay_of(setup->modes->slowness[m] * setup->length, setup->step);
        if (grid.delay[m].samples + 2 > grid.pad)
            grid.pad = grid.delay[m].samples + 2;
    }
    for (size_t end = 0; end < 2; end++)
        grid.stepper[end] = stepper_of(setup->end[end], setup->step);
    struct march run = {.count = grid.count, .step = setup->step, .window = setup->window};
    if (!corrections_take(&grid, arena, error) || !step_on(&grid, arena, &run, error) ||
        !finish(&grid, arena, &run, error))
        return false;
    *march = run;
    return true;
}
