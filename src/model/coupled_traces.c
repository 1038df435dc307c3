/* Traces side by side: the section solved with whatever copper lies between, then the terminated
 * line. */

#include "board_inputs.h"
#include "board_loss.h"
#include "coupled_response.h"
#include "registry.h"

#include <math.h>
#include <string.h>

enum {
    HEIGHT,
    WIDTH,
    VICTIM_WIDTH,
    GAP,
    BETWEEN,
    BETWEEN_WIDTH,
    AGGRESSORS,
    SWITCHING,
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
    SETTLING,
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
enum switching { SWITCHING_TOGETHER, SWITCHING_INDEPENDENT };
static const char *const switching_words[] = {"together", "independent", NULL};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = BOARD_HEIGHT,
    [WIDTH] = BOARD_WIDTH,
    [VICTIM_WIDTH] = {"victim_width", "width of the victim; not given: as the width",
                      DIMENSION_LENGTH, MODEL_SHAPE, NAN, 10e-6, 50e-3, false, "width", NULL, 0,
                      NULL},
    [GAP] = {"gap", "free distance between the feet of neighbouring traces", DIMENSION_LENGTH,
             MODEL_SHAPE, NAN, 10e-6, 0.1, false, NULL, NULL, 0, NULL},
    [BETWEEN] = {"between",
                 "ground strip midway between the victim and the traces next to it, and how it is "
                 "connected",
                 DIMENSION_WORD, MODEL_CHOICE, BETWEEN_NOTHING, 0, 3, false, NULL, between_words, 0,
                 NULL},
    [BETWEEN_WIDTH] = {"between_width", "width of that strip; needed when there is one",
                       DIMENSION_LENGTH, MODEL_SHAPE, 0, 0, 50e-3, false, NULL, NULL, 0, NULL},
    [AGGRESSORS] =
        {"aggressors",
         "traces of the same width and gap that switch beside the victim: 1 on one side, "
         "2 on both, 4 two on each side",
         DIMENSION_WORD, MODEL_CHOICE, 0, 0, 2, false, NULL, aggressor_words, 0, NULL},
    [SWITCHING] =
        {"switching",
         "whether several aggressors switch at the same time, as one bus, or each when it "
         "likes, so that their worst cases add up",
         DIMENSION_WORD, MODEL_CHOICE, SWITCHING_TOGETHER, 0, 1, false, NULL, switching_words, 0,
         NULL},
    [THICKNESS] = BOARD_THICKNESS,
    [DK] = BOARD_DK,
    [ETCH] = BOARD_ETCH,
    [MASK] = BOARD_MASK,
    [MASK_DK] = BOARD_MASK_DK,
    [COVER] = BOARD_COVER,
    [COVER_DK] = BOARD_COVER_DK,
    [EDGE_DISTANCE] =
        BOARD_EDGE_DISTANCE("centre of the last trace on the right (of one aggressor: the victim)"),
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
    [DF] = BOARD_DF,
    [MATERIAL_FREQUENCY] = BOARD_MATERIAL_FREQUENCY,
    [COPPER_RESISTIVITY] = COUPLED_RESISTIVITY,
    [FREQUENCY] = COUPLED_FREQUENCY,
    [SWING] = COUPLED_SWING,
    [EDGE] = COUPLED_EDGE,
};

enum {
    PREPARED_ERROR,
    PREPARED_INDUCTANCE,
    PREPARED_CAPACITANCE = PREPARED_INDUCTANCE + COUPLED_MOST * COUPLED_MOST,
    PREPARED_DC = PREPARED_CAPACITANCE + COUPLED_MOST * COUPLED_MOST,
    PREPARED_SKIN = PREPARED_DC + COUPLED_MOST * COUPLED_MOST,
    PREPARED_DIELECTRIC = PREPARED_SKIN + COUPLED_MOST * COUPLED_MOST,
    PREPARED_COUNT = PREPARED_DIELECTRIC + COUPLED_MOST * COUPLED_MOST
};

static bool has_strip(const double *values) {
    return values[BETWEEN] != BETWEEN_NOTHING;
}

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

static size_t aggressors_of(const double *values) {
    static const size_t count[] = {1, 2, 4};
    return count[(size_t)values[AGGRESSORS]];
}

static bool check_strip(const double *values, struct error *error) {
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

static bool check(const double *values, struct error *error) {
    struct board board = board_of(values);
    double narrowest = fmin(values[WIDTH], values[VICTIM_WIDTH]);
    if (has_strip(values) && !check_strip(values, error))
        return false;
    if (has_strip(values))
        narrowest = fmin(narrowest, values[BETWEEN_WIDTH]);
    return board_check(&board, narrowest, error) &&
           board_loss_check(values[THICKNESS], values[COPPER_RESISTIVITY], error);
}

static enum sketch_role strip_role(double between) {
    if (between == BETWEEN_TIED)
        return SKETCH_TIED;
    return between == BETWEEN_FLOATING ? SKETCH_FLOATING : SKETCH_TIED_ONE_END;
}

/* Left edges, x = 0 midway between the victim and its neighbour on the left. */
struct places {
    size_t left, right; /* aggressors on either side */
    double victim, pitch;
    double last_centre; /* of the last trace on the right */
};

static struct places places_of(const double *values) {
    size_t aggressors = aggressors_of(values);
    struct places places = {
        .left = (aggressors + 1) / 2,
        .right = aggressors / 2,
        .victim = values[GAP] / 2.0,
        .pitch = values[WIDTH] + values[GAP],
    };
    places.last_centre = places.victim + values[VICTIM_WIDTH] / 2.0;
    if (places.right > 0)
        places.last_centre = places.victim + values[VICTIM_WIDTH] +
                             (double)places.right * places.pitch - values[WIDTH] / 2.0;
    return places;
}

static void sketch_strip(struct sketch *drawing, const struct board *board, const double *values,
                         double centre) {
    double width = values[BETWEEN_WIDTH];
    if (has_strip(values))
        board_sketch_copper(drawing, board, strip_role(values[BETWEEN]), centre - width / 2.0,
                            width, between_words[(size_t)values[BETWEEN]]);
}

static void sketch_copper(struct sketch *drawing, const struct board *board, const double *values,
                          const struct places *places) {
    double right = places->victim + values[VICTIM_WIDTH] + values[GAP];
    for (size_t k = places->left; k-- > 0;)
        board_sketch_copper(drawing, board, SKETCH_AGGRESSOR,
                            -values[GAP] / 2.0 - values[WIDTH] - (double)k * places->pitch,
                            values[WIDTH], "aggressor");
    sketch_strip(drawing, board, values, 0.0);
    board_sketch_copper(drawing, board, SKETCH_VICTIM, places->victim, values[VICTIM_WIDTH],
                        "victim");
    if (places->right > 0)
        sketch_strip(drawing, board, values, right - values[GAP] / 2.0);
    for (size_t k = 0; k < places->right; k++)
        board_sketch_copper(drawing, board, SKETCH_AGGRESSOR, right + (double)k * places->pitch,
                            values[WIDTH], "aggressor");
}

static void sketch_dimensions(struct sketch *drawing, const struct board *board,
                              const double *values, const struct places *places) {
    double top = board->height + board->thickness, strip = values[BETWEEN_WIDTH] / 2.0;
    double aggressor = -values[GAP] / 2.0, victim = places->victim;
    if (has_strip(values))
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){false, -strip, strip, top, "between_width",
                                                       values[BETWEEN_WIDTH]});
    sketch_add_dimension(
        drawing, (struct sketch_dimension){false, aggressor, victim, top, "gap", values[GAP]});
    sketch_add_dimension(drawing,
                         (struct sketch_dimension){false, aggressor - values[WIDTH], aggressor, top,
                                                   "width", values[WIDTH]});
    if (values[VICTIM_WIDTH] != values[WIDTH])
        sketch_add_dimension(drawing,
                             (struct sketch_dimension){false, victim, victim + values[VICTIM_WIDTH],
                                                       top, "victim_width", values[VICTIM_WIDTH]});
    board_sketch_dimensions(drawing, board, victim + values[VICTIM_WIDTH], places->last_centre);
}

static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    struct board board = board_of(values);
    struct places places = places_of(values);
    *drawing = (struct sketch){0};
    board_sketch(drawing, &board, places.last_centre);
    sketch_copper(drawing, &board, values, &places);
    sketch_dimensions(drawing, &board, values, &places);
    return true;
}

/* Where the traces of a coupled_set lie among the signals of the section, which run from left to
 * right.  Beside the end of a plane the nearest is the one towards it, where less plane couples
 * more. */
static const size_t *order_of(const double *values) {
    static const size_t one[] = {0, 1}, two[] = {0, 1, 2}, two_turned[] = {2, 1, 0},
                        four[] = {1, 2, 3, 0, 4}, four_turned[] = {3, 2, 1, 4, 0};
    bool turned = values[EDGE_DISTANCE] > 0.0;
    switch (aggressors_of(values)) {
    case 2:
        return turned ? two_turned : two;
    case 4:
        return turned ? four_turned : four;
    default:
        return one;
    }
}

/* The traces in the order of a coupled_set. */
static void keep(const double *values, size_t count, const double *matrix, double *prepared) {
    const size_t *order = order_of(values);
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < count; j++)
            prepared[i * count + j] = matrix[order[i] * count + order[j]];
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    struct board board = board_of(values);
    struct sketch drawing;
    struct section_problem problem;
    struct section_solution full, traces;
    enum section_tie ties[SECTION_MOST_CONDUCTORS];
    if (!sketch(values, &drawing, error))
        return false;
    board_section(&drawing, &board, &problem, ties);
    bool dielectric = values[DF] > 0.0, copper = values[COPPER_RESISTIVITY] > 0.0;
    struct board_loss loss;
    if (!model_memo_section(memo, &problem, &full, error) ||
        (dielectric && !section_dielectric_capacitance(&problem, &full, error)) ||
        !section_reduce(&full, ties, &traces, error) ||
        (copper && !board_loss(&problem, &full, ties, memo, &loss, error)))
        return error_in(error, "section");
    size_t count = traces.count;
    for (size_t i = 0; i < PREPARED_COUNT; i++)
        prepared[i] = 0.0;
    prepared[PREPARED_ERROR] = traces.error;
    keep(values, count, traces.inductance, prepared + PREPARED_INDUCTANCE);
    keep(values, count, traces.capacitance, prepared + PREPARED_CAPACITANCE);
    if (dielectric)
        keep(values, count, traces.dielectric_capacitance, prepared + PREPARED_DIELECTRIC);
    if (copper) {
        keep(values, count, loss.dc, prepared + PREPARED_DC);
        keep(values, count, loss.skin, prepared + PREPARED_SKIN);
    }
    return true;
}

static struct coupled_set set_of(const double *values, const double *prepared) {
    struct coupled_set set = {.count = aggressors_of(values) + 1,
                              .mirrored = values[EDGE_DISTANCE] == 0.0,
                              .error = prepared[PREPARED_ERROR]};
    memcpy(set.inductance, prepared + PREPARED_INDUCTANCE, sizeof set.inductance);
    memcpy(set.capacitance, prepared + PREPARED_CAPACITANCE, sizeof set.capacitance);
    memcpy(set.dielectric_capacitance, prepared + PREPARED_DIELECTRIC,
           sizeof set.dielectric_capacitance);
    double resistivity = values[COPPER_RESISTIVITY];
    double surface = section_surface_resistance(resistivity);
    for (size_t k = 0; k < COUPLED_MOST * COUPLED_MOST; k++) {
        set.dc_resistance[k] = resistivity * prepared[PREPARED_DC + k];
        set.skin_resistance[k] = surface * prepared[PREPARED_SKIN + k];
    }
    set.df = values[DF];
    set.material_frequency = values[MATERIAL_FREQUENCY];
    return set;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    struct board board = board_of(values);
    struct coupled_set set = set_of(values, prepared);
    struct coupled_drive drive = {
        .length = values[LENGTH],
        .swing = values[SWING],
        .edge = values[EDGE],
        .bit_time = values[BIT_TIME],
        .settling = values[SETTLING],
        .independent = values[SWITCHING] == SWITCHING_INDEPENDENT,
        .source = values[SOURCE],
        .load = values[LOAD],
        .load_capacitance = values[LOAD_CAPACITANCE],
        .victim_source = values[VICTIM_SOURCE],
        .victim_load = values[VICTIM_LOAD],
        .victim_load_capacitance = values[VICTIM_LOAD_CAPACITANCE],
        .receiver_near = values[RECEIVER] == 1.0,
    };
    if (!coupled_respond(&set, &drive, worker, answers, errors, error))
        return false;
    *flags = board_flags_of_section(&board) |
             board_flags_of_edge(values[HEIGHT], values[HEIGHT], values[THICKNESS], values[DK],
                                 values[EDGE]);
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
    .method = BOARD_SECTION_METHOD " " COUPLED_LINE_METHOD " " COUPLED_SEVERAL_METHOD,
    .validity = BOARD_SECTION_VALIDITY
    " Drivers and receivers are linear; a strip between the traces is tied "
    "ideally, everywhere or at one point. " COUPLED_LOSS_VALIDITY,
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
