#include "march.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = 4, SERIES = 18 };

/* A front within this share of a step after a sample counts as being on it: fronts of the fastest
 * mode lie on samples but for rounding. */
static const double ON_SAMPLE = 1e-6;

struct delay {
    size_t samples; /* whole samples, rounded up */
    double weight[STENCIL];
    double fraction; /* how far past the second stencil point */
};

struct stepper {
    size_t states;
    double decay[MOST * MOST];          /* exp(A h) */
    double gain[STENCIL][MOST * MOST];  /* of the waves one sample ahead, now, and two before */
    double drive[MOST];                 /* of the EMF, constant from 0 on */
};

struct grid {
    const struct march_setup *setup;
    size_t count, pad, room;
    struct delay delay[MOST];
    struct stepper stepper[2];
    double *leaving[2]; /* [count][pad + room] */
    double *value[2];   /* [count][room] */
    size_t corrected;   /* samples that corrections reach */
    double *wave_correction[2];  /* [corrected][count] of arriving waves */
    double *state_correction[2]; /* [corrected][states] */
    double *leaving_correction[2]; /* [corrected][count] of leaving waves */
    double state[2][MOST];
    double arriving[2][STENCIL][MOST]; /* one sample ahead, now, and two before */
};

static struct delay delay_of(double delay, double step) {
    double samples = ceil(delay / step - 1e-9);
    double f = fmax(samples - delay / step, 0);
    struct delay made = {.samples = (size_t)samples, .fraction = f < 1e-8 ? 0 : f};
    f = made.fraction;
    made.weight[0] = -f * (f - 1) * (f - 2) / 6;
    made.weight[1] = (f + 1) * (f - 1) * (f - 2) / 2;
    made.weight[2] = -(f + 1) * f * (f - 2) / 2;
    made.weight[3] = (f + 1) * f * (f - 1) / 6;
    return made;
}

/* out = left right, all [n][n] or [n][columns] */
static void multiply(const double *left, const double *right, size_t n, size_t columns,
                     double *out) {
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < columns; j++) {
            double sum = 0;
            for (size_t k = 0; k < n; k++)
                sum += left[i * n + k] * right[k * columns + j];
            out[i * columns + j] = sum;
        }
}

/* phi_k(Z) = sum over j of Z^j / (j + k)!; the step keeps |Z| well below 1. */
static void phi(const double *z, size_t n, unsigned k, double *out) {
    double term[MOST * MOST] = {0}, next[MOST * MOST], factor = 1;
    for (unsigned i = 2; i <= k; i++)
        factor /= i;
    for (size_t i = 0; i < n; i++)
        term[i * n + i] = factor;
    memset(out, 0, n * n * sizeof *out);
    for (unsigned j = 1; j < SERIES; j++) {
        for (size_t i = 0; i < n * n; i++)
            out[i] += term[i];
        multiply(term, z, n, n, next);
        for (size_t i = 0; i < n * n; i++)
            term[i] = next[i] / (j + k);
    }
}

/* x(t + h) = exp(A h) x + integral of exp(A (h - u)) B b(t + u) du, b the cubic through the samples
 * at u = 2h, h, 0, -h (columns: powers of u/h).  The cubic kernel between its middle samples has a
 * Fourier transform that is nowhere negative, so the reflection of the sampled end is an average of
 * true reflections and passive like them: the march cannot blow up at any step.  (A cubic that does
 * not look ahead is active near the Nyquist frequency and does.)  Looking ahead is possible because
 * a wave that arrives at 2h left the other end long before. */
static struct stepper stepper_of(const struct end_system *end, double step) {
    static const double cubic[STENCIL][STENCIL] = {{0, -1.0 / 6, 0, 1.0 / 6},
                                                   {0, 1, 1.0 / 2, -1.0 / 2},
                                                   {1, -1.0 / 2, -1, 1.0 / 2},
                                                   {0, -1.0 / 3, 1.0 / 2, -1.0 / 6}};
    static const double factorial[STENCIL] = {1, 1, 2, 6};
    struct stepper made = {.states = end->states};
    size_t n = end->states, count = end->count;
    double z[MOST * MOST], moment[MOST * MOST], forced[MOST * MOST];
    for (size_t i = 0; i < n * n; i++)
        z[i] = end->state[i] * step;
    phi(z, n, 0, made.decay);
    for (unsigned k = 0; k < STENCIL; k++) {
        phi(z, n, k + 1, moment);
        multiply(moment, end->state_of_wave, n, count, forced);
        for (size_t s = 0; s < STENCIL; s++)
            for (size_t i = 0; i < n * count; i++)
                made.gain[s][i] += step * factorial[k] * cubic[s][k] * forced[i];
        if (k == 0) {
            multiply(moment, end->state_of_emf, n, 1, made.drive);
            for (size_t i = 0; i < n; i++)
                made.drive[i] *= step;
        }
    }
    return made;
}

/* Power series of one component of a front's jumps, `stride` apart, at `t` after the front. */
static double series(const double *jump, size_t stride, size_t orders, double t) {
    static const double over[] = {1, 1, 1.0 / 2, 1.0 / 3};
    double sum = 0;
    for (size_t p = orders; p-- > 0;)
        sum = jump[p * stride] + sum * t * (p + 1 < FRONT_ORDERS ? over[p + 1] : 0);
    return sum;
}

/* First sample that includes the front. */
static size_t sample_of(double time, double step) {
    double sample = ceil(time / step - ON_SAMPLE);
    return sample > 0 ? (size_t)sample : 0;
}

/* Reading a wave between samples: where the four samples lie on both sides of a front, those on
 * the wrong side are continued across it. */
static void correct_waves(struct grid *grid, const struct front *front) {
    double h = grid->setup->step;
    size_t first = sample_of(front->time, h), count = grid->count;
    size_t orders = grid->setup->fronts->orders, to = front->near ? 1 : 0;
    for (size_t m = 0; m < count; m++) {
        const struct delay *delay = &grid->delay[m];
        if (delay->fraction == 0)
            continue;
        for (size_t back = 0; back < 3; back++) {
            double base = (double)first - (double)back; /* second stencil point */
            double target = (base + delay->fraction) * h - front->time;
            double correction =
                target >= -ON_SAMPLE * h ? series(front->leaving + m, count, orders, target) : 0;
            for (size_t j = 0; j < STENCIL; j++) {
                double sample = base - 1 + (double)j;
                if (sample >= (double)first)
                    correction -= delay->weight[j] * series(front->leaving + m, count, orders,
                                                            sample * h - front->time);
            }
            size_t i = first + delay->samples - back;
            if (i < grid->corrected)
                grid->wave_correction[to][i * count + m] += correction;
        }
    }
}

/* Integrating the ends: the part of x due to the front is known as a power series; what the
 * quadrature would make of it is taken off. */
static void correct_states(struct grid *grid, const struct front *front) {
    size_t end = front->near ? 0 : 1, count = grid->count;
    const struct stepper *stepper = &grid->stepper[end];
    size_t states = stepper->states, orders = grid->setup->fronts->orders;
    double h = grid->setup->step, before[MOST] = {0};
    size_t first = sample_of(front->time, h);
    /* The three steps whose samples lie on both sides, by the sample they lead to. */
    for (size_t i = first > 0 ? first - 1 : 0; i < first + 2; i++) {
        double now = (double)i * h - front->time, after[MOST] = {0};
        for (size_t k = 0; k < states && i >= first; k++) {
            double power = 1;
            for (size_t p = 0; p < orders; p++) {
                power *= now / (double)(p + 1);
                after[k] += power * front->state[p * states + k];
            }
        }
        for (size_t k = 0; k < states; k++) {
            double correction = after[k];
            for (size_t j = 0; j < states; j++)
                correction -= stepper->decay[k * states + j] * before[j];
            for (size_t s = 0; s < STENCIL && i + 1 >= first + s; s++)
                for (size_t m = 0; m < count; m++)
                    correction -= stepper->gain[s][k * count + m] *
                                  series(front->wave + m, count, orders, now + (1 - (double)s) * h);
            if (i < grid->corrected)
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

/* Mean of (u - from)^power / power!, 0 before `from`, weighed by the kernel about 0; u in samples.
 * Four Gauss-Legendre points are exact between the kernel's knots. */
static double blurred_power(double from, size_t power) {
    static const double point[2] = {0.33998104358485626, 0.86113631159405258};
    static const double weight[2] = {0.65214515486254614, 0.34785484513745386};
    double sum = 0, factorial = power == 3 ? 6 : power == 2 ? 2 : 1;
    for (int knot = -2; knot < 2; knot++) {
        double low = fmax(from, knot), half = (knot + 1 - low) / 2;
        for (int k = 0; k < 4 && half > 0; k++) {
            double u = low + half + half * (k % 2 ? -1 : 1) * point[k / 2];
            double value = 1;
            for (size_t p = 0; p < power; p++)
                value *= u - from;
            sum += half * weight[k / 2] * value / factorial * kernel(u);
        }
    }
    return sum;
}

/* A wave whose next arrival is left to the grid: its samples are blurred by the kernel, which keeps
 * their slow part to fourth order and depends smoothly on where between samples the front lies.
 * Sharp samples would move it by up to a step, and differently in two modes that hardly differ. */
static void blur_leaving(struct grid *grid, const struct front *front) {
    size_t from = front->near ? 0 : 1, count = grid->count;
    double h = grid->setup->step, position = front->time / h;
    size_t first = sample_of(front->time, h);
    for (size_t i = position > 2 ? (size_t)(position - 2) : 0; (double)i < position + 2; i++) {
        if (i >= grid->corrected)
            return;
        double scale = 1, mean[FRONT_ORDERS];
        for (size_t p = 0; p < FRONT_ORDERS; p++) {
            mean[p] = scale * blurred_power(position - (double)i, p);
            scale *= h;
        }
        for (size_t m = 0; m < count; m++) {
            const double *jump = front->leaving + m;
            double correction = 0;
            for (size_t p = 0; p < FRONT_ORDERS; p++)
                correction += mean[p] * jump[p * count];
            if (i >= first)
                correction -= series(jump, count, FRONT_ORDERS, (double)i * h - front->time);
            grid->leaving_correction[from][i * count + m] += correction;
        }
    }
}

static bool corrections_take(struct grid *grid, struct arena *arena, struct error *error) {
    const struct fronts *fronts = grid->setup->fronts;
    double latest = 0;
    for (size_t k = 0; k < fronts->count; k++)
        latest = fmax(latest, fronts->front[k].time);
    double reach = latest / grid->setup->step + (double)grid->pad + 8;
    grid->corrected = (size_t)fmin(reach, (double)grid->setup->most_steps);
    for (size_t end = 0; end < 2; end++) {
        grid->wave_correction[end] =
            arena_new(arena, grid->corrected * grid->count, double, error);
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

static bool all_at_rest(const struct grid *grid, size_t samples, double *sum,
                        struct march *march) {
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
            march->rest[end][k] = rest_of(sum, samples, setup->window, edge, setup->final[end][k]);
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
            size_t room = samples > 0  ? 2 * samples
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
        integral[i] +=
            h / 24 * (13 * (value[i - 1] + value[i]) - before - value[i + 1]);
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
    size_t first = sample_of(front->time, h);
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
                                  series(jump, count, orders, now + ((double)j - 2) * h);
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
