/* Peak search.  With R the integral of the step response S, the response to a ramp of length e is
 * v(t) = (R(t) - R(t - e)) / e and its slope (S(t) - S(t - e)) / e.
 *   1. v on the grid, 0 .. end, then e .. e + end;
 *   2. cells that by their own and their neighbours' variation could hold more than the best so far
 *      are cut at fronts, at fronts + e and at the sample of t - e; inside a piece v is smooth and
 *      an extremum is a zero of its slope. */
#include "curve.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST_CUTS = 24, BLOCK = 256 };

bool curves_build(const struct march *march, const struct rest *rest, const struct fronts *fronts,
                  bool near, struct arena *arena, struct curve *curves, struct error *error) {
    size_t samples = march->samples, count = march->count, end = near ? 0 : 1, held = 0;
    size_t window = march->window < samples ? march->window : samples - 1;
    size_t *first = arena_new(arena, samples + 1, size_t, error);
    struct curve_front *front = arena_new(arena, fronts->count * count, struct curve_front, error);
    size_t *cell = arena_new(arena, fronts->count, size_t, error);
    if (first == NULL || front == NULL || cell == NULL)
        return false;
    for (size_t f = 0; f < fronts->count; f++) {
        /* On a sample means: the sample has it, so it lies at the end of the cell before. */
        double position = fronts->front[f].time / march->step;
        double before = ceil(position - 1e-6) - 1;
        cell[f] = fronts->front[f].near != near || before < 0 || before + 1 >= (double)samples
                      ? SIZE_MAX
                      : (size_t)before;
        if (cell[f] != SIZE_MAX)
            first[cell[f] + 1]++;
    }
    for (size_t i = 0; i < samples; i++)
        first[i + 1] += first[i];
    held = first[samples];
    for (size_t f = fronts->count; f-- > 0;) {
        if (cell[f] == SIZE_MAX)
            continue;
        size_t slot = --first[cell[f] + 1];
        for (size_t k = 0; k < count; k++) {
            struct curve_front *to = &front[k * held + slot];
            to->time = fronts->front[f].time;
            for (size_t p = 0; p < fronts->orders; p++)
                to->jump[p] = fronts->front[f].voltage[p * count + k];
        }
    }
    /* The countdown left each start one cell late. */
    memmove(first, first + 1, samples * sizeof *first);
    first[samples] = held;
    for (size_t k = 0; k < count; k++)
        curves[k] =
            (struct curve){.step = march->step,
                           .samples = samples,
                           .value = march->value[end] + k * march->stride,
                           .integral = march->integral[end] + k * samples,
                           .final = rest[k].final,
                           .settled = rest_settled(march->integral[end] + k * samples, samples,
                                                   window, march->step, rest[k].final),
                           .first = first,
                           .front = front + k * held,
                           .fronts = held};
    return true;
}

static void add_front(const struct curve_front *front, double t, double sign, double *value,
                      double *integral) {
    const double *j = front->jump;
    *value += sign * (j[0] + t * (j[1] + t / 2 * (j[2] + t / 3 * j[3])));
    *integral += sign * t * (j[0] + t / 2 * (j[1] + t / 3 * (j[2] + t / 4 * j[3])));
}

static void curve_at(const struct curve *curve, double time, double *value, double *integral) {
    double h = curve->step, position = time / h;
    size_t last = curve->samples - 1;
    *value = *integral = 0;
    if (time < 0)
        return;
    if (position >= (double)last) {
        *value = curve->final;
        *integral = curve->settled + curve->final * time;
        return;
    }
    size_t cell = (size_t)position;
    double u = position - (double)cell, end = ((double)cell + 1) * h;
    double s0 = curve->value[cell], s1 = curve->value[cell + 1];
    double r0 = curve->integral[cell], r1 = curve->integral[cell + 1];
    for (size_t f = curve->first[cell]; f < curve->first[cell + 1]; f++)
        add_front(&curve->front[f], end - curve->front[f].time, -1, &s1, &r1);
    double rise = r1 - r0, bend = h * (s0 + s1) - 2 * rise;
    *integral = r0 + u * (h * s0 + u * (3 * rise - h * (2 * s0 + s1) + u * bend));
    *value = s0 + u * (2 * (3 * rise / h - 2 * s0 - s1) + u * 3 * bend / h);
    for (size_t f = curve->first[cell]; f < curve->first[cell + 1]; f++)
        if (time >= curve->front[f].time)
            add_front(&curve->front[f], time - curve->front[f].time, 1, value, integral);
}

struct response {
    double value, slope;
};

static struct response response_at(const struct curve *curve, double edge, double time) {
    double s1, r1, s0, r0;
    curve_at(curve, time, &s1, &r1);
    curve_at(curve, time - edge, &s0, &r0);
    return (struct response){(r1 - r0) / edge, (s1 - s0) / edge};
}

double curve_response(const struct curve *curve, double edge, double time) {
    return response_at(curve, edge, time).value;
}

static void offer(struct line_peak *peak, double value, double time) {
    if (fabs(value) > peak->highest)
        *peak = (struct line_peak){.highest = fabs(value), .time = time};
}

/* A zero of the slope between two times where its signs differ: regula falsi, the stale end halved
 * (Illinois). */
static void offer_extremum(const struct curve *curve, double edge, double low, double high,
                           double slope_low, double slope_high, struct line_peak *peak) {
    double width = high - low;
    for (int round = 0; round < 12 && high - low > 1e-7 * width; round++) {
        double middle = low + (high - low) * slope_low / (slope_low - slope_high);
        struct response at = response_at(curve, edge, middle);
        offer(peak, at.value, middle);
        if (fabs(at.slope) * curve->step < 1e-9 * peak->highest)
            return;
        if ((at.slope > 0) == (slope_low > 0)) {
            low = middle;
            slope_low = at.slope;
            slope_high /= 2;
        } else {
            high = middle;
            slope_high = at.slope;
            slope_low /= 2;
        }
    }
}

static size_t add_cut(double *cut, size_t cuts, double time, double low, double high) {
    if (!(time > low && time < high) || cuts >= MOST_CUTS)
        return cuts;
    size_t at = cuts;
    while (at > 0 && cut[at - 1] > time) {
        cut[at] = cut[at - 1];
        at--;
    }
    cut[at] = time;
    return cuts + 1;
}

static size_t add_front_cuts(const struct curve *curve, double from, double shift, double low,
                             double high, double *cut, size_t cuts) {
    double position = floor(from / curve->step);
    for (int c = 0; c < 2; c++) {
        double cell = position + c;
        if (cell < 0 || cell + 1 >= (double)curve->samples)
            continue;
        size_t i = (size_t)cell;
        for (size_t f = curve->first[i]; f < curve->first[i + 1]; f++)
            cuts = add_cut(cut, cuts, curve->front[f].time + shift, low, high);
    }
    return cuts;
}

static void search_cell(const struct curve *curve, double edge, double low, double high,
                        struct line_peak *peak) {
    double cut[MOST_CUTS];
    double h = curve->step, before = ceil((low - edge) / h) * h + edge;
    size_t cuts = add_cut(cut, 0, before, low, high);
    cuts = add_front_cuts(curve, low, 0, low, high, cut, cuts);
    cuts = add_front_cuts(curve, low - edge, edge, low, high, cut, cuts);
    for (size_t k = 0; k <= cuts; k++) {
        double from = k == 0 ? low : cut[k - 1], to = k == cuts ? high : cut[k];
        double inside = 1e-9 * h; /* one-sided slopes */
        if (to - from <= 4 * inside)
            continue;
        struct response a = response_at(curve, edge, from + inside);
        struct response b = response_at(curve, edge, to - inside);
        offer(peak, a.value, from);
        offer(peak, b.value, to);
        if (a.slope * b.slope < 0)
            offer_extremum(curve, edge, from + inside, to - inside, a.slope, b.slope, peak);
    }
}

/* v at `count` grid times: t_i (falling = false) or t_i + e (falling = true), fronts inside cells
 * not looked at.  (R(t_i + e) - R(t_i)) and (R(t_i) - R(t_i - e)) share the shifted reading. */
static void grid_values(const struct curve *curve, double edge, bool falling, size_t start,
                        size_t count, double *values) {
    double h = curve->step, shift = (falling ? edge : -edge) / h, whole = floor(shift);
    double u = shift - whole, first = (double)start + whole;
    double w0 = (1 + 2 * u) * (1 - u) * (1 - u), w1 = u * u * (3 - 2 * u);
    double d0 = h * u * (1 - u) * (1 - u), d1 = -h * u * u * (1 - u);
    double sign = falling ? 1 / edge : -1 / edge;
    const double *here = curve->integral + start;
    size_t before = first < 0 ? (size_t)fmin(-first, (double)count) : 0;
    size_t inside = (size_t)fmin(fmax((double)(curve->samples - 1) - first, 0), (double)count);
    for (size_t k = 0; k < before; k++)
        values[k] = -sign * here[k];
    if (before < inside) {
        size_t at = (size_t)(first + (double)before);
        const double *integral = curve->integral + at, *value = curve->value + at;
        for (size_t k = 0; k < inside - before; k++)
            values[before + k] = sign * (w0 * integral[k] + d0 * value[k] + w1 * integral[k + 1] +
                                         d1 * value[k + 1] - here[before + k]);
    }
    for (size_t k = inside > before ? inside : before; k < count; k++)
        values[k] = sign * (curve->settled + curve->final * h * (first + (double)k + u) - here[k]);
}

/* Blocks of grid times, first t_i, then t_i + e as far as these lie beyond the last sample.  They
 * overlap, so that a cell is judged with both neighbours. */
struct block {
    bool falling;
    size_t start, count;
};

static struct block first_block(const struct curve *curve, double edge, bool falling) {
    struct block block = {.falling = falling};
    if (falling) { /* times up to the last sample were visited without */
        double skip = floor((double)(curve->samples - 1) - edge / curve->step);
        block.start = skip > 0 ? (size_t)skip : 0;
    }
    size_t left = curve->samples - block.start;
    block.count = left < BLOCK ? left : BLOCK;
    return block;
}

static bool next_block(const struct curve *curve, double edge, struct block *block) {
    if (block->start + block->count == curve->samples) {
        if (block->falling)
            return false;
        *block = first_block(curve, edge, true);
        return block->count > 1;
    }
    block->start += block->count - 3;
    size_t left = curve->samples - block->start;
    block->count = left < BLOCK ? left : BLOCK;
    return true;
}

/* The largest magnitude and the largest step; lane by lane, so that none waits for the other. */
static void largest_of(const double *values, size_t count, double *highest, double *steepest) {
    enum { LANES = 8 };
    double high[LANES] = {0}, steep[LANES] = {0};
    size_t k = 0;
    for (; k + LANES < count; k += LANES)
        for (size_t lane = 0; lane < LANES; lane++) {
            double size = fabs(values[k + lane]);
            double step = fabs(values[k + lane + 1] - values[k + lane]);
            high[lane] = size > high[lane] ? size : high[lane];
            steep[lane] = step > steep[lane] ? step : steep[lane];
        }
    for (; k < count; k++) {
        double size = fabs(values[k]), step = k + 1 < count ? fabs(values[k + 1] - values[k]) : 0;
        high[0] = size > high[0] ? size : high[0];
        steep[0] = step > steep[0] ? step : steep[0];
    }
    for (size_t lane = 0; lane < LANES; lane++) {
        *highest = high[lane] > *highest ? high[lane] : *highest;
        *steepest = steep[lane] > *steepest ? steep[lane] : *steepest;
    }
}

struct search {
    const struct curve *curve;
    double edge, from;
    struct line_peak peak;
};

/* The most that a cell of the block could hold: its largest value and 5/4 of its largest step. */
static double look_at_block(struct search *search, const struct block *block) {
    const struct curve *curve = search->curve;
    double values[BLOCK], highest = 0, steepest = 0, offset = block->falling ? search->edge : 0;
    double skip = ceil((search->from - offset) / curve->step) - (double)block->start;
    if (!(skip < (double)block->count))
        return 0;
    /* The cell that `from` lies in counts. */
    size_t first = skip > 1 ? (size_t)skip - 1 : 0;
    grid_values(curve, search->edge, block->falling, block->start, block->count, values);
    largest_of(values + first, block->count - first, &highest, &steepest);
    if (highest > search->peak.highest) {
        size_t best = first;
        while (fabs(values[best]) < highest)
            best++;
        double time = fmax((double)(block->start + best) * curve->step + offset, search->from);
        offer(&search->peak, response_at(curve, search->edge, time).value, time);
    }
    return highest + 1.25 * steepest;
}

static void search_block(struct search *search, const struct block *block) {
    const struct curve *curve = search->curve;
    double values[BLOCK], h = curve->step, offset = block->falling ? search->edge : 0;
    size_t count = block->count;
    grid_values(curve, search->edge, block->falling, block->start, count, values);
    for (size_t k = 0; k + 1 < count; k++) {
        double here = fabs(values[k + 1] - values[k]);
        double left = k > 0 ? fabs(values[k] - values[k - 1]) : here;
        double right = k + 2 < count ? fabs(values[k + 2] - values[k + 1]) : here;
        /* fmax is a call. */
        double first = fabs(values[k]), second = fabs(values[k + 1]);
        double highest = first > second ? first : second, beside = left > right ? left : right;
        if (highest + (here < beside ? here : beside) + beside / 4 < search->peak.highest)
            continue;
        double low = (double)(block->start + k) * h + offset;
        if (low + h > search->from)
            search_cell(curve, search->edge, fmax(low, search->from), low + h, &search->peak);
    }
}

struct line_peak curve_peak(const struct curve *curve, double edge, double from) {
    enum { BLOCKS = 1024 }; /* what lies beyond them is searched without having been looked at */
    struct search search = {.curve = curve, .edge = edge, .from = from, .peak = {.time = from}};
    double room[BLOCKS];
    size_t blocks = 0;
    offer(&search.peak, response_at(curve, edge, from).value, from);
    if (curve->samples < 2)
        return search.peak;
    struct block block = first_block(curve, edge, false);
    do {
        if (blocks == BLOCKS)
            break;
        room[blocks++] = look_at_block(&search, &block);
    } while (next_block(curve, edge, &block));
    size_t k = 0;
    block = first_block(curve, edge, false);
    do {
        if (k >= blocks || room[k] >= search.peak.highest)
            search_block(&search, &block);
        k++;
    } while (next_block(curve, edge, &block));
    return search.peak;
}
