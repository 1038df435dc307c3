/* Two equal loops side by side between ports. */

#include "board_inputs.h"
#include "loop_parts.h"
#include "registry.h"

#include <complex.h>
#include <math.h>

enum {
    HEIGHT,
    WIDTH,
    THICKNESS,
    LENGTH,
    SEPARATION,
    DIAMETER,
    VIAS,
    PITCH,
    BODY,
    REFERENCE,
    FREQUENCY,
    INPUT_COUNT
};

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = LOOP_HEIGHT,
    [WIDTH] = LOOP_WIDTH,
    [THICKNESS] = LOOP_THICKNESS,
    [LENGTH] = LOOP_LENGTH,
    [SEPARATION] = {"separation", "centre to centre of the two loops", DIMENSION_LENGTH,
                    MODEL_SHAPE, NAN, 50e-6, 1, false, NULL, NULL, 0, NULL},
    [DIAMETER] = VIA_DIAMETER,
    [VIAS] = LOOP_VIAS,
    [PITCH] = VIA_PITCH,
    [BODY] = LOOP_BODY,
    [REFERENCE] = {"reference", "impedance of the port in series with each loop",
                   DIMENSION_RESISTANCE, MODEL_DRIVE, 50, 1e-3, 1e6, false, NULL, NULL, 0, NULL},
    [FREQUENCY] = VIA_FREQUENCY("transfer"),
};

enum { LOOP_INDUCTANCE, MUTUAL_INDUCTANCE, COUPLING, TRANSFER, OUTPUT_COUNT };

static const struct model_output outputs[OUTPUT_COUNT] = {
    [LOOP_INDUCTANCE] = {"loop_inductance", "inductance of each loop", "L<sub>loop</sub>",
                         "One loop, the other open.", DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE,
                         NULL},
    [MUTUAL_INDUCTANCE] = {"mutual_inductance", "mutual inductance of the loops", "M",
                           "Flux through one loop for the current in the other.",
                           DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
    [COUPLING] = {"coupling", "coupling factor", "k", "Mutual over loop inductance.",
                  DIMENSION_RATIO, MODEL_HIGHER_IS_WORSE, NULL},
    [TRANSFER] = {"transfer", "transfer between the loops", "S<sub>21</sub>",
                  "20 log of the S-parameter between the two ports at the frequency.",
                  DIMENSION_LEVEL, MODEL_HIGHER_IS_WORSE, NULL},
};

enum { PREPARED_LOOP, PREPARED_LOOP_ERROR, PREPARED_MUTUAL, PREPARED_MUTUAL_ERROR, PREPARED_COUNT };

static struct loop_shape shape_of(const double *values) {
    return (struct loop_shape){.height = values[HEIGHT] + values[BODY],
                               .width = values[WIDTH],
                               .thickness = values[THICKNESS],
                               .length = values[LENGTH],
                               .via_diameter = values[DIAMETER],
                               .vias = (size_t)values[VIAS],
                               .via_pitch = values[PITCH],
                               .separation = values[SEPARATION]};
}

static bool check(const double *values, struct error *error) {
    struct loop_shape shape = shape_of(values);
    if (!loop_check(&shape, values[VIAS], error))
        return false;
    double row = (values[VIAS] - 1.0) * values[PITCH] + via_least_pitch(values[DIAMETER]);
    double least = fmax(1.05 * values[WIDTH], row);
    return values[SEPARATION] >= least * (1.0 - 1e-9) ||
           error_set(error, ERROR_INPUT,
                     "separation is %s: the loops are closer than their %s; the smallest allowed "
                     "is %s",
                     via_length(values[SEPARATION]).text,
                     row > 1.05 * values[WIDTH] ? "vias" : "traces are wide",
                     via_length(least).text);
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    (void)memo;
    struct loop_shape shape = shape_of(values);
    struct loop_solution solution;
    if (!loop_solve(&shape, 2, &solution, error))
        return false;
    prepared[PREPARED_LOOP] = solution.inductance;
    prepared[PREPARED_LOOP_ERROR] = solution.error;
    prepared[PREPARED_MUTUAL] = solution.mutual;
    prepared[PREPARED_MUTUAL_ERROR] = solution.mutual_error;
    return true;
}

/* S21 of two coupled inductances between equal ports: 2 jwM Z0 / ((Z0 + jwL)^2 + (wM)^2). */
static double transfer_of(double self, double mutual, double reference, double frequency) {
    double w = 2.0 * M_PI * frequency;
    double complex port = reference + I * w * self;
    return cabs(2.0 * w * mutual * reference / (port * port + w * w * mutual * mutual));
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    (void)worker;
    (void)error;
    struct loop_shape shape = shape_of(values);
    double self = prepared[PREPARED_LOOP], mutual = prepared[PREPARED_MUTUAL];
    double relative = prepared[PREPARED_LOOP_ERROR] / self;
    double relative_mutual = prepared[PREPARED_MUTUAL_ERROR] / fabs(mutual);
    answers[LOOP_INDUCTANCE] = self;
    errors[LOOP_INDUCTANCE] = prepared[PREPARED_LOOP_ERROR];
    answers[MUTUAL_INDUCTANCE] = mutual;
    errors[MUTUAL_INDUCTANCE] = prepared[PREPARED_MUTUAL_ERROR];
    answers[COUPLING] = mutual / self;
    errors[COUPLING] = fabs(answers[COUPLING]) * (relative + relative_mutual);
    answers[TRANSFER] =
        20.0 * log10(transfer_of(self, mutual, values[REFERENCE], values[FREQUENCY]));
    errors[TRANSFER] = 20.0 / log(10.0) * (2.0 * relative + relative_mutual);
    *flags = loop_flags(&shape, values[FREQUENCY]);
    return true;
}

/* Across the loops, seen along the traces; the vias stand behind them. */
static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    *drawing = (struct sketch){0};
    double height = values[HEIGHT], foot = height + values[BODY], half = values[WIDTH] / 2.0;
    double radius = values[DIAMETER] / 2.0, top = foot + values[THICKNESS];
    board_sketch(drawing, &(struct board){.height = height}, 0.0);
    for (int loop = 0; loop < 2; loop++) {
        double x = loop * values[SEPARATION];
        enum sketch_role role = loop == 0 ? SKETCH_AGGRESSOR : SKETCH_VICTIM;
        for (double i = 0.0; i < values[VIAS]; i += 1.0) {
            double at = x + (i - (values[VIAS] - 1.0) / 2.0) * values[PITCH];
            sketch_add_solid(
                drawing, (struct sketch_solid){role, at - radius, at + radius, 0.0, foot, NULL});
        }
        sketch_add_solid(drawing, (struct sketch_solid){role, x - half, x + half, foot, top,
                                                        loop == 0 ? "loop" : "other loop"});
    }
    sketch_add_dimension(drawing, (struct sketch_dimension){false, 0.0, values[SEPARATION], top,
                                                            "separation", values[SEPARATION]});
    loop_heights(height, values[BODY], values[SEPARATION] + half, drawing);
    return true;
}

static bool plan(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    struct loop_shape shape = shape_of(values);
    loop_plan(&shape, 2, drawing);
    return true;
}

const struct model model_loop_pair = {
    .name = "loop-pair",
    .title = "Two loops side by side",
    .summary = "How much does one current loop over a plane talk to the next?",
    .method = LOOP_METHOD " Two such loops face each other; the transfer is the S-parameter "
                          "between ports in series with them.",
    .validity = LOOP_VALIDITY " Magnetic coupling only; the loops are equal, parallel and begin "
                              "and end together.",
    .revision = 1,
    .inputs = inputs,
    .input_count = INPUT_COUNT,
    .outputs = outputs,
    .output_count = OUTPUT_COUNT,
    .flags = via_flags,
    .flag_count = VIA_FLAG_COUNT,
    .check = check,
    .prepared_count = PREPARED_COUNT,
    .prepare = prepare,
    .respond = respond,
    .sketch = sketch,
    .plan = plan,
};
