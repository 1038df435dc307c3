#include "commands.h"

#include "groundrules/study.h"
#include "options.h"

#include <stdio.h>

enum exit_code command_schema(int argc, char **argv) {
    struct error error = {0};
    struct options options = {0};
    struct arena *arena = arena_create(&error);
    const char *schema = NULL;
    const char **words =
        arena == NULL ? NULL : arena_new(arena, (size_t)argc + 1, const char *, &error);
    if (words != NULL && options_read(argc, argv, "", words, &options, &error) &&
        options.word_count > 0)
        error_set(&error, ERROR_USAGE, "schema takes no words");
    if (error.kind == ERROR_NONE && study_schema(arena, &schema, &error))
        puts(schema);
    enum exit_code code = error.kind != ERROR_NONE ? report_error(&error) : EXIT_DONE;
    arena_free(arena);
    return code;
}
