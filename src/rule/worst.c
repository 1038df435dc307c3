/* 1. Scan: the factorial of samples of all ranges and choices, tolerances at nominal.
 * 2. Starts: the worst samples, no two of them neighbours.
 * 3. Corners: each start at every combination of tolerance ends.
 * 4. Climb: axis by axis between the neighbouring samples, by golden section, until nothing gets
 * worse. */

#include "worst.h"

#include <math.h>
#include <string.h>

enum { MOST_STARTS = 8, MOST_SAMPLES = 32, MOST_SCAN = 20000, GOLDEN_STEPS = 9, ROUNDS = 3 };

struct start {
    size_t at[MODEL_MOST_INPUTS]; /* sample index on each range axis */
    struct worst worst;
};

struct search {
    const struct judge *judge;
    const struct region *region;
    size_t samples[MODEL_MOST_INPUTS]; /* per range axis */
    double low[MODEL_MOST_INPUTS];     /* where sampling starts */
    struct start starts[MOST_STARTS];
    size_t start_count, most_starts;
    bool full;
};

static bool is_named(const struct region *region, const struct region_axis *axis,
                     const char *name) {
    return strcmp(region->model->inputs[axis->input].name, name) == 0;
}

/* A run a twelfth as long couples at most about a twelfth as much while it is short against the
 * edge, and costs the most to solve (its bounces are the finest): a probe leaves such runs to the
 * proof. */
static double sample_from(const struct region *region, const struct region_axis *axis, bool full) {
    if (full || !is_named(region, axis, "length"))
        return axis->low;
    return fmax(axis->low, axis->high / 12.0);
}

static size_t samples_for(const struct region *region, const struct region_axis *axis, double low,
                          bool full) {
    if (axis->kind == REGION_CHOICE)
        return (size_t)(axis->high - axis->low) + 1;
    double spread = low > 0.0 ? log2(axis->high / low) : 3.0;
    /* Crosstalk is not monotone in length and edge; in resistances it bends gently. */
    bool wavy = is_named(region, axis, "length") || is_named(region, axis, "edge") ||
                is_named(region, axis, "gap") || is_named(region, axis, "bit_time");
    size_t count = wavy ? 2 + (size_t)ceil((full ? 1.3 : 0.7) * spread) : full ? 3 : 2;
    return count > MOST_SAMPLES ? MOST_SAMPLES : count;
}

/* Too many ranges at once: thin out the finest axis until the scan is payable. */
static void plan(struct search *search) {
    size_t total = 1;
    for (size_t i = 0; i < search->region->range_count; i++) {
        const struct region_axis *axis = &search->region->axes[i];
        search->low[i] = sample_from(search->region, axis, search->full);
        search->samples[i] = samples_for(search->region, axis, search->low[i], search->full);
        total *= search->samples[i];
    }
    while (total > MOST_SCAN) {
        size_t finest = 0;
        for (size_t i = 1; i < search->region->range_count; i++)
            if (search->samples[i] > search->samples[finest])
                finest = i;
        total = total / search->samples[finest] * (search->samples[finest] - 1);
        search->samples[finest]--;
    }
}

static bool neighbours(const struct search *search, const size_t *a, const size_t *b) {
    for (size_t i = 0; i < search->region->range_count; i++) {
        if (search->region->axes[i].kind == REGION_CHOICE && a[i] != b[i])
            return false;
        size_t apart = a[i] > b[i] ? a[i] - b[i] : b[i] - a[i];
        if (apart > 1)
            return false;
    }
    return true;
}

/* Keeps the starts sorted from worst to mildest; of two neighbours the worse stays. */
static void offer(struct search *search, const size_t *at, const struct worst *candidate) {
    size_t place = search->start_count;
    for (size_t i = 0; i < search->start_count; i++)
        if (neighbours(search, search->starts[i].at, at)) {
            if (search->starts[i].worst.verdict.badness >= candidate->verdict.badness)
                return;
            memmove(&search->starts[i], &search->starts[i + 1],
                    (search->start_count - i - 1) * sizeof search->starts[0]);
            search->start_count--;
            i--;
        }
    for (place = search->start_count;
         place > 0 && search->starts[place - 1].worst.verdict.badness < candidate->verdict.badness;
         place--)
        ;
    if (place == search->most_starts)
        return;
    size_t last =
        search->start_count < search->most_starts ? search->start_count : search->most_starts - 1;
    memmove(&search->starts[place + 1], &search->starts[place],
            (last - place) * sizeof search->starts[0]);
    memcpy(search->starts[place].at, at, sizeof search->starts[place].at);
    search->starts[place].worst = *candidate;
    search->start_count = last + 1;
}

static double sample(const struct search *search, size_t i, size_t at) {
    struct region_axis axis = search->region->axes[i];
    axis.low = search->low[i];
    return region_sample(&axis, at, search->samples[i]);
}

static bool scan(struct search *search, struct error *error) {
    const struct region *region = search->region;
    size_t at[MODEL_MOST_INPUTS] = {0};
    struct worst candidate;
    memcpy(candidate.inputs, region->base, sizeof candidate.inputs);
    for (;;) {
        for (size_t i = 0; i < region->range_count; i++)
            candidate.inputs[region->axes[i].input] = sample(search, i, at[i]);
        if (!judge_case(search->judge, candidate.inputs, &candidate.verdict, error))
            return false;
        offer(search, at, &candidate);
        size_t axis = region->range_count;
        while (axis > 0 && ++at[axis - 1] == search->samples[axis - 1])
            at[--axis] = 0;
        if (axis == 0)
            return true;
    }
}

static bool try_value(const struct search *search, struct worst *worst, size_t input, double value,
                      double *badness, struct error *error) {
    struct worst tried = *worst;
    tried.inputs[input] = value;
    if (!judge_case(search->judge, tried.inputs, &tried.verdict, error))
        return false;
    *badness = tried.verdict.badness;
    if (tried.verdict.badness > worst->verdict.badness)
        *worst = tried;
    return true;
}

static bool corners(const struct search *search, struct worst *worst, struct error *error) {
    const struct region *region = search->region;
    size_t count = region->axis_count - region->range_count;
    struct worst best = *worst;
    if (count > 8)
        count = 8; /* the climb still visits the others */
    for (size_t corner = 0; count > 0 && corner < (size_t)1 << count; corner++) {
        struct worst tried = *worst;
        for (size_t i = 0; i < count; i++) {
            const struct region_axis *axis = &region->axes[region->range_count + i];
            tried.inputs[axis->input] = (corner >> i & 1u) != 0 ? axis->high : axis->low;
        }
        if (!judge_case(search->judge, tried.inputs, &tried.verdict, error))
            return false;
        if (tried.verdict.badness > best.verdict.badness)
            best = tried;
    }
    *worst = best;
    return true;
}

/* Golden section (Kiefer 1953) inside [low, high], in the logarithm where the axis is sampled so.
 */
static bool golden(const struct search *search, struct worst *worst, const struct region_axis *axis,
                   double low, double high, struct error *error) {
    const double ratio = 0.6180339887498949;
    double a = axis->logarithmic ? log(low) : low, b = axis->logarithmic ? log(high) : high;
    double x1 = b - ratio * (b - a), x2 = a + ratio * (b - a), f1, f2;
#define AT(x) (axis->logarithmic ? exp(x) : (x))
    if (!try_value(search, worst, axis->input, AT(x1), &f1, error) ||
        !try_value(search, worst, axis->input, AT(x2), &f2, error))
        return false;
    for (int step = 0; step < GOLDEN_STEPS; step++) {
        bool left = f1 > f2;
        if (left) {
            b = x2, x2 = x1, f2 = f1, x1 = b - ratio * (b - a);
        } else {
            a = x1, x1 = x2, f1 = f2, x2 = a + ratio * (b - a);
        }
        if (!try_value(search, worst, axis->input, AT(left ? x1 : x2), left ? &f1 : &f2, error))
            return false;
    }
#undef AT
    return true;
}

static double reach(const struct search *search, size_t i) {
    const struct region_axis *axis = &search->region->axes[i];
    double cells = i < search->region->range_count ? (double)(search->samples[i] - 1) : 1.0;
    return axis->logarithmic ? pow(axis->high / axis->low, 1.0 / cells)
                             : (axis->high - axis->low) / cells;
}

/* Golden section only where a look half a cell to either side says that it goes on getting worse
 * there. */
static bool climb_axis(const struct search *search, struct worst *worst, size_t i,
                       struct error *error) {
    const struct region_axis *axis = &search->region->axes[i];
    double here = worst->inputs[axis->input], cell = reach(search, i);
    double low = fmax(axis->low, axis->logarithmic ? here / cell : here - cell);
    double high = fmin(axis->high, axis->logarithmic ? here * cell : here + cell);
    double before = worst->verdict.badness, left = -INFINITY, right = -INFINITY;
    double below = axis->logarithmic ? sqrt(low * here) : 0.5 * (low + here);
    double above = axis->logarithmic ? sqrt(high * here) : 0.5 * (high + here);
    if ((here > low && !try_value(search, worst, axis->input, below, &left, error)) ||
        (here < high && !try_value(search, worst, axis->input, above, &right, error)))
        return false;
    bool inside = here > axis->low && here < axis->high;
    double steep = 0.02 * fmax(fabs(before), 1e-3);
    if (left <= before && right <= before &&
        (!inside || (before - left > steep && before - right > steep)))
        return true;
    return golden(search, worst, axis, low, high, error);
}

static bool climb(const struct search *search, struct worst *worst, struct error *error) {
    size_t axes = search->full ? search->region->axis_count : search->region->range_count;
    for (int round = 0; round < (search->full ? ROUNDS : 1); round++) {
        double before = worst->verdict.badness;
        for (size_t i = 0; i < axes; i++)
            if (search->region->axes[i].kind != REGION_CHOICE &&
                !climb_axis(search, worst, i, error))
                return false;
        if (worst->verdict.badness - before <= 1e-4 * fmax(1.0, fabs(before)))
            break;
    }
    return true;
}

bool worst_of(const struct judge *judge, const struct region *region, enum worst_effort effort,
              struct worst *worst, struct error *error) {
    struct search search = {.judge = judge, .region = region, .full = effort == WORST_FULL};
    search.most_starts = search.full ? 5 : 2;
    plan(&search);
    if (!scan(&search, error))
        return false;
    for (size_t i = 0; i < search.start_count; i++) {
        struct worst *start = &search.starts[i].worst;
        if (!corners(&search, start, error) || !climb(&search, start, error))
            return false;
        if (i == 0 || start->verdict.badness > worst->verdict.badness)
            *worst = *start;
    }
    return true;
}
