/* Traces side by side: the section solved with whatever copper lies between, then the terminated
 * line. */

#include "board_inputs.h"
#include "coupled_response.h"
#include "registry.h"

#include <math.h>

enum {
    HEIGHT,
    WIDTH,
    VICTIM_WIDTH,
    GAP,
    BETWEEN,
    BETWEEN_WIDTH,
    AGGRESSORS,
    THICKNESS,
    DK,
    ETCH,
    MASK,
    MASK_DK,
    COVER,
    COVER_DK,
    EDGE_DISTANCE,
    LENGTH,
    SOURCE,
    LOAD,
    LOAD_CAPACITANCE,
    VICTIM_SOURCE,
    VICTIM_LOAD,
    VICTIM_LOAD_CAPACITANCE,
    RECEIVER,
    BIT_TIME,
    DF,
    MATERIAL_FREQUENCY,
    COPPER_RESISTIVITY,
    FREQUENCY,
    SWING,
    EDGE,
    INPUT_COUNT
};

enum between { BETWEEN_NOTHING, BETWEEN_FLOATING, BETWEEN_TIED_ONE_END, BETWEEN_TIED };
static const char *const between_words[] = {"nothing", "floating", "tied-one-end", "tied", NULL};
static const char *const aggressor_words[] = {"1", "2", "4", NULL};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = BOARD_HEIGHT,
    [WIDTH] = BOARD_WIDTH,
    [VICTIM_WIDTH] = {"victim_width", "width of the victim; not given: as the width",
                      DIMENSION_LENGTH, MODEL_SHAPE, NAN, 10e-6, 50e-3, false, "width", NULL, 0,
                      NULL},
    [GAP] = {"gap", "free distance between the feet of aggressor and victim", DIMENSION_LENGTH,
             MODEL_SHAPE, NAN, 10e-6, 0.1, false, NULL, NULL, 0, NULL},
    [BETWEEN] = {"between", "ground strip midway between the traces, and how it is connected",
                 DIMENSION_WORD, MODEL_CHOICE, BETWEEN_NOTHING, 0, 3, false, NULL, between_words, 0,
                 NULL},
    [BETWEEN_WIDTH] = {"between_width", "width of that strip; needed when there is one",
                       DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 50e-3, false, NULL, NULL, 0, NULL},
    [AGGRESSORS] = {"aggressors", "traces that switch together beside the victim", DIMENSION_WORD,
                    MODEL_CHOICE, 0, 0, 2, false, NULL, aggressor_words, 1, NULL},
    [THICKNESS] = BOARD_THICKNESS,
    [DK] = BOARD_DK,
    [ETCH] = BOARD_ETCH,
    [MASK] = BOARD_MASK,
    [MASK_DK] = BOARD_MASK_DK,
    [COVER] = BOARD_COVER,
    [COVER_DK] = BOARD_COVER_DK,
    [EDGE_DISTANCE] = BOARD_EDGE_DISTANCE,
    [LENGTH] = COUPLED_LENGTH,
    [SOURCE] = COUPLED_SOURCE,
    [LOAD] = COUPLED_LOAD,
    [LOAD_CAPACITANCE] = COUPLED_LOAD_CAPACITANCE,
    [VICTIM_SOURCE] = COUPLED_VICTIM_SOURCE,
    [VICTIM_LOAD] = COUPLED_VICTIM_LOAD,
    [VICTIM_LOAD_CAPACITANCE] = COUPLED_VICTIM_LOAD_CAPACITANCE,
    [RECEIVER] = COUPLED_RECEIVER,
    [BIT_TIME] = COUPLED_BIT_TIME,
    [DF] = BOARD_DF,
    [MATERIAL_FREQUENCY] = BOARD_MATERIAL_FREQUENCY,
    [COPPER_RESISTIVITY] = COUPLED_RESISTIVITY,
    [FREQUENCY] = BOARD_FREQUENCY,
    [SWING] = COUPLED_SWING,
    [EDGE] = COUPLED_EDGE,
};

enum {
    PREPARED_LA,
    PREPARED_LM,
    PREPARED_LV,
    PREPARED_CA,
    PREPARED_CM,
    PREPARED_CV,
    PREPARED_ERROR,
    PREPARED_COUNT
};

static bool has_strip(const double *values) {
    return values[BETWEEN] != BETWEEN_NOTHING;
}

static bool check(const double *values, struct error *error) {
    if (!has_strip(values))
        return true;
    char strip[40], gap[40];
    quantity_print(strip, sizeof strip, values[BETWEEN_WIDTH], DIMENSION_LENGTH, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    quantity_print(gap, sizeof gap, values[GAP], DIMENSION_LENGTH, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    if (!(values[BETWEEN_WIDTH] >= 10e-6))
        return error_set(
            error, ERROR_INPUT,
            "between_width is %s; a strip between the traces needs a width of at least 0.01 mm",
            strip);
    /* Closer than 5 % of the gap on each side there is no strip any more but a short. */
    if (!(values[BETWEEN_WIDTH] <= 0.9 * values[GAP]))
        return error_set(error, ERROR_INPUT,
                         "between_width %s overlaps the traces or nearly touches them: allowed is "
                         "at most 0.9 of "
                         "the gap, which is %s",
                         strip, gap);
    return true;
}

static enum sketch_role strip_role(double between) {
    if (between == BETWEEN_TIED)
        return SKETCH_TIED;
    return between == BETWEEN_FLOATING ? SKETCH_FLOATING : SKETCH_TIED_ONE_END;
}

static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    *drawing = (struct sketch){0};
    double height = values[HEIGHT], top = height + values[THICKNESS];
    double aggressor = -values[GAP] / 2.0, victim = values[GAP] / 2.0,
           strip = values[BETWEEN_WIDTH] / 2.0;
    board_sketch_slab(drawing, height);
    sketch_add_solid(drawing, (struct sketch_solid){SKETCH_AGGRESSOR, aggressor - values[WIDTH],
                                                    aggressor, height, top, "aggressor"});
    if (has_strip(values)) {
        sketch_add_solid(drawing,
                         (struct sketch_solid){strip_role(values[BETWEEN]), -strip, strip, height,
                                               top, between_words[(size_t)values[BETWEEN]]});
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){false, -strip, strip, top, "between_width",
                                                       values[BETWEEN_WIDTH]});
    }
    sketch_add_solid(drawing,
                     (struct sketch_solid){SKETCH_VICTIM, victim, victim + values[VICTIM_WIDTH],
                                           height, top, "victim"});
    sketch_add_dimension(
        drawing, (struct sketch_dimension){false, aggressor, victim, top, "gap", values[GAP]});
    sketch_add_dimension(drawing,
                         (struct sketch_dimension){false, aggressor - values[WIDTH], aggressor, top,
                                                   "width", values[WIDTH]});
    if (values[VICTIM_WIDTH] != values[WIDTH])
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){false, victim, victim + values[VICTIM_WIDTH],
                                                       top, "victim_width", values[VICTIM_WIDTH]});
    sketch_add_dimension(drawing,
                         (struct sketch_dimension){true, 0.0, height, victim + values[VICTIM_WIDTH],
                                                   "height", height});
    return true;
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    struct sketch drawing;
    struct section_problem problem;
    struct section_solution full, pair;
    enum section_tie ties[SECTION_MOST_CONDUCTORS];
    if (!sketch(values, &drawing, error))
        return false;
    sketch_section(&drawing, values[DK], &problem, ties);
    if (!model_memo_section(memo, &problem, &full, error) ||
        !section_reduce(&full, ties, &pair, error))
        return error_in(error, "section");
    prepared[PREPARED_LA] = pair.inductance[0];
    prepared[PREPARED_LM] = pair.inductance[1];
    prepared[PREPARED_LV] = pair.inductance[3];
    prepared[PREPARED_CA] = pair.capacitance[0];
    prepared[PREPARED_CM] = -pair.capacitance[1];
    prepared[PREPARED_CV] = pair.capacitance[3];
    prepared[PREPARED_ERROR] = pair.error;
    return true;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    struct coupled_pair pair = {prepared[PREPARED_LA],   prepared[PREPARED_LV],
                                prepared[PREPARED_LM],   prepared[PREPARED_CA],
                                prepared[PREPARED_CV],   prepared[PREPARED_CM],
                                prepared[PREPARED_ERROR]};
    struct coupled_drive drive = {
        .length = values[LENGTH],
        .swing = values[SWING],
        .edge = values[EDGE],
        .bit_time = values[BIT_TIME],
        .source = values[SOURCE],
        .load = values[LOAD],
        .load_capacitance = values[LOAD_CAPACITANCE],
        .victim_source = values[VICTIM_SOURCE],
        .victim_load = values[VICTIM_LOAD],
        .victim_load_capacitance = values[VICTIM_LOAD_CAPACITANCE],
        .receiver_near = values[RECEIVER] == 1.0,
    };
    if (!coupled_respond(&pair, &drive, worker, answers, errors, error))
        return false;
    *flags = board_flags_of_edge(values[HEIGHT], values[HEIGHT], values[THICKNESS], values[DK],
                                 values[EDGE]);
    if (values[THICKNESS] == 0.0)
        *flags |= 1u << BOARD_FLAG_THIN;
    return true;
}

/* A tenth of the edge for a passage in the dielectric alone, the slowest there is. */
static double steady_length(const double *values) {
    static const double light = 299792458.0, part = 0.1;
    double dk = fmax(values[DK], fmax(values[MASK_DK], values[COVER_DK]));
    return part * values[EDGE] * light / sqrt(fmax(dk, 1.0));
}

const struct model model_coupled_traces = {
    .name = "coupled-traces",
    .title = "Traces side by side",
    .summary = "How much does one trace couple into the next over a ground plane, and what reaches "
               "the ends?",
    .method = BOARD_SECTION_METHOD " " COUPLED_LINE_METHOD,
    .validity = BOARD_SECTION_VALIDITY
    " Drivers and receivers are linear; a strip between the traces is tied "
    "ideally, everywhere or at one point.",
    .revision = 2,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = coupled_outputs,
    .output_count = COUPLED_OUTPUT_COUNT,
    .flags = board_flags,
    .flag_count = BOARD_FLAG_COUNT,
    .check = check,
    .prepared_count = PREPARED_COUNT,
    .prepare = prepare,
    .respond = respond,
    .sketch = sketch,
    .steady_length = steady_length,
};
