/* Steps of the march, one end after the other in blocks shorter than the shortest delay: what
 * arrives within a block left the other end before it.  The blocks are compiled for the counts that
 * matter, so that their small products are straight-line code. */
#include "grid.h"

#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = GRID_STENCIL };

#define FOR_COUNT static inline __attribute__((always_inline))

/* The coefficients of one end, taken out of memory that stores might alias. */
struct local {
    double decay[MOST * MOST], gain[STENCIL][MOST * MOST], drive[MOST];
    double voltage_of_state[MOST * MOST], voltage_of_wave[MOST * MOST], voltage_of_emf[MOST];
    double leaving_of_state[MOST * MOST], leaving_of_wave[MOST * MOST], leaving_of_emf[MOST];
    double state[MOST], arriving[STENCIL][MOST];
    double weight[MOST][STENCIL];
    const double *wave[MOST]; /* of sample 0 */
};

FOR_COUNT void local_load(const struct grid *grid, size_t end, size_t count, size_t states,
                          struct local *local) {
    const struct stepper *stepper = &grid->stepper[end];
    const struct end_system *system = grid->setup->end[end];
    for (size_t i = 0; i < states * states; i++)
        local->decay[i] = stepper->decay[i];
    for (size_t i = 0; i < states * count; i++) {
        for (size_t s = 0; s < STENCIL; s++)
            local->gain[s][i] = stepper->gain[s][i];
        local->voltage_of_state[i] = system->voltage_of_state[i];
        local->leaving_of_state[i] = system->leaving_of_state[i];
    }
    for (size_t i = 0; i < count * count; i++) {
        local->voltage_of_wave[i] = system->voltage_of_wave[i];
        local->leaving_of_wave[i] = system->leaving_of_wave[i];
    }
    for (size_t i = 0; i < states; i++) {
        local->drive[i] = stepper->drive[i];
        local->state[i] = grid->state[end][i];
    }
    for (size_t m = 0; m < count; m++) {
        local->voltage_of_emf[m] = system->voltage_of_emf[m];
        local->leaving_of_emf[m] = system->leaving_of_emf[m];
        local->wave[m] = grid->leaving[1 - end] + m * (grid->pad + grid->room) + grid->pad -
                         grid->delay[m].samples;
        for (size_t s = 0; s < STENCIL; s++) {
            local->arriving[s][m] = grid->arriving[end][s][m];
            local->weight[m][s] = grid->delay[m].weight[s];
        }
    }
}

FOR_COUNT void local_save(struct grid *grid, size_t end, size_t count, size_t states,
                          const struct local *local) {
    for (size_t i = 0; i < states; i++)
        grid->state[end][i] = local->state[i];
    for (size_t s = 0; s < STENCIL; s++)
        for (size_t m = 0; m < count; m++)
            grid->arriving[end][s][m] = local->arriving[s][m];
}

/* Sample i + 1 becomes the newest one of the end's history. */
FOR_COUNT void read_arriving(const struct grid *grid, size_t end, size_t i, size_t count,
                             bool corrected, struct local *local) {
    for (size_t m = 0; m < count; m++) {
        const double *wave = local->wave[m] + i + 1;
        double sum = local->weight[m][1] * wave[0];
        if (grid->delay[m].fraction > 0)
            sum += local->weight[m][0] * wave[-1] + local->weight[m][2] * wave[1] +
                   local->weight[m][3] * wave[2];
        if (corrected && i + 1 < grid->corrected)
            sum += grid->wave_correction[end][(i + 1) * count + m];
        local->arriving[3][m] = local->arriving[2][m];
        local->arriving[2][m] = local->arriving[1][m];
        local->arriving[1][m] = local->arriving[0][m];
        local->arriving[0][m] = sum;
    }
}

FOR_COUNT void advance_state(const struct grid *grid, size_t end, size_t i, size_t count,
                             size_t states, bool corrected, struct local *local) {
    double next[MOST];
    for (size_t k = 0; k < states; k++) {
        double sum = local->drive[k], forced = 0;
        for (size_t m = 0; m < count; m++)
            for (size_t s = 0; s < STENCIL; s++)
                forced += local->gain[s][k * count + m] * local->arriving[s][m];
        for (size_t j = 0; j < states; j++)
            sum += local->decay[k * states + j] * local->state[j];
        if (corrected)
            sum += grid->state_correction[end][i * states + k];
        next[k] = sum + forced;
    }
    for (size_t k = 0; k < states; k++)
        local->state[k] = next[k];
}

FOR_COUNT void take_block(struct grid *grid, size_t end, size_t from, size_t to, size_t count,
                          size_t states, bool corrected) {
    struct local local;
    local_load(grid, end, count, states, &local);
    double *value = grid->value[end];
    double *leaving = grid->leaving[end] + grid->pad;
    const size_t value_stride = grid->room, leaving_stride = grid->pad + grid->room;
    for (size_t i = from; i < to; i++) {
        read_arriving(grid, end, i, count, corrected, &local);
        if (states > 0 && i > 0)
            advance_state(grid, end, i, count, states, corrected, &local);
        for (size_t k = 0; k < count; k++) {
            double voltage = local.voltage_of_emf[k], leaves = local.leaving_of_emf[k];
            for (size_t j = 0; j < states; j++) {
                voltage += local.voltage_of_state[k * states + j] * local.state[j];
                leaves += local.leaving_of_state[k * states + j] * local.state[j];
            }
            for (size_t m = 0; m < count; m++) {
                voltage += local.voltage_of_wave[k * count + m] * local.arriving[1][m];
                leaves += local.leaving_of_wave[k * count + m] * local.arriving[1][m];
            }
            if (corrected)
                leaves += grid->leaving_correction[end][i * count + k];
            value[k * value_stride + i] = voltage;
            leaving[k * leaving_stride + i] = leaves;
        }
    }
    local_save(grid, end, count, states, &local);
}

/* ---- two conductors: both modes, and both conductors, in one register ---- */

typedef double pair __attribute__((vector_size(16)));

struct pair_local {
    pair gain[2][STENCIL]; /* of a state, modes side by side */
    double decay[2][2], drive[2];
    pair voltage_of_emf, leaving_of_emf; /* conductors side by side */
    pair voltage_of_state[2], leaving_of_state[2];
    pair voltage_of_wave[2], leaving_of_wave[2];
};

static struct pair_local pair_load(const struct grid *grid, size_t end, size_t states) {
    const struct stepper *stepper = &grid->stepper[end];
    const struct end_system *e = grid->setup->end[end];
    struct pair_local made = {
        .voltage_of_emf = {e->voltage_of_emf[0], e->voltage_of_emf[1]},
        .leaving_of_emf = {e->leaving_of_emf[0], e->leaving_of_emf[1]},
    };
    for (size_t j = 0; j < 2; j++) {
        made.voltage_of_wave[j] = (pair){e->voltage_of_wave[j], e->voltage_of_wave[2 + j]};
        made.leaving_of_wave[j] = (pair){e->leaving_of_wave[j], e->leaving_of_wave[2 + j]};
    }
    for (size_t k = 0; k < states; k++) {
        made.voltage_of_state[k] = (pair){e->voltage_of_state[k], e->voltage_of_state[states + k]};
        made.leaving_of_state[k] = (pair){e->leaving_of_state[k], e->leaving_of_state[states + k]};
        made.drive[k] = stepper->drive[k];
        for (size_t j = 0; j < states; j++)
            made.decay[k][j] = stepper->decay[k * states + j];
        for (size_t s = 0; s < STENCIL; s++)
            made.gain[k][s] = (pair){stepper->gain[s][k * 2], stepper->gain[s][k * 2 + 1]};
    }
    return made;
}

FOR_COUNT double read_mode(const struct delay *delay, const double *wave) {
    double sum = delay->weight[1] * wave[0];
    if (delay->fraction > 0)
        sum +=
            delay->weight[0] * wave[-1] + delay->weight[2] * wave[1] + delay->weight[3] * wave[2];
    return sum;
}

FOR_COUNT void take_pair_block(struct grid *grid, const struct pair_local *restrict local,
                               size_t end, size_t from, size_t to, size_t states, bool corrected) {
    const struct delay delay[2] = {grid->delay[0], grid->delay[1]};
    const size_t stride = grid->pad + grid->room;
    const double *wave[2];
    pair history[STENCIL];
    double x[2] = {grid->state[end][0], grid->state[end][1]};
    double *restrict value = grid->value[end];
    double *restrict leaving = grid->leaving[end] + grid->pad;
    for (size_t m = 0; m < 2; m++)
        wave[m] = grid->leaving[1 - end] + m * stride + grid->pad - delay[m].samples;
    for (size_t s = 0; s < STENCIL; s++)
        history[s] = (pair){grid->arriving[end][s][0], grid->arriving[end][s][1]};
    for (size_t i = from; i < to; i++) {
        pair newest = {read_mode(&delay[0], wave[0] + i + 1),
                       read_mode(&delay[1], wave[1] + i + 1)};
        if (corrected && i + 1 < grid->corrected) {
            const double *correction = grid->wave_correction[end] + (i + 1) * 2;
            newest += (pair){correction[0], correction[1]};
        }
        history[3] = history[2];
        history[2] = history[1];
        history[1] = history[0];
        history[0] = newest;
        if (states > 0 && i > 0) {
            double next[2] = {0};
            for (size_t k = 0; k < states; k++) {
                pair forced = local->gain[k][0] * history[0] + local->gain[k][1] * history[1] +
                              local->gain[k][2] * history[2] + local->gain[k][3] * history[3];
                next[k] = local->drive[k] + (forced[0] + forced[1]);
                if (corrected)
                    next[k] += grid->state_correction[end][i * states + k];
                for (size_t j = 0; j < states; j++)
                    next[k] += local->decay[k][j] * x[j];
            }
            x[0] = next[0];
            x[1] = next[1];
        }
        pair first = {history[1][0], history[1][0]}, second = {history[1][1], history[1][1]};
        pair voltage = local->voltage_of_emf + local->voltage_of_wave[0] * first +
                       local->voltage_of_wave[1] * second;
        pair leaves = local->leaving_of_emf + local->leaving_of_wave[0] * first +
                      local->leaving_of_wave[1] * second;
        for (size_t j = 0; j < states; j++) {
            voltage += local->voltage_of_state[j] * (pair){x[j], x[j]};
            leaves += local->leaving_of_state[j] * (pair){x[j], x[j]};
        }
        if (corrected) {
            const double *correction = grid->leaving_correction[end] + i * 2;
            leaves += (pair){correction[0], correction[1]};
        }
        value[i] = voltage[0];
        value[grid->room + i] = voltage[1];
        leaving[i] = leaves[0];
        leaving[stride + i] = leaves[1];
    }
    for (size_t k = 0; k < 2; k++)
        grid->state[end][k] = x[k];
    for (size_t s = 0; s < STENCIL; s++)
        for (size_t m = 0; m < 2; m++)
            grid->arriving[end][s][m] = history[s][m];
}

FOR_COUNT void pair_block_for_states(struct grid *grid, const struct pair_local *local, size_t end,
                                     size_t from, size_t to, bool corrected) {
    size_t states = grid->stepper[end].states;
    if (states == 0)
        take_pair_block(grid, local, end, from, to, 0, corrected);
    else if (states == 1)
        take_pair_block(grid, local, end, from, to, 1, corrected);
    else
        take_pair_block(grid, local, end, from, to, 2, corrected);
}

static void block_of_two(struct grid *grid, const struct pair_local *local, size_t end, size_t from,
                         size_t to, bool corrected) {
    if (corrected)
        pair_block_for_states(grid, local, end, from, to, true);
    else
        pair_block_for_states(grid, local, end, from, to, false);
}

/* ---- other counts ---- */

FOR_COUNT void block_for_states(struct grid *grid, size_t end, size_t from, size_t to, size_t count,
                                bool corrected) {
    size_t states = grid->stepper[end].states;
    if (states == 1)
        take_block(grid, end, from, to, count, 1, corrected);
    else
        take_block(grid, end, from, to, count, states, corrected);
}

static void block_of_one(struct grid *grid, size_t end, size_t from, size_t to, bool corrected) {
    block_for_states(grid, end, from, to, 1, corrected);
}

static void block_of_three(struct grid *grid, size_t end, size_t from, size_t to, bool corrected) {
    block_for_states(grid, end, from, to, 3, corrected);
}

static void block_of_any(struct grid *grid, size_t end, size_t from, size_t to, bool corrected) {
    take_block(grid, end, from, to, grid->count, grid->stepper[end].states, corrected);
}

/* How many samples of an end hang on none of the other's in between. */
static size_t longest_block(const struct grid *grid) {
    size_t longest = grid->delay[0].samples;
    for (size_t m = 0; m < grid->count; m++) {
        size_t ahead = grid->delay[m].fraction > 0 ? 3 : 1;
        size_t samples = grid->delay[m].samples - ahead;
        longest = samples < longest ? samples : longest;
    }
    return longest;
}

void steps_take(struct grid *grid, size_t from, size_t to) {
    size_t longest = longest_block(grid);
    struct pair_local local[2] = {0};
    for (size_t end = 0; end < 2 && grid->count == 2; end++)
        local[end] = pair_load(grid, end, grid->stepper[end].states);
    for (size_t next; from < to; from = next) {
        bool corrected = from < grid->corrected;
        next = from + longest < to ? from + longest : to;
        if (corrected && next > grid->corrected)
            next = grid->corrected;
        for (size_t end = 0; end < 2; end++)
            if (grid->count == 2)
                block_of_two(grid, &local[end], end, from, next, corrected);
            else if (grid->count == 1)
                block_of_one(grid, end, from, next, corrected);
            else if (grid->count == 3)
                block_of_three(grid, end, from, next, corrected);
            else
                block_of_any(grid, end, from, next, corrected);
    }
}
