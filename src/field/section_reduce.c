/* Reduction to the signals.  Zero potential drops a conductor's rows from C, zero net current drops
 * them from L.  Zero charge leaves C, and zero flux leaves L, by the same elimination. */

#include "section_parts.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

double section_reflection(double dk) {
    return (dk - 1) / (dk + 1);
}

static bool invert(size_t n, double *a, struct error *error) {
    lapack_int order = (lapack_int)n;
    if (LAPACKE_dpotrf(LAPACK_ROW_MAJOR, 'U', order, a, order) != 0 ||
        LAPACKE_dpotri(LAPACK_ROW_MAJOR, 'U', order, a, order) != 0)
        return error_set(error, ERROR_SINGULAR, "section: capacitance is not positive definite");
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < i; j++)
            a[i * n + j] = a[j * n + i];
    return true;
}

bool section_inductance(size_t count, const double *vacuum_capacitance, double *inductance,
                        struct error *error) {
    double inverse[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    memcpy(inverse, vacuum_capacitance, count * count * sizeof *inverse);
    if (!invert(count, inverse, error))
        return false;
    for (size_t i = 0; i < count * count; i++)
        inductance[i] = SECTION_MU_0 * SECTION_EPSILON_0 * inverse[i];
    return true;
}

double section_difference(const struct section_solution *one,
                          const struct section_solution *other) {
    double worst = 0.0;
    for (size_t i = 0; i < one->count * one->count; i++) {
        worst = fmax(worst, fabs(one->capacitance[i] / other->capacitance[i] - 1));
        worst = fmax(worst, fabs(one->vacuum_capacitance[i] / other->vacuum_capacitance[i] - 1));
        worst = fmax(worst, fabs(one->inductance[i] / other->inductance[i] - 1));
    }
    return worst;
}

struct pick {
    size_t count;
    size_t at[SECTION_MOST_CONDUCTORS];
};

static void pick_matrix(const double *from, size_t count, const struct pick *rows,
                        const struct pick *columns, double *to) {
    for (size_t i = 0; i < rows->count; i++)
        for (size_t j = 0; j < columns->count; j++)
            to[i * columns->count + j] = from[rows->at[i] * count + columns->at[j]];
}

/* kept = M_kk - M_kd inverse(M_dd) M_dk: the charge (or flux) of `dropped` is zero. */
static bool complement(const double *matrix, size_t count, const struct pick *kept,
                       const struct pick *dropped, double *result, struct error *error) {
    double across[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double among[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    pick_matrix(matrix, count, kept, kept, result);
    if (dropped->count == 0)
        return true;
    pick_matrix(matrix, count, kept, dropped, across);
    pick_matrix(matrix, count, dropped, dropped, among);
    if (!invert(dropped->count, among, error))
        return false;
    for (size_t i = 0; i < kept->count; i++)
        for (size_t j = 0; j < kept->count; j++)
            for (size_t k = 0; k < dropped->count; k++)
                for (size_t l = 0; l < dropped->count; l++)
                    result[i * kept->count + j] -= across[i * dropped->count + k] *
                                                   among[k * dropped->count + l] *
                                                   across[j * dropped->count + l];
    return true;
}

/* The derivative of C_ss - C_sf inverse(C_ff) C_fs: floating conductors keep the potentials that
 * -inverse(C_ff) C_fs gives them, so the derivative is T' D T with T = [1; -inverse(C_ff) C_fs]. */
static bool congruence(const double *matrix, const double *capacitance, size_t count,
                       const struct pick *kept, const struct pick *floating, double *result,
                       struct error *error) {
    double across[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double among[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS];
    double t[SECTION_MOST_CONDUCTORS * SECTION_MOST_CONDUCTORS] = {0}; /* count x kept */
    size_t n = kept->count, m = floating->count;
    pick_matrix(capacitance, count, floating, kept, across);
    pick_matrix(capacitance, count, floating, floating, among);
    if (m > 0 && !invert(m, among, error))
        return false;
    for (size_t i = 0; i < n; i++)
        t[kept->at[i] * n + i] = 1;
    for (size_t f = 0; f < m; f++)
        for (size_t i = 0; i < n; i++)
            for (size_t g = 0; g < m; g++)
                t[floating->at[f] * n + i] -= among[f * m + g] * across[g * n + i];
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            double sum = 0;
            for (size_t k = 0; k < count; k++)
                for (size_t l = 0; l < count; l++)
                    if (t[k * n + i] != 0 && t[l * n + j] != 0)
                        sum += t[k * n + i] * matrix[k * count + l] * t[l * n + j];
            result[i * n + j] = sum;
        }
    return true;
}

static void symmetrise(size_t n, double *a) {
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < i; j++)
            a[i * n + j] = a[j * n + i] = 0.5 * (a[i * n + j] + a[j * n + i]);
}

bool section_reduce(const struct section_solution *solution, const enum section_tie *ties,
                    struct section_solution *reduced, struct error *error) {
    size_t n = solution->count;
    struct pick signals = {0}, floating = {0}, tied = {0};
    for (size_t i = 0; i < n; i++) {
        if (ties[i] == SECTION_SIGNAL)
            signals.at[signals.count++] = i;
        else if (ties[i] == SECTION_FLOATING)
            floating.at[floating.count++] = i;
        else if (ties[i] == SECTION_TIED)
            tied.at[tied.count++] = i;
    }
    if (signals.count == 0)
        return error_set(error, ERROR_INPUT, "section: no conductor is a signal");
    struct section_solution result = {
        .count = signals.count, .error = solution->error, .unknowns = solution->unknowns};
    if (!complement(solution->capacitance, n, &signals, &floating, result.capacitance, error) ||
        !complement(solution->vacuum_capacitance, n, &signals, &floating, result.vacuum_capacitance,
                    error) ||
        !complement(solution->inductance, n, &signals, &tied, result.inductance, error) ||
        !congruence(solution->dielectric_capacitance, solution->capacitance, n, &signals, &floating,
                    result.dielectric_capacitance, error))
        return false;
    symmetrise(signals.count, result.capacitance);
    symmetrise(signals.count, result.vacuum_capacitance);
    symmetrise(signals.count, result.inductance);
    symmetrise(signals.count, result.dielectric_capacitance);
    *reduced = result;
    return true;
}
