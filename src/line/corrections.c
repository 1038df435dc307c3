/* Fronts are known as power series; the grid's interpolation and quadrature would smear them over a
 * few samples.  Here is what to add at those samples. */
#include "grid.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = GRID_STENCIL };

/* Reading a wave between samples: where the four samples lie on both sides of a front, those on
 * the wrong side are continued across it. */
static void correct_waves(struct grid *grid, const struct front *front) {
    double h = grid->setup->step;
    size_t first = front_sample(front->time, h), count = grid->count;
    size_t orders = grid->setup->fronts->orders, to = front->near ? 1 : 0;
    double after = (double)first * h - front->time;
    for (size_t m = 0; m < count; m++) {
        const struct delay *delay = &grid->delay[m];
        const double *jump = front->leaving + m, *weight = delay->weight;
        if (delay->fraction == 0 || first + delay->samples >= grid->corrected)
            continue;
        double s0 = front_series(jump, count, orders, after);
        double s1 = front_series(jump, count, orders, after + h);
        double s2 = front_series(jump, count, orders, after + 2 * h);
        double target = after + delay->fraction * h, before = target - h;
        double *at = grid->wave_correction[to] + (first + delay->samples) * count + m;
        at[0] += front_series(jump, count, orders, target) -
                 (weight[1] * s0 + weight[2] * s1 + weight[3] * s2);
        at -= count;
        if (before >= -ON_SAMPLE * h)
            at[0] += front_series(jump, count, orders, before);
        at[0] -= weight[2] * s0 + weight[3] * s1;
        at -= count;
        at[0] -= weight[3] * s0;
    }
}

/* Integrating the ends: the part of x due to the front is known as a power series; what the
 * quadrature would make of it is taken off, in the three steps whose samples lie on both sides. */
static void correct_states(struct grid *grid, const struct front *front) {
    size_t end = front->near ? 0 : 1, count = grid->count;
    const struct stepper *stepper = &grid->stepper[end];
    size_t states = stepper->states, orders = grid->setup->fronts->orders;
    double h = grid->setup->step, before[MOST] = {0}, wave[3][MOST];
    size_t first = front_sample(front->time, h);
    double late = (double)first * h - front->time;
    for (size_t s = 0; s < 3 && states > 0; s++)
        for (size_t m = 0; m < count; m++)
            wave[s][m] = front_series(front->wave + m, count, orders, late + (double)s * h);
    for (size_t step = first > 0 ? 0 : 1; step < 3; step++) {
        size_t i = first + step - 1; /* the sample the step leads to */
        double now = late + ((double)step - 1) * h, after[MOST] = {0};
        if (i >= grid->corrected)
            return;
        for (size_t k = 0; k < states; k++) {
            double power = 1, correction = 0;
            for (size_t p = 0; p < orders && step > 0; p++) {
                power *= now / (double)(p + 1);
                after[k] += power * front->state[p * states + k];
            }
            correction = after[k];
            for (size_t j = 0; j < states; j++)
                correction -= stepper->decay[k * states + j] * before[j];
            for (size_t s = 0; s <= step; s++)
                for (size_t m = 0; m < count; m++)
                    correction -= stepper->gain[s][k * count + m] * wave[step - s][m];
            grid->state_correction[end][i * states + k] += correction;
        }
        memcpy(before, after, sizeof before);
    }
}

/* The cubic kernel that also interpolates and integrates, u in samples. */
static double kernel(double u) {
    u = fabs(u);
    if (u >= 2)
        return 0;
    return u <= 1 ? (1 - u * u) * (2 - u) / 2 : (1 - u) * (2 - u) * (3 - u) / 6;
}

/* Means of (u - from)^power / power!, 0 before `from`, weighed by the kernel about 0; u in samples.
 * Four Gauss-Legendre points are exact between the kernel's knots. */
static void blurred_powers(double from, double mean[FRONT_ORDERS]) {
    static const double point[2] = {0.33998104358485626, 0.86113631159405258};
    static const double weight[2] = {0.65214515486254614, 0.34785484513745386};
    memset(mean, 0, FRONT_ORDERS * sizeof *mean);
    for (int knot = -2; knot < 2; knot++) {
        double low = from > knot ? from : knot, half = (knot + 1 - low) / 2;
        for (int k = 0; k < 4 && half > 0; k++) {
            double u = low + half + half * (k % 2 ? -1 : 1) * point[k / 2];
            double share = half * weight[k / 2] * kernel(u);
            for (size_t power = 0; power < FRONT_ORDERS; power++) {
                mean[power] += share;
                share *= (u - from) / (double)(power + 1);
            }
        }
    }
}

/* A wave whose next arrival is left to the grid: its samples are blurred by the kernel, which keeps
 * their slow part to fourth order and depends smoothly on where between samples the front lies.
 * Sharp samples would move it by up to a step, and differently in two modes that hardly differ. */
static void blur_leaving(struct grid *grid, const struct front *front) {
    size_t from = front->near ? 0 : 1, count = grid->count;
    double h = grid->setup->step, position = front->time / h;
    size_t first = front_sample(front->time, h);
    for (size_t i = position > 2 ? (size_t)(position - 2) : 0; (double)i < position + 2; i++) {
        if (i >= grid->corrected)
            return;
        double scale = 1, mean[FRONT_ORDERS];
        blurred_powers(position - (double)i, mean);
        for (size_t p = 0; p < FRONT_ORDERS; p++) {
            mean[p] *= scale;
            scale *= h;
        }
        for (size_t m = 0; m < count; m++) {
            const double *jump = front->leaving + m;
            double correction = 0;
            for (size_t p = 0; p < FRONT_ORDERS; p++)
                correction += mean[p] * jump[p * count];
            if (i >= first)
                correction -= front_series(jump, count, FRONT_ORDERS, (double)i * h - front->time);
            grid->leaving_correction[from][i * count + m] += correction;
        }
    }
}

bool corrections_take(struct grid *grid, struct arena *arena, struct error *error) {
    const struct fronts *fronts = grid->setup->fronts;
    double latest = 0;
    for (size_t k = 0; k < fronts->count; k++)
        latest = fmax(latest, fronts->front[k].time);
    double reach = latest / grid->setup->step + (double)grid->pad + 8;
    grid->corrected = (size_t)fmin(reach, (double)grid->setup->most_steps);
    for (size_t end = 0; end < 2; end++) {
        grid->wave_correction[end] = arena_new(arena, grid->corrected * grid->count, double, error);
        grid->state_correction[end] =
            arena_new(arena, grid->corrected * grid->stepper[end].states + 1, double, error);
        grid->leaving_correction[end] =
            arena_new(arena, grid->corrected * grid->count, double, error);
        if (!grid->wave_correction[end] || !grid->state_correction[end] ||
            !grid->leaving_correction[end])
            return false;
    }
    for (size_t k = 0; k < fronts->count; k++) {
        if (fronts->front[k].last)
            blur_leaving(grid, &fronts->front[k]);
        else
            correct_waves(grid, &fronts->front[k]);
        if (k > 0) /* the first is the EMF's own step, integrated exactly by `drive` */
            correct_states(grid, &fronts->front[k]);
    }
    return true;
}
