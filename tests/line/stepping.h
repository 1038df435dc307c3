#ifndef TESTS_LINE_STEPPING_H
#define TESTS_LINE_STEPPING_H

#include "groundrules/line.h"

#include <math.h>
#include <stdlib.h>

/* An oracle that shares nothing with the line solver: two coupled lossless lines by the method of
 * characteristics on a fine uniform grid (Branin 1967), modes from the quadratic of L C, delays by
 * linear interpolation, capacitances by the trapezoidal rule.  Every part is passive, nothing is
 * clever; the error falls with the step, so two steps tell it. */

struct stepping_peak {
    double near, far; /* V per volt of swing, largest |v| of conductor 1 */
};

struct stepping_modes {
    double slowness[2], voltage[2][2], admittance[2][2];
};

static inline struct stepping_modes stepping_modes_of(const struct line_problem *p) {
    const double *l = p->inductance, *c = p->capacitance;
    double a = l[0] * c[0] + l[1] * c[2], b = l[0] * c[1] + l[1] * c[3];
    double d = l[2] * c[0] + l[3] * c[2], e = l[2] * c[1] + l[3] * c[3];
    double half = (a + e) / 2, root = sqrt((a - e) * (a - e) / 4 + b * d);
    struct stepping_modes made;
    for (int m = 0; m < 2; m++) {
        double square = m == 0 ? half - root : half + root;
        made.slowness[m] = sqrt(square);
        /* Both rows give the same vector; the larger one is the safer. */
        double x = b, y = square - a;
        if (fabs(d) + fabs(square - e) > fabs(x) + fabs(y)) {
            x = square - e;
            y = d;
        }
        if (x == 0 && y == 0) { /* equal velocities: any basis will do */
            x = m == 0;
            y = m == 1;
        }
        made.voltage[0][m] = x / hypot(x, y);
        made.voltage[1][m] = y / hypot(x, y);
    }
    /* Yc = inv(L) T diag(slowness) inv(T) */
    double det = made.voltage[0][0] * made.voltage[1][1] - made.voltage[0][1] * made.voltage[1][0];
    double inverse[2][2] = {{made.voltage[1][1] / det, -made.voltage[0][1] / det},
                            {-made.voltage[1][0] / det, made.voltage[0][0] / det}};
    double det_l = l[0] * l[3] - l[1] * l[2];
    double inverse_l[2][2] = {{l[3] / det_l, -l[1] / det_l}, {-l[2] / det_l, l[0] / det_l}};
    for (int i = 0; i < 2; i++)
        for (int j = 0; j < 2; j++) {
            made.admittance[i][j] = 0;
            for (int k = 0; k < 2; k++)
                for (int m = 0; m < 2; m++)
                    made.admittance[i][j] +=
                        inverse_l[i][k] * made.voltage[k][m] * made.slowness[m] * inverse[m][j];
        }
    return made;
}

/* Trapezoidal step of one pair of ends.  incident: voltages of the arriving waves now. */
struct stepping_end {
    double voltage[2], current[2]; /* current into the capacitances */
};

static inline void stepping_advance(const struct stepping_modes *modes, const struct line_end *end,
                                    const double *incident, double emf, double step,
                                    struct stepping_end *state) {
    double m[2][2], right[2];
    for (int i = 0; i < 2; i++) {
        double conductance = end[i].resistance > 0 ? 1 / end[i].resistance : 1e9;
        double companion = 2 * end[i].capacitance / step;
        right[i] =
            companion * state->voltage[i] + state->current[i] + conductance * emf * end[i].emf;
        for (int j = 0; j < 2; j++) {
            m[i][j] = modes->admittance[i][j] + (i == j ? conductance + companion : 0);
            right[i] += 2 * modes->admittance[i][j] * incident[j];
        }
    }
    double det = m[0][0] * m[1][1] - m[0][1] * m[1][0], next[2];
    next[0] = (right[0] * m[1][1] - right[1] * m[0][1]) / det;
    next[1] = (m[0][0] * right[1] - m[1][0] * right[0]) / det;
    for (int i = 0; i < 2; i++) {
        double companion = 2 * end[i].capacitance / step;
        state->current[i] = companion * (next[i] - state->voltage[i]) - state->current[i];
        state->voltage[i] = next[i];
    }
}

/* Peaks of conductor 1 within `steps` steps of `step` seconds. */
static inline struct stepping_peak stepping_peaks(const struct line_problem *problem, double edge,
                                                  double step, size_t steps) {
    struct stepping_modes modes = stepping_modes_of(problem);
    double det =
        modes.voltage[0][0] * modes.voltage[1][1] - modes.voltage[0][1] * modes.voltage[1][0];
    double *leaving[2][2]; /* end, mode */
    for (int k = 0; k < 4; k++)
        leaving[k / 2][k % 2] = calloc(steps + 1, sizeof(double));
    struct stepping_end end[2] = {0};
    struct stepping_peak peak = {0};
    for (size_t n = 1; n <= steps; n++) {
        for (int side = 0; side < 2; side++) {
            double wave[2], incident[2] = {0};
            for (int m = 0; m < 2; m++) {
                double back = (double)n - modes.slowness[m] * problem->length / step;
                size_t before = back > 0 ? (size_t)back : 0;
                double f = back - (double)before;
                const double *from = leaving[1 - side][m];
                wave[m] = back > 0 ? (1 - f) * from[before] + f * from[before + 1] : 0;
                for (int i = 0; i < 2; i++)
                    incident[i] += modes.voltage[i][m] * wave[m];
            }
            double emf = side == 0 ? fmin((double)n * step / edge, 1) : 0;
            stepping_advance(&modes, side == 0 ? problem->near : problem->far, incident, emf, step,
                             &end[side]);
            double out[2] = {end[side].voltage[0] - incident[0],
                             end[side].voltage[1] - incident[1]};
            leaving[side][0][n] =
                (out[0] * modes.voltage[1][1] - out[1] * modes.voltage[0][1]) / det;
            leaving[side][1][n] =
                (modes.voltage[0][0] * out[1] - modes.voltage[1][0] * out[0]) / det;
        }
        peak.near = fmax(peak.near, fabs(end[0].voltage[1]));
        peak.far = fmax(peak.far, fabs(end[1].voltage[1]));
    }
    for (int k = 0; k < 4; k++)
        free(leaving[k / 2][k % 2]);
    return peak;
}

#endif
