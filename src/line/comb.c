#include "comb.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const double MOST_SAMPLES = 1e6;

/* 32 samples an edge; as many as the ringing needs, which the march resolves, while that is not
 * too dear. */
static double sample_step(const struct line_response *response, double edge, double longest) {
    const double per_edge = 32, march_steps = 2, dear = 1e4;
    return fmin(edge / per_edge, fmax(march_steps * response_step(response), longest / dear));
}

void comb_free(struct comb *comb) {
    free(comb->phase);
    free(comb->extra);
    free(comb->samples);
    *comb = (struct comb){0};
}

static bool reserve(struct comb *comb, size_t phases, struct error *error) {
    double *phase = realloc(comb->phase, phases * sizeof *phase);
    if (phase != NULL)
        comb->phase = phase;
    bool *extra = realloc(comb->extra, phases * sizeof *extra);
    if (extra != NULL)
        comb->extra = extra;
    double *samples = realloc(comb->samples, comb->teeth * phases * sizeof *samples);
    if (samples != NULL)
        comb->samples = samples;
    if (phase == NULL || extra == NULL || samples == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    return true;
}

typedef double sampled(const struct line_response *response, size_t end, size_t victim, double edge,
                       double time);

static void take_samples(const struct line_response *response, size_t end, size_t victim,
                         double edge, sampled *sample, struct comb *comb) {
    for (size_t k = 0; k < comb->teeth; k++)
        for (size_t p = 0; p < comb->phases; p++)
            comb->samples[k * comb->phases + p] =
                sample(response, end, victim, edge, comb->phase[p] + (double)k * comb->apart);
}

void comb_coarse(const struct line_response *response, size_t end, size_t victim, double edge,
                 struct comb *comb) {
    take_samples(response, end, victim, edge, response_coarse_at, comb);
}

/* A phase worth having, and by how much a sample beside it may fall short, V. */
struct candidate {
    double phase, worth;
};

struct candidates {
    struct candidate *candidate;
    size_t count, room;
    double least; /* V */
};

static void offer(const struct comb *comb, double time, double worth,
                  struct candidates *candidates) {
    double from = comb->phase[0], teeth = floor((time - from) / comb->apart);
    double phase = time - teeth * comb->apart;
    if (time < from || worth < candidates->least || candidates->count == candidates->room ||
        !(phase >= from && phase < from + comb->apart))
        return;
    candidates->candidate[candidates->count++] = (struct candidate){phase, worth};
}

/* The vertex of the parabola through three uniform samples of which the middle one is extreme. */
static void offer_extrema(const struct comb *comb, struct candidates *candidates) {
    double step = comb->apart / (double)comb->phases;
    for (size_t i = 1; i + 1 < comb->teeth * comb->phases; i++) {
        const double *at = comb->samples + i;
        double left = at[0] - at[-1], right = at[1] - at[0];
        if (!(left * right < 0))
            continue;
        double shift = 0.5 * (left + right) / (left - right);
        double worth = fabs((left + right) * shift) / 4;
        offer(comb, comb->phase[0] + ((double)i + shift) * step, worth, candidates);
    }
}

/* Where the step response jumps by J the edge's response changes its slope by J / edge, there and
 * an edge later. */
static void offer_corners(const struct line_response *response, size_t end, size_t victim,
                          double edge, const struct comb *comb, struct candidates *candidates) {
    double step = comb->apart / (double)comb->phases;
    for (size_t i = 0; i < response_corners(response, end, victim); i++) {
        double jump, time = response_corner(response, end, victim, i, &jump);
        double worth = fabs(jump) / edge * step / 2;
        offer(comb, time, worth, candidates);
        offer(comb, time + edge, worth, candidates);
    }
}

static int by_worth(const void *left, const void *right) {
    const struct candidate *a = left, *b = right;
    if (a->worth != b->worth)
        return a->worth > b->worth ? -1 : 1;
    return a->phase < b->phase ? -1 : a->phase > b->phase;
}

static int by_phase(const void *left, const void *right) {
    const struct candidate *a = left, *b = right;
    return a->phase < b->phase ? -1 : a->phase > b->phase;
}

static double largest_sample(const struct comb *comb) {
    double largest = 0;
    for (size_t i = 0; i < comb->teeth * comb->phases; i++)
        largest = fmax(largest, fabs(comb->samples[i]));
    return largest;
}

/* Uniform phases and candidates in order of time; `chosen` is sorted by phase. */
static bool merge(const struct candidate *chosen, size_t count, struct comb *comb,
                  struct error *error) {
    size_t uniform = comb->phases, at = uniform + count;
    if (!reserve(comb, at, error))
        return false;
    for (size_t u = uniform, c = count; at-- > 0;) {
        bool extra = c > 0 && (u == 0 || chosen[c - 1].phase > comb->phase[u - 1]);
        comb->phase[at] = extra ? chosen[--c].phase : comb->phase[--u];
        comb->extra[at] = extra;
    }
    comb->phases = uniform + count;
    return true;
}

/* The worthiest, as many as there are uniform ones, or more where that is cheap. */
static bool add_extra(const struct line_response *response, size_t end, size_t victim, double edge,
                      struct comb *comb, struct error *error) {
    const double negligible = 2e-5, cheap = 2e4;
    size_t corners = response_corners(response, end, victim);
    size_t most = (size_t)fmax((double)comb->phases, cheap / (double)comb->teeth);
    struct candidates candidates = {.room = comb->teeth * comb->phases + 2 * corners,
                                    .least = negligible * largest_sample(comb)};
    candidates.candidate = malloc(candidates.room * sizeof *candidates.candidate);
    if (candidates.candidate == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    if (candidates.least > 0) {
        offer_extrema(comb, &candidates);
        offer_corners(response, end, victim, edge, comb, &candidates);
    }
    qsort(candidates.candidate, candidates.count, sizeof *candidates.candidate, by_worth);
    size_t count = candidates.count < most ? candidates.count : most;
    qsort(candidates.candidate, count, sizeof *candidates.candidate, by_phase);
    bool ok = merge(candidates.candidate, count, comb, error);
    free(candidates.candidate);
    return ok;
}

bool comb_create(const struct line_response *response, size_t end, size_t victim, double edge,
                 double bit_time, double from, double longest, struct comb *comb,
                 struct error *error) {
    double apart = fmin(bit_time, longest); /* further apart edges do not meet */
    double half = fmax(ceil(apart / sample_step(response, edge, longest) / 2), 2);
    double teeth = ceil(longest / apart) + 1;
    if (!(2 * half * teeth <= MOST_SAMPLES))
        return error_set(error, ERROR_INPUT,
                         "a bit time of %g s against ringing of %g s needs %.0f samples, at most "
                         "%.0f are taken",
                         bit_time, longest, 2 * half * teeth, MOST_SAMPLES);
    struct comb made = {.apart = apart, .phases = (size_t)(2 * half), .teeth = (size_t)teeth};
    bool ok = reserve(&made, made.phases, error);
    for (size_t p = 0; ok && p < made.phases; p++) {
        made.phase[p] = from + (double)p * apart / (2 * half);
        made.extra[p] = false;
    }
    if (ok)
        take_samples(response, end, victim, edge, response_at, &made);
    ok = ok && add_extra(response, end, victim, edge, &made, error);
    if (!ok) {
        comb_free(&made);
        return false;
    }
    take_samples(response, end, victim, edge, response_at, &made);
    *comb = made;
    return true;
}

void comb_thin(struct comb *comb) {
    size_t kept = 0, uniform = 0, before = comb->phases;
    for (size_t p = 0; p < before; p++) {
        bool keep = comb->extra[p] || uniform % 2 == 0;
        uniform += !comb->extra[p];
        comb->extra[p] = !keep; /* from here on: to be left out */
        kept += keep;
    }
    for (size_t k = 0, to = 0; k < comb->teeth; k++)
        for (size_t p = 0; p < before; p++)
            if (!comb->extra[p])
                comb->samples[to++] = comb->samples[k * before + p];
    for (size_t p = 0, to = 0; p < before; p++)
        if (!comb->extra[p])
            comb->phase[to++] = comb->phase[p];
    comb->phases = kept;
}
