/* A signal via with ground vias around it. */

#include "registry.h"
#include "via_inputs.h"

#include <math.h>

enum { HEIGHT, DIAMETER, RETURN_VIAS, RETURN_DISTANCE, PLANES, INPUT_COUNT };

enum { MOST_RETURNS = 24 };
enum planes { NO_PLANES, TWO_PLANES };
static const char *const plane_words[] = {"0", "2", NULL};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = {"height", "height of all barrels; with two planes, from plane to plane",
                DIMENSION_LENGTH, MODEL_SHAPE, NAN, 10e-6, 10e-3, false, NULL, NULL, 0, NULL},
    [DIAMETER] = VIA_DIAMETER,
    [RETURN_VIAS] = {"return_vias", "ground vias, evenly around the signal via", DIMENSION_COUNT,
                     MODEL_SHAPE, 1, 1, MOST_RETURNS, false, NULL, NULL, 0, NULL},
    [RETURN_DISTANCE] = {"return_distance", "axis of the signal via to the axes of the ground vias",
                         DIMENSION_LENGTH, MODEL_SHAPE, 1e-3, 50e-6, 0.1, false, NULL, NULL, 0,
                         NULL},
    [PLANES] = {"planes", "planes that the barrels stand between; 0: the ends are open",
                DIMENSION_WORD, MODEL_CHOICE, TWO_PLANES, 0, 1, false, NULL, plane_words, 0, NULL},
};

enum { LOOP_INDUCTANCE, UNIFORM_INDUCTANCE, OUTPUT_COUNT };

static const struct model_output outputs[OUTPUT_COUNT] = {
    [LOOP_INDUCTANCE] = {"loop_inductance", "loop of the signal via and its returns",
                         "L<sub>loop</sub>",
                         "Loop out through the signal via and back through all ground vias; "
                         "currents find their shares among the vias and around each barrel.",
                         DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
    [UNIFORM_INDUCTANCE] = {"uniform_inductance", "loop, current even around each barrel",
                            "L<sub>u</sub>",
                            "The loop with the current even around each barrel: an upper bound, "
                            "and between planes the exact formula of thin vias.",
                            DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
};

enum { PREPARED_LOOP, PREPARED_UNIFORM, PREPARED_ERROR, PREPARED_COUNT };

/* Closest axes of two barrels per return_distance. */
static double closeness(double returns) {
    return returns > 1.0 ? fmin(1.0, 2.0 * sin(M_PI / returns)) : 1.0;
}

static bool check(const double *values, struct error *error) {
    if (!via_check_count("return_vias", values[RETURN_VIAS], error))
        return false;
    double least = via_least_pitch(values[DIAMETER]) / closeness(values[RETURN_VIAS]);
    return values[RETURN_DISTANCE] >= least * (1.0 - 1e-9) ||
           error_set(error, ERROR_INPUT,
                     "return_distance is %s: %g ground vias of %s touch or overlap the signal via "
                     "or each other; the smallest allowed is %s",
                     via_length(values[RETURN_DISTANCE]).text, values[RETURN_VIAS],
                     via_length(values[DIAMETER]).text, via_length(least).text);
}

enum { MOST = MOST_RETURNS + 1 };

/* Out through the first barrel, back through all others. */
static bool loop_of(const double *matrix, size_t count, double *inductance, struct error *error) {
    size_t from[MOST] = {1}, to[MOST], in = 1, out = 0; /* the others start at node 0 */
    for (size_t i = 0; i < count; i++)
        to[i] = 2;
    struct inductance_network network = {.branches = count,
                                         .matrix = matrix,
                                         .from = from,
                                         .to = to,
                                         .nodes = 3,
                                         .ports = 1,
                                         .port_in = &in,
                                         .port_out = &out};
    return inductance_network_solve(&network, inductance, NULL, error);
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    (void)memo;
    double x[MOST] = {0}, y[MOST] = {0}, matrix[MOST * MOST], coarser[MOST * MOST],
           even[MOST * MOST], coarse = 0.0;
    size_t count = (size_t)values[RETURN_VIAS] + 1;
    for (size_t i = 1; i < count; i++) {
        double turn = 2.0 * M_PI * (double)(i - 1) / values[RETURN_VIAS];
        x[i] = values[RETURN_DISTANCE] * cos(turn);
        y[i] = values[RETURN_DISTANCE] * sin(turn);
    }
    double closest = values[RETURN_DISTANCE] * closeness(values[RETURN_VIAS]);
    struct inductance_barrels barrels = {
        .count = count,
        .x = x,
        .y = y,
        .height = values[HEIGHT],
        .diameter = values[DIAMETER],
        .ends = values[PLANES] == TWO_PLANES ? INDUCTANCE_PLANES : INDUCTANCE_FREE,
        .harmonics = inductance_barrel_harmonics(values[DIAMETER], closest),
    };
    if (!inductance_barrels_solve(&barrels, matrix, coarser, even, error) ||
        !loop_of(matrix, count, &prepared[PREPARED_LOOP], error) ||
        !loop_of(coarser, count, &coarse, error) ||
        !loop_of(even, count, &prepared[PREPARED_UNIFORM], error))
        return error_in(error, "vias");
    prepared[PREPARED_ERROR] = via_rest(prepared[PREPARED_LOOP], coarse, values[DIAMETER], closest);
    return true;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    (void)values;
    (void)worker;
    (void)error;
    answers[LOOP_INDUCTANCE] = prepared[PREPARED_LOOP];
    answers[UNIFORM_INDUCTANCE] = prepared[PREPARED_UNIFORM];
    errors[LOOP_INDUCTANCE] = prepared[PREPARED_ERROR];
    errors[UNIFORM_INDUCTANCE] = 1e-8 * prepared[PREPARED_UNIFORM];
    *flags = 0;
    return true;
}

/* The cut through the signal via and a return; with an even number there is one opposite. */
static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    *drawing = (struct sketch){0};
    double height = values[HEIGHT], radius = values[DIAMETER] / 2.0;
    double distance = values[RETURN_DISTANCE];
    if (values[PLANES] == TWO_PLANES) {
        sketch_add_solid(drawing, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6,
                                                        0.0, "ground plane"});
        sketch_add_solid(drawing, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, height,
                                                        height + 35e-6, "ground plane"});
    }
    sketch_add_solid(
        drawing, (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0.0, height, NULL});
    sketch_add_solid(drawing, (struct sketch_solid){SKETCH_AGGRESSOR, -radius, radius, 0.0, height,
                                                    "signal via"});
    for (int side = 1; side >= (fmod(values[RETURN_VIAS], 2.0) == 0.0 ? -1 : 1); side -= 2)
        sketch_add_solid(drawing,
                         (struct sketch_solid){SKETCH_TIED, side * distance - radius,
                                               side * distance + radius, 0.0, height, "return"});
    sketch_add_dimension(drawing, (struct sketch_dimension){false, 0.0, distance, height,
                                                            "return_distance", distance});
    sketch_add_dimension(drawing, (struct sketch_dimension){false, -radius, radius, height,
                                                            "via_diameter", values[DIAMETER]});
    sketch_add_dimension(
        drawing, (struct sketch_dimension){true, 0.0, height, distance + radius, "height", height});
    return true;
}

static bool plan(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    double diameter = values[DIAMETER], radius = diameter / 2.0;
    double distance = values[RETURN_DISTANCE];
    *drawing = (struct sketch){.plan = true};
    sketch_add_disc(drawing,
                    (struct sketch_disc){SKETCH_AGGRESSOR, 0.0, 0.0, diameter, "signal via"});
    for (double i = 0.0; i < values[RETURN_VIAS]; i += 1.0) {
        double turn = 2.0 * M_PI * i / values[RETURN_VIAS];
        sketch_add_disc(drawing, (struct sketch_disc){SKETCH_TIED, distance * cos(turn),
                                                      distance * sin(turn), diameter, "return"});
    }
    sketch_add_dimension(
        drawing, (struct sketch_dimension){false, 0.0, distance, 0.0, "return_distance", distance});
    sketch_add_dimension(
        drawing, (struct sketch_dimension){false, -radius, radius, 0.0, "via_diameter", diameter});
    return true;
}

const struct model model_signal_via = {
    .name = "signal-via",
    .title = "A signal via and its ground vias",
    .summary = "What loop does a signal via make with the ground vias around it?",
    .method = "Partial inductances of thin round tubes. Between two planes the currents do not "
              "change along the height and the field is two-dimensional: exact for tubes. Without "
              "planes the upright parts are taken alone, their ends open. Currents find their "
              "shares among the ground vias and, as harmonics of the azimuth, around each barrel; "
              "what the last two changed, carried on geometrically, is the error estimate.",
    .validity = "Perfectly conducting barrels, infinite uncut planes; the height is well below a "
                "tenth of the wavelength. Without planes the horizontal parts of the loop are not "
                "counted.",
    .revision = 1,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = outputs,
    .output_count = OUTPUT_COUNT,
    .check = check,
    .prepared_count = PREPARED_COUNT,
    .prepare = prepare,
    .respond = respond,
    .sketch = sketch,
    .plan = plan,
};
