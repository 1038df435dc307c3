#include "ends.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS, INPUTS = 2 * LINE_MOST_CONDUCTORS + 1 };

enum node_kind { NODE_FIXED, NODE_STATE, NODE_FREE };

struct nodes {
    enum node_kind kind[MOST];
    size_t state[MOST]; /* index of the state */
    size_t free[MOST];  /* index of the free node */
    size_t states, frees;
    double conductance[MOST];
};

static struct nodes sort_nodes(const struct line_modes *modes, const struct line_end *ends,
                               double negligible) {
    struct nodes nodes = {0};
    for (size_t i = 0; i < modes->count; i++) {
        bool fixed = ends[i].resistance == 0;
        nodes.conductance[i] = fixed ? 0 : 1 / ends[i].resistance;
        double total =
            nodes.conductance[i] + modes->characteristic_admittance[i * modes->count + i];
        if (fixed)
            nodes.kind[i] = NODE_FIXED;
        else if (ends[i].capacitance > negligible * total) {
            nodes.kind[i] = NODE_STATE;
            nodes.state[i] = nodes.states++;
        } else {
            nodes.kind[i] = NODE_FREE;
            nodes.free[i] = nodes.frees++;
        }
    }
    return nodes;
}

/* The nodal current forced by one unit input: 2 Yc T b or G emf e. */
static double forced(const struct line_modes *modes, const struct nodes *nodes,
                     const struct line_end *ends, size_t i, size_t input) {
    size_t count = modes->count;
    if (input == nodes->states + count)
        return nodes->conductance[i] * ends[i].emf;
    if (input < nodes->states)
        return 0;
    size_t m = input - nodes->states;
    double sum = 0;
    for (size_t j = 0; j < count; j++)
        sum += modes->characteristic_admittance[i * count + j] * modes->voltage[j * count + m];
    return 2 * sum;
}

/* V[count][inputs], inputs = states, then waves, then the EMF: known nodes first, then Kirchhoff's
 * law at the free ones. */
static bool node_voltages(const struct line_modes *modes, const struct nodes *nodes,
                          const struct line_end *ends, double voltage[MOST][INPUTS],
                          struct error *error) {
    size_t count = modes->count, inputs = nodes->states + count + 1;
    double matrix[MOST * MOST] = {0}, right[MOST * INPUTS] = {0};
    memset(voltage, 0, sizeof(double) * MOST * INPUTS);
    for (size_t i = 0; i < count; i++) {
        if (nodes->kind[i] == NODE_STATE)
            voltage[i][nodes->state[i]] = 1;
        if (nodes->kind[i] == NODE_FIXED)
            voltage[i][inputs - 1] = ends[i].emf;
    }
    if (nodes->frees == 0)
        return true;
    for (size_t i = 0; i < count; i++) {
        if (nodes->kind[i] != NODE_FREE)
            continue;
        size_t row = nodes->free[i];
        for (size_t input = 0; input < inputs; input++) {
            double sum = forced(modes, nodes, ends, i, input);
            for (size_t j = 0; j < count; j++)
                if (nodes->kind[j] != NODE_FREE)
                    sum -= modes->characteristic_admittance[i * count + j] * voltage[j][input];
            right[row * inputs + input] = sum;
        }
        for (size_t j = 0; j < count; j++)
            if (nodes->kind[j] == NODE_FREE)
                matrix[row * nodes->frees + nodes->free[j]] =
                    modes->characteristic_admittance[i * count + j] +
                    (i == j ? nodes->conductance[i] : 0);
    }
    lapack_int n = (lapack_int)nodes->frees, columns = (lapack_int)inputs;
    if (LAPACKE_dposv(LAPACK_ROW_MAJOR, 'U', n, columns, matrix, n, right, columns) != 0)
        return error_set(error, ERROR_SINGULAR, "the characteristic admittance is not positive");
    for (size_t i = 0; i < count; i++)
        if (nodes->kind[i] == NODE_FREE)
            memcpy(voltage[i], right + nodes->free[i] * inputs, inputs * sizeof(double));
    return true;
}

static void fill_states(const struct line_modes *modes, const struct nodes *nodes,
                        const struct line_end *ends, double voltage[MOST][INPUTS],
                        struct end_system *system) {
    size_t count = modes->count, states = nodes->states;
    for (size_t i = 0; i < count; i++) {
        if (nodes->kind[i] != NODE_STATE)
            continue;
        size_t row = nodes->state[i];
        for (size_t input = 0; input <= states + count; input++) {
            double current =
                forced(modes, nodes, ends, i, input) - nodes->conductance[i] * voltage[i][input];
            for (size_t j = 0; j < count; j++)
                current -= modes->characteristic_admittance[i * count + j] * voltage[j][input];
            double slope = current / ends[i].capacitance;
            if (input < states)
                system->state[row * states + input] = slope;
            else if (input < states + count)
                system->state_of_wave[row * count + input - states] = slope;
            else
                system->state_of_emf[row] = slope;
        }
    }
}

/* charge = T' C; leaving wave = T' C V - b */
static void fill_outputs(const struct line_problem *problem, const struct line_modes *modes,
                         double voltage[MOST][INPUTS], struct end_system *system) {
    size_t count = modes->count, states = system->states;
    double charge[MOST * MOST] = {0};
    for (size_t m = 0; m < count; m++)
        for (size_t j = 0; j < count; j++)
            for (size_t i = 0; i < count; i++)
                charge[m * count + j] +=
                    modes->voltage[i * count + m] * 0.5 *
                    (problem->capacitance[i * count + j] + problem->capacitance[j * count + i]);
    for (size_t i = 0; i < count; i++)
        for (size_t input = 0; input <= states + count; input++) {
            double leaving = input == states + i ? -1 : 0;
            for (size_t j = 0; j < count; j++)
                leaving += charge[i * count + j] * voltage[j][input];
            if (input < states) {
                system->voltage_of_state[i * states + input] = voltage[i][input];
                system->leaving_of_state[i * states + input] = leaving;
            } else if (input < states + count) {
                system->voltage_of_wave[i * count + input - states] = voltage[i][input];
                system->leaving_of_wave[i * count + input - states] = leaving;
            } else {
                system->voltage_of_emf[i] = voltage[i][input];
                system->leaving_of_emf[i] = leaving;
            }
        }
}

bool end_system_build(const struct line_problem *problem, const struct line_modes *modes,
                      const struct line_end *ends, double negligible, struct end_system *system,
                      struct error *error) {
    double voltage[MOST][INPUTS];
    struct nodes nodes = sort_nodes(modes, ends, negligible);
    struct end_system built = {.count = modes->count, .states = nodes.states};
    if (!node_voltages(modes, &nodes, ends, voltage, error))
        return false;
    fill_states(modes, &nodes, ends, voltage, &built);
    fill_outputs(problem, modes, voltage, &built);
    /* The rows of A bound its eigenvalues (Gershgorin), and the fastest is what steps must resolve.
     */
    built.fastest = INFINITY;
    for (size_t i = 0; i < nodes.states; i++) {
        double sum = 0;
        for (size_t j = 0; j < nodes.states; j++)
            sum += fabs(built.state[i * nodes.states + j]);
        built.fastest = fmin(built.fastest, 1 / sum);
    }
    *system = built;
    return true;
}
