#include "coupled_response.h"

#include "worker.h"

#include <math.h>
#include <stdint.h>

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
    [COUPLED_NOISE_PEAK] =
        {"noise_peak", "crosstalk that counts at the receiver", "V<sub>noise</sub>",
         "Largest voltage at the receiver's end for the worst sequence of edges (`bit_time`; else "
         "one "
         "edge), at instants at least `settling` after the start of the latest edge.",
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
        {"impedance", "impedance, neighbours quiet", "Z<sub>0</sub>",
         "Square root of the aggressor's inductance over its Maxwell capacitance.",
         DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_EVEN_IMPEDANCE] =
        {"even_impedance", "even-mode impedance", "Z<sub>e</sub>",
         "Both switching the same way, only for two equal traces; of the victim, "
         "all switching the same way, when there are more.",
         DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_ODD_IMPEDANCE] =
        {"odd_impedance", "odd-mode impedance", "Z<sub>o</sub>",
         "Both switching opposite ways, only for two equal traces; of the victim, "
         "all others switching the opposite way, when there are more.",
         DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [COUPLED_DELAY] = {"delay", "delay per length, neighbours quiet", "t<sub>d</sub>",
                       "Square root of the aggressor's inductance times its Maxwell capacitance.",
                       DIMENSION_SLOWNESS, MODEL_NEITHER, NULL},
    [COUPLED_INDUCTANCE] = {"inductance", "aggressor's inductance per length", "L<sub>a</sub>",
                            "External inductance per metre.", DIMENSION_INDUCTANCE_PER_LENGTH,
                            MODEL_NEITHER, NULL},
    [COUPLED_VICTIM_INDUCTANCE] = {"victim_inductance", "victim's inductance per length",
                                   "L<sub>v</sub>", "External inductance per metre.",
                                   DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_MUTUAL_INDUCTANCE] =
        {"mutual_inductance", "mutual inductance per length", "L<sub>m</sub>",
         "Mutual inductance of the victim and the nearest aggressor per metre.",
         DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLED_CAPACITANCE] = {"capacitance", "aggressor's capacitance per length", "C<sub>a</sub>",
                             "Maxwell diagonal: to ground and to the neighbours.",
                             DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_VICTIM_CAPACITANCE] = {"victim_capacitance", "victim's capacitance per length",
                                    "C<sub>v</sub>",
                                    "Maxwell diagonal: to ground and to the neighbours.",
                                    DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [COUPLED_MUTUAL_CAPACITANCE] =
        {"mutual_capacitance", "mutual capacitance per length", "C<sub>m</sub>",
         "Capacitance between the victim and the nearest aggressor, positive.",
         DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
};

/* The victim and its nearest aggressor, mutual capacitance positive. */
struct nearest {
    double inductance, victim_inductance, mutual_inductance;
    double capacitance, victim_capacitance, mutual_capacitance;
};

static struct nearest nearest_of(const struct coupled_set *set) {
    size_t a = COUPLED_AGGRESSOR, v = COUPLED_VICTIM, count = set->count;
    return (struct nearest){
        .inductance = set->inductance[a * count + a],
        .victim_inductance = set->inductance[v * count + v],
        .mutual_inductance = set->inductance[a * count + v],
        .capacitance = set->capacitance[a * count + a],
        .victim_capacitance = set->capacitance[v * count + v],
        .mutual_capacitance = -set->capacitance[a * count + v],
    };
}

static void fill_matrices(const struct nearest *pair, double *outputs) {
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

/* Below fourteen decades under the swing there is rounding, not a voltage. */
static double clean_ratio(double ratio) {
    return ratio < 1e-14 ? 0.0 : ratio;
}

static double level(double ratio) {
    return ratio > 0.0 ? 20.0 * log10(ratio) : NAN;
}

static void fill_coefficients(const struct nearest *pair, double error, double *outputs,
                              double *errors) {
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
    errors[COUPLED_FORWARD_COEFFICIENT] = error * (inductive + capacitive);
}

static void fill_pair_modes(const struct nearest *pair, double *outputs) {
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

static bool fill_section(const struct coupled_set *set, const struct coupled_fold *fold,
                         double *outputs, double *errors, struct error *error) {
    struct nearest pair = nearest_of(set);
    fill_matrices(&pair, outputs);
    fill_coefficients(&pair, set->error, outputs, errors);
    if (set->count == 2)
        fill_pair_modes(&pair, outputs);
    else if (!coupled_fold_impedances(fold, &outputs[COUPLED_EVEN_IMPEDANCE],
                                      &outputs[COUPLED_ODD_IMPEDANCE], error))
        return false;
    for (size_t i = COUPLED_INDUCTIVE_COEFFICIENT; i < COUPLED_OUTPUT_COUNT; i++)
        errors[i] = isnan(outputs[i]) ? 0.0 : 2.0 * set->error * fabs(outputs[i]);
    errors[COUPLED_BACKWARD_COEFFICIENT] = 2.0 * set->error * outputs[COUPLED_BACKWARD_COEFFICIENT];
    return true;
}

/* ---- what arrives ---- */

/* `share`: the aggressor that switches alone, SIZE_MAX = all together. */
static struct line_problem line_of(const struct coupled_fold *fold,
                                   const struct coupled_drive *drive, size_t share) {
    struct line_problem problem = coupled_fold_line(fold, drive->length);
    struct line_end driver = {drive->victim_source, 0.0, 0.0};
    struct line_end receiver = {drive->victim_load, drive->victim_load_capacitance, 0.0};
    for (size_t a = 0; a < fold->count; a++) {
        double emf = share == SIZE_MAX || share == a ? fold->emf[a] : 0.0;
        problem.near[a] = (struct line_end){drive->source, 0.0, emf};
        problem.far[a] = (struct line_end){drive->load, drive->load_capacitance, 0.0};
    }
    problem.near[COUPLED_VICTIM] = drive->receiver_near ? receiver : driver;
    problem.far[COUPLED_VICTIM] = drive->receiver_near ? driver : receiver;
    return problem;
}

/* At one end of the victim, V per volt of swing, with absolute errors. */
struct arrival {
    double peak, peak_error;
    double free, clocked, sequence_error;
    double noise, noise_error;
};

static void add_peak(struct arrival *arrival, struct line_peak peak) {
    arrival->peak += peak.highest;
    arrival->peak_error += peak.highest * peak.error;
}

static void add_sequence(struct arrival *arrival, struct line_sequence sequence) {
    arrival->free += sequence.free;
    arrival->clocked += sequence.clocked;
    arrival->sequence_error += sequence.free * sequence.error;
}

static void add_settled(struct arrival *arrival, struct line_settled settled) {
    arrival->noise += settled.free;
    arrival->noise_error += settled.error;
}

/* Adds to both ends, [2]. */
static bool add_response(const struct line_response *response, const struct coupled_drive *drive,
                         struct arrival *arrival, struct error *error) {
    struct line_peak peak[2];
    struct line_sequence sequence[2];
    struct line_settled settled[2];
    if (!line_response_peaks(response, COUPLED_VICTIM, drive->edge, &peak[0], &peak[1], error))
        return error_in(error, "line");
    bool many = drive->bit_time > 0.0, late = drive->settling > 0.0;
    if (many && !line_response_sequences(response, COUPLED_VICTIM, drive->edge, drive->bit_time,
                                         &sequence[0], &sequence[1], error))
        return error_in(error, "sequence of edges");
    if (late && !line_response_settled(response, COUPLED_VICTIM, drive->edge, drive->bit_time,
                                       drive->settling, &settled[0], &settled[1], error))
        return error_in(error, "settled victim");
    for (size_t end = 0; end < 2; end++) {
        add_peak(&arrival[end], peak[end]);
        if (many)
            add_sequence(&arrival[end], sequence[end]);
        if (late)
            add_settled(&arrival[end], settled[end]);
    }
    return true;
}

/* Without a bit time a sequence is the edge; without settling all of it counts. */
static void complete(const struct coupled_drive *drive, struct arrival *arrival) {
    if (!(drive->bit_time > 0.0)) {
        arrival->free = arrival->clocked = arrival->peak;
        arrival->sequence_error = arrival->peak_error;
    }
    if (!(drive->settling > 0.0)) {
        arrival->noise = arrival->free;
        arrival->noise_error = arrival->sequence_error;
    }
}

/* Aggressors that switch each when it likes reach every sum of their own, so the worst is the sum
 * of their worst; those of one bus are one response. */
static bool arrivals(const struct coupled_fold *fold, const struct coupled_drive *drive,
                     struct model_worker *worker, struct arrival *arrival, struct error *error) {
    bool to_rest = drive->bit_time > 0.0 || drive->settling > 0.0;
    bool first = true;
    for (size_t a = 0; a < fold->count; a++) {
        if (a == COUPLED_VICTIM || (!drive->independent && !first))
            continue;
        struct line_problem problem = line_of(fold, drive, drive->independent ? a : SIZE_MAX);
        const struct line_response *response =
            worker_response(worker, &problem, drive->edge, to_rest, error);
        first = false;
        if (response == NULL)
            return error_in(error, "line");
        if (!add_response(response, drive, arrival, error))
            return false;
    }
    for (size_t end = 0; end < 2; end++)
        complete(drive, &arrival[end]);
    return true;
}

static void fill_peaks(const struct coupled_drive *drive, const struct arrival *near,
                       const struct arrival *far, double field_error, double *outputs,
                       double *errors) {
    double near_ratio = clean_ratio(near->peak), far_ratio = clean_ratio(far->peak);
    double near_error = near_ratio > 0.0 ? near->peak_error / near_ratio : 0.0;
    double far_error = far_ratio > 0.0 ? far->peak_error / far_ratio : 0.0;
    near_error += 2.0 * field_error;
    far_error += 2.0 * field_error;
    outputs[COUPLED_NEAR_END_PEAK] = near_ratio * drive->swing;
    outputs[COUPLED_FAR_END_PEAK] = far_ratio * drive->swing;
    outputs[COUPLED_WORST_PEAK] = fmax(near_ratio, far_ratio) * drive->swing;
    outputs[COUPLED_RECEIVER_PEAK] = (drive->receiver_near ? near_ratio : far_ratio) * drive->swing;
    outputs[COUPLED_NEAR_END_RATIO] = near_ratio;
    outputs[COUPLED_FAR_END_RATIO] = far_ratio;
    outputs[COUPLED_NEAR_END_LEVEL] = level(near_ratio);
    outputs[COUPLED_FAR_END_LEVEL] = level(far_ratio);
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
static void fill_sequences(const struct coupled_drive *drive, const struct arrival *near,
                           const struct arrival *far, double field_error, double *outputs,
                           double *errors) {
    const struct arrival *receiver = drive->receiver_near ? near : far;
    outputs[COUPLED_PATTERN_PEAK] = clean_ratio(fmax(near->free, far->free)) * drive->swing;
    outputs[COUPLED_CLOCKED_PEAK] = clean_ratio(fmax(near->clocked, far->clocked)) * drive->swing;
    outputs[COUPLED_NOISE_PEAK] = clean_ratio(receiver->noise) * drive->swing;
    double uncertain = fmax(near->sequence_error, far->sequence_error) * drive->swing;
    errors[COUPLED_PATTERN_PEAK] = uncertain + 2.0 * field_error * outputs[COUPLED_PATTERN_PEAK];
    errors[COUPLED_CLOCKED_PEAK] = uncertain + 2.0 * field_error * outputs[COUPLED_CLOCKED_PEAK];
    errors[COUPLED_NOISE_PEAK] =
        receiver->noise_error * drive->swing + 2.0 * field_error * outputs[COUPLED_NOISE_PEAK];
}

bool coupled_respond(const struct coupled_set *set, const struct coupled_drive *drive,
                     struct model_worker *worker, double *outputs, double *errors,
                     struct error *error) {
    struct coupled_fold fold = coupled_fold(set);
    struct arrival arrival[2] = {0};
    if (!fill_section(set, &fold, outputs, errors, error) ||
        !arrivals(&fold, drive, worker, arrival, error))
        return false;
    fill_peaks(drive, &arrival[0], &arrival[1], set->error, outputs, errors);
    fill_sequences(drive, &arrival[0], &arrival[1], set->error, outputs, errors);
    return true;
}
