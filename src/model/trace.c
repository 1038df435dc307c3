/* One trace over a plane: its section solved, nothing else. */

#include "board_inputs.h"
#include "board_loss.h"
#include "groundrules/line.h"
#include "registry.h"

#include <math.h>
#include <string.h>

enum {
    HEIGHT,
    WIDTH,
    ETCH,
    THICKNESS,
    DK,
    DF,
    MATERIAL_FREQUENCY,
    MASK,
    MASK_DK,
    COVER,
    COVER_DK,
    EDGE_DISTANCE,
    COPPER_RESISTIVITY,
    FREQUENCY,
    INPUT_COUNT
};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = BOARD_HEIGHT,
    [WIDTH] = BOARD_WIDTH,
    [ETCH] = BOARD_ETCH,
    [THICKNESS] = BOARD_THICKNESS,
    [DK] = BOARD_DK,
    [DF] = BOARD_DF,
    [MATERIAL_FREQUENCY] = BOARD_MATERIAL_FREQUENCY,
    [MASK] = BOARD_MASK,
    [MASK_DK] = BOARD_MASK_DK,
    [COVER] = BOARD_COVER,
    [COVER_DK] = BOARD_COVER_DK,
    [EDGE_DISTANCE] = BOARD_EDGE_DISTANCE("centre of the trace"),
    [COPPER_RESISTIVITY] = {"copper_resistivity", "resistivity of the copper; 0 = none lost in it",
                            DIMENSION_RESISTIVITY, MODEL_SHAPE, 1.72e-8, 0, 1e-5, false, NULL, NULL,
                            0, NULL},
    [FREQUENCY] = BOARD_FREQUENCY,
};

enum {
    IMPEDANCE,
    EFFECTIVE_DK,
    DELAY,
    INDUCTANCE,
    CAPACITANCE,
    RESISTANCE,
    ATTENUATION,
    OUTPUT_COUNT
};

static const struct model_output outputs[OUTPUT_COUNT] = {
    [IMPEDANCE] = {"impedance", "characteristic impedance", "Z<sub>0</sub>",
                   "Lossless characteristic impedance, square root of L over C.",
                   DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
    [EFFECTIVE_DK] = {"effective_dk", "effective dielectric constant", "ε<sub>eff</sub>",
                      "Capacitance over the capacitance of the same copper in air.",
                      DIMENSION_NUMBER, MODEL_NEITHER, NULL},
    [DELAY] = {"delay", "delay per length", "t<sub>d</sub>", "Time of travel per metre.",
               DIMENSION_SLOWNESS, MODEL_NEITHER, NULL},
    [INDUCTANCE] = {"inductance", "inductance per length", "L", "External inductance per metre.",
                    DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_NEITHER, NULL},
    [CAPACITANCE] = {"capacitance", "capacitance per length", "C",
                     "Capacitance to the plane per metre.", DIMENSION_CAPACITANCE_PER_LENGTH,
                     MODEL_NEITHER, NULL},
    [RESISTANCE] = {"resistance", "resistance per length", "R",
                    "Series resistance of trace and plane at the frequency: the root of the "
                    "squares of DC and skin resistance. None for a thin sheet.",
                    DIMENSION_RESISTANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
    [ATTENUATION] = {"attenuation", "attenuation per length", "α",
                     "Loss in copper and dielectric along the trace at the frequency.",
                     DIMENSION_ATTENUATION, MODEL_HIGHER_IS_WORSE, NULL},
};

enum {
    PREPARED_L,
    PREPARED_C,
    PREPARED_C0,
    PREPARED_ERROR,
    PREPARED_DC,         /* 1/m^2, NAN for a sheet */
    PREPARED_SKIN,       /* 1/m, likewise */
    PREPARED_LOSS_ERROR, /* relative, of the latter */
    PREPARED_DIELECTRIC, /* F/m */
    PREPARED_COUNT
};

static struct board board_of(const double *values) {
    return (struct board){
        .height = values[HEIGHT],
        .thickness = values[THICKNESS],
        .dk = values[DK],
        .etch = values[ETCH],
        .mask = values[MASK],
        .mask_dk = values[MASK_DK],
        .cover = values[COVER],
        .cover_dk = values[COVER_DK],
        .edge_distance = values[EDGE_DISTANCE],
    };
}

static bool check(const double *values, struct error *error) {
    struct board board = board_of(values);
    return board_check(&board, values[WIDTH], error);
}

static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    struct board board = board_of(values);
    double half = values[WIDTH] / 2.0;
    *drawing = (struct sketch){0};
    board_sketch(drawing, &board, 0.0);
    board_sketch_copper(drawing, &board, SKETCH_TRACE, -half, values[WIDTH], "trace");
    sketch_add_dimension(drawing, (struct sketch_dimension){false, -half, half,
                                                            board.height + board.thickness, "width",
                                                            values[WIDTH]});
    board_sketch_dimensions(drawing, &board, half, 0.0);
    return true;
}

static bool prepare_loss(const double *values, const struct section_problem *problem,
                         struct section_solution *solution, const enum section_tie *ties,
                         double *prepared, struct model_memo *memo, struct error *error) {
    struct board_loss loss = {0};
    bool lossless = values[COPPER_RESISTIVITY] == 0.0, sheet = values[THICKNESS] == 0.0;
    if (!lossless && !sheet && !board_loss(problem, solution, ties, memo, &loss, error))
        return error_in(error, "section");
    if (values[DF] > 0.0 && !section_dielectric_capacitance(problem, solution, error))
        return error_in(error, "section");
    prepared[PREPARED_DC] = sheet && !lossless ? NAN : loss.dc[0];
    prepared[PREPARED_SKIN] = sheet && !lossless ? NAN : loss.skin[0];
    prepared[PREPARED_LOSS_ERROR] = loss.error;
    prepared[PREPARED_DIELECTRIC] = values[DF] > 0.0 ? solution->dielectric_capacitance[0] : 0.0;
    return true;
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    struct board board = board_of(values);
    struct sketch drawing;
    struct section_problem problem;
    struct section_solution solution;
    enum section_tie ties[SECTION_MOST_CONDUCTORS];
    if (!sketch(values, &drawing, error))
        return false;
    board_section(&drawing, &board, &problem, ties);
    if (!model_memo_section(memo, &problem, &solution, error))
        return error_in(error, "section");
    prepared[PREPARED_L] = solution.inductance[0];
    prepared[PREPARED_C] = solution.capacitance[0];
    prepared[PREPARED_C0] = solution.vacuum_capacitance[0];
    prepared[PREPARED_ERROR] = solution.error;
    return prepare_loss(values, &problem, &solution, ties, prepared, memo, error);
}

/* The line's law adds DC and skin resistance, which counts the copper twice where both are felt;
 * the root of their squares is right at either end.  What is taken off is given as DC resistance,
 * so that the skin's reactance stays. */
static bool fill_loss(const double *values, const double *prepared, double *answers,
                      struct error *error) {
    double frequency = values[FREQUENCY], resistivity = values[COPPER_RESISTIVITY];
    double surface = section_surface_resistance(resistivity);
    double dc = resistivity * prepared[PREPARED_DC];
    double skin = surface * prepared[PREPARED_SKIN] * sqrt(frequency);
    double complex constant;
    answers[RESISTANCE] = hypot(dc, skin);
    answers[ATTENUATION] = NAN;
    if (isnan(answers[RESISTANCE]))
        return true;
    struct line_problem line = {.count = 1,
                                .length = 1.0,
                                .inductance = {prepared[PREPARED_L]},
                                .capacitance = {prepared[PREPARED_C]},
                                .dc_resistance = {answers[RESISTANCE] - skin},
                                .skin_resistance = {surface * prepared[PREPARED_SKIN]},
                                .dielectric_capacitance = {prepared[PREPARED_DIELECTRIC]},
                                .df = values[DF],
                                .material_frequency = values[MATERIAL_FREQUENCY]};
    if (!line_propagation(&line, frequency, &constant, error))
        return false;
    answers[ATTENUATION] = 20.0 / M_LN10 * creal(constant);
    return true;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    (void)worker;
    (void)error;
    double inductance = prepared[PREPARED_L], capacitance = prepared[PREPARED_C];
    answers[IMPEDANCE] = sqrt(inductance / capacitance);
    answers[EFFECTIVE_DK] = capacitance / prepared[PREPARED_C0];
    answers[DELAY] = sqrt(inductance * capacitance);
    answers[INDUCTANCE] = inductance;
    answers[CAPACITANCE] = capacitance;
    if (!fill_loss(values, prepared, answers, error))
        return error_in(error, "line");
    for (size_t i = 0; i < OUTPUT_COUNT; i++)
        errors[i] = isnan(answers[i]) ? 0.0 : fabs(answers[i]) * prepared[PREPARED_ERROR];
    errors[EFFECTIVE_DK] *= 2.0; /* two capacitances */
    if (!isnan(answers[RESISTANCE])) {
        errors[RESISTANCE] = answers[RESISTANCE] * prepared[PREPARED_LOSS_ERROR];
        errors[ATTENUATION] =
            answers[ATTENUATION] * (prepared[PREPARED_LOSS_ERROR] + prepared[PREPARED_ERROR]);
    }
    struct board board = board_of(values);
    *flags = board_flags_of_section(&board);
    return true;
}

const struct model model_trace = {
    .name = "trace",
    .title = "One trace over a plane",
    .summary =
        "What impedance, delay, inductance, capacitance and loss has a trace over a ground plane?",
    .method = BOARD_SECTION_METHOD " " BOARD_LOSS_METHOD,
    .validity = BOARD_SECTION_VALIDITY " " BOARD_LOSS_VALIDITY,
    .revision = 2,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = outputs,
    .output_count = OUTPUT_COUNT,
    .flags = board_flags,
    .flag_count = BOARD_FLAG_COUNT,
    .check = check,
    .prepared_count = PREPARED_COUNT,
    .prepare = prepare,
    .respond = respond,
    .sketch = sketch,
};
