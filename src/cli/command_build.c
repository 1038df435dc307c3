#include "commands.h"

#include "groundrules/document.h"
#include "groundrules/output.h"
#include "options.h"
#include "progress.h"

#include <errno.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

/* ---- interruption: nothing half-written stays ---- */

static volatile sig_atomic_t interrupted;

static void on_signal(int number) {
    interrupted = 1;
    if (output_abandon())
        _exit(128 + number);
}

static void catch_signals(void) {
    struct sigaction action = {0};
    action.sa_handler = on_signal;
    sigemptyset(&action.sa_mask);
    sigaction(SIGINT, &action, NULL);
    sigaction(SIGTERM, &action, NULL);
    sigaction(SIGHUP, &action, NULL);
    /* A folder's quota or limit is answered by write(), not by a signal. */
    signal(SIGXFSZ, SIG_IGN);
}

/* ---- the date of the document ---- */

/* Days since 1970-01-01 of a date of the Gregorian calendar (H. Fliegel and T. van Flandern, 1968).
 */
static long long days_of(int year, int month, int day) {
    long long y = year, m = month, d = day;
    long long a = (m - 14) / 12;
    long long julian = 1461 * (y + 4800 + a) / 4 + 367 * (m - 2 - 12 * a) / 12 -
                       3 * ((y + 4900 + a) / 100) / 4 + d - 32075;
    return julian - 2440588;
}

/* SOURCE_DATE_EPOCH wins; then the study's own date; never the clock, so that the same study gives
 * the same bytes. */
static bool document_date(const struct study *study, long long *date, struct error *error) {
    const char *epoch = getenv("SOURCE_DATE_EPOCH");
    int year, month, day;
    *date = 0;
    if (epoch != NULL && *epoch != '\0') {
        char *end = NULL;
        errno = 0;
        *date = strtoll(epoch, &end, 10);
        if (errno != 0 || *end != '\0' || *date < 0 || *date > 253402300799LL)
            return error_set(error, ERROR_USAGE,
                             "SOURCE_DATE_EPOCH is '%s'; it must be seconds since 1970", epoch);
        return true;
    }
    if (study->document.date != NULL &&
        sscanf(study->document.date, "%4d-%2d-%2d", &year, &month, &day) == 3)
        *date = days_of(year, month, day) * 86400LL;
    return true;
}

/* ---- the folder ---- */

/* "studies/family.json" -> "studies/family". */
static char *standard_folder(const char *study, struct arena *arena, struct error *error) {
    const char *slash = strrchr(study, '/');
    const char *dot = strrchr(slash != NULL ? slash : study, '.');
    const char *name = slash != NULL ? slash + 1 : study;
    if (dot == NULL || dot == name)
        return arena_print(arena, error, "%s.guideline", study);
    return arena_copy_length(arena, study, (size_t)(dot - study), error);
}

static bool write_all(const char *folder, const struct guideline_file *files, size_t count,
                      struct arena *arena, struct output_result *result, struct error *error) {
    struct output_file *outputs = arena_new(arena, count, struct output_file, error);
    if (outputs == NULL)
        return false;
    for (size_t i = 0; i < count; i++)
        outputs[i] = (struct output_file){files[i].name, files[i].bytes, files[i].length};
    const char *manifest = arena_print(arena, error, "%s/rules.json", folder);
    const char *const *stale = NULL;
    size_t stale_count = 0;
    return manifest != NULL && study_manifest_files(manifest, arena, &stale, &stale_count, error) &&
           output_write(folder, outputs, count, stale, stale_count, arena, result, error);
}

/* ---- the build ---- */

static bool gather(const struct guideline *guideline, struct arena *arena,
                   struct guideline_file **files, size_t *count, struct error *error) {
    struct document_options document = {0};
    struct guideline_file *pages = NULL, *tables = NULL;
    size_t page_count = 0, table_count = 0;
    if (!document_date(guideline->study, &document.date, error) ||
        !document_render(guideline, &document, arena, &pages, &page_count, error) ||
        !guideline_export(guideline, arena, &tables, &table_count, error))
        return false;
    *count = page_count + table_count + 1;
    *files = arena_new(arena, *count, struct guideline_file, error);
    if (*files == NULL)
        return false;
    memcpy(*files, pages, page_count * sizeof **files);
    memcpy(*files + page_count, tables, table_count * sizeof **files);
    return guideline_manifest(guideline, *files, page_count + table_count, arena,
                              *files + *count - 1, error);
}

static size_t rules_not_met(const struct guideline *guideline, size_t *all) {
    size_t unmet = 0;
    *all = 0;
    for (size_t c = 0; c < guideline->study->chapter_count; c++)
        for (size_t r = 0; r < guideline->chapters[c].chapter->rule_count; r++) {
            const struct guideline_rule *rule = &guideline->chapters[c].rules[r];
            for (size_t v = 0; v < rule->rule->variant_count; v++) {
                enum guideline_status status = rule->findings[v].status;
                unmet += status == GUIDELINE_CANNOT_BE_MET || status == GUIDELINE_BELOW_FAB;
                (*all)++;
            }
        }
    return unmet;
}

static double seconds(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

static enum exit_code build(const struct options *options, struct arena *arena) {
    struct study study;
    struct study_problems problems = {0};
    struct error error = {0};
    double start = seconds();
    if (!study_read(options->words[0], arena, &study, &problems, &error)) {
        if (error.kind != ERROR_NONE)
            return report_error(&error);
        print_problems(options->words[0], &problems);
        return EXIT_STUDY;
    }
    const char *folder = options->output != NULL
                             ? options->output
                             : standard_folder(options->words[0], arena, &error);
    struct progress progress = progress_start(options->quiet);
    struct guideline_options settings = {options->jobs, progress_update, &progress};
    struct guideline guideline;
    struct guideline_file *files = NULL;
    struct output_result result = {0};
    size_t count = 0, all = 0;
    bool ok = folder != NULL && guideline_compute(&study, &settings, arena, &guideline, &error) &&
              gather(&guideline, arena, &files, &count, &error);
    progress_end(&progress);
    if (!ok || !write_all(folder, files, count, arena, &result, &error))
        return report_error(&error);
    size_t unmet = rules_not_met(&guideline, &all);
    if (!options->quiet)
        printf("%s: %zu files; %zu bound%s found and proven, %zu not met; %zu points and %zu fields "
               "solved in %.1f s\n",
               folder, count, all - unmet, all - unmet == 1 ? "" : "s", unmet,
               guideline.cases_solved, guideline.fields_solved, seconds() - start);
    return options->strict && unmet > 0 ? EXIT_NOT_MET : EXIT_DONE;
}

enum exit_code command_build(int argc, char **argv) {
    struct error error = {0};
    struct options options = {0};
    catch_signals();
    struct arena *arena = arena_create(&error);
    const char **words =
        arena == NULL ? NULL : arena_new(arena, (size_t)argc + 1, const char *, &error);
    if (words != NULL && options_read(argc, argv, "ojqs", words, &options, &error) &&
        options.word_count != 1)
        error_set(&error, ERROR_USAGE, "build takes one study file");
    enum exit_code code = error.kind != ERROR_NONE ? report_error(&error) : build(&options, arena);
    arena_free(arena);
    if (interrupted != 0 && code == EXIT_DONE)
        return 128 + SIGINT;
    return code;
}
