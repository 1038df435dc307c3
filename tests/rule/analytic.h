#ifndef TESTS_RULE_ANALYTIC_H
#define TESTS_RULE_ANALYTIC_H

#include "check.h"
#include "find.h"

#include <string.h>

/* A model whose answers are algebra, so that every bound is known. */

enum { GAP, LENGTH, EDGE, SOURCE, HEIGHT, DK, WIDTH, VICTIM_WIDTH, RECEIVER, VIAS, ANALYTIC_INPUTS };
enum { PEAK, IMPEDANCE, ANALYTIC_OUTPUTS };

typedef double analytic(const double *inputs);

static analytic *analytic_formula;
static double analytic_error; /* of the peak, absolute */

static bool analytic_prepare(const double *inputs, double *prepared, struct model_memo *memo,
                             struct error *error) {
    (void)inputs, (void)memo, (void)error;
    prepared[0] = 0;
    return true;
}

static bool analytic_respond(const double *inputs, const double *prepared,
                             struct model_worker *worker, double *outputs, double *errors,
                             unsigned *flags, struct error *error) {
    (void)prepared, (void)worker, (void)error;
    outputs[PEAK] = analytic_formula(inputs);
    errors[PEAK] = analytic_error;
    outputs[IMPEDANCE] = 60 * sqrt(inputs[HEIGHT] / inputs[WIDTH]);
    errors[IMPEDANCE] = 0;
    *flags = 0;
    return true;
}

static const char *const receivers[] = {"far", "near", NULL};
static const struct model_input analytic_inputs[] = {
    [GAP] = {"gap", "", DIMENSION_LENGTH, MODEL_SHAPE, NAN, 1e-6, 1, false, NULL, NULL, 0, NULL},
    [LENGTH] = {"length", "", DIMENSION_LENGTH, MODEL_DRIVE, 0.1, 1e-6, 10, false, NULL, NULL, 0,
                NULL},
    [EDGE] = {"edge", "", DIMENSION_TIME, MODEL_DRIVE, 1e-9, 1e-15, 1, false, NULL, NULL, 0, NULL},
    [SOURCE] = {"source", "", DIMENSION_RESISTANCE, MODEL_DRIVE, 50, 0, 1e6, false, NULL, NULL, 0,
                NULL},
    [HEIGHT] = {"height", "", DIMENSION_LENGTH, MODEL_SHAPE, 1e-3, 1e-6, 1, false, NULL, NULL, 0,
                NULL},
    [DK] = {"dk", "", DIMENSION_NUMBER, MODEL_SHAPE, 4, 1, 15, false, NULL, NULL, 0, NULL},
    [WIDTH] = {"width", "", DIMENSION_LENGTH, MODEL_SHAPE, 0.3e-3, 1e-5, 0.05, false, NULL, NULL, 0,
               NULL},
    [VICTIM_WIDTH] = {"victim_width", "", DIMENSION_LENGTH, MODEL_SHAPE, NAN, 1e-5, 0.05, false,
                      "width", NULL, 0, NULL},
    [RECEIVER] = {"receiver", "", DIMENSION_WORD, MODEL_CHOICE, 0, 0, 1, false, NULL, receivers, 0,
                  NULL},
    [VIAS] = {"vias", "", DIMENSION_COUNT, MODEL_SHAPE, 1, 1, 100, false, NULL, NULL, 0, NULL},
};
static const struct model_output analytic_outputs[] = {
    [PEAK] = {"peak", "peak", NULL, "", DIMENSION_VOLTAGE, MODEL_HIGHER_IS_WORSE, NULL},
    [IMPEDANCE] = {"impedance", "impedance", NULL, "", DIMENSION_RESISTANCE, MODEL_NEITHER, NULL},
};
static const struct model analytic_model = {.name = "analytic",
                                            .inputs = analytic_inputs,
                                            .input_count = ANALYTIC_INPUTS,
                                            .outputs = analytic_outputs,
                                            .output_count = ANALYTIC_OUTPUTS,
                                            .prepared_count = 1,
                                            .prepare = analytic_prepare,
                                            .respond = analytic_respond};

struct question {
    struct study_variant variant;
    struct study_rule rule;
    struct guideline_finding finding;
};

static inline void fix(struct question *question, size_t input, double value) {
    question->variant.settings[input] =
        (struct study_setting){.value = value, .range = {value, value}, .origin = STUDY_GIVEN};
}

static inline void range(struct question *question, size_t input, double from, double to) {
    fix(question, input, from > 0 ? sqrt(from * to) : from);
    question->variant.settings[input].range = (struct interval){from, to};
}

static inline void tolerance(struct question *question, size_t input, double value, double by) {
    fix(question, input, value);
    question->variant.settings[input].minus = question->variant.settings[input].plus = by;
}

/* "smallest gap so that peak <= 0.1 V" on a grid of 0.1 mm between 0.1 and 20 mm. */
static inline struct question smallest_gap(analytic *formula) {
    struct question question;
    memset(&question, 0, sizeof question);
    analytic_formula = formula;
    analytic_error = 0;
    for (size_t i = 0; i < ANALYTIC_INPUTS; i++)
        fix(&question, i, analytic_inputs[i].standard);
    fix(&question, GAP, 1e-3);
    question.rule = (struct study_rule){.id = "T-1",
                                        .find = GAP,
                                        .find_smallest = true,
                                        .within = {0.1e-3, 20e-3},
                                        .grid = 0.1e-3,
                                        .condition = {.at_most = true, .limit = 0.1, .share = 1, .text = ""}};
    for (size_t i = 0; i < MODEL_MOST_INPUTS; i++)
        question.rule.reference.values[i] = NAN;
    return question;
}

/* "no worse than the board with a plane at `height`" */
static inline void against(struct question *question, struct study_stackup *board, double height) {
    *board = (struct study_stackup){
        .height = {.value = height}, .thickness = {.value = 35e-6}, .dk = {.value = 4}};
    question->rule.condition.against = STUDY_REFERENCE;
    question->rule.reference.stackup = board;
}

/* The finder alone. */
static inline void ask(struct question *question) {
    struct error error = {0};
    struct solver solver;
    struct model_memo *memo = model_memo_create(&error);
    struct region region;
    assert_ok(memo != NULL);
    assert_ok(solver_start(&solver, &analytic_model, memo, &error));
    region_of(&analytic_model, &question->variant, question->rule.find, question->rule.nominal,
              &region);
    struct judge judge = {.solver = &solver,
                          .region = &region,
                          .at_most = question->rule.condition.at_most,
                          .limit = question->rule.condition.limit,
                          .share = question->rule.condition.share,
                          .reference = question->rule.condition.against == STUDY_REFERENCE
                                           ? &question->rule.reference
                                           : NULL};
    region.base[question->rule.find] =
        question->rule.find_smallest ? question->rule.within.to : question->rule.within.from;
    assert_ok(find_bound(&question->rule, &question->variant, &judge, &region, &question->finding,
                         &error));
    solver_end(&solver);
    model_memo_free(memo);
}

#endif
