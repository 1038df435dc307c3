/* 1. Samples of the found input over the whole of `within`, on the grid, each judged by its worst
 * case.
 * 2. From the permitted end inwards: the first sample that fails.  Local maxima on the way that
 * come near the limit are climbed; one that fails moves the first failure there.
 * 3. Bisection on the grid between the last sample that holds and the first that fails.
 * 4. Proof: the bound, its neighbours inside and every sample permitted, with the full scan; if one
 * fails the bound moves on past it. */

#include "find.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { MOST_SAMPLES = 40, MOST_MOVES = 200 };

struct finder {
    const struct study_rule *rule;
    const struct judge *judge;
    const struct region *region;
    long first, last; /* multiples of the grid: first = the permitted end, last = the other end */
    int inward;       /* +1 or -1: from first towards last */
    long samples[MOST_SAMPLES]; /* from first to last */
    struct worst worst[MOST_SAMPLES];
    size_t count;
};

double find_fab_smallest(const struct model *model, size_t input,
                         const struct study_stackup *stackup) {
    const char *name = model->inputs[input].name;
    if (stackup == NULL)
        return 0.0;
    if (strcmp(name, "gap") == 0)
        return stackup->smallest_gap;
    if (strcmp(name, "width") == 0 || strcmp(name, "victim_width") == 0 ||
        strcmp(name, "between_width") == 0)
        return stackup->smallest_width;
    if (strcmp(name, "via_diameter") == 0)
        return stackup->smallest_drill;
    return 0.0;
}

static bool worst_at(const struct finder *finder, long multiple, enum worst_effort effort,
                     struct worst *worst, struct error *error) {
    struct region region = *finder->region;
    region.base[finder->rule->find] = (double)multiple * finder->rule->grid;
    return worst_of(finder->judge, &region, effort, worst, error);
}

static bool holds(const struct worst *worst) {
    return worst->verdict.badness <= 0.0;
}

/* Logarithmic where the range spans a decade and a half or more; always on the grid, no value
 * twice. */
static void place_samples(struct finder *finder) {
    double from = (double)finder->first, to = (double)finder->last;
    double spread = fabs(log(fmax(from, to) / fmax(1.0, fmin(from, to))));
    size_t wanted = spread > 1.0 ? 5 + (size_t)(4.0 * spread) : 8;
    if (wanted > MOST_SAMPLES)
        wanted = MOST_SAMPLES;
    for (size_t i = 0; i < wanted; i++) {
        double part = (double)i / (double)(wanted - 1);
        double at = spread > 1.0 && fmin(from, to) > 0.0 ? from * pow(to / from, part)
                                                         : from + (to - from) * part;
        long multiple = i + 1 == wanted ? finder->last : lround(at);
        if (finder->count == 0 || finder->samples[finder->count - 1] != multiple)
            finder->samples[finder->count++] = multiple;
    }
}

/* A hump between samples that comes near the limit: golden section over the grid for its top. */
static bool climb_hump(const struct finder *finder, size_t i, long *top, struct worst *worst,
                       struct error *error) {
    long a = finder->samples[i - 1], b = finder->samples[i + 1];
    *top = finder->samples[i];
    *worst = finder->worst[i];
    while (labs(b - a) > 2) {
        long left = *top - (*top - a) / 2, right = *top + (b - *top) / 2;
        struct worst at_left, at_right;
        if (!worst_at(finder, left, WORST_PROBE, &at_left, error) ||
            !worst_at(finder, right, WORST_PROBE, &at_right, error))
            return false;
        if (left != *top && at_left.verdict.badness > worst->verdict.badness) {
            b = *top, *top = left, *worst = at_left;
        } else if (right != *top && at_right.verdict.badness > worst->verdict.badness) {
            a = *top, *top = right, *worst = at_right;
        } else {
            if (left == a || right == b)
                break;
            a = left, b = right;
        }
    }
    return true;
}

/* From the permitted end: *good is the last multiple seen to hold before the first failure *bad.
 * *bad == *good: nothing failed. */
static bool first_failure(struct finder *finder, long *good, long *bad, struct error *error) {
    const double near_limit = -0.25;
    *good = *bad = finder->first;
    for (size_t i = 0; i < finder->count; i++) {
        if (!worst_at(finder, finder->samples[i], WORST_PROBE, &finder->worst[i], error))
            return false;
        if (i >= 2 && finder->worst[i - 1].verdict.badness > near_limit &&
            finder->worst[i - 1].verdict.badness >= finder->worst[i - 2].verdict.badness &&
            finder->worst[i - 1].verdict.badness >= finder->worst[i].verdict.badness) {
            long top;
            struct worst worst;
            if (!climb_hump(finder, i - 1, &top, &worst, error))
                return false;
            if (!holds(&worst)) {
                *good = finder->samples[i - 2];
                *bad = top;
                return true;
            }
        }
        if (!holds(&finder->worst[i])) {
            *bad = finder->samples[i];
            return true;
        }
        *good = *bad = finder->samples[i];
    }
    return true;
}

static bool bisect(const struct finder *finder, long *good, long bad, struct error *error) {
    while (labs(bad - *good) > 1) {
        long middle = *good + (bad - *good) / 2;
        struct worst worst;
        if (!worst_at(finder, middle, WORST_PROBE, &worst, error))
            return false;
        if (holds(&worst))
            *good = middle;
        else
            bad = middle;
    }
    return true;
}

/* Everything permitted by `bound`, fully: the bound itself, the samples beyond, and points between
 * the nearest two. */
static bool prove(const struct finder *finder, long bound, struct worst *worst, bool *held,
                  struct error *error) {
    long outward = -finder->inward;
    *held = true;
    if (!worst_at(finder, bound, WORST_FULL, worst, error))
        return false;
    if (!holds(worst)) {
        *held = false;
        return true;
    }
    long nearby[3] = {bound + outward, bound + 2 * outward, bound + 5 * outward};
    for (size_t i = 0; i < 3 + finder->count; i++) {
        long at = i < 3 ? nearby[i] : finder->samples[i - 3];
        bool permitted = finder->inward < 0 ? at > bound && at <= finder->first
                                            : at < bound && at >= finder->first;
        struct worst there;
        if (!permitted)
            continue;
        /* Samples far from the limit were judged on the way in. */
        bool near = i < 3 || finder->worst[i - 3].verdict.badness > -0.15;
        if (!near && finder->worst[i - 3].verdict.badness < worst->verdict.badness)
            continue;
        enum worst_effort effort = i == 0 || (i >= 3 && near) ? WORST_FULL : WORST_PROBE;
        if (!worst_at(finder, at, effort, &there, error))
            return false;
        if (there.verdict.badness > worst->verdict.badness)
            *worst = there;
        if (!holds(&there)) {
            *held = false;
            return true;
        }
    }
    return true;
}

static bool move_until_proven(const struct finder *finder, long *bound, struct worst *worst,
                              bool *found, struct error *error) {
    long outward = -finder->inward;
    *found = false;
    for (int move = 0; move < MOST_MOVES && !*found; move++) {
        if (!prove(finder, *bound, worst, found, error))
            return false;
        if (*found)
            return true;
        /* Steps grow: a proof that fails far out must not be repeated for every grid line. */
        long step = 1 + move / 8;
        *bound += outward * step;
        if (finder->inward < 0 ? *bound > finder->first : *bound < finder->first)
            return true;
    }
    return true;
}

static void record(const struct finder *finder, const struct worst *worst,
                   struct guideline_finding *finding) {
    finding->worst = worst->verdict.value;
    finding->limit = worst->verdict.limit;
    finding->flags = worst->verdict.flags;
    finding->error =
        worst->verdict.value != 0.0 ? worst->verdict.error / fabs(worst->verdict.value) : 0.0;
    double beyond = finder->rule->condition.at_most ? finding->worst - finding->limit
                                                    : finding->limit - finding->worst;
    finding->margin = -beyond / fmax(fabs(finding->limit), 1e-30);
    memcpy(finding->worst_inputs, worst->inputs, sizeof finding->worst_inputs);
    struct error ignored = {0}; /* these inputs were solved, so they resolve */
    model_resolve(finder->judge->solver->model, finding->worst_inputs, &ignored);
}

static bool below_fab(const struct finder *finder, const struct study_variant *variant,
                      double fab) {
    const struct model *model = finder->judge->solver->model;
    for (size_t i = 0; i < model->input_count; i++) {
        double smallest = find_fab_smallest(model, i, variant->stackup);
        const struct study_setting *setting = &variant->settings[i];
        if (i != finder->rule->find && smallest > 0.0 && setting->value > 0.0 &&
            setting->origin != STUDY_STANDARD && setting->value < smallest * (1.0 - 1e-9))
            return true;
    }
    return !finder->rule->find_smallest && fab > 0.0 &&
           finder->rule->within.to < fab * (1.0 - 1e-9);
}

static bool answer(struct finder *finder, struct guideline_finding *finding, struct error *error) {
    long good, bad;
    struct worst worst;
    bool found = false;
    if (!first_failure(finder, &good, &bad, error))
        return false;
    if (bad == finder->first && !holds(&finder->worst[0])) {
        finding->status = GUIDELINE_CANNOT_BE_MET;
        finding->nearest = NAN;
        record(finder, &finder->worst[0], finding);
        return true;
    }
    if (bad != good && !bisect(finder, &good, bad, error))
        return false;
    if (!move_until_proven(finder, &good, &worst, &found, error))
        return false;
    if (!found) {
        finding->status = GUIDELINE_CANNOT_BE_MET;
        record(finder, &worst, finding);
        return true;
    }
    finding->status = good == finder->last ? GUIDELINE_MET_EVERYWHERE : GUIDELINE_FOUND;
    finding->multiple = good;
    finding->value = (double)good * finder->rule->grid;
    record(finder, &worst, finding);
    if (finding->status == GUIDELINE_MET_EVERYWHERE)
        return true;
    struct worst nearest;
    if (!worst_at(finder, good + finder->inward, WORST_PROBE, &nearest, error))
        return false;
    finding->nearest = nearest.verdict.value;
    return true;
}

bool find_bound(const struct study_rule *rule, const struct study_variant *variant,
                struct judge *judge, const struct region *region, struct guideline_finding *finding,
                struct error *error) {
    struct finder *finder = calloc(1, sizeof *finder);
    struct guideline_finding made = {
        .worst = NAN, .limit = NAN, .nearest = NAN, .margin = NAN, .value = NAN};
    if (finder == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    *finder = (struct finder){.rule = rule, .judge = judge, .region = region};
    made.fab_smallest = find_fab_smallest(judge->solver->model, rule->find, variant->stackup);
    double from = rule->within.from, to = rule->within.to;
    if (made.fab_smallest > from)
        from = made.fab_smallest;
    long low = quantity_grid_up(from, rule->grid), high = quantity_grid_down(to, rule->grid);
    bool ok = true;
    if (below_fab(finder, variant, made.fab_smallest) || low > high) {
        made.status = GUIDELINE_BELOW_FAB;
    } else {
        finder->first = rule->find_smallest ? high : low;
        finder->last = rule->find_smallest ? low : high;
        finder->inward = rule->find_smallest ? -1 : 1;
        place_samples(finder);
        ok = answer(finder, &made, error);
    }
    made.solutions = judge->solver->solved;
    free(finder);
    if (ok)
        *finding = made;
    return ok;
}
