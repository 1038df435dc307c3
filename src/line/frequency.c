/* Modal waves a (leaving the near end) and b (leaving the far end):
 *     V(0) = T (a + D b),  I(0) = C T S^-1 (a - D b),  D = diag(exp(-s slowness length)),
 * and the same with a and b exchanged at the far end, I counted into the line there too.  At every
 * end                r Z (I + s Cend V) + g V = g EMF,    r = R/(R + Z),  g = Z/(R + Z),
 * is Kirchhoff's current law scaled so that R = 0 and R = infinity are ordinary values (Z is any
 * impedance of the line's order).  |D| <= 1, so no entry grows with length or frequency, and at
 * sin(beta l) = 0 the equations stay regular, unlike admittances. */
#include "problem.h"

#include "loss.h"
#include "terminated.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

enum { MOST = 2 * LINE_MOST_CONDUCTORS };

struct equations {
    size_t size; /* 2 count */
    double complex matrix[MOST * MOST];
    double complex right[MOST * MOST];
    double drive[MOST]; /* g of every end, near ends first */
};

static double line_impedance(const struct line_modes *modes, size_t i) {
    return 1 / modes->characteristic_admittance[i * modes->count + i];
}

static void fill_row(const struct line_problem *problem, const struct line_modes *modes, size_t row,
                     const struct line_end *end, const double complex *delay, double complex s,
                     const double *current, struct equations *equations) {
    size_t count = problem->count, i = row % count;
    double z = line_impedance(modes, i);
    double g = isinf(end->resistance) ? 0 : z / (end->resistance + z), r = 1 - g;
    double complex of_voltage = g + r * z * s * end->capacitance;
    size_t leaving = row < count ? 0 : count, arriving = count - leaving;
    double complex *entry = equations->matrix + row * equations->size;
    for (size_t m = 0; m < count; m++) {
        double complex voltage = of_voltage * modes->voltage[i * count + m];
        double complex flow = r * z * current[i * count + m];
        entry[leaving + m] = voltage + flow;
        entry[arriving + m] = (voltage - flow) * delay[m];
    }
    equations->drive[row] = g;
}

static void fill_equations(const struct line_problem *problem, const struct line_modes *modes,
                           const struct line_end *near, const struct line_end *far,
                           double complex s, struct equations *equations) {
    size_t count = problem->count;
    double complex delay[LINE_MOST_CONDUCTORS];
    double current[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS] = {0}; /* Yc T */
    for (size_t m = 0; m < count; m++)
        delay[m] = cexp(-s * modes->slowness[m] * problem->length);
    for (size_t i = 0; i < count; i++)
        for (size_t m = 0; m < count; m++)
            for (size_t j = 0; j < count; j++)
                current[i * count + m] +=
                    modes->characteristic_admittance[i * count + j] * modes->voltage[j * count + m];
    equations->size = 2 * count;
    for (size_t i = 0; i < count; i++) {
        fill_row(problem, modes, i, &near[i], delay, s, current, equations);
        fill_row(problem, modes, count + i, &far[i], delay, s, current, equations);
    }
}

/* right[size][columns] becomes the waves. */
static bool solve(struct equations *equations, size_t columns, struct error *error) {
    lapack_int pivots[MOST];
    lapack_int n = (lapack_int)equations->size;
    lapack_int info = LAPACKE_zgesv(LAPACK_ROW_MAJOR, n, (lapack_int)columns, equations->matrix, n,
                                    pivots, equations->right, (lapack_int)columns);
    bool finite = true;
    for (size_t k = 0; k < equations->size * columns; k++)
        finite = finite && isfinite(creal(equations->right[k])) &&
                 isfinite(cimag(equations->right[k])) && cabs(equations->right[k]) < 1e12;
    if (info != 0 || !finite)
        return error_set(error, ERROR_SINGULAR,
                         "the line is at a resonance that nothing damps; no finite answer");
    return true;
}

/* V of end `row` for the waves of one column. */
static double complex end_voltage(const struct line_modes *modes, const double complex *delay,
                                  const struct equations *equations, size_t columns, size_t column,
                                  size_t row) {
    size_t count = modes->count, i = row % count;
    size_t leaving = row < count ? 0 : count, arriving = count - leaving;
    double complex sum = 0;
    for (size_t m = 0; m < count; m++)
        sum += modes->voltage[i * count + m] *
               (equations->right[(leaving + m) * columns + column] +
                delay[m] * equations->right[(arriving + m) * columns + column]);
    return sum;
}

/* Waves are of the order of EMF/T, about 1e-6: unit columns keep the bound in `solve` meaningful.
 */
static void scale_columns(struct line_modes *modes) {
    double largest = 0;
    size_t entries = modes->count * modes->count;
    for (size_t k = 0; k < entries; k++)
        largest = fmax(largest, fabs(modes->voltage[k]));
    for (size_t k = 0; k < entries; k++)
        modes->voltage[k] /= largest;
}

bool problem_solve_at(const struct line_problem *problem, const struct line_modes *modes,
                      double complex s, double complex *near, double complex *far,
                      struct error *error) {
    size_t count = problem->count;
    struct line_modes scaled = *modes;
    scale_columns(&scaled);
    struct equations equations;
    fill_equations(problem, &scaled, problem->near, problem->far, s, &equations);
    memset(equations.right, 0, equations.size * sizeof *equations.right);
    for (size_t i = 0; i < count; i++)
        equations.right[i] = equations.drive[i] * problem->near[i].emf;
    if (!solve(&equations, 1, error))
        return false;
    double complex delay[LINE_MOST_CONDUCTORS];
    for (size_t m = 0; m < count; m++)
        delay[m] = cexp(-s * modes->slowness[m] * problem->length);
    for (size_t i = 0; i < count; i++) {
        near[i] = end_voltage(&scaled, delay, &equations, 1, 0, i);
        far[i] = end_voltage(&scaled, delay, &equations, 1, 0, count + i);
    }
    return true;
}

static bool check_frequency(double frequency, struct error *error) {
    if (!(frequency > 0 && frequency <= 1e15))
        return error_set(error, ERROR_INPUT, "frequency is %g Hz, must be above 0, at most 1e15",
                         frequency);
    return true;
}

static bool all_finite(const double complex *voltages, size_t count, struct error *error) {
    for (size_t i = 0; i < count; i++)
        if (!isfinite(creal(voltages[i])) || !isfinite(cimag(voltages[i])))
            return error_set(error, ERROR_SINGULAR,
                             "the line is at a resonance that nothing damps; no finite answer");
    return true;
}

static bool lossy_response(const struct line_problem *problem, double complex s,
                           double complex *near, double complex *far, struct error *error) {
    double complex v_near[LINE_MOST_CONDUCTORS], v_far[LINE_MOST_CONDUCTORS];
    struct terminated line = terminated_of(problem, problem->near, problem->far);
    terminated_voltages(&line, s, v_near, v_far);
    if (!all_finite(v_near, problem->count, error) || !all_finite(v_far, problem->count, error))
        return false;
    memcpy(near, v_near, problem->count * sizeof *near);
    memcpy(far, v_far, problem->count * sizeof *far);
    return true;
}

bool line_frequency_response(const struct line_problem *problem, double frequency,
                             double complex *near, double complex *far, struct error *error) {
    struct line_modes modes;
    if (!problem_check(problem, error) || !check_frequency(frequency, error) ||
        !line_modes(problem, &modes, error))
        return false;
    const double pi = 3.14159265358979323846;
    if (loss_present(problem))
        return lossy_response(problem, I * 2 * pi * frequency, near, far, error);
    return problem_solve_at(problem, &modes, I * 2 * pi * frequency, near, far, error);
}

static bool lossy_scattering(const struct line_problem *problem, const struct line_end *ports,
                             double complex s, double complex *scattering, struct error *error) {
    size_t count = problem->count, size = 2 * count;
    double complex own[LINE_MOST_CONDUCTORS], other[LINE_MOST_CONDUCTORS];
    for (size_t column = 0; column < size; column++) {
        struct line_end driven[LINE_MOST_CONDUCTORS];
        for (size_t i = 0; i < count; i++) {
            driven[i] = ports[i];
            driven[i].emf = i == column % count;
        }
        struct terminated line = terminated_of(problem, driven, ports);
        terminated_voltages(&line, s, own, other);
        if (!all_finite(own, count, error) || !all_finite(other, count, error))
            return false;
        /* Equal ports at both ends: driven from the far end the two exchange their roles. */
        for (size_t row = 0; row < size; row++) {
            bool same_end = (row < count) == (column < count);
            double complex voltage = same_end ? own[row % count] : other[row % count];
            scattering[row * size + column] = 2 * voltage - (row == column ? 1 : 0);
        }
    }
    return true;
}

bool line_scattering(const struct line_problem *problem, double reference, double frequency,
                     double complex *scattering, struct error *error) {
    struct line_modes modes;
    struct line_end ports[LINE_MOST_CONDUCTORS];
    if (!(reference > 0 && reference <= 1e9))
        return error_set(error, ERROR_INPUT,
                         "reference impedance is %g ohm, must be above 0, at most 1e9", reference);
    struct line_problem matched = *problem;
    for (size_t i = 0; i < LINE_MOST_CONDUCTORS; i++)
        ports[i] = matched.near[i] = matched.far[i] = (struct line_end){.resistance = reference};
    matched.near[0].emf = 1; /* a port is driven */
    if (!problem_check(&matched, error) || !check_frequency(frequency, error) ||
        !line_modes(problem, &modes, error))
        return false;
    scale_columns(&modes);
    const double complex s = I * 2 * 3.14159265358979323846 * frequency;
    if (loss_present(problem))
        return lossy_scattering(problem, ports, s, scattering, error);
    struct equations equations;
    fill_equations(problem, &modes, ports, ports, s, &equations);
    size_t size = equations.size;
    memset(equations.right, 0, size * size * sizeof *equations.right);
    for (size_t k = 0; k < size; k++)
        equations.right[k * size + k] = equations.drive[k];
    if (!solve(&equations, size, error))
        return false;
    double complex delay[LINE_MOST_CONDUCTORS];
    for (size_t m = 0; m < problem->count; m++)
        delay[m] = cexp(-s * modes.slowness[m] * problem->length);
    for (size_t row = 0; row < size; row++)
        for (size_t column = 0; column < size; column++)
            scattering[row * size + column] =
                2 * end_voltage(&modes, delay, &equations, size, column, row) -
                (row == column ? 1 : 0);
    return true;
}

/* Eigenvalues alone: without eigenvectors nothing is lost where modes are equal. */
bool line_propagation(const struct line_problem *problem, double frequency,
                      double complex *constants, struct error *error) {
    struct line_modes modes;
    size_t count = problem->count;
    if (!line_modes(problem, &modes, error) || !loss_check(problem, error) ||
        !check_frequency(frequency, error))
        return false;
    const double complex s = I * 2 * 3.14159265358979323846 * frequency;
    double complex slowness[LINE_MOST_CONDUCTORS * LINE_MOST_CONDUCTORS];
    double complex eigenvalues[LINE_MOST_CONDUCTORS];
    struct loss_laws laws = loss_laws_of(problem);
    propagation_slowness(&laws, s, slowness);
    lapack_int n = (lapack_int)count;
    if (LAPACKE_zgeev(LAPACK_ROW_MAJOR, 'N', 'N', n, slowness, n, eigenvalues, NULL, n, NULL, n) !=
        0)
        return error_set(error, ERROR_SINGULAR, "propagation constants were not found");
    for (size_t i = 0; i < count; i++)
        for (size_t j = i + 1; j < count; j++)
            if (creal(eigenvalues[j]) < creal(eigenvalues[i])) {
                double complex swapped = eigenvalues[i];
                eigenvalues[i] = eigenvalues[j];
                eigenvalues[j] = swapped;
            }
    for (size_t i = 0; i < count; i++)
        constants[i] = s * eigenvalues[i];
    return true;
}
