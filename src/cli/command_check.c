#include "commands.h"

#include "groundrules/study.h"
#include "options.h"

#include <stdio.h>
#include <stdlib.h>

void print_problems(const char *path, const struct study_problems *problems) {
    for (size_t i = 0; i < problems->count; i++) {
        const struct study_problem *problem = &problems->items[i];
        fprintf(stderr, "%s:%u:%u: %s%s%s\n", path, problem->line, problem->column, problem->path,
                problem->path[0] != '\0' ? ": " : "", problem->message);
    }
    if (problems->left_out > 0)
        fprintf(stderr, "%s: %zu more not shown\n", path, problems->left_out);
    size_t all = problems->count + problems->left_out;
    fprintf(stderr, "groundrules: %s: %zu problem%s\n", path, all, all == 1 ? "" : "s");
}

static enum exit_code check(const struct options *options, struct arena *arena) {
    struct study study;
    struct study_problems problems = {0};
    struct error error = {0};
    if (study_read(options->words[0], arena, &study, &problems, &error)) {
        if (!options->quiet)
            printf("%s: nothing wrong: %zu board%s, %zu signal%s, %zu chapter%s\n",
                   options->words[0], study.stackup_count, study.stackup_count == 1 ? "" : "s",
                   study.signal_count, study.signal_count == 1 ? "" : "s", study.chapter_count,
                   study.chapter_count == 1 ? "" : "s");
        return EXIT_DONE;
    }
    if (error.kind != ERROR_NONE)
        return report_error(&error);
    print_problems(options->words[0], &problems);
    return EXIT_STUDY;
}

enum exit_code command_check(int argc, char **argv) {
    struct error error = {0};
    struct options options = {0};
    enum exit_code code = EXIT_USAGE;
    struct arena *arena = arena_create(&error);
    const char **words =
        arena == NULL ? NULL : arena_new(arena, (size_t)argc + 1, const char *, &error);
    if (words != NULL && options_read(argc, argv, "q", words, &options, &error) &&
        options.word_count != 1)
        error_set(&error, ERROR_USAGE, "check takes one study file");
    if (error.kind != ERROR_NONE)
        code = report_error(&error);
    else
        code = check(&options, arena);
    arena_free(arena);
    return code;
}
