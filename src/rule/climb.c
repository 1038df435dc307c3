#include "climb.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST_STEPS = 6 }; /* in one direction; the scan's samples are no further apart */
/* A ridge that gains less than this in so many steps has come to its top. */
enum { IDLE_STEPS = 20 };
static const double RIDGE_GAIN = 5e-4;

static double forth(const struct region_axis *axis, double value) {
    return axis->logarithmic ? log(value) : value;
}

static double back(const struct region_axis *axis, double at) {
    return region_snap(axis, axis->logarithmic ? exp(at) : at);
}

double climb_cell(const struct region_axis *axis, double low, size_t samples) {
    double cells = samples > 1 ? (double)(samples - 1) : 1.0;
    return (forth(axis, axis->high) - forth(axis, low)) / cells;
}

struct looks {
    double here, left, right; /* badness; -INFINITY beyond an end */
};

static bool look_around(const struct judge *judge, const struct region_axis *axis, double step,
                        struct worst *worst, struct looks *looks, struct error *error) {
    double value = worst->inputs[axis->input], at = forth(axis, value);
    *looks = (struct looks){worst->verdict.badness, -INFINITY, -INFINITY};
    return (!(value > axis->low) ||
            worst_try(judge, worst, axis->input, back(axis, at - step), &looks->left, error)) &&
           (!(value < axis->high) ||
            worst_try(judge, worst, axis->input, back(axis, at + step), &looks->right, error));
}

/* On in the direction that was found to get worse. */
static bool walk(const struct judge *judge, const struct region_axis *axis, double step,
                 struct worst *worst, struct error *error) {
    for (int i = 0; i < MOST_STEPS; i++) {
        double before = worst->verdict.badness, badness;
        double value = back(axis, forth(axis, worst->inputs[axis->input]) + step);
        if (value == worst->inputs[axis->input])
            return true;
        if (!worst_try(judge, worst, axis->input, value, &badness, error))
            return false;
        if (!(badness > before))
            return true;
    }
    return true;
}

static bool try_parabola(const struct judge *judge, const struct region_axis *axis, double step,
                         const struct looks *looks, struct worst *worst, struct error *error) {
    double bend = looks->left - 2.0 * looks->here + looks->right, badness;
    if (!(bend < 0.0) || !isfinite(bend))
        return true;
    double shift = 0.5 * step * (looks->left - looks->right) / bend;
    if (fabs(shift) < step / 32.0)
        return true;
    return worst_try(judge, worst, axis->input,
                     back(axis, forth(axis, worst->inputs[axis->input]) + shift), &badness, error);
}

bool climb_axis(const struct judge *judge, const struct region_axis *axis, struct climb climb,
                struct worst *worst, struct error *error) {
    double step = climb.cell;
    for (int level = 0, down = 0; level < climb.levels; level++, step /= 4.0) {
        double from = worst->inputs[axis->input];
        struct looks looks;
        if (!look_around(judge, axis, step, worst, &looks, error))
            return false;
        bool ended = isinf(looks.left) || isinf(looks.right);
        if (worst->inputs[axis->input] != from) {
            double ahead = worst->inputs[axis->input] > from ? step : -step;
            if (!walk(judge, axis, ahead, worst, error))
                return false;
            down = 0;
        } else if (!ended && !try_parabola(judge, axis, step, &looks, worst, error)) {
            return false;
        } else if (ended && ++down == climb.patience) {
            return true;
        }
    }
    return true;
}

/* ---- ridges ---- */

/* Knuth's linear congruential generator (MMIX), the upper bits as a number in -1 .. 1. */
static double draw(uint64_t *state) {
    *state = *state * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
    return (double)(*state >> 11) / 4503599627370496.0 - 1.0;
}

/* Each axis takes part in every second step. */
static void draw_direction(const struct region *region, size_t line, uint64_t *state,
                           double *direction) {
    for (size_t i = 0; i < region->axis_count; i++) {
        double length = draw(state);
        bool part = draw(state) > 0.0 && i != line && region->axes[i].kind != REGION_CHOICE;
        direction[i] = part ? length : 0.0;
    }
}

static bool step_along(const struct judge *judge, const struct region *region, size_t line,
                       const double *direction, double size, struct worst *worst,
                       struct error *error) {
    double longest = 0.0;
    for (size_t i = 0; i < region->axis_count; i++) {
        const struct region_axis *axis = &region->axes[i];
        double step = size * (forth(axis, axis->high) - forth(axis, axis->low)) * direction[i];
        if (direction[i] == 0.0)
            continue;
        worst->inputs[axis->input] = back(axis, forth(axis, worst->inputs[axis->input]) + step);
        if (axis->logarithmic)
            longest = fmax(longest, fabs(step));
    }
    if (!judge_case(judge, worst->inputs, &worst->verdict, error))
        return false;
    if (line == SIZE_MAX)
        return true;
    /* Resonances move by about as much, in the logarithm, as what moves them. */
    struct climb climb = {.cell = fmax(longest, 0.1 * size), .levels = 2, .patience = 1};
    return climb_axis(judge, &region->axes[line], climb, worst, error);
}

bool climb_ridge(const struct judge *judge, const struct region *region, size_t line, int steps,
                 struct worst *worst, struct error *error) {
    uint64_t state = 1;
    double direction[MODEL_MOST_INPUTS], size = 0.2;
    bool worse = false;
    for (int i = 0, idle = 0; i < steps && idle < IDLE_STEPS && region->axis_count > 1; i++) {
        struct worst tried = *worst;
        if (!worse)
            draw_direction(region, line, &state, direction);
        if (!step_along(judge, region, line, direction, size, &tried, error))
            return false;
        worse = tried.verdict.badness > worst->verdict.badness;
        idle = tried.verdict.badness > worst->verdict.badness + RIDGE_GAIN ? 0 : idle + 1;
        if (worse)
            *worst = tried;
        size = fmin(0.5, size * (worse ? 1.5 : 0.8));
    }
    return true;
}
