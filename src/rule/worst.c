/* 1. Scan (scan.c); tolerances at nominal or where a case known to be bad has them.
 * 2. Starts: the worst samples, no two of them neighbours.
 * 3. Ends: each start at the other end of every axis that the scan left out.
 * 4. Corners: each start at every combination of tolerance ends.
 * 5. Climb (climb.c), axis by axis, until nothing gets worse; against a reference along ridges too.
 */

#include "worst.h"

#include "climb.h"
#include "scan.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST_CORNER_AXES = 8, ROUNDS = 3, RIDGES = 2, RIDGE_STEPS = 20 };
/* A start this much below the worst does not overtake it within a cell. */
static const double BEHIND = 0.15;
/* A probe that is this far from the limit is not climbed: what may hide between its samples is a
 * matter of percents. */
static const double FAR = -0.5;
/* A round that gains less is the last: for most starts, and for the worst in the end. */
static const double COARSE_GAIN = 2e-3, FINE_GAIN = 5e-4;

bool worst_try(const struct judge *judge, struct worst *worst, size_t input, double value,
               double *badness, struct error *error) {
    struct worst tried = *worst;
    tried.inputs[input] = value;
    if (!judge_case(judge, tried.inputs, &tried.verdict, error))
        return false;
    *badness = tried.verdict.badness;
    if (tried.verdict.badness > worst->verdict.badness)
        *worst = tried;
    return true;
}

/* One end after the other, until neither gets worse. */
static bool ends(const struct scan *scan, struct worst *worst, struct error *error) {
    for (int pass = 0; pass < 2; pass++) {
        double before = worst->verdict.badness, badness;
        for (size_t i = 0; i < scan->region->range_count; i++) {
            const struct region_axis *axis = &scan->region->axes[i];
            if (scan->samples[i] == 0 &&
                (!worst_try(scan->judge, worst, axis->input, axis->low, &badness, error) ||
                 !worst_try(scan->judge, worst, axis->input, axis->high, &badness, error)))
                return false;
        }
        if (!(worst->verdict.badness > before))
            break;
    }
    return true;
}

static bool corners(const struct scan *scan, struct worst *worst, struct error *error) {
    const struct region *region = scan->region;
    size_t count = region->axis_count - region->range_count;
    struct worst best = *worst;
    if (count > MOST_CORNER_AXES)
        count = MOST_CORNER_AXES; /* the climb still visits the others */
    for (size_t corner = 0; count > 0 && corner < (size_t)1 << count; corner++) {
        struct worst tried = *worst;
        for (size_t i = 0; i < count; i++) {
            const struct region_axis *axis = &region->axes[region->range_count + i];
            tried.inputs[axis->input] = (corner >> i & 1u) != 0 ? axis->high : axis->low;
        }
        if (!judge_case(scan->judge, tried.inputs, &tried.verdict, error))
            return false;
        if (tried.verdict.badness > best.verdict.badness)
            best = tried;
    }
    *worst = best;
    return true;
}

static bool climb_axes(const struct scan *scan, struct worst *worst, struct error *error) {
    const struct region *region = scan->region;
    for (size_t i = 0; i < (scan->thorough ? region->axis_count : region->range_count); i++) {
        const struct region_axis *axis = &region->axes[i];
        bool sampled = i < region->range_count && scan->samples[i] > 1;
        if (axis->kind == REGION_CHOICE || (!scan->thorough && !sampled))
            continue;
        double low = i < region->range_count ? scan->low[i] : axis->low;
        double cell = climb_cell(axis, low, sampled ? scan->samples[i] : 2);
        struct climb how = {.cell = cell / (scan->thorough && i == scan->line ? 4.0 : 2.0),
                            .levels = scan->thorough ? 3 : 2,
                            .patience = 2};
        if (!climb_axis(scan->judge, axis, how, worst, error))
            return false;
    }
    return true;
}

/* A probe climbs what it has sampled, once; a proof everything, and looks at the corners again from
 * where it arrives. */
static bool climb(const struct scan *scan, double gain, struct worst *worst, struct error *error) {
    for (int round = 0; round < (scan->thorough ? ROUNDS : 1); round++) {
        double before = worst->verdict.badness;
        if (!climb_axes(scan, worst, error) || (scan->thorough && !corners(scan, worst, error)))
            return false;
        if (!(worst->verdict.badness - before > gain * scan_scale(scan->judge, before)))
            break;
    }
    return true;
}

static bool finish(const struct scan *scan, struct worst *worst, struct error *error) {
    if (!corners(scan, worst, error))
        return false;
    if (!scan->thorough && !scan->judge->curve && worst->verdict.badness < FAR)
        return true;
    return climb(scan, COARSE_GAIN, worst, error);
}

/* Over what the scan writes its axes. */
static void start_from(const struct scan *scan, const struct worst *hint, double *inputs) {
    const struct region *region = scan->region;
    memcpy(inputs, region->base, sizeof region->base);
    for (size_t i = 0; i < region->axis_count; i++) {
        const struct region_axis *axis = &region->axes[i];
        double plain = axis->kind == REGION_TOLERANCE ? axis->nominal : axis->low;
        inputs[axis->input] = hint != NULL ? hint->inputs[axis->input] : plain;
    }
}

static void insert(struct worst_cases *found, const struct worst *worst) {
    size_t place = found->count++;
    for (; place > 0 && found->cases[place - 1].verdict.badness < worst->verdict.badness; place--)
        found->cases[place] = found->cases[place - 1];
    found->cases[place] = *worst;
}

/* A limit that is itself the larger of several peaks bends downwards where they meet, and the ratio
 * to it has sharp ridges across the axes. */
static bool follow_ridges(const struct scan *scan, struct worst_cases *found, struct error *error) {
    for (size_t i = 0; i < found->count && i < RIDGES; i++) {
        struct worst worst = found->cases[i];
        if (!climb_ridge(scan->judge, scan->region, scan->line, RIDGE_STEPS, &worst, error))
            return false;
        found->cases[i] = worst;
    }
    for (size_t i = 1; i < found->count; i++)
        if (found->cases[i].verdict.badness > found->cases[0].verdict.badness) {
            struct worst first = found->cases[0];
            found->cases[0] = found->cases[i];
            found->cases[i] = first;
        }
    return true;
}

bool worst_of(const struct judge *judge, const struct region *region, enum worst_effort effort,
              const struct worst *hint, struct worst_cases *found, struct error *error) {
    struct scan scan = {.judge = judge,
                        .region = region,
                        .full = effort == WORST_FULL,
                        .thorough = effort != WORST_PROBE};
    double from[MODEL_MOST_INPUTS];
    scan.most_starts = scan.full ? WORST_MOST_CASES : 4;
    start_from(&scan, hint, from);
    if (!scan_region(&scan, from, error))
        return false;
    double best = -INFINITY;
    if (effort == WORST_PROBE && !judge->curve && hint != NULL && scan.best < WORST_IS_FAR) {
        *found = (struct worst_cases){.cases = {scan.starts[0].worst}, .count = 1};
        return true;
    }
    for (size_t i = 0; i < scan.start_count; i++) {
        if (!ends(&scan, &scan.starts[i].worst, error))
            return false;
        best = fmax(best, scan.starts[i].worst.verdict.badness);
    }
    found->count = 0;
    for (size_t i = 0; i < scan.start_count; i++) {
        struct worst worst = scan.starts[i].worst;
        if (worst.verdict.badness < best - BEHIND * scan_scale(judge, best))
            continue;
        if (!finish(&scan, &worst, error))
            return false;
        insert(found, &worst);
    }
    if (scan.thorough && !climb(&scan, FINE_GAIN, &found->cases[0], error))
        return false;
    bool settled =
        judge->reference == NULL || !scan.thorough || found->cases[0].verdict.badness > 0.0;
    return settled || follow_ridges(&scan, found, error);
}
