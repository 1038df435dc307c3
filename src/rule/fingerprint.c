#include "fingerprint.h"

#include "groundrules/text.h"

#include <glib.h>
#include <stdlib.h>
#include <string.h>

bool fingerprint_bytes(const unsigned char *bytes, size_t length, char digest[65],
                       struct error *error) {
    GChecksum *checksum = g_checksum_new(G_CHECKSUM_SHA256);
    if (checksum == NULL)
        return error_set(error, ERROR_INTERNAL, "no SHA-256");
    /* GLib takes signed lengths; pieces keep any size safe. */
    for (size_t at = 0; at < length; at += 1 << 20) {
        size_t piece = length - at < (1 << 20) ? length - at : (1 << 20);
        g_checksum_update(checksum, bytes + at, (gssize)piece);
    }
    memcpy(digest, g_checksum_get_string(checksum), 64);
    digest[64] = '\0';
    g_checksum_free(checksum);
    return true;
}

struct lines {
    struct arena *arena;
    struct error *error;
    const char **items;
    size_t count, capacity;
};

/* Raised when the search may answer the same question differently. */
enum { SEARCH_REVISION = 3 };

static void add(struct lines *lines, const char *line) {
    if (line == NULL)
        return;
    if (lines->count == lines->capacity) {
        size_t capacity = lines->capacity == 0 ? 256 : 2 * lines->capacity;
        const char **items = arena_new(lines->arena, capacity, const char *, lines->error);
        if (items == NULL)
            return;
        if (lines->count > 0)
            memcpy(items, lines->items, lines->count * sizeof *items);
        lines->items = items;
        lines->capacity = capacity;
    }
    lines->items[lines->count++] = line;
}

static void add_variant(struct lines *lines, const struct model *model, const char *where, size_t v,
                        const struct study_variant *variant) {
    for (size_t i = 0; i < model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        add(lines,
            arena_print(lines->arena, lines->error, "%s %zu %s.%u %s %.9g %.9g %.9g %.9g %.9g\n",
                        where, v, model->name, model->revision, model->inputs[i].name,
                        setting->value, setting->range.from, setting->range.to, setting->minus,
                        setting->plus));
    }
    if (variant->stackup != NULL)
        add(lines, arena_print(lines->arena, lines->error, "%s %zu smallest %.9g %.9g %.9g\n",
                               where, v, variant->stackup->smallest_width,
                               variant->stackup->smallest_gap, variant->stackup->smallest_drill));
    if (variant->victim != NULL)
        add(lines, arena_print(lines->arena, lines->error, "%s %zu budget %.9g\n", where, v,
                               variant->victim->noise_margin * variant->victim->share));
}

static void add_axis(struct lines *lines, const struct study_rule *rule, const char *which,
                     const struct study_cell_axis *axis) {
    for (size_t i = 0; i < axis->count && axis->ranges != NULL; i++)
        add(lines, arena_print(lines->arena, lines->error, "%s %s %s %zu %.9g %.9g\n", rule->id,
                               which, axis->name, i, axis->ranges[i].from, axis->ranges[i].to));
}

static void add_cells(struct lines *lines, const struct study_chapter *chapter,
                      const struct study_rule *rule) {
    size_t columns = rule->columns.count > 0 ? rule->columns.count : 1;
    add_axis(lines, rule, "rows", &rule->rows);
    add_axis(lines, rule, "columns", &rule->columns);
    for (size_t i = 0; rule->cells != NULL && i < rule->variant_count * rule->rows.count * columns;
         i++)
        add_variant(lines, chapter->model,
                    arena_print(lines->arena, lines->error, "%s cell", rule->id), i,
                    &rule->cells[i]);
}

static void add_board(struct lines *lines, const char *where, const struct study_stackup *stackup) {
    struct study_board_value values[STUDY_BOARD_VALUES];
    study_board_values(stackup, values);
    for (size_t i = 0; i < STUDY_BOARD_VALUES; i++)
        add(lines, arena_print(lines->arena, lines->error, "%s reference %s %.9g\n", where,
                               values[i].input, values[i].value.value));
}

static void add_rule(struct lines *lines, const struct study_chapter *chapter,
                     const struct study_rule *rule) {
    add(lines, arena_print(lines->arena, lines->error,
                           "%s find %zu %d %.9g %.9g %.9g so that %s nominal %d\n", rule->id,
                           rule->find, rule->find_smallest, rule->within.from, rule->within.to,
                           rule->grid, rule->condition.text, rule->nominal));
    for (size_t v = 0; v < rule->variant_count; v++)
        add_variant(lines, chapter->model, rule->id, v, &rule->variants[v]);
    add_cells(lines, chapter, rule);
    if (rule->condition.against != STUDY_REFERENCE)
        return;
    const struct study_stackup *stackup = rule->reference.stackup;
    add(lines, arena_print(lines->arena, lines->error, "%s reference kept %d\n", rule->id,
                           (int)rule->reference.kept));
    if (stackup != NULL)
        add_board(lines, rule->id, stackup);
    for (size_t i = 0; i < chapter->model->input_count; i++)
        if (rule->reference.values[i] == rule->reference.values[i])
            add(lines, arena_print(lines->arena, lines->error, "%s reference %s %.9g\n", rule->id,
                                   chapter->model->inputs[i].name, rule->reference.values[i]));
}

static int by_text(const void *a, const void *b) {
    return strcmp(*(const char *const *)a, *(const char *const *)b);
}

bool fingerprint_of(const struct study *study, char digest[65], struct arena *arena,
                    struct error *error) {
    struct lines lines = {.arena = arena, .error = error};
    add(&lines, arena_print(arena, error, "search %d\n", SEARCH_REVISION));
    for (size_t c = 0; c < study->chapter_count; c++) {
        const struct study_chapter *chapter = &study->chapters[c];
        for (size_t v = 0; v < chapter->variant_count; v++)
            add_variant(&lines, chapter->model, chapter->id, v, &chapter->variants[v]);
        for (size_t i = 0; i < chapter->vary.point_count; i++)
            add(&lines,
                arena_print(arena, error, "%s point %.9g\n", chapter->id, chapter->vary.points[i]));
        for (size_t r = 0; r < chapter->rule_count; r++)
            add_rule(&lines, chapter, &chapter->rules[r]);
    }
    if (error->kind != ERROR_NONE)
        return false;
    if (lines.count > 0)
        qsort(lines.items, lines.count, sizeof *lines.items, by_text);
    struct text all = text_start(arena, error);
    for (size_t i = 0; i < lines.count; i++)
        text_add(&all, lines.items[i]);
    char *text = text_end(&all);
    return text != NULL &&
           fingerprint_bytes((const unsigned char *)text, strlen(text), digest, error);
}
