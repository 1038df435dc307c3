#include "commands.h"

#include "describe.h"

#include "groundrules/model.h"
#include "groundrules/text.h"
#include "options.h"

#include <stdio.h>

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

static enum exit_code all_as_markdown(void) {
    puts("# Models\n\nMade by `groundrules models --markdown`; a test holds it to the "
         "declarations.");
    for (size_t i = 0; i < model_count(); i++)
        describe_markdown(model_at(i));
    return EXIT_DONE;
}

static enum exit_code models(const struct options *options) {
    if (options->markdown)
        return all_as_markdown();
    if (options->word_count == 1) {
        const struct model *model = model_find(options->words[0]);
        if (model == NULL)
            return unknown_model(options->words[0]);
        describe_text(model);
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
    if (words != NULL && options_read(argc, argv, "m", words, &options, &error) &&
        options.word_count > 1)
        error_set(&error, ERROR_USAGE, "models takes no or one name");
    enum exit_code code = error.kind != ERROR_NONE ? report_error(&error) : models(&options);
    arena_free(arena);
    return code;
}
