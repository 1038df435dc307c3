#include "describe.h"

#include "groundrules/quantity.h"

#include <math.h>
#include <stdio.h>

static const char *printed(char *buffer, size_t size, double value, enum dimension dimension) {
    return quantity_print(buffer, size, value, dimension, -6, QUANTITY_ASCII, QUANTITY_MILLIMETRES);
}

static void print_words(const struct model_input *input, const char *between) {
    for (size_t i = 0; input->words[i] != NULL; i++) {
        bool later = input->words_yet > 0 && i >= input->words_yet;
        printf("%s%s%s", i > 0 ? between : "", input->words[i], later ? " (not yet)" : "");
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

void describe_text(const struct model *model) {
    printf("%s: %s\n%s\n\ninputs\n", model->name, model->title, model->summary);
    for (size_t i = 0; i < model->input_count; i++) {
        const struct model_input *input = &model->inputs[i];
        printf("  %-24s ", input->name);
        if (input->not_yet != NULL) {
            printf("not yet: %s\n", input->not_yet);
            continue;
        }
        if (input->words != NULL)
            print_words(input, " | ");
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

static void markdown_input(const struct model_input *input) {
    printf("| `%s` | ", input->name);
    if (input->not_yet != NULL)
        printf("not yet");
    else if (input->words != NULL)
        print_words(input, ", ");
    else
        print_range(input);
    printf(" | %s |\n", input->meaning);
}

static void markdown_output(const struct model_output *output) {
    const char *unit = dimension_unit(output->dimension);
    printf("| `%s` | %s | %s%s |\n", output->name, unit[0] != '\0' ? unit : "1",
           output->not_yet != NULL ? "Not yet. " : "", output->meaning);
}

void describe_markdown(const struct model *model) {
    printf("\n## %s\n\n%s. %s\n\n", model->name, model->title, model->summary);
    printf("%s\n\n*Validity.* %s\n\n| input | allowed | meaning |\n|---|---|---|\n", model->method,
           model->validity);
    for (size_t i = 0; i < model->input_count; i++)
        markdown_input(&model->inputs[i]);
    printf("\n| output | unit | meaning |\n|---|---|---|\n");
    for (size_t i = 0; i < model->output_count; i++)
        markdown_output(&model->outputs[i]);
    if (model->flag_count > 0)
        printf("\n| flag | meaning |\n|---|---|\n");
    for (size_t i = 0; i < model->flag_count; i++)
        printf("| `%s` | %s |\n", model->flags[i].name, model->flags[i].meaning);
}
