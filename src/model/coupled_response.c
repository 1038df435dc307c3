#include "coupled_response.h"

#include "worker.h"

#include <math.h>
#include <string.h>

const char *const coupled_receiver_words[] = {"far", "near", NULL};

const struct model_output coupled_outputs[COUPLED_OUTPUT_COUNT] = {
    [COUPLED_NEAR_END_PEAK] =
        {"near_end_peak", "near-end peak", "V<sub>near</sub>",
         "Largest voltage at the victim's near end, the aggressor's driver end, for one edge.",
         DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_FAR_END_PEAK] = {"far_end_peak", "far-end peak", "V<sub>far</sub>",
                              "Largest voltage at the victim's far end for one edge.",
                              DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_WORST_PEAK] = {"worst_peak", "larger crosstalk peak", "V<sub>peak</sub>",
                            "The larger of the near-end and the far-end peak.", DIMENSION_VOLTAGE,
                            MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_RECEIVER_PEAK] = {"receiver_peak", "crosstalk peak at the receiver", "V<sub>rec</sub>",
                               "Largest voltage at the end where the victim's receiver sits.",
                               DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_PATTERN_PEAK] = {"pattern_peak", "peak of the worst sequence of edges", NULL,
                              "Largest voltage for the worst sequence of edges that are at least "
                              "`bit_time` apart, larger end.",
                              DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_CLOCKED_PEAK] =
        {"clocked_peak", "peak of the worst clocked sequence", NULL,
         "Largest voltage for edges on whole multiples of the bit time, larger end.",
         DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_NEAR_END_RATIO] = {"near_end_ratio", "near-end peak over swing", NULL,
                                "Near-end peak over the EMF's swing.", DIMENSION_RATIO,
                                MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_FAR_END_RATIO] = {"far_end_ratio", "far-end peak over swing", NULL,
                               "Far-end peak over the EMF's swing.", DIMENSION_RATIO,
                               MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_NEAR_END_LEVEL] = {"near_end_level", "near-end level", NULL,
                                "20 log of the near-end peak over the EMF's swing.",
                                DIMENSION_LEVEL, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_FAR_END_LEVEL] = {"far_end_level", "far-end level", NULL,
                               "20 log of the far-end peak over the EMF's swing.", DIMENSION_LEVEL,
                               MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_BACKWARD_COEFFICIENT] =
        {"backward_coefficient", "backward coefficient", "K<sub>b</sub>",
         "Weak-coupling near-end ratio of a long matched pair: a quarter of the "
         "inductive plus the capacitive coefficient.",
         DIMENSION_RATIO, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_FORWARD_COEFFICIENT] =
        {"forward_coefficient", "forward coefficient", "K<sub>f</sub>",
         "Weak-coupling far-end voltage of a matched pair per length and per rate of "
         "the aggressor's voltage; negative where the inductive part prevails.",
         DIMENSION_SLOWNESS, MODEL_NEITHER, NULL},
    [COUPLED_INDUCTIVE_COEFFICIENT] = {"inductive_coefficient", "inductive coefficient",
                                       "K<sub>L</sub>",
                                       "Mutual inductance over the aggressor's inductance.",
                                       DIMENSION_RATIO, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_CAPACITIVE_COEFFICIENT] = {"capacitive_coefficient", "capacitive coefficient",
                                        "K<sub>C</sub>",
                                        "Mutual capacitance over the victim's Maxwell capacitance.",
                                        DIMENSION_RATIO, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_IMPEDANCE] =
        {"impedance", "impedance, neighbour quiet", "Z<sub>0</sub>",
         "Square root of the aggressor's inductance over its Maxwell capacitance.",
         DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_EVEN_IMPEDANCE] = {"even_impedance", "even-mode impedance", "Z<sub>e</sub>",
                                "Both switching the same way; only for two equal traces.",
                                DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_ODD_IMPEDANCE] = {"odd_impedance", "odd-mode impedance", "Z<sub>o</sub>",
                               "Both switching opposite ways; only for two equal traces.",
                               DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_DELAY] = {"delay", "delay per length, neighbour quiet", "t<sub>d</sub>",
                       "Square root of the aggressor's inductance times its Maxwell capacitance.",
                       DIMENSION_SLOWNESS, MODEL_NEITHER, NULL},
    [COUPLED_INDUCTANCE] = {"inductance", "aggressor's inductance per length", "L<sub>a</sub>",
                            "External inductance per metre.", DIMENSION_INDUCTANCE_PER_LENGTH,
                            MODEL_NEITHER, NULL},
    [COUPLED_VICTIM_INDUCTANCE] = {"victim_inductance", "victim's inductance per length",
                                   "L<sub>v</sub>", "External inductance per metre.",
                                   DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_MUTUAL_INDUCTANCE] = {"mutual_inductance", "mutual inductance per length",
                                   "L<sub>m</sub>", "Mutual inductance per metre.",
                                   DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_CAPACITANCE] = {"capacitance", "aggressor's capacitance per length", "C<sub>a</sub>",
                             "Maxwell diagonal: to ground and to the neighbour.",
                             DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_VICTIM_CAPACITANCE] = {"victim_capacitance", "victim's capacitance per length",
                                    "C<sub>v</sub>",
                                    "Maxwell diagonal: to ground and to the neighbour.",
                                    DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_MUTUAL_CAPACITANCE] = {"mutual_capacitance", "mutual capacitance per length",
                                    "C<sub>m</sub>",
                                    "Capacitance between the two traces, positive.",
                                    DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
};

static void fill_matrices(const struct coupled_pair *pair, double *outputs) {
    double impedance = sqrt(pair->inductance / pair->capacitance);
    outputs[COUPLED_IMPEDANCE] = impedance;
    outputs[COUPLED_DELAY] = sqrt(pair->inductance * pair->capacitance);
    outputs[COUPLED_INDUCTANCE] = pair->inductance;
    outputs[COUPLED_VICTIM_INDUCTANCE] = pair->victim_inductance;
    outputs[COUPLED_MUTUAL_INDUCTANCE] = pair->mutual_inductance;
    outputs[COUPLED_CAPACITANCE] = pair->capacitance;
    outputs[COUPLED_VICTIM_CAPACITANCE] = pair->victim_capacitance;
    outputs[COUPLED_MUTUAL_CAPACITANCE] = pair->mutual_capacitance;
}

static struct line_problem line_of(const struct coupled_pair *pair,
                                   const struct coupled_drive *drive) {
    struct line_problem problem;
    memset(&problem, 0, sizeof problem);
    problem.count = 2;
    problem.length = drive->length;
    problem.inductance[0] = pair->inductance;
    problem.inductance[1] = problem.inductance[2] = pair->mutual_inductance;
    problem.inductance[3] = pair->victim_inductance;
    problem.capacitance[0] = pair->capacitance;
    problem.capacitance[1] = problem.capacitance[2] = -pair->mutual_capacitance;
    problem.capacitance[3] = pair->victim_capacitance;
    struct line_end driver = {drive->victim_source, 0.0};
    struct line_end receiver = {drive->victim_load, drive->victim_load_capacitance};
    problem.near[0] = (struct line_end){drive->source, 0.0};
    problem.far[0] = (struct line_end){drive->load, drive->load_capacitance};
    problem.near[1] = drive->receiver_near ? receiver : driver;
    problem.far[1] = drive->receiver_near ? driver : receiver;
    return problem;
}

/* Below fourteen decades under the swing there is rounding, not a voltage. */
static double clean_ratio(double ratio) {
    return ratio < 1e-14 ? 0.0 : ratio;
}

static double level(double ratio) {
    return ratio > 0.0 ? 20.0 * log10(ratio) : NAN;
}

static void fill_coefficients(const struct coupled_pair *pair, double *outputs, double *errors) {
    double aggressor_impedance = sqrt(pair->inductance / pair->capacitance);
    double victim_impedance = sqrt(pair->victim_inductance / pair->victim_capacitance);
    double inductive = pair->mutual_inductance / aggressor_impedance;
    double capacitive = pair->mutual_capacitance * victim_impedance;
    outputs[COUPLED_INDUCTIVE_COEFFICIENT] = pair->mutual_inductance / pair->inductance;
    outputs[COUPLED_CAPACITIVE_COEFFICIENT] = pair->mutual_capacitance / pair->victim_capacitance;
    outputs[COUPLED_BACKWARD_COEFFICIENT] =
        (outputs[COUPLED_INDUCTIVE_COEFFICIENT] + outputs[COUPLED_CAPACITIVE_COEFFICIENT]) / 4.0;
    outputs[COUPLED_FORWARD_COEFFICIENT] = (capacitive - inductive) / 2.0;
    /* A difference: its error is that of the terms, not of the result. */
    errors[COUPLED_FORWARD_COEFFICIENT] = pair->error * (inductive + capacitive);
}

static void fill_modes(const struct coupled_pair *pair, double *outputs) {
    bool equal = fabs(pair->inductance - pair->victim_inductance) <= 1e-9 * pair->inductance &&
                 fabs(pair->capacitance - pair->victim_capacitance) <= 1e-9 * pair->capacitance;
    if (!equal) {
        outputs[COUPLED_EVEN_IMPEDANCE] = outputs[COUPLED_ODD_IMPEDANCE] = NAN;
        return;
    }
    outputs[COUPLED_EVEN_IMPEDANCE] = sqrt((pair->inductance + pair->mutual_inductance) /
                                           (pair->capacitance - pair->mutual_capacitance));
    outputs[COUPLED_ODD_IMPEDANCE] = sqrt((pair->inductance - pair->mutual_inductance) /
                                          (pair->capacitance + pair->mutual_capacitance));
}

static void fill_peaks(const struct coupled_drive *drive, struct line_peak near,
                       struct line_peak far, double field_error, double *outputs, double *errors) {
    double near_ratio = clean_ratio(near.highest), far_ratio = clean_ratio(far.highest);
    outputs[COUPLED_NEAR_END_PEAK] = near_ratio * drive->swing;
    outputs[COUPLED_FAR_END_PEAK] = far_ratio * drive->swing;
    outputs[COUPLED_WORST_PEAK] = fmax(near_ratio, far_ratio) * drive->swing;
    outputs[COUPLED_RECEIVER_PEAK] = (drive->receiver_near ? near_ratio : far_ratio) * drive->swing;
    outputs[COUPLED_NEAR_END_RATIO] = near_ratio;
    outputs[COUPLED_FAR_END_RATIO] = far_ratio;
    outputs[COUPLED_NEAR_END_LEVEL] = level(near_ratio);
    outputs[COUPLED_FAR_END_LEVEL] = level(far_ratio);
    double near_error = near.error + 2.0 * field_error, far_error = far.error + 2.0 * field_error;
    errors[COUPLED_NEAR_END_PEAK] = near_error * outputs[COUPLED_NEAR_END_PEAK];
    errors[COUPLED_FAR_END_PEAK] = far_error * outputs[COUPLED_FAR_END_PEAK];
    errors[COUPLED_WORST_PEAK] = fmax(errors[COUPLED_NEAR_END_PEAK], errors[COUPLED_FAR_END_PEAK]);
    errors[COUPLED_RECEIVER_PEAK] =
        errors[drive->receiver_near ? COUPLED_NEAR_END_PEAK : COUPLED_FAR_END_PEAK];
    errors[COUPLED_NEAR_END_RATIO] = near_error * near_ratio;
    errors[COUPLED_FAR_END_RATIO] = far_error * far_ratio;
    errors[COUPLED_NEAR_END_LEVEL] = 20.0 / M_LN10 * near_error;
    errors[COUPLED_FAR_END_LEVEL] = 20.0 / M_LN10 * far_error;
}

/* The errors of both ends in proportion to their own peaks; the larger end counts. */
static bool fill_sequences(const struct coupled_drive *drive, const struct line_response *response,
                           double field_error, double *outputs, double *errors,
                           struct error *error) {
    struct line_sequence near, far;
    outputs[COUPLED_PATTERN_PEAK] = outputs[COUPLED_CLOCKED_PEAK] = outputs[COUPLED_WORST_PEAK];
    errors[COUPLED_PATTERN_PEAK] = errors[COUPLED_CLOCKED_PEAK] = errors[COUPLED_WORST_PEAK];
    if (!(drive->bit_time > 0.0))
        return true;
    if (!line_response_sequences(response, 1, drive->edge, drive->bit_time, &near, &far, error))
        return error_in(error, "sequence of edges");
    outputs[COUPLED_PATTERN_PEAK] = fmax(near.free, far.free) * drive->swing;
    outputs[COUPLED_CLOCKED_PEAK] = fmax(near.clocked, far.clocked) * drive->swing;
    double uncertain = fmax(near.error * near.free, far.error * far.free) * drive->swing;
    errors[COUPLED_PATTERN_PEAK] = uncertain + 2.0 * field_error * outputs[COUPLED_PATTERN_PEAK];
    errors[COUPLED_CLOCKED_PEAK] = uncertain + 2.0 * field_error * outputs[COUPLED_CLOCKED_PEAK];
    return true;
}

bool coupled_respond(const struct coupled_pair *pair, const struct coupled_drive *drive,
                     struct model_worker *worker, double *outputs, double *errors,
                     struct error *error) {
    struct line_problem problem = line_of(pair, drive);
    const struct line_response *response =
        worker_response(worker, &problem, drive->edge, drive->bit_time > 0.0, error);
    struct line_peak near, far;
    if (response == NULL || !line_response_peaks(response, 1, drive->edge, &near, &far, error))
        return error_in(error, "line");
    fill_matrices(pair, outputs);
    fill_coefficients(pair, outputs, errors);
    fill_modes(pair, outputs);
    for (size_t i = COUPLED_INDUCTIVE_COEFFICIENT; i < COUPLED_OUTPUT_COUNT; i++)
        errors[i] = isnan(outputs[i]) ? 0.0 : 2.0 * pair->error * fabs(outputs[i]);
    errors[COUPLED_BACKWARD_COEFFICIENT] =
        2.0 * pair->error * outputs[COUPLED_BACKWARD_COEFFICIENT];
    fill_peaks(drive, near, far, pair->error, outputs, errors);
    return fill_sequences(drive, response, pair->error, outputs, errors, error);
}
