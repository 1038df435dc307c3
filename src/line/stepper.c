#include "grid.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, STENCIL = GRID_STENCIL, SERIES = 18 };

struct delay delay_of(double delay, double step) {
    double samples = ceil(delay / step - 1e-9);
    double f = fmax(samples - delay / step, 0);
    struct delay made = {.samples = (size_t)samples, .fraction = f < 1e-8 ? 0 : f};
    f = made.fraction;
    made.weight[0] = -f * (f - 1) * (f - 2) / 6;
    made.weight[1] = (f + 1) * (f - 1) * (f - 2) / 2;
    made.weight[2] = -(f + 1) * f * (f - 2) / 2;
    made.weight[3] = (f + 1) * f * (f - 1) / 6;
    return made;
}

/* out = left right, all [n][n] or [n][columns] */
static void multiply(const double *left, const double *right, size_t n, size_t columns,
                     double *out) {
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < columns; j++) {
            double sum = 0;
            for (size_t k = 0; k < n; k++)
                sum += left[i * n + k] * right[k * columns + j];
            out[i * columns + j] = sum;
        }
}

/* phi_k(Z) = sum over j of Z^j / (j + k)!; the step keeps |Z| well below 1. */
static void phi(const double *z, size_t n, unsigned k, double *out) {
    double term[MOST * MOST] = {0}, next[MOST * MOST], factor = 1;
    for (unsigned i = 2; i <= k; i++)
        factor /= i;
    for (size_t i = 0; i < n; i++)
        term[i * n + i] = factor;
    memset(out, 0, n * n * sizeof *out);
    for (unsigned j = 1; j < SERIES; j++) {
        for (size_t i = 0; i < n * n; i++)
            out[i] += term[i];
        multiply(term, z, n, n, next);
        for (size_t i = 0; i < n * n; i++)
            term[i] = next[i] / (j + k);
    }
}

/* x(t + h) = exp(A h) x + integral of exp(A (h - u)) B b(t + u) du, b the cubic through the samples
 * at u = 2h, h, 0, -h (columns: powers of u/h).  The cubic kernel between its middle samples has a
 * Fourier transform that is nowhere negative, so the reflection of the sampled end is an average of
 * true reflections and passive like them: the march cannot blow up at any step.  (A cubic that does
 * not look ahead is active near the Nyquist frequency and does.)  Looking ahead is possible because
 * a wave that arrives at 2h left the other end long before. */
struct stepper stepper_of(const struct end_system *end, double step) {
    static const double cubic[STENCIL][STENCIL] = {{0, -1.0 / 6, 0, 1.0 / 6},
                                                   {0, 1, 1.0 / 2, -1.0 / 2},
                                                   {1, -1.0 / 2, -1, 1.0 / 2},
                                                   {0, -1.0 / 3, 1.0 / 2, -1.0 / 6}};
    static const double factorial[STENCIL] = {1, 1, 2, 6};
    struct stepper made = {.states = end->states};
    size_t n = end->states, count = end->count;
    double z[MOST * MOST], moment[MOST * MOST], forced[MOST * MOST];
    for (size_t i = 0; i < n * n; i++)
        z[i] = end->state[i] * step;
    phi(z, n, 0, made.decay);
    for (unsigned k = 0; k < STENCIL; k++) {
        phi(z, n, k + 1, moment);
        multiply(moment, end->state_of_wave, n, count, forced);
        for (size_t s = 0; s < STENCIL; s++)
            for (size_t i = 0; i < n * count; i++)
                made.gain[s][i] += step * factorial[k] * cubic[s][k] * forced[i];
        if (k == 0) {
            multiply(moment, end->state_of_emf, n, 1, made.drive);
            for (size_t i = 0; i < n; i++)
                made.drive[i] *= step;
        }
    }
    return made;
}
