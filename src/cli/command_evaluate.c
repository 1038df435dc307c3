#include "commands.h"

#include "groundrules/study.h"
#include "groundrules/text.h"
#include "options.h"
#include "point.h"

#include <math.h>
#include <string.h>
#include <stdio.h>

struct answer {
    double outputs[MODEL_MOST_OUTPUTS];
    double errors[MODEL_MOST_OUTPUTS];
    unsigned flags;
};

static bool solve(const struct point *point, struct answer *answer, struct error *error) {
    struct model_memo *memo = model_memo_create(error);
    struct model_worker *worker = memo == NULL ? NULL : model_worker_create(error);
    bool ok =
        worker != NULL && model_evaluate(point->model, point->inputs, memo, worker, answer->outputs,
                                         answer->errors, &answer->flags, error);
    model_worker_free(worker);
    model_memo_free(memo);
    return ok;
}

static void print_number(const char *comma, const char *name, double value) {
    if (isfinite(value))
        printf("%s\n    \"%s\": %.17g", comma, name, value);
    else if (isinf(value) && value > 0)
        printf("%s\n    \"%s\": \"open\"", comma, name);
    else
        printf("%s\n    \"%s\": null", comma, name);
}

static void print_json_inputs(const struct point *point) {
    const struct model *model = point->model;
    printf("{\n  \"model\": \"%s\",\n  \"inputs\": {", model->name);
    for (size_t i = 0; i < model->input_count; i++) {
        const struct model_input *input = &model->inputs[i];
        const char *comma = i > 0 ? "," : "";
        if (input->words != NULL)
            printf("%s\n    \"%s\": \"%s\"", comma, input->name,
                   input->words[(size_t)point->inputs[i]]);
        else
            print_number(comma, input->name, point->inputs[i]);
    }
    printf("\n  },\n");
}

static void print_json_outputs(const struct model *model, const char *key, const double *values) {
    const char *comma = "";
    printf("  \"%s\": {", key);
    for (size_t i = 0; i < model->output_count; i++)
        if (model->outputs[i].not_yet == NULL) {
            print_number(comma, model->outputs[i].name, values[i]);
            comma = ",";
        }
    printf("\n  },\n");
}

static void print_json(const struct point *point, const struct answer *answer) {
    const struct model *model = point->model;
    print_json_inputs(point);
    print_json_outputs(model, "outputs", answer->outputs);
    const char *comma = "";
    printf("  \"units\": {");
    for (size_t i = 0; i < model->output_count; i++)
        if (model->outputs[i].not_yet == NULL) {
            printf("%s\n    \"%s\": \"%s\"", comma, model->outputs[i].name,
                   dimension_unit(model->outputs[i].dimension));
            comma = ",";
        }
    printf("\n  },\n");
    print_json_outputs(model, "errors", answer->errors);
    printf("  \"flags\": [");
    comma = "";
    for (size_t i = 0; i < model->flag_count; i++)
        if ((answer->flags >> i & 1u) != 0) {
            printf("%s\"%s\"", comma, model->flags[i].name);
            comma = ", ";
        }
    printf("]\n}\n");
}

/* As many digits as the error leaves, two at least and six at most. */
static int known_digits(double value, double error) {
    if (!(error > 0.0) || value == 0.0)
        return 6;
    double digits = floor(log10(fabs(value) / error)) + 1.0;
    return (int)fmin(6.0, fmax(2.0, digits));
}

static void print_text(const struct point *point, const struct answer *answer) {
    const struct model *model = point->model;
    for (size_t i = 0; i < model->output_count; i++) {
        const struct model_output *output = &model->outputs[i];
        char text[64];
        if (output->not_yet != NULL)
            continue;
        if (isnan(answer->outputs[i]))
            printf("%-24s does not apply\n", output->name);
        else
            printf("%-24s %s\n", output->name,
                   quantity_print(text, sizeof text, answer->outputs[i], output->dimension,
                                  known_digits(answer->outputs[i], answer->errors[i]),
                                  QUANTITY_ASCII, QUANTITY_MILLIMETRES));
    }
    for (size_t i = 0; i < model->flag_count; i++)
        if ((answer->flags >> i & 1u) != 0)
            printf("flag %s: %s\n", model->flags[i].name, model->flags[i].meaning);
}

static bool take_board(const struct options *options, struct point *point, struct arena *arena,
                       enum exit_code *code, struct error *error) {
    if (options->study == NULL && point->stackup == NULL)
        return true;
    if (options->study == NULL)
        return error_set(error, ERROR_USAGE, "stackup=%s needs --study FILE", point->stackup);
    if (point->stackup == NULL)
        return error_set(error, ERROR_USAGE, "--study needs stackup=ID");
    struct study study;
    struct study_problems problems = {0};
    if (!study_read(options->study, arena, &study, &problems, error)) {
        if (error->kind == ERROR_NONE) {
            print_problems(options->study, &problems);
            *code = EXIT_STUDY;
        }
        return false;
    }
    const struct study_stackup *stackup = study_find_stackup(&study, point->stackup);
    if (stackup == NULL) {
        const char **names = arena_new(arena, study.stackup_count, const char *, error);
        for (size_t i = 0; names != NULL && i < study.stackup_count; i++)
            names[i] = study.stackups[i].id;
        const char *nearest =
            names == NULL ? NULL : text_nearest(point->stackup, names, study.stackup_count);
        return error_set(error, ERROR_INPUT, "%s has no stackup '%s'%s%s%s", options->study,
                         point->stackup, nearest != NULL ? "; did you mean " : "",
                         nearest != NULL ? nearest : "", nearest != NULL ? "?" : "");
    }
    study_apply_stackup(stackup, point->model, point->inputs);
    return true;
}

/* The model may stand before or after name=value words. */
static size_t model_word(const struct options *options) {
    size_t i = 0;
    while (i < options->word_count && strchr(options->words[i], '=') != NULL)
        i++;
    return i;
}

static bool find_model(const struct options *options, size_t word, struct point *point,
                       struct error *error) {
    if (word == options->word_count)
        return error_set(error, ERROR_USAGE, "evaluate needs a model; see groundrules models");
    const char *name = options->words[word];
    point->model = model_find(name);
    if (point->model != NULL)
        return true;
    const char *names[64];
    size_t count = model_count() < 64 ? model_count() : 64;
    for (size_t i = 0; i < count; i++)
        names[i] = model_at(i)->name;
    const char *nearest = text_nearest(name, names, count);
    return error_set(error, ERROR_INPUT, "there is no model '%s'%s%s%s; see groundrules models",
                     name, nearest != NULL ? "; did you mean " : "",
                     nearest != NULL ? nearest : "", nearest != NULL ? "?" : "");
}

static enum exit_code evaluate(const struct options *options, struct arena *arena) {
    struct error error = {0};
    struct point point = {0};
    struct answer answer = {0};
    enum exit_code code = EXIT_DONE;
    size_t word = model_word(options);
    if (!find_model(options, word, &point, &error))
        return report_error(&error);
    point_read(&point, options->words, word);
    point_read(&point, options->words + word + 1, options->word_count - word - 1);
    if (point.wrong > 0)
        return EXIT_STUDY;
    if (!take_board(options, &point, arena, &code, &error))
        return error.kind != ERROR_NONE ? report_error(&error) : code;
    if (!model_resolve(point.model, point.inputs, &error) || !solve(&point, &answer, &error))
        return report_error(&error);
    if (options->json)
        print_json(&point, &answer);
    else
        print_text(&point, &answer);
    return EXIT_DONE;
}

enum exit_code command_evaluate(int argc, char **argv) {
    struct error error = {0};
    struct options options = {0};
    struct arena *arena = arena_create(&error);
    const char **words =
        arena == NULL ? NULL : arena_new(arena, (size_t)argc + 1, const char *, &error);
    bool ok = words != NULL && options_read(argc, argv, "JS", words, &options, &error);
    enum exit_code code = ok ? evaluate(&options, arena) : report_error(&error);
    arena_free(arena);
    return code;
}
