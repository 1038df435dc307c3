/* The terminated pair for given values per length: for measured or published matrices. */

#include "coupled_response.h"
#include "registry.h"

#include <math.h>

enum {
    INDUCTANCE,
    VICTIM_INDUCTANCE,
    MUTUAL_INDUCTANCE,
    CAPACITANCE,
    VICTIM_CAPACITANCE,
    MUTUAL_CAPACITANCE,
    LENGTH,
    SOURCE,
    LOAD,
    LOAD_CAPACITANCE,
    VICTIM_SOURCE,
    VICTIM_LOAD,
    VICTIM_LOAD_CAPACITANCE,
    RECEIVER,
    BIT_TIME,
    SETTLING,
    DC_RESISTANCE,
    SKIN_RESISTANCE,
    DF,
    DIELECTRIC_SHARE,
    SWING,
    EDGE,
    INPUT_COUNT
};

static const struct model_input inputs[INPUT_COUNT] = {
    [INDUCTANCE] = {"inductance", "inductance of the aggressor", DIMENSION_INDUCTANCE_PER_LENGTH,
                    MODEL_SHAPE, NAN, 1e-10, 1e-4, false, NULL, NULL, 0, NULL},
    [VICTIM_INDUCTANCE] = {"victim_inductance",
                           "inductance of the victim; not given: as the inductance",
                           DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_SHAPE, NAN, 1e-10, 1e-4, false,
                           "inductance", NULL, 0, NULL},
    [MUTUAL_INDUCTANCE] = {"mutual_inductance", "mutual inductance",
                           DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_SHAPE, NAN, 0, 1e-4, false, NULL,
                           NULL, 0, NULL},
    [CAPACITANCE] = {"capacitance", "Maxwell diagonal of the aggressor",
                     DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_SHAPE, NAN, 1e-14, 1e-6, false, NULL,
                     NULL, 0, NULL},
    [VICTIM_CAPACITANCE] = {"victim_capacitance",
                            "Maxwell diagonal of the victim; not given: as the capacitance",
                            DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_SHAPE, NAN, 1e-14, 1e-6, false,
                            "capacitance", NULL, 0, NULL},
    [MUTUAL_CAPACITANCE] = {"mutual_capacitance", "capacitance between the two, positive",
                            DIMENSION_CAPACITANCE_PER_LENGTH, MODEL_SHAPE, NAN, 0, 1e-6, false,
                            NULL, NULL, 0, NULL},
    [LENGTH] = COUPLED_LENGTH,
    [SOURCE] = COUPLED_SOURCE,
    [LOAD] = COUPLED_LOAD,
    [LOAD_CAPACITANCE] = COUPLED_LOAD_CAPACITANCE,
    [VICTIM_SOURCE] = COUPLED_VICTIM_SOURCE,
    [VICTIM_LOAD] = COUPLED_VICTIM_LOAD,
    [VICTIM_LOAD_CAPACITANCE] = COUPLED_VICTIM_LOAD_CAPACITANCE,
    [RECEIVER] = COUPLED_RECEIVER,
    [BIT_TIME] = COUPLED_BIT_TIME,
    [SETTLING] = COUPLED_SETTLING,
    [DC_RESISTANCE] = {"dc_resistance", "series resistance of each trace at zero frequency",
                       DIMENSION_RESISTANCE_PER_LENGTH, MODEL_DRIVE, 0, 0, 1e6, false, NULL, NULL,
                       0, NULL},
    [SKIN_RESISTANCE] = {"skin_resistance",
                         "skin-effect resistance of each trace per root of frequency",
                         DIMENSION_SKIN_RESISTANCE, MODEL_DRIVE, 0, 0, 1, false, NULL, NULL, 0,
                         NULL},
    [DF] = {"df", "loss tangent of the dielectric at 1 GHz, where the capacitances hold",
            DIMENSION_NUMBER, MODEL_DRIVE, 0, 0, 0.2, false, NULL, NULL, 0, NULL},
    [DIELECTRIC_SHARE] = {"dielectric_share",
                          "share of the capacitance that follows the dielectric", DIMENSION_RATIO,
                          MODEL_DRIVE, 1, 0, 1, false, NULL, NULL, 0, NULL},
    [SWING] = COUPLED_SWING,
    [EDGE] = COUPLED_EDGE,
};

static bool check(const double *values, struct error *error) {
    double inductive = values[MUTUAL_INDUCTANCE] * values[MUTUAL_INDUCTANCE];
    double capacitive = values[MUTUAL_CAPACITANCE] * values[MUTUAL_CAPACITANCE];
    if (!(inductive < values[INDUCTANCE] * values[VICTIM_INDUCTANCE]))
        return error_set(
            error, ERROR_INPUT,
            "mutual_inductance is %g H/m; it must stay below %g H/m, the geometric mean of the two "
            "inductances",
            values[MUTUAL_INDUCTANCE], sqrt(values[INDUCTANCE] * values[VICTIM_INDUCTANCE]));
    if (!(capacitive < values[CAPACITANCE] * values[VICTIM_CAPACITANCE]))
        return error_set(error, ERROR_INPUT,
                         "mutual_capacitance is %g F/m; it must stay below %g F/m, the geometric "
                         "mean of the two "
                         "capacitances",
                         values[MUTUAL_CAPACITANCE],
                         sqrt(values[CAPACITANCE] * values[VICTIM_CAPACITANCE]));
    return true;
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    (void)memo;
    (void)error;
    for (size_t i = INDUCTANCE; i <= MUTUAL_CAPACITANCE; i++)
        prepared[i] = values[i];
    return true;
}

static void fill_loss(const double *values, struct coupled_set *pair) {
    for (size_t i = 0; i < 2; i++) {
        pair->dc_resistance[3 * i] = values[DC_RESISTANCE];
        pair->skin_resistance[3 * i] = values[SKIN_RESISTANCE];
    }
    for (size_t k = 0; k < 4 && values[DF] > 0.0; k++)
        pair->dielectric_capacitance[k] = values[DIELECTRIC_SHARE] * pair->capacitance[k];
    pair->df = values[DF];
    pair->material_frequency = 1e9;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    struct coupled_set pair = {
        .count = 2,
        .inductance = {prepared[INDUCTANCE], prepared[MUTUAL_INDUCTANCE],
                       prepared[MUTUAL_INDUCTANCE], prepared[VICTIM_INDUCTANCE]},
        .capacitance = {prepared[CAPACITANCE], -prepared[MUTUAL_CAPACITANCE],
                        -prepared[MUTUAL_CAPACITANCE], prepared[VICTIM_CAPACITANCE]},
    };
    fill_loss(values, &pair);
    struct coupled_drive drive = {
        .length = values[LENGTH],
        .swing = values[SWING],
        .edge = values[EDGE],
        .bit_time = values[BIT_TIME],
        .settling = values[SETTLING],
        .source = values[SOURCE],
        .load = values[LOAD],
        .load_capacitance = values[LOAD_CAPACITANCE],
        .victim_source = values[VICTIM_SOURCE],
        .victim_load = values[VICTIM_LOAD],
        .victim_load_capacitance = values[VICTIM_LOAD_CAPACITANCE],
        .receiver_near = values[RECEIVER] == 1.0,
    };
    *flags = 0;
    return coupled_respond(&pair, &drive, worker, answers, errors, error);
}

const struct model model_coupled_lines = {
    .name = "coupled-lines",
    .title = "Coupled lines with given values per length",
    .summary = "What reaches the ends of a terminated pair whose matrices are known, measured or "
               "published?",
    .method = "The given matrices are taken as they are. " COUPLED_LINE_METHOD,
    .validity =
        "Lines of constant section; drivers and receivers are linear. " COUPLED_LOSS_VALIDITY,
    .revision = 2,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = coupled_outputs,
    .output_count = COUPLED_OUTPUT_COUNT,
    .check = check,
    .prepared_count = MUTUAL_CAPACITANCE + 1,
    .prepare = prepare,
    .respond = respond,
};
