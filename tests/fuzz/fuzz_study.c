/* Any bytes as a study.  Besides what the sanitizers see: the outcome is one of the three that
 * study.h promises, what is complained of lies in the file and can be printed, and a study that is
 * accepted holds what the later stages rely on. */

#include "fuzz.h"

#include "groundrules/study.h"

#include <string.h>

static void look_at_settings(const struct model *model, const struct study_variant *variant) {
    for (size_t i = 0; i < model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        if (setting->origin == STUDY_STANDARD && model->inputs[i].same_as != NULL)
            continue; /* NAN: it follows another input, which may be swept */
        promise(setting->minus >= 0 && setting->plus >= 0);
        promise(setting->range.from <= setting->value && setting->value <= setting->range.to);
    }
}

static void look_at_rule(const struct study_chapter *chapter, const struct study_rule *rule) {
    promise(rule->find < chapter->model->input_count && rule->grid > 0);
    promise(rule->within.from < rule->within.to && rule->variant_count > 0);
    promise(rule->condition.output < chapter->model->output_count);
    for (size_t i = 0; i < rule->variant_count; i++)
        look_at_settings(chapter->model, &rule->variants[i]);
    size_t columns = rule->columns.count == 0 ? 1 : rule->columns.count;
    if (rule->cells != NULL)
        for (size_t i = 0; i < rule->variant_count * rule->rows.count * columns; i++)
            look_at_settings(chapter->model, &rule->cells[i]);
}

static void look_at_chapter(const struct study_chapter *chapter) {
    promise(chapter->model != NULL && chapter->variant_count > 0 && chapter->chart_count > 0);
    promise(chapter->vary.point_count > 0 && chapter->vary.input < chapter->model->input_count);
    for (size_t i = 1; i < chapter->vary.point_count; i++)
        promise(chapter->vary.points[i - 1] < chapter->vary.points[i]);
    for (size_t i = 0; i < chapter->variant_count; i++)
        look_at_settings(chapter->model, &chapter->variants[i]);
    for (size_t i = 0; i < chapter->rule_count; i++)
        look_at_rule(chapter, &chapter->rules[i]);
}

static void look_at_problem(const struct study_problem *problem, size_t length) {
    promise(problem->line >= 1 && problem->line <= length + 1);
    promise(problem->column >= 1 && problem->column <= length + 1);
    for (const char *at = problem->message; *at != '\0'; at++)
        promise((unsigned char)*at >= 0x20 && *at != 0x7F);
}

static void read_once(const char *text, size_t length, bool memory_ends) {
    struct error error = {0};
    struct study study = {0};
    struct study_problems problems = {0};
    struct arena *arena = arena_create(&error);
    bool ok = arena != NULL &&
              study_read_text("fuzz.json", text, length, arena, &study, &problems, &error);
    promise(error.kind == ERROR_NONE || (memory_ends && error.kind == ERROR_MEMORY));
    promise(ok ? problems.count == 0 && error.kind == ERROR_NONE
               : problems.count > 0 || error.kind != ERROR_NONE);
    for (size_t i = 0; ok && i < study.chapter_count; i++)
        look_at_chapter(&study.chapters[i]);
    for (size_t i = 0; !ok && error.kind == ERROR_NONE && i < problems.count; i++)
        look_at_problem(&problems.items[i], length);
    arena_free(arena);
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
    char *text = fuzz_text(data, size);
    read_once(text, size, false);
    size_t sum = fuzz_sum(data, size);
    if (sum % 8 == 0) { /* again, with memory that runs out somewhere on the way */
        arena_fail_after(1 + sum / 8 % 512);
        read_once(text, size, true);
        arena_fail_after(0);
    }
    free(text);
    return 0;
}
