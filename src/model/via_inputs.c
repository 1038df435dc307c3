#include "via_inputs.h"

#include <math.h>

const struct model_flag via_flags[VIA_FLAG_COUNT] = {
    [VIA_FLAG_LONG] = {.name = "electrically-long",
                       .meaning = "The current path is longer than a tenth of the wavelength in a "
                                  "laminate of dk 4.3: lumped inductance is beyond its validity."},
    [VIA_FLAG_SLOW] = {.name = "low-frequency",
                       .meaning = "The frequency is so low that the return current spreads through "
                                  "the plane by its resistance: the plane's image is beyond its "
                                  "validity."},
    [VIA_FLAG_ROW] = {.name = "row-wider-than-trace",
                      .meaning = "The row of vias is wider than the trace: the copper that joins "
                                 "them is not counted, the loop weighs more."},
};

unsigned via_flags_of(double size, double height, double frequency) {
    const double copper_resistivity = 1.72e-8, plane = 35e-6, light = 299792458.0, dk = 4.3;
    unsigned flags = 0;
    if (size > 0.1 * light / (sqrt(dk) * frequency))
        flags |= 1u << VIA_FLAG_LONG;
    if (frequency < 10.0 * copper_resistivity / (2.0 * M_PI * INDUCTANCE_MU_0 * plane * height))
        flags |= 1u << VIA_FLAG_SLOW;
    return flags;
}

double via_least_pitch(double diameter) {
    return 1.05 * diameter;
}

struct via_text via_length(double length) {
    struct via_text text;
    quantity_print(text.text, sizeof text.text, length, DIMENSION_LENGTH, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    return text;
}

bool via_check_count(const char *name, double count, struct error *error) {
    return count == floor(count) ||
           error_set(error, ERROR_INPUT, "%s is %g; it must be a whole number", name, count);
}

bool via_check_pitch(double count, double pitch, double diameter, struct error *error) {
    double least = via_least_pitch(diameter);
    /* A hair of slack, so that the value the message names is accepted when it comes back. */
    return count < 2.0 || pitch >= least * (1.0 - 1e-9) ||
           error_set(error, ERROR_INPUT,
                     "via_pitch is %s: vias of %s touch or overlap; the smallest allowed is %s "
                     "(1.05 via_diameter)",
                     via_length(pitch).text, via_length(diameter).text, via_length(least).text);
}

/* A geometric series would leave less; in rings every other harmonic hardly counts, so that what
 * the last ones changed says little, hence the second term (test_ground_vias.c). */
double via_rest(double inductance, double coarser, double diameter, double spacing) {
    double ratio = inductance_barrel_convergence(diameter, spacing);
    return fabs(coarser - inductance) * fmin(1.0, 6.0 * ratio) +
           inductance * (0.005 * ratio * ratio + 1e-8);
}

static bool joined(const double *matrix, size_t count, double *inductance, double *shares,
                   struct error *error) {
    size_t from[VIA_MOST + 1], to[VIA_MOST + 1], in = 1, out = 0;
    for (size_t i = 0; i < count; i++) {
        from[i] = 1;
        to[i] = 0;
    }
    struct inductance_network network = {.branches = count,
                                         .matrix = matrix,
                                         .from = from,
                                         .to = to,
                                         .nodes = 2,
                                         .ports = 1,
                                         .port_in = &in,
                                         .port_out = &out};
    return inductance_network_solve(&network, inductance, shares, error);
}

bool via_joined(const struct inductance_barrels *barrels, double spacing, struct via_group *group,
                struct error *error) {
    enum { MOST = (VIA_MOST + 1) * (VIA_MOST + 1) };
    double matrix[MOST], coarser[MOST], even[MOST], shares[VIA_MOST + 1];
    double coarse = 0.0;
    size_t count = barrels->count;
    if (!inductance_barrels_solve(barrels, matrix, coarser, even, error) ||
        !joined(matrix, count, &group->inductance, shares, error) ||
        !joined(coarser, count, &coarse, NULL, error) ||
        !joined(even, count, &group->even, NULL, error))
        return false;
    group->error = via_rest(group->inductance, coarse, barrels->diameter, spacing);
    group->largest = group->smallest = shares[0];
    for (size_t i = 1; i < count; i++) {
        group->largest = fmax(group->largest, shares[i]);
        group->smallest = fmin(group->smallest, shares[i]);
    }
    return true;
}
