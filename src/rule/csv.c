/* rules.csv and the curves: RFC 4180, UTF-8, SI numbers with six digits, a point for the decimals.
 */

#include "groundrules/guideline.h"
#include "groundrules/text.h"

#include "status.h"

#include <math.h>
#include <string.h>

static void field(struct text *text, const char *value, bool first) {
    if (!first)
        text_add(text, ",");
    if (value == NULL)
        return;
    if (strpbrk(value, ",\"\r\n") == NULL) {
        text_add(text, value);
        return;
    }
    text_add(text, "\"");
    for (const char *at = value; *at != '\0'; at++)
        text_add_length(text, *at == '"' ? "\"\"" : at, *at == '"' ? 2 : 1);
    text_add(text, "\"");
}

static void number(struct text *text, double value) {
    if (isfinite(value))
        text_format(text, ",%.6g", value);
    else
        text_add(text, ",");
}

static bool finish(struct text *text, const char *name, struct guideline_file *file) {
    const char *bytes = text_end(text);
    if (bytes == NULL || name == NULL)
        return false;
    *file = (struct guideline_file){name, (const unsigned char *)bytes, strlen(bytes)};
    return true;
}

static void finding_line(struct text *text, const struct study_chapter *chapter,
                         const struct study_rule *rule, const struct study_variant *variant,
                         const char *row, const char *column,
                         const struct guideline_finding *finding) {
    const struct model_input *input = &chapter->model->inputs[rule->find];
    const struct model_output *output = &chapter->model->outputs[rule->condition.output];
    field(text, rule->id, true);
    field(text, chapter->id, false);
    field(text, status_strength(rule->strength), false);
    field(text, variant->label, false);
    field(text, row, false);
    field(text, column, false);
    field(text, input->name, false);
    field(text, rule->find_smallest ? "at least" : "at most", false);
    field(text, status_name(finding->status), false);
    bool bound = finding->status == GUIDELINE_FOUND || finding->status == GUIDELINE_MET_EVERYWHERE;
    number(text, bound ? finding->value : NAN);
    field(text, dimension_unit(input->dimension), false);
    number(text, rule->grid);
    field(text, output->name, false);
    number(text, finding->limit);
    number(text, finding->worst);
    field(text, dimension_unit(output->dimension), false);
    number(text, finding->margin);
    text_format(text, ",%zu\r\n", finding->solutions);
}

static bool rules_csv(const struct guideline *guideline, struct arena *arena,
                      struct guideline_file *file, struct error *error) {
    struct text text = text_start(arena, error);
    text_add(&text, "rule,chapter,strength,case,row,column,input,bound,status,value,unit,grid,"
                    "output,limit,worst,"
                    "output_unit,margin,solutions\r\n");
    for (size_t c = 0; c < guideline->study->chapter_count; c++) {
        const struct study_chapter *chapter = guideline->chapters[c].chapter;
        for (size_t r = 0; r < chapter->rule_count; r++) {
            const struct guideline_rule *rule = &guideline->chapters[c].rules[r];
            const struct study_rule *stated = rule->rule;
            size_t columns = stated->columns.count > 0 ? stated->columns.count : 1;
            for (size_t v = 0; v < stated->variant_count; v++) {
                finding_line(&text, chapter, stated, &stated->variants[v], NULL, NULL,
                             &rule->findings[v]);
                for (size_t i = 0; rule->cells != NULL && i < stated->rows.count * columns; i++)
                    finding_line(&text, chapter, stated, &stated->variants[v],
                                 stated->rows.labels[i / columns],
                                 stated->columns.count > 0 ? stated->columns.labels[i % columns]
                                                           : NULL,
                                 &rule->cells[v * stated->rows.count * columns + i]);
            }
        }
    }
    return finish(&text, "rules.csv", file);
}

/* " [V]"; nothing for a ratio or a number. */
static const char *bracketed(enum dimension dimension, struct arena *arena, struct error *error) {
    const char *unit = dimension_unit(dimension);
    return *unit == '\0' ? "" : arena_print(arena, error, " [%s]", unit);
}

static void curve_heads(struct text *text, const struct study_chapter *chapter,
                        const struct study_chart *chart, struct arena *arena, struct error *error) {
    const struct model_input *input = &chapter->model->inputs[chapter->vary.input];
    field(text,
          arena_print(arena, error, "%s%s", input->name, bracketed(input->dimension, arena, error)),
          true);
    for (size_t o = 0; o < chart->output_count; o++)
        for (size_t v = 0; v < chapter->variant_count; v++) {
            const struct model_output *output = &chapter->model->outputs[chart->outputs[o]];
            const char *label =
                chapter->variants[v].label != NULL ? chapter->variants[v].label : "";
            const char *parts[] = {"", " low", " high"};
            for (size_t p = 0; p < 3; p++)
                field(text,
                      arena_print(arena, error, "%s%s%s %s", output->name, parts[p],
                                  bracketed(output->dimension, arena, error), label),
                      false);
        }
    text_add(text, "\r\n");
}

static bool curves_csv(const struct guideline_chapter *chapter, size_t chart, struct arena *arena,
                       struct guideline_file *file, struct error *error) {
    const struct study_chapter *asked = chapter->chapter;
    const struct study_chart *drawn = &asked->charts[chart];
    struct text text = text_start(arena, error);
    curve_heads(&text, asked, drawn, arena, error);
    for (size_t i = 0; i < asked->vary.point_count; i++) {
        text_format(&text, "%.6g", asked->vary.points[i]);
        for (size_t o = 0; o < drawn->output_count; o++)
            for (size_t v = 0; v < asked->variant_count; v++) {
                const struct guideline_curve *curve =
                    guideline_find_curve(chapter, v, drawn->outputs[o]);
                number(&text, curve != NULL ? curve->y[i] : NAN);
                number(&text, curve != NULL ? curve->low[i] : NAN);
                number(&text, curve != NULL ? curve->high[i] : NAN);
            }
        text_add(&text, "\r\n");
    }
    return finish(&text, arena_print(arena, error, "curves/%s-%zu.csv", asked->id, chart + 1),
                  file);
}

bool guideline_export(const struct guideline *guideline, struct arena *arena,
                      struct guideline_file **files, size_t *count, struct error *error) {
    size_t most = 1, made = 0;
    for (size_t c = 0; c < guideline->study->chapter_count; c++)
        most += guideline->study->chapters[c].chart_count;
    struct guideline_file *all = arena_new(arena, most, struct guideline_file, error);
    if (all == NULL || !rules_csv(guideline, arena, &all[made++], error))
        return false;
    for (size_t c = 0; c < guideline->study->chapter_count; c++)
        for (size_t i = 0; i < guideline->study->chapters[c].chart_count; i++)
            if (!curves_csv(&guideline->chapters[c], i, arena, &all[made++], error))
                return false;
    *files = all;
    *count = made;
    return true;
}
