/* The step response's integral in bands, each a numerical inversion of the Laplace transform:
 * 1. smoothed by an eighth of the shortest edge, over a window in which the line comes to rest
 *    (doubled until it does);
 * 2. what a Gaussian four times narrower adds, as long as that is felt, again and again until it no
 *    longer matters to any ramp.
 * So sharp fronts cost their own short time only, and ringing only its own low frequencies. */
#include "lossy.h"

#include "inversion.h"

#include <math.h>

/* Of the shortest ramp's peak: what may still ring when the first band ends; what sequences of
 * edges need not see; where a further band ends; and where no further one is added. */
static const double SETTLED = 3e-3, LITTLE = 5e-3, FELT = 5e-4, CONVERGED = 1e-3;
/* Of the first two, for long runs. */
static const double LONG = 0.3;
static const double FIRST = 8, NARROWER = 4;
/* Sigmas within a passage that show its ringing. */
static const double RING_SIGMAS = 8;
/* Windows from one late band to the next, and sigmas per window that it follows. */
static const double LATER = 40, LATE_SIGMAS = 20;
/* Twice, for both ends of a ramp, all bands that could follow. */
static const double LEFT = 2.7;
/* V per volt of EMF; below is rounding. */
static const double NOTHING = 1e-9;
static const double USED = 0.85, MOST_FREQUENCIES = 1 << 15;
enum { MOST_DOUBLINGS = 6, SIDES = 2 * LINE_MOST_CONDUCTORS, LATE = SMOOTH_MOST_BANDS };

/* Slowest passage, an upper bound. */
static double passage_of(const struct line_problem *problem) {
    double trace = 0;
    size_t n = problem->count;
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++)
            trace += problem->inductance[i * n + j] * problem->capacitance[j * n + i];
    return sqrt(trace) * problem->length;
}

static double reflection(const struct line_end *end, double impedance) {
    double resistive = isinf(end->resistance)
                           ? 1
                           : fabs(end->resistance - impedance) / (end->resistance + impedance);
    return end->capacitance > 0 ? fmax(resistive, 0.7) : resistive;
}

/* Passages until echoes between the resistances have died; a first guess. */
static double passages_to_rest(const struct line_problem *problem) {
    double most = 0;
    for (size_t i = 0; i < problem->count; i++) {
        size_t own = i * problem->count + i;
        double impedance = sqrt(problem->inductance[own] / problem->capacitance[own]);
        double both =
            reflection(&problem->near[i], impedance) * reflection(&problem->far[i], impedance);
        most = fmax(most, both < 0.97 ? 2 * log(SETTLED) / log(fmax(both, 1e-3)) : 400);
    }
    return most + 6;
}

/* Capacitances through the resistances of their conductor and through its copper. */
static double charging_time(const struct line_problem *problem) {
    double slowest = 0;
    for (size_t i = 0; i < problem->count; i++) {
        const struct line_end *near = &problem->near[i], *far = &problem->far[i];
        double copper = problem->dc_resistance[i * problem->count + i] * problem->length;
        double own = problem->capacitance[i * problem->count + i] * problem->length;
        double conductance = 1 / near->resistance + 1 / far->resistance;
        double resistance = copper + (conductance > 0 ? 1 / conductance : 0);
        slowest = fmax(slowest, resistance * (own + near->capacitance + far->capacitance));
    }
    return slowest;
}

/* What the shortest ramp shows of a broad band at `time`, V; final value aside. */
static double ramp_of_band(const struct smooth_band *band, double edge, double time) {
    return (smooth_band_at(band, time) - smooth_band_at(band, time - edge)) / edge;
}

static double peak_of(const struct smooth *smooth, double edge) {
    const struct smooth_band *band = &smooth->band[0];
    double peak = 0;
    for (double time = 0; time < smooth_band_end(band); time += band->step)
        peak = fmax(peak, fabs(ramp_of_band(band, edge, time) + (time < edge ? 0 : smooth->final)));
    return peak;
}

/* From when on the first band is no more than the late one, which sees the ringing averaged. */
static double ringing_time(const struct smooth *smooth, double edge, double least) {
    double time = smooth_band_end(&smooth->band[0]) - smooth->band[0].step;
    while (time > edge && fabs(ramp_of_band(&smooth->band[0], edge, time) -
                               ramp_of_band(&smooth->late[0], edge, time)) <= least + NOTHING)
        time -= smooth->band[0].step;
    return time;
}

/* From when on a ramp shows little, as far as the late bands tell. */
static double resting_time(const struct smooth *smooth, double edge, double least) {
    for (size_t k = SMOOTH_LATE_BANDS; k-- > 0;) {
        const struct smooth_band *band = &smooth->late[k];
        double start =
            k > 0 ? smooth_band_end(&smooth->late[k - 1]) : smooth_band_end(&smooth->band[0]);
        for (double time = smooth_band_end(band) - band->step; time > start; time -= band->step)
            if (fabs(ramp_of_band(band, fmax(edge, band->step), time)) > least + NOTHING)
                return time;
    }
    return 0;
}

struct builder {
    struct inversion inversion;
    struct lossy *lossy;
    double edge, strict;
    double peak[SIDES]; /* of the shortest ramp */
};

static struct smooth *end_of(struct builder *builder, size_t side, size_t i) {
    return &builder->lossy->end[side][i];
}

static bool add_bands(struct builder *builder, double wider, double sigma, double period,
                      size_t place, struct arena *arena, struct error *error) {
    struct smooth_band bands[SIDES];
    if (!inversion_band(&builder->inversion, wider, sigma, period, arena, bands, error))
        return false;
    for (size_t side = 0; side < 2; side++)
        for (size_t i = 0; i < builder->inversion.count; i++) {
            struct smooth *end = end_of(builder, side, i);
            const struct smooth_band *band = &bands[side * LINE_MOST_CONDUCTORS + i];
            if (place >= LATE) {
                end->late[place - LATE] = *band;
            } else {
                end->band[place] = *band;
                end->bands = place + 1;
            }
        }
    return true;
}

/* The first band, `window` long, and the late ones. */
static bool add_broad_bands(struct builder *builder, double window, struct arena *arena,
                            struct error *error) {
    if (!add_bands(builder, 0, builder->edge / FIRST, window / USED, 0, arena, error))
        return false;
    for (size_t k = 0; k < SMOOTH_LATE_BANDS; k++, window *= LATER)
        if (!add_bands(builder, 0, window / LATE_SIGMAS, LATER * window / USED, LATE + k, arena,
                       error))
            return false;
    return true;
}

/* Finds out how long everything rings; the longest of it. */
static double look_for_rest(struct builder *builder) {
    double ringing = 0;
    for (size_t side = 0; side < 2; side++)
        for (size_t i = 0; i < builder->inversion.count; i++) {
            struct smooth *end = end_of(builder, side, i);
            end->final = builder->inversion.final[side][i];
            end->creep = builder->inversion.creep[side][i];
            double peak = peak_of(end, builder->edge);
            builder->peak[side * LINE_MOST_CONDUCTORS + i] = peak;
            ringing =
                fmax(ringing, ringing_time(end, builder->edge, SETTLED * builder->strict * peak));
        }
    return ringing;
}

static bool add_settled_bands(struct builder *builder, double window, struct arena *arena,
                              struct error *error) {
    double sigma = builder->edge / FIRST;
    double most = MOST_FREQUENCIES / inversion_frequencies(sigma, window) * window;
    window = fmin(window, most);
    for (size_t doubling = 0;; doubling++, window *= 2) {
        struct arena_mark mark = arena_mark(arena);
        if (!add_broad_bands(builder, window, arena, error))
            return false;
        if (look_for_rest(builder) < 0.9 * window || doubling == MOST_DOUBLINGS ||
            2 * window > most)
            return true;
        arena_rewind(arena, mark);
    }
}

/* The late bands see the ringing averaged: what they differ by in the mean from the first band
 * before its end is what is not settled, and what two windows make different; slow ramps alone see
 * it, and a part of it only. */
static double disagreement(const struct smooth *smooth) {
    enum { PLACES = 16 };
    double sum = 0, end = smooth_band_end(&smooth->band[0]);
    for (size_t k = 0; k < PLACES; k++) {
        double time = end * (0.7 + 0.29 * (double)k / (PLACES - 1));
        sum += smooth_band_at(&smooth->band[0], time) - smooth_band_at(&smooth->late[0], time);
    }
    return fabs(sum) / PLACES / 3;
}

static void note_errors(struct builder *builder) {
    struct lossy *lossy = builder->lossy;
    double edge = builder->edge;
    lossy->window = smooth_band_end(&end_of(builder, 0, 0)->band[0]);
    for (size_t side = 0; side < 2; side++)
        for (size_t i = 0; i < builder->inversion.count; i++) {
            struct smooth *end = end_of(builder, side, i);
            double peak = builder->peak[side * LINE_MOST_CONDUCTORS + i];
            double little = LITTLE * builder->strict * peak;
            double resting = resting_time(end, edge, little);
            double last = smooth_band_end(&end->late[SMOOTH_LATE_BANDS - 1]);
            end->missing = LEFT * FELT * peak * edge + disagreement(end);
            lossy->late[side][i] = (resting < 0.9 * last ? little : peak) * edge;
            lossy->range[side][i] = end->band[0].largest;
            lossy->window = fmax(lossy->window, resting);
        }
}

/* How long the next band will be felt: after the first by the curvature, which smoothing takes to
 * be sigma^2/2 of it, later by what the last one added. */
static double felt_until(const struct smooth *smooth, double edge, double least) {
    const struct smooth_band *band = &smooth->band[smooth->bands - 1];
    size_t last = band->lead + band->samples - 1;
    double scale = 0.5 * band->sigma * band->sigma / (band->step * band->step);
    for (size_t i = last - 1; i > 0; i--) {
        double added = smooth->bands > 1
                           ? band->rest[i] / NARROWER
                           : scale * (band->rest[i - 1] - 2 * band->rest[i] + band->rest[i + 1]);
        if (fabs(added) > least * edge)
            return ((double)i - (double)band->lead) * band->step;
    }
    return 0;
}

/* Whether a further band is wanted, and how long it will be felt. */
static bool next_band(struct builder *builder, double *felt) {
    double longest = 0;
    bool wanted = false;
    for (size_t side = 0; side < 2; side++)
        for (size_t i = 0; i < builder->inversion.count; i++) {
            const struct smooth *end = end_of(builder, side, i);
            double peak = builder->peak[side * LINE_MOST_CONDUCTORS + i] + NOTHING / FELT;
            const struct smooth_band *band = &end->band[end->bands - 1];
            if (end->bands == 1 || band->largest / NARROWER > CONVERGED * peak * builder->edge)
                wanted = true;
            longest = fmax(longest, felt_until(end, builder->edge, FELT * peak));
        }
    *felt = longest;
    return wanted;
}

/* Adds band k, `felt` seconds long, or longer while it has not died at its end; only the next
 * broader one was known when that was chosen.  *done: no more can be afforded. */
static bool add_narrower_band(struct builder *builder, size_t k, double wider, double felt,
                              struct arena *arena, bool *done, struct error *error) {
    double sigma = wider / NARROWER, lead = 2 * INVERSION_LEAD * wider;
    for (;; felt *= 2) {
        struct arena_mark mark = arena_mark(arena);
        double period = (felt + lead) / USED, lasting;
        *done = inversion_frequencies(sigma, period) > MOST_FREQUENCIES;
        if (*done)
            return true;
        if (!add_bands(builder, wider, sigma, period, k, arena, error))
            return false;
        next_band(builder, &lasting);
        if (lasting < 0.9 * felt || inversion_frequencies(sigma, 2 * period) > MOST_FREQUENCIES)
            return true;
        arena_rewind(arena, mark);
    }
}

/* Ringing of a line that is short against the edge hides below a broad Gaussian. */
struct ring {
    double passage, time; /* s, about */
};

static bool add_narrower_bands(struct builder *builder, const struct ring *ring,
                               struct arena *arena, struct error *error) {
    double wider = builder->edge / FIRST;
    for (size_t k = 1; k < SMOOTH_MOST_BANDS; k++, wider /= NARROWER) {
        double felt;
        bool done = false, wanted = next_band(builder, &felt);
        if (wider > ring->passage / RING_SIGMAS)
            felt = fmax(felt, ring->time);
        else if (!wanted)
            return true;
        if (!add_narrower_band(builder, k, wider, felt + wider, arena, &done, error))
            return false;
        if (done)
            return true;
    }
    return true;
}

bool lossy_build(const struct line_problem *problem, double shortest_edge, bool long_run,
                 struct arena *arena, struct lossy *lossy, struct error *error) {
    double passage = passage_of(problem), charging = charging_time(problem);
    struct builder builder = {.inversion = inversion_of(problem, passage + charging),
                              .lossy = lossy,
                              .edge = shortest_edge,
                              .strict = long_run ? LONG : 1};
    struct ring ring = {passage / sqrt((double)problem->count),
                        passages_to_rest(problem) * passage};
    double window = ring.time + 6 * shortest_edge;
    window += fmin(4 * charging, 10 * window); /* longer ones are for the late bands */
    if (!add_settled_bands(&builder, window, arena, error))
        return false;
    note_errors(&builder);
    return add_narrower_bands(&builder, &ring, arena, error);
}
