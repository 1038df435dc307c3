#include "loss.h"

#include "complex_matrix.h"

#include <math.h>

static const double pi = 3.14159265358979323846;
/* As for inductance and capacitance: what is off by more is a mistake. */
static const double SYMMETRY = 1e-6;
static const double MOST_RESISTANCE = 1e9, MOST_TANGENT = 1;

static bool any(const double *matrix, size_t count) {
    for (size_t k = 0; k < count * count; k++)
        if (matrix[k] != 0)
            return true;
    return false;
}

static bool has_dielectric(const struct line_problem *problem) {
    return problem->df != 0 && any(problem->dielectric_capacitance, problem->count);
}

bool loss_present(const struct line_problem *problem) {
    return any(problem->dc_resistance, problem->count) ||
           any(problem->skin_resistance, problem->count) || has_dielectric(problem);
}

/* ln((w2 + s)/(w1 + s)) */
static double complex relaxations(double complex s) {
    const double lower = 2 * pi * LINE_LOWEST_RELAXATION, upper = 2 * pi * LINE_HIGHEST_RELAXATION;
    double a = lower + creal(s), b = upper + creal(s), w = cimag(s);
    return CMPLX(0.5 * log((b * b + w * w) / (a * a + w * w)), atan2(w, b) - atan2(w, a));
}

struct loss_laws loss_laws_of(const struct line_problem *problem) {
    struct loss_laws laws = {.problem = problem, .dielectric = has_dielectric(problem)};
    if (laws.dielectric) {
        double complex at = relaxations(I * 2 * pi * problem->material_frequency);
        laws.difference = -problem->df / cimag(at);
        laws.offset = -laws.difference * creal(at);
    }
    return laws;
}

void loss_immittances(const struct loss_laws *laws, double complex s, size_t count,
                      double complex *inductance, double complex *capacitance) {
    const struct line_problem *p = laws->problem;
    double complex inverse = complex_inverse(s);
    double complex skin = complex_times(complex_root(s / pi), inverse);
    double complex chi = laws->dielectric ? laws->offset + laws->difference * relaxations(s) : 0;
    for (size_t k = 0; k < count * count; k++) {
        inductance[k] =
            p->inductance[k] + p->skin_resistance[k] * skin + p->dc_resistance[k] * inverse;
        capacitance[k] = p->capacitance[k] + p->dielectric_capacitance[k] * chi;
    }
}

/* Symmetric, finite, and no entry off the diagonal beyond what a positive semidefinite matrix
 * allows. */
static bool check_matrix(const double *matrix, size_t count, const char *name, double most,
                         struct error *error) {
    for (size_t i = 0; i < count; i++)
        if (!(matrix[i * count + i] >= 0 && matrix[i * count + i] <= most))
            return error_set(error, ERROR_INPUT, "%s[%zu][%zu] is %g, must be within 0 and %g",
                             name, i, i, matrix[i * count + i], most);
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < i; j++) {
            double below = matrix[i * count + j], above = matrix[j * count + i];
            double scale = sqrt(matrix[i * count + i] * matrix[j * count + j]);
            if (!(fabs(below - above) <= SYMMETRY * scale && fabs(above) <= scale * (1 + SYMMETRY)))
                return error_set(error, ERROR_INPUT,
                                 "%s: [%zu][%zu] is %g, [%zu][%zu] is %g; must be equal and at "
                                 "most %g, or power would be made",
                                 name, i, j, below, j, i, above, scale);
        }
    return true;
}

static bool check_dielectric(const struct line_problem *problem, struct error *error) {
    if (!(problem->material_frequency > 0 && problem->material_frequency <= 1e15))
        return error_set(error, ERROR_INPUT,
                         "material frequency is %g Hz, must be above 0, at most 1e15",
                         problem->material_frequency);
    for (size_t i = 0; i < problem->count; i++) {
        size_t own = i * problem->count + i;
        if (!(problem->dielectric_capacitance[own] <= problem->capacitance[own] * (1 + SYMMETRY)))
            return error_set(error, ERROR_INPUT,
                             "dielectric_capacitance[%zu][%zu] is %g F/m, the capacitance %g F/m: "
                             "the share of the dielectric cannot be above one",
                             i, i, problem->dielectric_capacitance[own], problem->capacitance[own]);
    }
    struct loss_laws laws = loss_laws_of(problem);
    if (!(1 + laws.offset > 0))
        return error_set(error, ERROR_INPUT,
                         "a loss tangent of %g at %g Hz leaves no permittivity at high frequency "
                         "in the causal model",
                         problem->df, problem->material_frequency);
    return true;
}

bool loss_check(const struct line_problem *problem, struct error *error) {
    if (!(problem->df >= 0 && problem->df <= MOST_TANGENT))
        return error_set(error, ERROR_INPUT, "df is %g, must be within 0 and %g", problem->df,
                         MOST_TANGENT);
    size_t count = problem->count;
    return check_matrix(problem->dc_resistance, count, "dc_resistance", MOST_RESISTANCE, error) &&
           check_matrix(problem->skin_resistance, count, "skin_resistance", MOST_RESISTANCE,
                        error) &&
           check_matrix(problem->dielectric_capacitance, count, "dielectric_capacitance", INFINITY,
                        error) &&
           (!has_dielectric(problem) || check_dielectric(problem, error));
}
