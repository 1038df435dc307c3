#include "commands.h"

#include "groundrules/model.h"
#include "groundrules/text.h"
#include "options.h"

#include <math.h>
#include <stdio.h>

static const char *printed(char *buffer, size_t size, double value, enum dimension dimension) {
    return quantity_print(buffer, size, value, dimension, -6, QUANTITY_ASCII, QUANTITY_MILLIMETRES);
}

static void print_words(const struct model_input *input) {
    for (size_t i = 0; input->words[i] != NULL; i++) {
        bool later = input->words_yet > 0 && i >= input->words_yet;
        printf("%s%s%s", i > 0 ? " | " : "", input->words[i], later ? " (not yet)" : "");
    }
    printf("; standard %s", input->words[(size_t)input->standard]);
}

static void print_range(const struct model_input *input) {
    char low[64], high[64], standard[64];
    printf("%s .. %s%s", printed(low, sizeof low, input->lowest, input->dimension),
           printed(high, sizeof high, input->highest, input->dimension),
           input->open ? ", open" : "");
    if (input->same_as != NULL)
        printf("; standard: as %s", input->same_as);
    else if (isnan(input->standard))
        printf("; must be given");
    else
        printf("; standard %s",
               printed(standard, sizeof standard, input->standard, input->dimension));
}

static void print_model(const struct model *model) {
    printf("%s: %s\n%s\n\ninputs\n", model->name, model->title, model->summary);
    for (size_t i = 0; i < model->input_count; i++) {
        const struct model_input *input = &model->inputs[i];
        printf("  %-24s ", input->name);
        if (input->not_yet != NULL) {
            printf("not yet: %s\n", input->not_yet);
            continue;
        }
        if (input->words != NULL)
            print_words(input);
        else
            print_range(input);
        printf("\n  %-24s %s\n", "", input->meaning);
    }
    printf("\noutputs\n");
    for (size_t i = 0; i < model->output_count; i++) {
        const struct model_output *output = &model->outputs[i];
        if (output->not_yet != NULL)
            printf("  %-24s not yet: %s\n", output->name, output->not_yet);
        else
            printf("  %-24s %s: %s\n", output->name, dimension_unit(output->dimension),
                   output->meaning);
    }
    printf("\nvalidity\n  %s\n", model->validity);
    for (size_t i = 0; i < model->flag_count; i++)
        printf("  flag %s: %s\n", model->flags[i].name, model->flags[i].meaning);
}

static enum exit_code unknown_model(const char *name) {
    const char *names[64];
    size_t count = model_count() < 64 ? model_count() : 64;
    for (size_t i = 0; i < count; i++)
        names[i] = model_at(i)->name;
    const char *nearest = text_nearest(name, names, count);
    struct error error = {0};
    error_set(&error, ERROR_INPUT, "there is no model '%s'%s%s%s; see groundrules models", name,
              nearest != NULL ? "; did you mean " : "", nearest != NULL ? nearest : "",
              nearest != NULL ? "?" : "");
    return report_error(&error);
}

static enum exit_code models(const struct options *options) {
    if (options->word_count == 1) {
        const struct model *model = model_find(options->words[0]);
        if (model == NULL)
            return unknown_model(options->words[0]);
        print_model(model);
        return EXIT_DONE;
    }
    for (size_t i = 0; i < model_count(); i++)
        printf("%-16s %s\n", model_at(i)->name, model_at(i)->summary);
    return EXIT_DONE;
}

enum exit_code command_models(int argc, char **argv) {
    struct error error = {0};
    struct options options = {0};
    struct arena *arena = arena_create(&error);
    const char **words =
        arena == NULL ? NULL : arena_new(arena, (size_t)argc + 1, const char *, &error);
    if (words != NULL && options_read(argc, argv, "", words, &options, &error) &&
        options.word_count > 1)
        error_set(&error, ERROR_USAGE, "models takes no or one name");
    enum exit_code code = error.kind != ERROR_NONE ? report_error(&error) : models(&options);
    arena_free(arena);
    return code;
}
