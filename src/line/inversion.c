/* With s = c + j w on a uniform grid of w the inverse is a Fourier series whose only faults are
 *   - that it repeats after a period T, damped by exp(-c T): what has settled by then is seen
 *     before t = 0, where nothing else is, and taken off again;
 *   - that it ends: the transform is multiplied by exp(sigma^2 s^2 / 2), which smooths the response
 *     by a Gaussian, and ends where that has become nothing. */
#include "inversion.h"

#include "complex_matrix.h"
#include "fourier.h"

#include <math.h>

static const double pi = 3.14159265358979323846;

/* Damping over a period, and the share of the period that is used. */
static const double SHIFT = 8, USED = 0.85;
/* The Gaussian's last frequency, in 1/sigma: exp(-8) of it, and 1/s^2, are left. */
static const double LAST = 4.1;

/* H(s) = final + creep sqrt(s) + a s for s small against the line, from three values of s. */
struct inversion inversion_of(const struct line_problem *problem, double slowest) {
    struct inversion inversion = {.count = problem->count};
    inversion.line = terminated_of(problem, problem->near, problem->far);
    double small = 1e-6 / slowest;
    double complex at[3][2][LINE_MOST_CONDUCTORS];
    for (size_t k = 0; k < 3; k++)
        terminated_voltages(&inversion.line, small * (double)(1 << 2 * k), at[k][0], at[k][1]);
    for (size_t side = 0; side < 2; side++)
        for (size_t i = 0; i < problem->count; i++) {
            double one = creal(at[0][side][i]), two = creal(at[1][side][i]);
            double three = creal(at[2][side][i]);
            /* Of x = sqrt(s / small) = 1, 2, 4. */
            inversion.final[side][i] = (8 * one - 6 * two + three) / 3;
            inversion.creep[side][i] = (-12 * one + 15 * two - 3 * three) / (6 * sqrt(small));
        }
    return inversion;
}

double inversion_frequencies(double sigma, double period) {
    return ceil(LAST / sigma * period / (2 * pi));
}

/* What the voltage is multiplied by. */
static double complex weight_at(double complex s, double wider, double sigma) {
    double complex square = complex_times(s, s), inverse = complex_inverse(square);
    double complex smoothed = cexp(0.5 * sigma * sigma * square);
    /* Beyond exp(-40) nothing is left of the wider one. */
    if (wider > 0 && wider * wider * creal(square) > -80)
        smoothed -= cexp(0.5 * wider * wider * square);
    return complex_times(smoothed, inverse);
}

struct grid {
    double period, wider, sigma;
    size_t frequencies, size;
};

/* spectrum[count][size]: near + j far, so that one complex sum gives both real ends. */
static void fill_spectrum(const struct inversion *inversion, const struct grid *grid,
                          double complex *spectrum) {
    double complex end[2][LINE_MOST_CONDUCTORS];
    for (size_t k = 0; k < grid->frequencies; k++) {
        double complex s = CMPLX(SHIFT / grid->period, 2 * pi * (double)k / grid->period);
        double complex weight = weight_at(s, grid->wider, grid->sigma) / grid->period;
        terminated_voltages(&inversion->line, s, end[0], end[1]);
        for (size_t i = 0; i < inversion->count; i++) {
            if (grid->wider == 0) {
                end[0][i] -= inversion->final[0][i];
                end[1][i] -= inversion->final[1][i];
            }
            double complex near = complex_times(weight, end[0][i]);
            double complex far = complex_times(weight, end[1][i]);
            double complex *row = spectrum + i * grid->size;
            row[k] = CMPLX(creal(near) - cimag(far), cimag(near) + creal(far));
            if (k > 0)
                row[grid->size - k] = CMPLX(creal(near) + cimag(far), creal(far) - cimag(near));
        }
    }
}

/* Undoes the damping and puts the time before 0 first; of a broad band also takes off what the
 * settled value left in every period. */
static void unfold(const double complex *series, const struct grid *grid, const double *growth,
                   bool far, struct smooth_band *band, double *rest) {
    size_t total = band->lead + band->samples;
    for (size_t i = 0; i < total; i++) {
        size_t at = i >= band->lead ? i - band->lead : i + grid->size - band->lead;
        rest[i] = growth[i] * (far ? cimag(series[at]) : creal(series[at]));
    }
    double repeated = grid->wider == 0 ? rest[0] : 0;
    for (size_t i = 0; i < total; i++) {
        rest[i] -= repeated;
        band->largest = fmax(band->largest, fabs(rest[i]));
    }
    band->rest = rest;
}

static void transform(const struct inversion *inversion, const struct grid *grid,
                      const struct fourier *fourier, const struct smooth_band *band,
                      double complex *spectrum, double *growth, double *rest,
                      struct smooth_band *bands) {
    size_t total = band->lead + band->samples;
    for (size_t i = 0; i < total; i++)
        growth[i] = exp(SHIFT * ((double)i - (double)band->lead) / (double)grid->size);
    fill_spectrum(inversion, grid, spectrum);
    for (size_t i = 0; i < inversion->count; i++) {
        fourier_sum(fourier, spectrum + i * grid->size);
        for (size_t side = 0; side < 2; side++) {
            struct smooth_band *to = &bands[side * LINE_MOST_CONDUCTORS + i];
            *to = *band;
            unfold(spectrum + i * grid->size, grid, growth, side == 1, to,
                   rest + (side * inversion->count + i) * total);
        }
    }
}

bool inversion_band(const struct inversion *inversion, double wider, double sigma, double period,
                    struct arena *arena, struct smooth_band *bands, struct error *error) {
    struct grid grid = {.period = period, .wider = wider, .sigma = sigma, .size = 64};
    grid.frequencies = (size_t)inversion_frequencies(sigma, period);
    while (grid.size < 2 * grid.frequencies)
        grid.size *= 2;
    struct smooth_band band = {.step = period / (double)grid.size, .sigma = sigma};
    /* What a band adds is as wide as the Gaussian that it sharpens. */
    band.lead = (size_t)ceil(INVERSION_LEAD * fmax(sigma, wider) / band.step);
    band.samples = (size_t)(USED * (double)grid.size) - (wider > 0 ? band.lead : 0);
    size_t total = band.lead + band.samples;
    double *rest = arena_new(arena, 2 * inversion->count * total, double, error);
    struct arena_mark mark = arena_mark(arena);
    double *growth = arena_new(arena, total, double, error);
    double complex *spectrum =
        arena_new(arena, inversion->count * grid.size, double complex, error);
    struct fourier fourier;
    if (rest == NULL || growth == NULL || spectrum == NULL ||
        !fourier_prepare(grid.size, arena, &fourier, error))
        return false;
    transform(inversion, &grid, &fourier, &band, spectrum, growth, rest, bands);
    arena_rewind(arena, mark);
    return true;
}
