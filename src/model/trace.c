/* One trace over a plane: its section solved, nothing else. */

#include "board_inputs.h"
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
                    "Series resistance at the frequency.", DIMENSION_RESISTANCE_PER_LENGTH,
                    MODEL_HIGHER_IS_WORSE, BOARD_LOSS_NOT_YET},
    [ATTENUATION] = {"attenuation", "attenuation per length", "α",
                     "Loss along the trace at the frequency.", DIMENSION_ATTENUATION,
                     MODEL_HIGHER_IS_WORSE, BOARD_LOSS_NOT_YET},
};

enum { PREPARED_L, PREPARED_C, PREPARED_C0, PREPARED_ERROR, PREPARED_COUNT };

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
    answers[RESISTANCE] = NAN;
    answers[ATTENUATION] = NAN;
    for (size_t i = 0; i < OUTPUT_COUNT; i++)
        errors[i] = isnan(answers[i]) ? 0.0 : fabs(answers[i]) * prepared[PREPARED_ERROR];
    errors[EFFECTIVE_DK] *= 2.0; /* two capacitances */
    struct board board = board_of(values);
    *flags = board_flags_of_section(&board);
    return true;
}

const struct model model_trace = {
    .name = "trace",
    .title = "One trace over a plane",
    .summary = "What impedance, delay, inductance and capacitance has a trace over a ground plane?",
    .method = BOARD_SECTION_METHOD,
    .validity = BOARD_SECTION_VALIDITY,
    .revision = 1,
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
