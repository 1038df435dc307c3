#include "problem.h"

#include "loss.h"

#include <math.h>

/* Field solvers deliver symmetric matrices to about 1e-9; what is off by more is a mistake. */
static const double SYMMETRY = 1e-6;
/* Limits that no board, cable or cabinet reaches; inside them nothing over- or underflows. */
static const double SHORTEST_LENGTH = 1e-9, LONGEST_LENGTH = 1e9;
static const double SMALLEST_ENTRY = 1e-18, LARGEST_ENTRY = 1e3, LARGEST_EMF = 1e6;

static bool check_symmetric(const double *matrix, size_t count, const char *name,
                            struct error *error) {
    for (size_t i = 0; i < count; i++) {
        double own = matrix[i * count + i];
        if (!(own >= SMALLEST_ENTRY && own <= LARGEST_ENTRY))
            return error_set(error, ERROR_INPUT, "%s[%zu][%zu] is %g, must be within %g and %g",
                             name, i, i, own, SMALLEST_ENTRY, LARGEST_ENTRY);
    }
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < i; j++) {
            double below = matrix[i * count + j], above = matrix[j * count + i];
            double scale = sqrt(matrix[i * count + i] * matrix[j * count + j]);
            if (!isfinite(below) || !isfinite(above))
                return error_set(error, ERROR_INPUT, "%s[%zu][%zu] is not a finite number", name,
                                 isfinite(below) ? j : i, isfinite(below) ? i : j);
            if (!(fabs(below - above) <= SYMMETRY * scale))
                return error_set(error, ERROR_INPUT,
                                 "%s is not symmetric: [%zu][%zu] is %g, [%zu][%zu] is %g", name, i,
                                 j, below, j, i, above);
        }
    return true;
}

bool problem_check_matrices(const struct line_problem *problem, struct error *error) {
    size_t count = problem->count;
    if (count < 1 || count > LINE_MOST_CONDUCTORS)
        return error_set(error, ERROR_INPUT, "%zu conductors, must be 1 to %d", count,
                         (int)LINE_MOST_CONDUCTORS);
    if (!check_symmetric(problem->inductance, count, "inductance", error) ||
        !check_symmetric(problem->capacitance, count, "capacitance", error))
        return false;
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++) {
            double entry = problem->capacitance[i * count + j];
            double scale =
                sqrt(problem->capacitance[i * count + i] * problem->capacitance[j * count + j]);
            if (i != j && entry > SYMMETRY * scale)
                return error_set(error, ERROR_INPUT,
                                 "capacitance[%zu][%zu] is %g F/m: a Maxwell matrix has no "
                                 "positive entry off its diagonal",
                                 i, j, entry);
        }
    return true;
}

static bool check_end(const struct line_end *end, const char *name, size_t i, struct error *error) {
    if (!(end->resistance >= 0))
        return error_set(error, ERROR_INPUT,
                         "%s[%zu]: resistance is %g ohm, must be 0 or above (infinite = open)",
                         name, i, end->resistance);
    if (!(end->capacitance >= 0 && end->capacitance <= 1))
        return error_set(error, ERROR_INPUT, "%s[%zu]: capacitance is %g F, must be within 0 and 1",
                         name, i, end->capacitance);
    return true;
}

static bool check_emfs(const struct line_problem *problem, struct error *error) {
    bool driven = false;
    for (size_t i = 0; i < problem->count; i++) {
        double emf = problem->near[i].emf;
        if (!(fabs(emf) <= LARGEST_EMF))
            return error_set(
                error, ERROR_INPUT,
                "near[%zu]: EMF is %g V per volt of swing, must be within %g either way", i, emf,
                LARGEST_EMF);
        if (emf != 0 && isinf(problem->near[i].resistance))
            return error_set(error, ERROR_INPUT,
                             "near[%zu]: the driven end is open, an EMF needs a finite resistance",
                             i);
        if (problem->far[i].emf != 0)
            return error_set(error, ERROR_INPUT,
                             "far[%zu]: has an EMF, only near ends can be driven", i);
        driven = driven || emf != 0;
    }
    if (!driven)
        return error_set(error, ERROR_INPUT, "no near end is driven");
    return true;
}

bool problem_check(const struct line_problem *problem, struct error *error) {
    if (!problem_check_matrices(problem, error))
        return false;
    if (!(problem->length >= SHORTEST_LENGTH && problem->length <= LONGEST_LENGTH))
        return error_set(error, ERROR_INPUT, "length is %g m, must be within %g and %g",
                         problem->length, SHORTEST_LENGTH, LONGEST_LENGTH);
    if (!loss_check(problem, error))
        return false;
    for (size_t i = 0; i < problem->count; i++)
        if (!check_end(&problem->near[i], "near", i, error) ||
            !check_end(&problem->far[i], "far", i, error))
            return false;
    return check_emfs(problem, error);
}

double problem_largest_emf(const struct line_problem *problem) {
    double largest = 0;
    for (size_t i = 0; i < problem->count; i++)
        largest = fmax(largest, fabs(problem->near[i].emf));
    return largest;
}
