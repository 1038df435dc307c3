/* A trace over a plane, closed through vias at both ends. */

#include "loop_parts.h"
#include "registry.h"

#include <math.h>

enum { HEIGHT, WIDTH, THICKNESS, LENGTH, DIAMETER, VIAS, PITCH, BODY, FREQUENCY, INPUT_COUNT };

static const struct model_input inputs[INPUT_COUNT] = {
    [HEIGHT] = LOOP_HEIGHT, [WIDTH] = LOOP_WIDTH,      [THICKNESS] = LOOP_THICKNESS,
    [LENGTH] = LOOP_LENGTH, [DIAMETER] = VIA_DIAMETER, [VIAS] = LOOP_VIAS,
    [PITCH] = VIA_PITCH,    [BODY] = LOOP_BODY,        [FREQUENCY] = VIA_FREQUENCY("reactance"),
};

enum {
    LOOP_INDUCTANCE,
    INDUCTANCE_PER_LENGTH,
    REACTANCE,
    TRACE_INDUCTANCE,
    VIA_INDUCTANCE,
    OUTPUT_COUNT
};

static const struct model_output outputs[OUTPUT_COUNT] = {
    [LOOP_INDUCTANCE] = {"loop_inductance", "loop inductance", "L<sub>loop</sub>",
                         "The whole loop: trace, vias at both ends, and the plane's return.",
                         DIMENSION_INDUCTANCE, MODEL_HIGHER_IS_WORSE, NULL},
    [INDUCTANCE_PER_LENGTH] = {"inductance_per_length", "loop inductance per length", "L/l",
                               "Loop inductance over the loop's length.",
                               DIMENSION_INDUCTANCE_PER_LENGTH, MODEL_HIGHER_IS_WORSE, NULL},
    [REACTANCE] = {"reactance", "reactance of the loop", "X",
                   "2 pi times the frequency times the loop inductance.", DIMENSION_RESISTANCE,
                   MODEL_HIGHER_IS_WORSE, NULL},
    [TRACE_INDUCTANCE] = {"trace_inductance", "the trace's part of the loop", "L<sub>trace</sub>",
                          "What the trace over its plane brings to the loop.", DIMENSION_INDUCTANCE,
                          MODEL_HIGHER_IS_WORSE, NULL},
    [VIA_INDUCTANCE] = {"via_inductance", "the vias' part of the loop", "L<sub>vias</sub>",
                        "What the vias of both ends bring to the loop.", DIMENSION_INDUCTANCE,
                        MODEL_HIGHER_IS_WORSE, NULL},
};

enum { PREPARED_LOOP, PREPARED_ERROR, PREPARED_TRACE, PREPARED_VIAS, PREPARED_COUNT };

static struct loop_shape shape_of(const double *values) {
    return (struct loop_shape){.height = values[HEIGHT] + values[BODY],
                               .width = values[WIDTH],
                               .thickness = values[THICKNESS],
                               .length = values[LENGTH],
                               .via_diameter = values[DIAMETER],
                               .vias = (size_t)values[VIAS],
                               .via_pitch = values[PITCH]};
}

static bool check(const double *values, struct error *error) {
    struct loop_shape shape = shape_of(values);
    return loop_check(&shape, values[VIAS], error);
}

static bool prepare(const double *values, double *prepared, struct model_memo *memo,
                    struct error *error) {
    (void)memo;
    struct loop_shape shape = shape_of(values);
    struct loop_solution solution;
    if (!loop_solve(&shape, 1, &solution, error))
        return false;
    prepared[PREPARED_LOOP] = solution.inductance;
    prepared[PREPARED_ERROR] = solution.error;
    prepared[PREPARED_TRACE] = solution.trace;
    prepared[PREPARED_VIAS] = solution.vias;
    return true;
}

static bool respond(const double *values, const double *prepared, struct model_worker *worker,
                    double *answers, double *errors, unsigned *flags, struct error *error) {
    (void)worker;
    (void)error;
    struct loop_shape shape = shape_of(values);
    double reach = 2.0 * M_PI * values[FREQUENCY];
    answers[LOOP_INDUCTANCE] = prepared[PREPARED_LOOP];
    answers[INDUCTANCE_PER_LENGTH] = prepared[PREPARED_LOOP] / values[LENGTH];
    answers[REACTANCE] = reach * prepared[PREPARED_LOOP];
    answers[TRACE_INDUCTANCE] = prepared[PREPARED_TRACE];
    answers[VIA_INDUCTANCE] = prepared[PREPARED_VIAS];
    errors[LOOP_INDUCTANCE] = errors[TRACE_INDUCTANCE] = errors[VIA_INDUCTANCE] =
        prepared[PREPARED_ERROR];
    errors[INDUCTANCE_PER_LENGTH] = prepared[PREPARED_ERROR] / values[LENGTH];
    errors[REACTANCE] = reach * prepared[PREPARED_ERROR];
    *flags = loop_flags(&shape, values[FREQUENCY]);
    return true;
}

static bool sketch(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    struct loop_shape shape = shape_of(values);
    *drawing = (struct sketch){0};
    loop_sketch(&shape, values[BODY], drawing);
    return true;
}

static bool plan(const double *values, struct sketch *drawing, struct error *error) {
    (void)error;
    struct loop_shape shape = shape_of(values);
    loop_plan(&shape, 1, drawing);
    return true;
}

const struct model model_trace_loop = {
    .name = "trace-loop",
    .title = "A trace over a plane, closed through vias",
    .summary = "What does a current loop of a trace, its vias and the plane weigh?",
    .method = LOOP_METHOD,
    .validity = LOOP_VALIDITY,
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
