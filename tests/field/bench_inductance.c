/* Microseconds for a group of six vias, a signal via with four returns, one and two thick traces.
 */
#include "groundrules/inductance.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

static double now(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

enum { ROUNDS = 2000 };

static bool group(const char *name, const double *x, const double *y, size_t count,
                  size_t harmonics, enum inductance_ends ends) {
    struct error error = {0};
    double matrix[64];
    struct inductance_barrels barrels = {count, x, y, 1.6e-3, 0.6e-3, ends, harmonics};
    double start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!inductance_barrels_solve(&barrels, matrix, NULL, NULL, &error))
            return fprintf(stderr, "%s\n", error.message), false;
    printf("%-34s %zu harmonics %7.1f us\n", name, harmonics, (now() - start) / ROUNDS * 1e6);
    return true;
}

static bool traces(const char *name, size_t count, double thickness) {
    struct error error = {0};
    double inductance[4], estimate[4];
    struct inductance_trace trace[2] = {{0, 0.3e-3, thickness, 1.6e-3},
                                        {3e-3, 0.3e-3, thickness, 1.6e-3}};
    struct inductance_traces problem = {count, trace, 10e-3};
    double start = now();
    for (int k = 0; k < ROUNDS; k++)
        if (!inductance_traces_solve(&problem, inductance, estimate, &error))
            return fprintf(stderr, "%s\n", error.message), false;
    printf("%-34s relative error %.0e %7.1f us\n", name, estimate[0] / inductance[0],
           (now() - start) / ROUNDS * 1e6);
    return true;
}

int main(void) {
    double row[6], zero[6] = {0}, x[6], y[6];
    for (int i = 0; i < 6; i++) {
        row[i] = i * 1e-3;
        x[i] = 1e-3 * cos(i * M_PI / 3);
        y[i] = 1e-3 * sin(i * M_PI / 3);
    }
    size_t harmonics = inductance_barrel_harmonics(0.6e-3, 1e-3);
    bool ok =
        group("six vias in a row, 1 mm, plane", row, zero, 6, harmonics, INDUCTANCE_ON_PLANE) &&
        group("six vias in a ring, 1 mm, plane", x, y, 6, harmonics, INDUCTANCE_ON_PLANE) &&
        group("the same, even current", x, y, 6, 0, INDUCTANCE_ON_PLANE) &&
        group("the same, between planes", x, y, 6, harmonics, INDUCTANCE_PLANES) &&
        traces("one thin trace", 1, 0) && traces("one thick trace", 1, 35e-6) &&
        traces("two thin traces", 2, 0) && traces("two thick traces", 2, 35e-6);
    return !ok;
}
