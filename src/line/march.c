#include "grid.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = GRID_STENCIL };

static bool grid_reserve(struct grid *grid, size_t room, struct arena *arena, struct error *error) {
    size_t old = grid->room, pad = grid->pad;
    if (room <= old)
        return true;
    for (size_t end = 0; end < 2; end++) {
        double *leaving = arena_new(arena, grid->count * (pad + room), double, error);
        double *value = arena_new(arena, grid->count * room, double, error);
        if (leaving == NULL || value == NULL)
            return false;
        for (size_t m = 0; m < grid->count && old > 0; m++) {
            memcpy(leaving + m * (pad + room), grid->leaving[end] + m * (pad + old),
                   (pad + old) * sizeof(double));
            memcpy(value + m * room, grid->value[end] + m * old, old * sizeof(double));
        }
        grid->leaving[end] = leaving;
        grid->value[end] = value;
    }
    grid->room = room;
    return true;
}

/* The steps below are compiled for one, two and any number of conductors: with the count known the
 * small products are straight-line code, several times as fast. */
#define FOR_COUNT static inline __attribute__((always_inline))

/* Sample i becomes the newest one of the end's history. */
FOR_COUNT void read_arriving(struct grid *grid, size_t end, size_t i, size_t count) {
    double(*history)[MOST] = grid->arriving[end];
    for (size_t m = 0; m < count; m++) {
        const struct delay *delay = &grid->delay[m];
        const double *wave =
            grid->leaving[1 - end] + m * (grid->pad + grid->room) + grid->pad + i - delay->samples;
        double sum = delay->weight[1] * wave[0];
        if (delay->fraction > 0)
            sum += delay->weight[0] * wave[-1] + delay->weight[2] * wave[1] +
                   delay->weight[3] * wave[2];
        if (i < grid->corrected)
            sum += grid->wave_correction[end][i * count + m];
        history[3][m] = history[2][m];
        history[2][m] = history[1][m];
        history[1][m] = history[0][m];
        history[0][m] = sum;
    }
}

FOR_COUNT void advance_state(struct grid *grid, size_t end, size_t i, size_t count) {
    const struct stepper *stepper = &grid->stepper[end];
    size_t states = stepper->states;
    double next[MOST];
    for (size_t k = 0; k < states; k++) {
        double sum = stepper->drive[k];
        for (size_t j = 0; j < states; j++)
            sum += stepper->decay[k * states + j] * grid->state[end][j];
        for (size_t m = 0; m < count; m++)
            for (size_t s = 0; s < STENCIL; s++)
                sum += stepper->gain[s][k * count + m] * grid->arriving[end][s][m];
        if (i < grid->corrected)
            sum += grid->state_correction[end][i * states + k];
        next[k] = sum;
    }
    for (size_t k = 0; k < states; k++)
        grid->state[end][k] = next[k];
}

FOR_COUNT void take_sample(struct grid *grid, size_t end, size_t i, size_t count) {
    const struct end_system *system = grid->setup->end[end];
    size_t states = system->states;
    read_arriving(grid, end, i + 1, count);
    if (states > 0 && i > 0)
        advance_state(grid, end, i, count);
    const double *wave = grid->arriving[end][1], *state = grid->state[end];
    for (size_t k = 0; k < count; k++) {
        double voltage = system->voltage_of_emf[k], leaving = system->leaving_of_emf[k];
        for (size_t j = 0; j < states; j++) {
            voltage += system->voltage_of_state[k * states + j] * state[j];
            leaving += system->leaving_of_state[k * states + j] * state[j];
        }
        for (size_t m = 0; m < count; m++) {
            voltage += system->voltage_of_wave[k * count + m] * wave[m];
            leaving += system->leaving_of_wave[k * count + m] * wave[m];
        }
        if (i < grid->corrected)
            leaving += grid->leaving_correction[end][i * count + k];
        grid->value[end][k * grid->room + i] = voltage;
        grid->leaving[end][k * (grid->pad + grid->room) + grid->pad + i] = leaving;
    }
}

FOR_COUNT void take_samples_of(struct grid *grid, size_t from, size_t to, size_t count) {
    for (size_t i = from; i < to; i++) {
        take_sample(grid, 0, i, count);
        take_sample(grid, 1, i, count);
    }
}

static void take_samples(struct grid *grid, size_t from, size_t to) {
    if (grid->count == 1)
        take_samples_of(grid, from, to, 1);
    else if (grid->count == 2)
        take_samples_of(grid, from, to, 2);
    else
        take_samples_of(grid, from, to, grid->count);
}

static bool all_at_rest(const struct grid *grid, size_t samples, double *sum, struct march *march) {
    const struct march_setup *setup = grid->setup;
    double width = ceil(setup->edge / setup->step);
    size_t edge = width < (double)samples ? (size_t)width : samples;
    bool reached = true;
    for (size_t end = 0; end < 2; end++)
        for (size_t k = 0; k < grid->count; k++) {
            const double *value = grid->value[end] + k * grid->room;
            sum[0] = 0;
            for (size_t i = 1; i < samples; i++)
                sum[i] = sum[i - 1] + 0.5 * (value[i] + value[i - 1]);
            march->rest[end][k] =
                rest_of(sum, samples, setup->window, edge, setup->final[end][k], setup->settled);
            reached = reached && march->rest[end][k].reached;
        }
    return reached;
}

static bool step_on(struct grid *grid, struct arena *arena, struct march *march,
                    struct error *error) {
    const struct march_setup *setup = grid->setup;
    size_t exact = setup->exact_steps, next_check = 2 * setup->window, samples = 0;
    size_t most = exact > 0 ? exact : setup->most_steps;
    double *sum = NULL;
    while (samples < most) {
        if (samples == grid->room) {
            size_t room = samples > 0 ? 2 * samples
                          : exact > 0 ? exact
                                      : next_check + next_check / 2;
            if (!grid_reserve(grid, room, arena, error))
                return false;
            sum = exact > 0 ? NULL : arena_new(arena, room, double, error);
            if (exact == 0 && sum == NULL)
                return false;
        }
        size_t to = grid->room < most ? grid->room : most;
        if (exact == 0 && next_check < to)
            to = next_check;
        take_samples(grid, samples, to);
        samples = to;
        if (exact == 0 && (samples == next_check || samples == most)) {
            if (samples > setup->window && all_at_rest(grid, samples, sum, march))
                break;
            next_check = samples + (setup->window > samples / 4 ? setup->window : samples / 4);
        }
    }
    march->samples = samples;
    return true;
}

/* Integral of the cubic through four samples, fourth order, corrected at fronts.  The last sample
 * has no successor and gets the trapezoid. */
static void integrate(const struct grid *grid, size_t end, size_t k, size_t samples,
                      double *integral) {
    const double *value = grid->value[end] + k * grid->room;
    double h = grid->setup->step;
    for (size_t i = 1; i + 1 < samples; i++) {
        double before = i >= 2 ? value[i - 2] : 0;
        integral[i] += h / 24 * (13 * (value[i - 1] + value[i]) - before - value[i + 1]);
    }
    if (samples > 1)
        integral[samples - 1] += h / 2 * (value[samples - 1] + value[samples - 2]);
    for (size_t i = 1; i < samples; i++)
        integral[i] += integral[i - 1];
}

static double series_integral(const double *jump, size_t stride, size_t orders, double t) {
    double sum = 0, power = 1;
    for (size_t p = 0; p < orders; p++) {
        power *= t / (double)(p + 1);
        sum += power * jump[p * stride];
    }
    return sum;
}

static void correct_integral(const struct grid *grid, const struct front *front, size_t samples,
                             double *integral) {
    static const double weight[STENCIL] = {-1.0 / 24, 13.0 / 24, 13.0 / 24, -1.0 / 24};
    size_t count = grid->count, orders = grid->setup->fronts->orders;
    double h = grid->setup->step;
    size_t first = front_sample(front->time, h);
    for (size_t shift = 0; shift < 3; shift++) {
        if (first + shift < 2) /* before the first step */
            continue;
        size_t i = first + shift - 1;
        if (i + 1 >= samples)
            continue;
        double now = (double)i * h - front->time;
        for (size_t k = 0; k < count; k++) {
            const double *jump = front->voltage + k;
            double correction = now > 0 ? series_integral(jump, count, orders, now) : 0;
            if (now > h)
                correction -= series_integral(jump, count, orders, now - h);
            for (size_t j = 0; j < STENCIL; j++)
                if (i + j >= first + 2)
                    correction -= h * weight[j] *
                                  front_series(jump, count, orders, now + ((double)j - 2) * h);
            integral[k * samples + i] += correction;
        }
    }
}

static bool finish(const struct grid *grid, struct arena *arena, struct march *march,
                   struct error *error) {
    size_t samples = march->samples, count = grid->count;
    const struct fronts *fronts = grid->setup->fronts;
    for (size_t end = 0; end < 2; end++) {
        march->value[end] = arena_new(arena, count * samples, double, error);
        march->integral[end] = arena_new(arena, count * samples, double, error);
        if (!march->value[end] || !march->integral[end])
            return false;
        for (size_t f = 0; f < fronts->count; f++)
            if (fronts->front[f].near == (end == 0))
                correct_integral(grid, &fronts->front[f], samples, march->integral[end]);
        for (size_t k = 0; k < count; k++) {
            memcpy(march->value[end] + k * samples, grid->value[end] + k * grid->room,
                   samples * sizeof(double));
            integrate(grid, end, k, samples, march->integral[end] + k * samples);
        }
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
