/* Networks: nodal analysis with reciprocal inductances.  With L = U'U and R the incidence of
 * branches and nodes, Y = R' inv(L) R = Z'Z, Z = inv(U') R; a port's inductance is P' inv(Y) P. */
#include "groundrules/inductance.h"

#include "dense.h"

#include <stdlib.h>
#include <string.h>

static bool check(const struct inductance_network *network, struct error *error) {
    for (size_t b = 0; b < network->branches; b++)
        if (network->from[b] >= network->nodes || network->to[b] >= network->nodes)
            return error_set(error, ERROR_INPUT, "branches[%zu] ends at a node that is none", b);
    for (size_t p = 0; p < network->ports; p++)
        if (network->port_out[p] >= network->nodes || network->port_in[p] >= network->nodes)
            return error_set(error, ERROR_INPUT, "ports[%zu] ends at a node that is none", p);
    if (network->branches == 0 || network->nodes < 2 || network->ports == 0)
        return error_set(error, ERROR_INPUT, "a network needs branches, nodes and ports");
    return true;
}

/* Node 0 has no row. */
static void incidence(double *row, size_t from, size_t to) {
    if (from > 0)
        row[from - 1] += 1.0;
    if (to > 0)
        row[to - 1] -= 1.0;
}

/* column := inv(U) column, U in the upper triangle of a. */
static void back_substitute(size_t rows, size_t stride, const double *a, double *column) {
    for (size_t i = rows; i-- > 0;) {
        double sum = column[i];
        for (size_t j = i + 1; j < rows; j++)
            sum -= a[i * stride + j] * column[j];
        column[i] = sum / a[i * stride + i];
    }
}

static void port_currents(const struct inductance_network *network, const double *first,
                          const double *second, double *potential, double *currents) {
    size_t n = network->nodes - 1, width = network->branches + n;
    for (size_t p = 0; p < network->ports; p++) {
        double *current = currents + p * network->branches;
        for (size_t i = 0; i < n; i++)
            potential[i] = second[i * (n + network->ports) + n + p];
        back_substitute(n, n + network->ports, second, potential);
        for (size_t b = 0; b < network->branches; b++) {
            current[b] = 0.0;
            for (size_t i = 0; i < n; i++)
                current[b] += first[b * width + network->branches + i] * potential[i];
        }
        back_substitute(network->branches, width, first, current);
    }
}

/* Upper triangle of extra columns' products Y'Y into `to`, whose rows are `stride` long. */
static void products(size_t rows, size_t extra, const double *a, size_t stride, double *to,
                     size_t to_stride) {
    for (size_t i = 0; i < extra; i++)
        for (size_t j = i; j < extra; j++) {
            double sum = 0.0;
            for (size_t k = 0; k < rows; k++)
                sum += a[k * stride + rows + i] * a[k * stride + rows + j];
            to[i * to_stride + j] = sum;
        }
}

static bool solve(const struct inductance_network *network, double *first, double *second,
                  double *potential, double *inductance, double *currents, struct error *error) {
    size_t n = network->nodes - 1, ports = network->ports, width = network->branches + n;
    for (size_t b = 0; b < network->branches; b++) {
        memcpy(first + b * width, network->matrix + b * network->branches,
               network->branches * sizeof *first);
        incidence(first + b * width + network->branches, network->from[b], network->to[b]);
    }
    if (!dense_eliminate(network->branches, n, width, first, NULL))
        return error_set(error, ERROR_SINGULAR, "the inductances are not positive definite");
    products(network->branches, n, first, width, second, n + ports);
    for (size_t p = 0; p < ports; p++) {
        if (network->port_in[p] > 0)
            second[(network->port_in[p] - 1) * (n + ports) + n + p] += 1.0;
        if (network->port_out[p] > 0)
            second[(network->port_out[p] - 1) * (n + ports) + n + p] -= 1.0;
    }
    if (!dense_eliminate(n, ports, n + ports, second, NULL))
        return error_set(error, ERROR_SINGULAR, "a node of the network hangs in the air");
    products(n, ports, second, n + ports, inductance, ports);
    for (size_t i = 0; i < ports; i++)
        for (size_t j = 0; j < i; j++)
            inductance[i * ports + j] = inductance[j * ports + i];
    if (currents != NULL)
        port_currents(network, first, second, potential, currents);
    return true;
}

bool inductance_network_solve(const struct inductance_network *network, double *inductance,
                              double *currents, struct error *error) {
    if (!check(network, error))
        return false;
    size_t n = network->nodes - 1;
    double *first = calloc(network->branches * (network->branches + n), sizeof *first);
    double *second = calloc(n * (n + network->ports), sizeof *second);
    double *potential = calloc(n, sizeof *potential);
    bool ok = first != NULL && second != NULL && potential != NULL;
    if (!ok)
        error_set(error, ERROR_MEMORY, "out of memory");
    else
        ok = solve(network, first, second, potential, inductance, currents, error);
    free(first);
    free(second);
    free(potential);
    return ok;
}
