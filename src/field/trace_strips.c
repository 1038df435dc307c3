/* Traces over a plane: surfaces divided into strips that are joined at both ends, so that all of a
 * trace's strips have one flux, and their currents add up to the trace's. */
#include "groundrules/inductance.h"

#include "dense.h"
#include "strip.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Strips across a thin sheet, across one face of thick copper, and up one side, which is small as a
 * rule; coarse are half. */
enum { SHEET = 16, FACE = 12, LOW_SIDE = 4, MOST_STRIPS = 4 * FACE };

/* Edge k of n between 0 and 1, crowded at both ends: current crowds there as the -1/2 power of the
 * distance at a sheet's edge and the -1/3 power at a corner; the fourth power of k makes the error
 * fall with the third power of n. */
static double graded(size_t k, size_t n) {
    double t = 2.0 * (double)k / (double)n;
    return t <= 1.0 ? 0.5 * pow(t, 4.0) : 1.0 - 0.5 * pow(2.0 - t, 4.0);
}

static size_t divide(struct strip *strips, bool upright, double from, double to, double at,
                     size_t count) {
    for (size_t k = 0; k < count; k++)
        strips[k] = (struct strip){upright, from + (to - from) * graded(k, count),
                                   from + (to - from) * graded(k + 1, count), at};
    return count;
}

static size_t strips_of(const struct inductance_trace *trace, size_t coarseness,
                        struct strip *strips) {
    double left = trace->centre - trace->width / 2.0, right = trace->centre + trace->width / 2.0;
    double foot = trace->height, top = foot + trace->thickness;
    if (trace->thickness == 0.0)
        return divide(strips, false, left, right, foot, SHEET / coarseness);
    size_t side = (trace->thickness > 0.3 * trace->width ? FACE : LOW_SIDE) / coarseness;
    size_t count = divide(strips, false, left, right, foot, FACE / coarseness);
    count += divide(strips + count, false, left, right, top, FACE / coarseness);
    count += divide(strips + count, true, foot, top, left, side);
    return count + divide(strips + count, true, foot, top, right, side);
}

static bool same_section(const struct inductance_trace *a, const struct inductance_trace *b) {
    return a->width == b->width && a->thickness == b->thickness && a->height == b->height;
}

struct division {
    size_t count, strips, stride;
    size_t first[INDUCTANCE_MOST_TRACES + 1];
    struct strip *strip;
    double *a; /* strips * stride; the traces' incidence behind the square */
};

static void fill(struct division *division, const struct inductance_traces *traces) {
    for (size_t t = 0; t < division->count; t++) {
        size_t start = division->first[t], end = division->first[t + 1], twin = t;
        for (size_t other = 0; other < t && twin == t; other++)
            if (same_section(&traces->traces[t], &traces->traces[other]))
                twin = other;
        for (size_t i = start; i < end; i++) {
            double *row = division->a + i * division->stride;
            const struct strip *strip = &division->strip[i];
            row[division->strips + t] = 1.0;
            if (twin != t) /* the same numbers, wherever it stands */
                memcpy(row + i,
                       division->a + (i - start + division->first[twin]) * division->stride +
                           (i - start + division->first[twin]),
                       (end - i) * sizeof *row);
            else
                for (size_t j = i; j < end; j++)
                    row[j] = strip_coupling(strip, &division->strip[j], traces->length);
            for (size_t j = end; j < division->strips; j++)
                row[j] = strip_coupling(strip, &division->strip[j], traces->length);
        }
    }
}

/* Inverts the small symmetric matrix Y'Y of what is behind the eliminated square. */
static bool invert(const struct division *division, double *inductance, struct error *error) {
    size_t n = division->count, stride = 2 * n;
    double small[2 * INDUCTANCE_MOST_TRACES * INDUCTANCE_MOST_TRACES] = {0};
    for (size_t i = 0; i < n; i++) {
        for (size_t j = i; j < n; j++)
            for (size_t k = 0; k < division->strips; k++)
                small[i * stride + j] += division->a[k * division->stride + division->strips + i] *
                                         division->a[k * division->stride + division->strips + j];
        small[i * stride + n + i] = 1.0;
    }
    if (!dense_eliminate(n, n, stride, small, NULL))
        return error_set(error, ERROR_SINGULAR, "the traces' currents have no solution");
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            inductance[i * n + j] = 0.0;
            for (size_t k = 0; k < n; k++)
                inductance[i * n + j] += INDUCTANCE_MU_0 / (2.0 * M_PI) *
                                         small[k * stride + n + i] * small[k * stride + n + j];
        }
    return true;
}

static bool solve(const struct inductance_traces *traces, size_t coarseness, double *inductance,
                  struct error *error) {
    struct strip strip[INDUCTANCE_MOST_TRACES * MOST_STRIPS];
    struct division division = {.count = traces->count, .strip = strip};
    for (size_t t = 0; t < traces->count; t++) {
        division.first[t] = division.strips;
        division.strips += strips_of(&traces->traces[t], coarseness, strip + division.strips);
    }
    division.first[traces->count] = division.strips;
    division.stride = division.strips + division.count;
    division.a = calloc(division.strips * division.stride, sizeof *division.a);
    if (division.a == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    fill(&division, traces);
    bool ok = dense_eliminate(division.strips, division.count, division.stride, division.a, NULL);
    if (!ok)
        error_set(error, ERROR_SINGULAR, "the traces' currents have no solution");
    ok = ok && invert(&division, inductance, error);
    free(division.a);
    return ok;
}

static bool check(const struct inductance_traces *traces, struct error *error) {
    if (traces->count == 0 || traces->count > INDUCTANCE_MOST_TRACES)
        return error_set(error, ERROR_INPUT, "%zu traces, must be 1 to %d", traces->count,
                         INDUCTANCE_MOST_TRACES);
    if (!(traces->length > 0.0))
        return error_set(error, ERROR_INPUT, "length is %g m, must be above 0", traces->length);
    for (size_t i = 0; i < traces->count; i++) {
        const struct inductance_trace *a = &traces->traces[i];
        if (!(a->width > 0.0 && a->thickness >= 0.0 && a->height > 0.0))
            return error_set(error, ERROR_INPUT,
                             "traces[%zu]: width and height must be above 0, thickness not below",
                             i);
        for (size_t j = 0; j < i; j++) {
            const struct inductance_trace *b = &traces->traces[j];
            if (!(fabs(a->centre - b->centre) > (a->width + b->width) / 2.0))
                return error_set(error, ERROR_INPUT, "traces %zu and %zu touch or overlap", j, i);
        }
    }
    return true;
}

bool inductance_traces_solve(const struct inductance_traces *traces, double *inductance,
                             double *estimate, struct error *error) {
    double coarse[INDUCTANCE_MOST_TRACES * INDUCTANCE_MOST_TRACES];
    double fine[INDUCTANCE_MOST_TRACES * INDUCTANCE_MOST_TRACES];
    if (!check(traces, error) || !solve(traces, 2, coarse, error) || !solve(traces, 1, fine, error))
        return false;
    for (size_t i = 0; i < traces->count * traces->count; i++) {
        inductance[i] = fine[i];
        estimate[i] = fabs(coarse[i] - fine[i]) / 2.0 + 1e-6 * fabs(fine[i]);
    }
    return true;
}
