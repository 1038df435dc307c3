#include "terminated.h"

#include "complex_matrix.h"

#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS };

struct terminated terminated_of(const struct line_problem *problem, const struct line_end *near,
                                const struct line_end *far) {
    struct terminated line = {.laws = loss_laws_of(problem), .near = near, .far = far};
    for (size_t i = 0; i < problem->count; i++) {
        size_t own = i * problem->count + i;
        line.impedance[i] = sqrt(problem->inductance[own] / problem->capacitance[own]);
    }
    return line;
}

static double driving_share(const struct line_end *end, double impedance) {
    return isinf(end->resistance) ? 0 : impedance / (end->resistance + impedance);
}

/* With V = leaving + arriving, I = Yc (leaving - arriving):
 * towards leaving + away arriving = g EMF. */
static inline __attribute__((always_inline)) void
fill_end(const struct terminated *line, const struct line_end *ends, size_t n, double complex s,
         const double complex *admittance, double complex *towards, double complex *away) {
    for (size_t i = 0; i < n; i++) {
        double z = line->impedance[i], g = driving_share(&ends[i], z);
        double complex of_voltage = g + ((1 - g) * z * ends[i].capacitance) * s;
        for (size_t j = 0; j < n; j++) {
            double complex flow = ((1 - g) * z) * admittance[i * n + j];
            double complex voltage = i == j ? of_voltage : 0;
            towards[i * n + j] = voltage + flow;
            away[i * n + j] = voltage - flow;
        }
    }
}

static inline __attribute__((always_inline)) void solve(const struct terminated *line,
                                                        double complex s, size_t n,
                                                        double complex *near, double complex *far) {
    struct propagation wave;
    double complex towards[MOST], away[MOST], turned[MOST], product[MOST];
    propagation_at(&line->laws, s, &wave);
    /* turned = E B, b = B a what the far end makes of what arrives. */
    fill_end(line, line->far, n, s, wave.admittance, towards, away);
    double complex back[MOST];
    complex_multiply(n, n, n, away, wave.across, back);
    complex_solve(n, n, towards, back);
    for (size_t k = 0; k < n * n; k++)
        back[k] = -back[k];
    complex_multiply(n, n, n, wave.across, back, turned);
    fill_end(line, line->near, n, s, wave.admittance, towards, away);
    complex_multiply(n, n, n, away, turned, product);
    double complex leaving[LINE_MOST_CONDUCTORS], other[LINE_MOST_CONDUCTORS];
    for (size_t k = 0; k < n * n; k++)
        towards[k] += product[k];
    for (size_t i = 0; i < n; i++)
        leaving[i] = line->near[i].emf * driving_share(&line->near[i], line->impedance[i]);
    complex_solve(n, 1, towards, leaving);
    complex_multiply(n, n, 1, turned, leaving, near);
    complex_multiply(n, n, 1, wave.across, leaving, far);
    complex_multiply(n, n, 1, back, leaving, other);
    for (size_t i = 0; i < n; i++) {
        near[i] += leaving[i];
        far[i] += other[i];
    }
}

void terminated_voltages(const struct terminated *line, double complex s, double complex *near,
                         double complex *far) {
    if (line->laws.problem->count == 2)
        solve(line, s, 2, near, far);
    else
        solve(line, s, line->laws.problem->count, near, far);
}
