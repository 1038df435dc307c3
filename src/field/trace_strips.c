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

/* Numbers of strips: foot, top, left side, right side; a sheet has a foot only. */
struct numbers {
    size_t face, side;
};

static struct numbers numbers_of(const struct inductance_trace *trace, size_t coarseness) {
    if (trace->thickness == 0.0)
        return (struct numbers){SHEET / coarseness, 0};
    bool upright = trace->thickness > 0.3 * trace->width;
    return (struct numbers){FACE / coarseness, (upright ? FACE : LOW_SIDE) / coarseness};
}

static size_t strips_of(const struct inductance_trace *trace, size_t coarseness,
                        struct strip *strips) {
    struct numbers n = numbers_of(trace, coarseness);
    double left = trace->centre - trace->width / 2.0, right = trace->centre + trace->width / 2.0;
    double foot = trace->height, top = foot + trace->thickness;
    size_t count = divide(strips, false, left, right, foot, n.face);
    if (n.side == 0)
        return count;
    count += divide(strips + count, false, left, right, top, n.face);
    count += divide(strips + count, true, foot, top, left, n.side);
    return count + divide(strips + count, true, foot, top, right, n.side);
}

/* The strip of the same trace that is the mirror image of its i-th. */
static size_t mirror_of(const struct inductance_trace *trace, size_t coarseness, size_t i) {
    struct numbers n = numbers_of(trace, coarseness);
    size_t faces = n.side == 0 ? n.face : 2 * n.face;
    if (i < faces)
        return i / n.face * n.face + (n.face - 1 - i % n.face);
    return i - faces < n.side ? i + n.side : i - n.side;
}

static bool same_section(const struct inductance_trace *a, const struct inductance_trace *b) {
    return a->width == b->width && a->thickness == b->thickness && a->height == b->height;
}

struct division {
    const struct inductance_traces *traces;
    size_t coarseness, strips, stride;
    size_t first[INDUCTANCE_MOST_TRACES + 1];
    struct strip *strip;
    double *a; /* strips * stride; the traces' incidence behind the square */
};

/* Traces t and u of one section are mirror images of each other: strips i of t and j of u couple as
 * the mirror of j in t and the mirror of i in u.  NULL when that pair is not the earlier one. */
static const double *mirrored(const struct division *division, size_t t, size_t i, size_t u,
                              size_t j) {
    const struct inductance_trace *trace = &division->traces->traces[t];
    size_t row = mirror_of(trace, division->coarseness, j);
    size_t column = mirror_of(trace, division->coarseness, i);
    if (t == u && row > column) { /* only the upper triangle is there */
        size_t swap = row;
        row = column;
        column = swap;
    }
    if (row >= i)
        return NULL;
    return division->a + (division->first[t] + row) * division->stride + division->first[u] +
           column;
}

static void couple(struct division *division, size_t t, size_t u) {
    const struct inductance_traces *traces = division->traces;
    bool alike = same_section(&traces->traces[t], &traces->traces[u]);
    size_t rows = division->first[t + 1] - division->first[t];
    size_t columns = division->first[u + 1] - division->first[u];
    for (size_t i = 0; i < rows; i++)
        for (size_t j = t == u ? i : 0; j < columns; j++) {
            size_t row = division->first[t] + i, column = division->first[u] + j;
            const double *known = alike ? mirrored(division, t, i, u, j) : NULL;
            division->a[row * division->stride + column] =
                known != NULL ? *known
                              : strip_coupling(&division->strip[row], &division->strip[column],
                                               traces->length);
        }
}

/* A trace's strips among themselves, the same numbers wherever it stands. */
static void copy_square(struct division *division, size_t from, size_t to) {
    size_t count = division->first[to + 1] - division->first[to];
    for (size_t i = 0; i < count; i++)
        memcpy(division->a + (division->first[to] + i) * division->stride + division->first[to] + i,
               division->a + (division->first[from] + i) * division->stride +
                   division->first[from] + i,
               (count - i) * sizeof(double));
}

static void fill(struct division *division) {
    const struct inductance_traces *traces = division->traces;
    for (size_t t = 0; t < traces->count; t++) {
        size_t twin = 0;
        while (!same_section(&traces->traces[t], &traces->traces[twin]))
            twin++;
        if (twin < t)
            copy_square(division, twin, t);
        else
            couple(division, t, t);
        for (size_t u = t + 1; u < traces->count; u++)
            couple(division, t, u);
        for (size_t i = division->first[t]; i < division->first[t + 1]; i++)
            division->a[i * division->stride + division->strips + t] = 1.0;
    }
}

/* Inverts the small symmetric matrix Y'Y of what is behind the eliminated square. */
static bool invert(const struct division *division, double *inductance, struct error *error) {
    size_t n = division->traces->count, stride = 2 * n;
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
    struct division division = {.traces = traces, .coarseness = coarseness, .strip = strip};
    for (size_t t = 0; t < traces->count; t++) {
        division.first[t] = division.strips;
        division.strips += strips_of(&traces->traces[t], coarseness, strip + division.strips);
    }
    division.first[traces->count] = division.strips;
    division.stride = division.strips + traces->count;
    division.a = calloc(division.strips * division.stride, sizeof *division.a);
    if (division.a == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    fill(&division);
    bool ok = dense_eliminate(division.strips, traces->count, division.stride, division.a, NULL);
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
        if (!(fmax(a->width, a->thickness) <= 4.0 * traces->length))
            return error_set(error, ERROR_INPUT,
                             "traces[%zu]: no trace but a plate, more than four times as wide or "
                             "thick as long",
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
        double step = (fine[i] - coarse[i]) / 7.0; /* half as wide, an eighth as wrong */
        inductance[i] = fine[i] + step;
        estimate[i] = fabs(step) + 2e-5 * fabs(fine[i]);
    }
    return true;
}
