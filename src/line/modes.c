/* L C T = T diag(slowness^2), T' C T = I.
 * The pencil is symmetric, so T is well conditioned also where velocities are equal; a plain
 * eigensolver of the unsymmetric product L C is not.  Two conductors are solved in closed form
 * (Cholesky factor of C, one rotation), more by LAPACK's dsygv. */
#include "problem.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

static double symmetric_part(const double *matrix, size_t count, size_t i, size_t j) {
    return 0.5 * (matrix[i * count + j] + matrix[j * count + i]);
}

static bool one_mode(const struct line_problem *problem, struct line_modes *modes) {
    modes->slowness[0] = problem->inductance[0] * problem->capacitance[0];
    modes->voltage[0] = 1 / sqrt(problem->capacitance[0]);
    return true;
}

/* With C = G G' (G lower triangular), G' L G is symmetric with the same eigenvalues and T = G'^-1
 * Q.
 */
static bool two_modes(const struct line_problem *problem, struct line_modes *modes) {
    const double *l = problem->inductance, *c = problem->capacitance;
    double c01 = symmetric_part(c, 2, 0, 1), l01 = symmetric_part(l, 2, 0, 1);
    double g00 = sqrt(c[0]), g10 = c01 / g00, rest = c[3] - g10 * g10;
    if (!(rest > 1e-14 * c[3]))
        return false;
    double g11 = sqrt(rest);
    double a = g00 * g00 * l[0] + 2 * g00 * g10 * l01 + g10 * g10 * l[3];
    double b = g11 * (g00 * l01 + g10 * l[3]);
    double d = g11 * g11 * l[3];
    double half = 0.5 * (a - d), root = hypot(half, b);
    double angle = root > 0 ? 0.5 * atan2(b, half) : 0;
    double cosine = cos(angle), sine = sin(angle);
    double greater = 0.5 * (a + d) + root;
    /* The product of the eigenvalues is det L det C: no cancellation in the smaller one. */
    double determinant = (l[0] * l[3] - l01 * l01) * (g00 * g00 * g11 * g11);
    modes->slowness[0] = determinant / greater;
    modes->slowness[1] = greater;
    const double q[2][2] = {{-sine, cosine}, {cosine, sine}}; /* rows are modes */
    for (size_t m = 0; m < 2; m++) {
        double lower = q[m][1] / g11;
        modes->voltage[0 * 2 + m] = (q[m][0] - g10 * lower) / g00;
        modes->voltage[1 * 2 + m] = lower;
    }
    return true;
}

static bool many_modes(const struct line_problem *problem, struct line_modes *modes) {
    size_t count = problem->count;
    double c[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++) {
            modes->voltage[i * count + j] = symmetric_part(problem->inductance, count, i, j);
            c[i * count + j] = symmetric_part(problem->capacitance, count, i, j);
        }
    lapack_int n = (lapack_int)count;
    return LAPACKE_dsygv(LAPACK_ROW_MAJOR, 2, 'V', 'U', n, modes->voltage, n, c, n,
                         modes->slowness) == 0;
}

/* Yc = C T diag(1/slowness) T' C */
static void fill_admittance(const struct line_problem *problem, struct line_modes *modes) {
    size_t count = problem->count;
    double charge[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS] = {0};
    for (size_t i = 0; i < count; i++)
        for (size_t m = 0; m < count; m++)
            for (size_t j = 0; j < count; j++)
                charge[i * count + m] += symmetric_part(problem->capacitance, count, i, j) *
                                         modes->voltage[j * count + m];
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++) {
            double sum = 0;
            for (size_t m = 0; m < count; m++)
                sum += charge[i * count + m] * charge[j * count + m] / modes->slowness[m];
            modes->characteristic_admittance[i * count + j] = sum;
        }
}

bool line_modes(const struct line_problem *problem, struct line_modes *modes, struct error *error) {
    if (!problem_check_matrices(problem, error))
        return false;
    struct line_modes found = {.count = problem->count};
    bool definite = problem->count == 1   ? one_mode(problem, &found)
                    : problem->count == 2 ? two_modes(problem, &found)
                                          : many_modes(problem, &found);
    if (!definite)
        return error_set(error, ERROR_INPUT, "capacitance is not positive definite");
    for (size_t m = 0; m < found.count; m++) {
        if (!(found.slowness[m] > 1e-14 * found.slowness[found.count - 1]))
            return error_set(error, ERROR_INPUT, "inductance is not positive definite");
        found.slowness[m] = sqrt(found.slowness[m]);
    }
    fill_admittance(problem, &found);
    *modes = found;
    return true;
}
