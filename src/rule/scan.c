/* 1. The factorial of samples; in a probe the gentle axes stay where they are.
 * 2. Refinement: along the axis that is sampled most, cells are halved, up to three times, where
 * the values at their ends and the slopes around them leave room for something worse than the worst
 * sample (in the spirit of Piyavskii 1972 and Shubert 1972, the slope being estimated).  A
 * reference condition needs this: the ratio of two boards peaks where the reference has a hollow.
 * `edge` comes innermost: samples that differ only in it share one line response. */

#include "scan.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST_SAMPLES = 32, MOST_SCAN = 20000, LINE_POSITIONS = (MOST_SAMPLES - 1) * SCAN_FINE + 1 };
/* Room for what is not at the worst corner or end in the scan; what hides must rise by so much
 * above its neighbours to be worth a look. */
static const double SLACK = 0.05, RISE = 0.01;

static bool is_named(const struct region *region, const struct region_axis *axis,
                     const char *name) {
    return strcmp(region->model->inputs[axis->input].name, name) == 0;
}

bool scan_is_wavy(const struct region *region, const struct region_axis *axis) {
    return axis->kind == REGION_RANGE &&
           (is_named(region, axis, "length") || is_named(region, axis, "edge") ||
            is_named(region, axis, "gap") || is_named(region, axis, "bit_time"));
}

double scan_scale(const struct judge *judge, double badness) {
    return judge->curve ? fmax(fabs(badness), 1e-30) : 1.0;
}

/* ---- the plan ---- */

/* Runs up to this one are short against the fastest edge and couple steadily more the longer they
 * are. Against a reference it is the ratio that counts, and no run is short. */
static double short_run(const struct scan *scan) {
    const struct region *region = scan->region;
    double inputs[MODEL_MOST_INPUTS];
    struct error ignored = {0}; /* what does not resolve is refused where it is solved */
    if (scan->judge->reference != NULL || region->model->steady_length == NULL)
        return 0.0;
    memcpy(inputs, region->base, sizeof inputs);
    for (size_t i = 0; i < region->range_count; i++)
        inputs[region->axes[i].input] = region->axes[i].low;
    return model_resolve(region->model, inputs, &ignored) ? region->model->steady_length(inputs)
                                                          : 0.0;
}

/* Short runs cost the most to solve (their bounces are the finest) and couple in proportion to
 * their length: below a quarter of the longest none is the worst.  A probe leaves all runs below a
 * twelfth to the proof. */
static double sample_from(const struct scan *scan, const struct region_axis *axis) {
    if (!is_named(scan->region, axis, "length"))
        return axis->low;
    double steady = fmin(axis->high / 4.0, short_run(scan));
    return fmax(axis->low, scan->full ? steady : fmax(steady, axis->high / 12.0));
}

static size_t samples_for(const struct scan *scan, const struct region_axis *axis, double low) {
    if (axis->kind == REGION_CHOICE)
        return (size_t)(axis->high - axis->low) + 1;
    if (axis->whole && scan->full)
        return (size_t)fmin(axis->high - axis->low + 1.0, MOST_SAMPLES);
    if (!scan_is_wavy(scan->region, axis))
        return scan->full ? 2 : 0;
    double octaves = low > 0.0 ? log2(axis->high / low) : 3.0;
    size_t count = 2 + (size_t)ceil((scan->full ? 2.0 : 0.7) * octaves);
    return count > MOST_SAMPLES ? MOST_SAMPLES : count;
}

static size_t finest_range(const struct scan *scan) {
    size_t finest = SIZE_MAX;
    for (size_t i = 0; i < scan->region->range_count; i++)
        if (scan->region->axes[i].kind == REGION_RANGE && scan->samples[i] > 2 &&
            (finest == SIZE_MAX || scan->samples[i] > scan->samples[finest]))
            finest = i;
    return finest;
}

static bool is_inner(const struct scan *scan, size_t i) {
    return i + 1 == scan->region->range_count &&
           is_named(scan->region, &scan->region->axes[i], "edge");
}

static size_t line_of(const struct scan *scan) {
    size_t line = SIZE_MAX;
    for (size_t i = 0; i < scan->region->range_count; i++)
        if (scan_is_wavy(scan->region, &scan->region->axes[i]) &&
            (line == SIZE_MAX || (!is_inner(scan, i) && scan->samples[i] > scan->samples[line])))
            line = i;
    return line;
}

/* Too many ranges at once: thin out the finest axis until the scan is payable. */
static void plan(struct scan *scan) {
    size_t total = 1;
    for (size_t i = 0; i < scan->region->range_count; i++) {
        const struct region_axis *axis = &scan->region->axes[i];
        scan->low[i] = sample_from(scan, axis);
        scan->samples[i] = samples_for(scan, axis, scan->low[i]);
        total *= scan->samples[i] > 0 ? scan->samples[i] : 1;
    }
    for (size_t finest; total > MOST_SCAN && (finest = finest_range(scan)) != SIZE_MAX;) {
        total = total / scan->samples[finest] * (scan->samples[finest] - 1);
        scan->samples[finest]--;
    }
    scan->line = line_of(scan);
}

static double value_at(const struct scan *scan, size_t i, size_t at) {
    struct region_axis axis = scan->region->axes[i];
    if (axis.kind == REGION_CHOICE)
        return axis.low + (double)(at / SCAN_FINE);
    axis.low = scan->low[i];
    return region_sample(&axis, at, (scan->samples[i] - 1) * SCAN_FINE + 1);
}

/* ---- the worst so far ---- */

static bool neighbours(const struct scan *scan, const size_t *a, const size_t *b) {
    for (size_t i = 0; i < scan->region->range_count; i++) {
        if (scan->region->axes[i].kind == REGION_CHOICE && a[i] != b[i])
            return false;
        size_t apart = a[i] > b[i] ? a[i] - b[i] : b[i] - a[i];
        if (apart > SCAN_FINE)
            return false;
    }
    return true;
}

/* Keeps the starts sorted from worst to mildest; of two neighbours the worse stays. */
static void offer(struct scan *scan, const size_t *at, const struct worst *candidate) {
    double badness = candidate->verdict.badness;
    for (size_t i = 0; i < scan->start_count; i++)
        if (neighbours(scan, scan->starts[i].at, at)) {
            if (scan->starts[i].worst.verdict.badness >= badness)
                return;
            memmove(&scan->starts[i], &scan->starts[i + 1],
                    (scan->start_count - i - 1) * sizeof scan->starts[0]);
            scan->start_count--;
            i--;
        }
    size_t place = scan->start_count;
    while (place > 0 && scan->starts[place - 1].worst.verdict.badness < badness)
        place--;
    if (place == scan->most_starts)
        return;
    size_t last = scan->start_count < scan->most_starts ? scan->start_count : scan->most_starts - 1;
    memmove(&scan->starts[place + 1], &scan->starts[place],
            (last - place) * sizeof scan->starts[0]);
    memcpy(scan->starts[place].at, at, sizeof scan->starts[place].at);
    scan->starts[place].worst = *candidate;
    scan->start_count = last + 1;
}

/* ---- one line: everything but the refined axis and the innermost one stands still ---- */

struct line {
    size_t at[MODEL_MOST_INPUTS];
    struct worst candidate;
    size_t positions, inner; /* inner: samples of `edge`, or 1 */
    bool known[LINE_POSITIONS];
    double badness[LINE_POSITIONS][MOST_SAMPLES];
};

static bool solve_position(struct scan *scan, struct line *line, size_t position,
                           struct error *error) {
    const struct region *region = scan->region;
    size_t last = region->range_count - 1;
    if (scan->line != SIZE_MAX) {
        line->at[scan->line] = position;
        line->candidate.inputs[region->axes[scan->line].input] =
            value_at(scan, scan->line, position);
    }
    for (size_t e = 0; e < line->inner; e++) {
        if (line->inner > 1) {
            line->at[last] = e * SCAN_FINE;
            line->candidate.inputs[region->axes[last].input] = value_at(scan, last, e * SCAN_FINE);
        }
        if (!judge_case(scan->judge, line->candidate.inputs, &line->candidate.verdict, error))
            return false;
        line->badness[position][e] = line->candidate.verdict.badness;
        scan->best = fmax(scan->best, line->candidate.verdict.badness);
        offer(scan, line->at, &line->candidate);
    }
    line->known[position] = true;
    return true;
}

static double step_between(const struct line *line, size_t a, size_t b, size_t e) {
    return line->known[a] && line->known[b] ? fabs(line->badness[a][e] - line->badness[b][e]) : 0.0;
}

/* Whether between two known positions something worse than the worst sample may hide. */
static bool may_hide(const struct scan *scan, const struct line *line, size_t from, size_t stride) {
    size_t to = from + stride;
    double scale = scan_scale(scan->judge, scan->best), enough = scan->best - SLACK * scale;
    for (size_t e = 0; e < line->inner; e++) {
        double steep = step_between(line, from, to, e);
        if (from >= stride)
            steep = fmax(steep, step_between(line, from - stride, from, e));
        if (to + stride < line->positions)
            steep = fmax(steep, step_between(line, to, to + stride, e));
        double rise = 0.5 * steep;
        if (rise > RISE * scale &&
            fmax(line->badness[from][e], line->badness[to][e]) + rise > enough)
            return true;
    }
    return false;
}

static bool solve_line(struct scan *scan, struct line *line, bool refined, struct error *error) {
    memset(line->known, 0, sizeof line->known);
    for (size_t position = 0; position < line->positions; position += SCAN_FINE)
        if (!solve_position(scan, line, position, error))
            return false;
    for (size_t stride = SCAN_FINE; refined && stride > 1; stride /= 2)
        for (size_t from = 0; from + stride < line->positions; from += stride)
            if (line->known[from] && line->known[from + stride] &&
                may_hide(scan, line, from, stride) &&
                !solve_position(scan, line, from + stride / 2, error))
                return false;
    return true;
}

/* Every combination of the axes that stand still along a line. */
static bool all_lines(struct scan *scan, struct line *line, bool refined, struct error *error) {
    const struct region *region = scan->region;
    size_t end = region->range_count - (line->inner > 1 ? 1 : 0);
    memset(line->at, 0, sizeof line->at);
    for (;;) {
        for (size_t i = 0; i < end; i++)
            if (scan->samples[i] > 0 && i != scan->line)
                line->candidate.inputs[region->axes[i].input] = value_at(scan, i, line->at[i]);
        if (!solve_line(scan, line, refined, error))
            return false;
        size_t axis = end;
        while (axis > 0) {
            size_t i = axis - 1;
            bool still = i == scan->line || scan->samples[i] < 2;
            if (!still && (line->at[i] += SCAN_FINE) <= (scan->samples[i] - 1) * SCAN_FINE)
                break;
            if (i != scan->line)
                line->at[i] = 0;
            axis--;
        }
        if (axis == 0)
            return true;
    }
}

bool scan_region(struct scan *scan, const double *from, struct error *error) {
    struct line line;
    size_t count = scan->region->range_count;
    plan(scan);
    scan->start_count = 0;
    scan->best = -INFINITY;
    memcpy(line.candidate.inputs, from, sizeof line.candidate.inputs);
    line.positions = scan->line == SIZE_MAX ? 1 : (scan->samples[scan->line] - 1) * SCAN_FINE + 1;
    line.inner = count > 0 && is_inner(scan, count - 1) && scan->line != count - 1
                     ? scan->samples[count - 1]
                     : 1;
    /* The second pass asks again for what the first solved, which costs nothing, knowing the worst
     * of all lines. */
    return all_lines(scan, &line, false, error) &&
           (!scan->full || scan->line == SIZE_MAX || all_lines(scan, &line, true, error));
}
