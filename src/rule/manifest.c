/* rules.json: what the next issue compares with, and what vouches for all other files. */

#include "fingerprint.h"
#include "json.h"
#include "status.h"

#include <math.h>
#include <string.h>

static void input_value(struct json *json, const char *key, const struct model_input *input,
                        double value) {
    if (input->words != NULL)
        json_text(json, key, input->words[(size_t)value]);
    else
        json_number(json, key, value);
}

static void resolved_inputs(struct json *json, const struct model *model,
                            const struct study_variant *variant) {
    json_open(json, "inputs", '{');
    for (size_t i = 0; i < model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        const struct model_input *input = &model->inputs[i];
        if (input->not_yet != NULL)
            continue;
        json_open(json, input->name, '{');
        input_value(json, "value", input, setting->value);
        if (setting->range.to > setting->range.from) {
            input_value(json, "from", input, setting->range.from);
            input_value(json, "to", input, setting->range.to);
        }
        if (setting->minus > 0.0 || setting->plus > 0.0) {
            json_number(json, "minus", setting->minus);
            json_number(json, "plus", setting->plus);
        }
        json_text(json, "origin", status_origin(setting->origin));
        json_close(json, '}');
    }
    json_close(json, '}');
}

static void finding(struct json *json, const struct model *model,
                    const struct guideline_finding *finding) {
    bool bound = finding->status == GUIDELINE_FOUND || finding->status == GUIDELINE_MET_EVERYWHERE;
    json_text(json, "status", status_name(finding->status));
    json_number(json, "value", bound ? finding->value : NAN);
    json_open(json, "proof", '{');
    json_whole(json, "solutions", (long long)finding->solutions);
    json_number(json, "worst", finding->worst);
    json_number(json, "limit", finding->limit);
    json_number(json, "margin", finding->margin);
    json_number(json, "error", finding->error);
    json_number(json, "one_step_beyond", finding->nearest);
    if (!isnan(finding->worst)) {
        json_open(json, "worst_inputs", '{');
        for (size_t i = 0; i < model->input_count; i++)
            if (model->inputs[i].not_yet == NULL)
                input_value(json, model->inputs[i].name, &model->inputs[i],
                            finding->worst_inputs[i]);
        json_close(json, '}');
    }
    if (finding->remedy_count > 0)
        json_open(json, "would_do", '[');
    for (size_t i = 0; i < finding->remedy_count; i++) {
        const struct guideline_remedy *remedy = &finding->remedies[i];
        json_open(json, NULL, '{');
        if (remedy->kind == GUIDELINE_TIED_COPPER)
            json_number(json, "tied_strip_between", remedy->strip_width);
        if (remedy->kind == GUIDELINE_OTHER_BOARD)
            json_text(json, "stackup", remedy->stackup->id);
        json_open(json, remedy->at_least ? "at_least" : "at_most", '{');
        json_number(json, model->inputs[remedy->input].name, remedy->value);
        json_close(json, '}');
        json_close(json, '}');
    }
    if (finding->remedy_count > 0)
        json_close(json, ']');
    json_open(json, "flags", '[');
    for (size_t i = 0; i < model->flag_count; i++)
        if ((finding->flags >> i & 1u) != 0)
            json_text(json, NULL, model->flags[i].name);
    json_close(json, ']');
    json_close(json, '}');
}

static void cells(struct json *json, const struct model *model, const struct guideline_rule *rule,
                  size_t v) {
    const struct study_rule *stated = rule->rule;
    size_t columns = stated->columns.count > 0 ? stated->columns.count : 1;
    if (rule->cells == NULL)
        return;
    json_open(json, "table", '[');
    for (size_t i = 0; i < stated->rows.count * columns; i++) {
        json_open(json, NULL, '{');
        json_text(json, stated->rows.name, stated->rows.labels[i / columns]);
        if (stated->columns.count > 0)
            json_text(json, stated->columns.name, stated->columns.labels[i % columns]);
        finding(json, model, &rule->cells[v * stated->rows.count * columns + i]);
        json_close(json, '}');
    }
    json_close(json, ']');
}

static void rule_entry(struct json *json, const struct study_chapter *chapter,
                       const struct guideline_rule *rule) {
    const struct study_rule *stated = rule->rule;
    const struct model_input *input = &chapter->model->inputs[stated->find];
    json_open(json, NULL, '{');
    json_text(json, "id", stated->id);
    json_text(json, "chapter", chapter->id);
    json_text(json, "strength", status_strength(stated->strength));
    json_text(json, "model", chapter->model->name);
    json_text(json, "input", input->name);
    json_text(json, "unit", dimension_unit(input->dimension));
    json_text(json, "bound", stated->find_smallest ? "at least" : "at most");
    json_text(json, "so_that", stated->condition.text);
    json_number(json, "grid", stated->grid);
    json_number(json, "from", stated->within.from);
    json_number(json, "to", stated->within.to);
    json_text(json, "tolerance", stated->nominal ? "nominal" : "corners");
    json_open(json, "cases", '[');
    for (size_t v = 0; v < stated->variant_count; v++) {
        json_open(json, NULL, '{');
        json_text(json, "case", stated->variants[v].label);
        json_text(json, "stackup",
                  stated->variants[v].stackup != NULL ? stated->variants[v].stackup->id : NULL);
        finding(json, chapter->model, &rule->findings[v]);
        cells(json, chapter->model, rule, v);
        resolved_inputs(json, chapter->model, &stated->variants[v]);
        json_close(json, '}');
    }
    json_close(json, ']');
    json_close(json, '}');
}

static bool file_list(struct json *json, const struct guideline_file *files, size_t count,
                      struct error *error) {
    json_open(json, "files", '[');
    for (size_t i = 0; i < count; i++) {
        char digest[65];
        if (!fingerprint_bytes(files[i].bytes, files[i].length, digest, error))
            return false;
        json_open(json, NULL, '{');
        json_text(json, "name", files[i].name);
        json_text(json, "sha256", digest);
        json_whole(json, "bytes", (long long)files[i].length);
        json_close(json, '}');
    }
    json_close(json, ']');
    return true;
}

bool guideline_manifest(const struct guideline *guideline, const struct guideline_file *files,
                        size_t count, struct arena *arena, struct guideline_file *manifest,
                        struct error *error) {
    const struct study_document *document = &guideline->study->document;
    struct json json = json_start(arena, error);
    json_open(&json, NULL, '{');
    json_text(&json, "format", "groundrules-rules 1");
    json_text(&json, "number", document->number);
    json_text(&json, "revision", document->revision);
    json_text(&json, "date", document->date);
    json_text(&json, "fingerprint", guideline->fingerprint);
    json_open(&json, "models", '{');
    for (size_t i = 0; i < model_count(); i++)
        json_whole(&json, model_at(i)->name, model_at(i)->revision);
    json_close(&json, '}');
    json_open(&json, "rules", '[');
    for (size_t c = 0; c < guideline->study->chapter_count; c++)
        for (size_t r = 0; r < guideline->chapters[c].chapter->rule_count; r++)
            rule_entry(&json, guideline->chapters[c].chapter, &guideline->chapters[c].rules[r]);
    json_close(&json, ']');
    if (!file_list(&json, files, count, error))
        return false;
    json_close(&json, '}');
    const char *text = json_end(&json);
    if (text == NULL)
        return false;
    *manifest = (struct guideline_file){"rules.json", (const unsigned char *)text, strlen(text)};
    return true;
}
