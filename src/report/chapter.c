/* A chapter: the question, the geometry to scale, charts with a sentence each, the table, the
 * rules, the method. */

#include "chapter.h"

#include "report/chart.h"
#include "report/drawing.h"
#include "words.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* ---- the geometry ---- */

enum { MOST_SKETCHES = 4 };

/* The sweep's middle shows the geometry better than its first point; no more digits than a
 * dimension line can carry. */
static double shown_point(const struct study_chapter *chapter) {
    const struct study_vary *vary = &chapter->vary;
    if (chapter->table_point_count > 0)
        return chapter->table_points[chapter->table_point_count / 2];
    double middle = vary->points[vary->logarithmic ? vary->point_count / 3 : vary->point_count / 2];
    double unit = pow(10.0, floor(log10(fabs(middle))) - 1.0);
    double rounded = round(middle / unit) * unit;
    return isfinite(rounded) && rounded >= vary->points[0] ? rounded : middle;
}

static bool sketch_of(const struct study_chapter *chapter, bool plan, size_t v,
                      struct sketch *sketch) {
    const struct model *model = chapter->model;
    double inputs[MODEL_MOST_INPUTS];
    for (size_t i = 0; i < chapter->model->input_count; i++)
        inputs[i] = chapter->variants[v].settings[i].value;
    inputs[chapter->vary.input] = shown_point(chapter);
    struct error ignored = {0};
    return model_resolve(chapter->model, inputs, &ignored) &&
           model_check(chapter->model, inputs, &ignored) &&
           (plan ? model->plan : model->sketch)(inputs, sketch, &ignored);
}

static bool same_picture(const struct sketch *a, const struct sketch *b) {
    if (a->solid_count != b->solid_count || a->disc_count != b->disc_count || a->etch != b->etch)
        return false;
    for (size_t i = 0; i < a->disc_count; i++)
        if (a->discs[i].x != b->discs[i].x || a->discs[i].y != b->discs[i].y ||
            a->discs[i].diameter != b->discs[i].diameter)
            return false;
    for (size_t i = 0; i < a->solid_count; i++) {
        const struct sketch_solid *p = &a->solids[i], *q = &b->solids[i];
        if (p->role != q->role || p->left != q->left || p->right != q->right ||
            p->bottom != q->bottom || p->top != q->top)
            return false;
    }
    return true;
}

/* At most four: distinct pictures, and where boards and something else are compared, those of the
 * first board. */
static size_t choose(const struct study_chapter *chapter, bool plan, struct sketch *sketches,
                     size_t *variants) {
    size_t count = 0;
    bool many = chapter->variant_count > 3;
    for (size_t v = 0; v < chapter->variant_count && count < MOST_SKETCHES; v++) {
        struct sketch sketch;
        if (many && chapter->variants[v].stackup != chapter->variants[0].stackup)
            continue;
        if (!sketch_of(chapter, plan, v, &sketch))
            continue;
        bool seen = false;
        for (size_t i = 0; i < count; i++)
            seen = seen || same_picture(&sketches[i], &sketch);
        if (!seen) {
            sketches[count] = sketch;
            variants[count++] = v;
        }
    }
    return count;
}

static const char *symbol(const char *input) {
    static const char *const names[][2] = {{"between_width", "strip"},
                                           {"victim_width", "victim"},
                                           {"edge_distance", "to the edge"},
                                           {"mask", "solder mask"},
                                           {"via_pitch", "pitch"},
                                           {"via_diameter", "via"},
                                           {"return_distance", "to the return"},
                                           {"separation", "apart"}};
    for (size_t i = 0; i < sizeof names / sizeof *names; i++)
        if (strcmp(input, names[i][0]) == 0)
            return names[i][1];
    return NULL; /* its own, in words */
}

/* A lone plan stands for every variant. */
static const char *picture_label(struct flow *flow, const struct study_variant *variant, bool plan,
                                 size_t count) {
    const char *label = plan && count == 1 ? NULL : variant->label;
    if (!plan)
        return label;
    return label == NULL ? "From above" : flow_print(flow, "%s, from above", label);
}

static void geometry_row(struct flow *flow, const struct study_chapter *chapter, bool plan,
                         const struct sketch *sketches, const size_t *variants, size_t count,
                         double width) {
    struct scene *drawings[MOST_SKETCHES];
    double tallest = 0.0, labels = 0.0;
    for (size_t i = 0; i < count; i++) {
        struct drawing_options options = {.name = flow_print(flow, "%s-%s-%zu", chapter->id,
                                                             plan ? "plan" : "geometry",
                                                             variants[i] + 1),
                                          .lengths = flow->guideline->study->document.lengths,
                                          .width = width,
                                          .most_height = plan ? 100.0 : 150.0,
                                          .input_symbol = symbol};
        struct drawing_report report;
        drawings[i] =
            drawing_sketch(&sketches[i], &options, flow->setter, flow->arena, &report, flow->error);
        if (drawings[i] == NULL)
            return;
        tallest = fmax(tallest, drawings[i]->height);
        const char *label = picture_label(flow, &chapter->variants[variants[i]], plan, count);
        if (label != NULL)
            labels =
                fmax(labels, flow_text_height(flow, THEME_LABEL, flow_escape(flow, label), width));
    }
    flow_need(flow, tallest + labels + 4.0);
    for (size_t i = 0; i < count && !flow_failed(flow); i++) {
        double x = flow->page.left + (width + flow->page.gutter) * (double)i;
        const char *label = picture_label(flow, &chapter->variants[variants[i]], plan, count);
        if (label != NULL)
            flow_text_box(flow, THEME_LABEL,
                          flow_print(flow, "<b>%s</b>", flow_escape(flow, label)), x, flow->y,
                          width);
        flow_figure(
            flow,
            flow_print(flow, "%s-%s-%zu", chapter->id, plan ? "plan" : "geometry", variants[i] + 1),
            label != NULL ? flow_escape(flow, label) : "Geometry", drawings[i]);
        scene_place(flow->scene, drawings[i], x,
                    flow->y + labels + 2.0 + tallest - drawings[i]->height);
    }
    flow->y += tallest + labels + 8.0;
}

static void pictures(struct flow *flow, const struct study_chapter *chapter, bool plan) {
    if (flow_failed(flow) || (plan ? chapter->model->plan : chapter->model->sketch) == NULL)
        return;
    struct sketch *sketches = arena_new(flow->arena, MOST_SKETCHES, struct sketch, flow->error);
    size_t variants[MOST_SKETCHES];
    size_t count = sketches == NULL ? 0 : choose(chapter, plan, sketches, variants);
    if (count == 0)
        return;
    double gutter = flow->page.gutter, all = flow->page.right - flow->page.left;
    size_t columns = count > 3 ? 2 : count;
    double width = (all - gutter * (double)(columns - 1)) / (double)columns;
    if (count == 1)
        width = (plan ? 0.45 : 0.6) * all;
    flow_gap(flow, 8.0);
    for (size_t first = 0; first < count && !flow_failed(flow); first += columns)
        geometry_row(flow, chapter, plan, sketches + first, variants + first,
                     count - first < columns ? count - first : columns, width);
}

static void geometry(struct flow *flow, const struct study_chapter *chapter) {
    pictures(flow, chapter, false);
    pictures(flow, chapter, true);
}

/* ---- charts ---- */

static bool draws(const struct study_chart *chart, size_t output) {
    for (size_t i = 0; i < chart->output_count; i++)
        if (chart->outputs[i] == output)
            return true;
    return false;
}

/* NAN stands for "as another input": two of them agree. */
static bool differs(double left, double right) {
    return left != right && !(isnan(left) && isnan(right));
}

/* A rule's limit and value belong into the chart when it judges what the curves show: no settings
 * of its own. */
static bool judges_the_curves(const struct guideline_chapter *chapter,
                              const struct study_rule *rule) {
    const struct study_chapter *asked = chapter->chapter;
    if (rule->variant_count != asked->variant_count)
        return false;
    for (size_t v = 0; v < rule->variant_count; v++) {
        const struct study_variant *a = &rule->variants[v], *b = &asked->variants[v];
        if (a->aggressor != b->aggressor || a->victim != b->victim)
            return false;
        for (size_t i = 0; i < asked->model->input_count; i++)
            if (i != asked->vary.input &&
                (differs(a->settings[i].range.from, b->settings[i].range.from) ||
                 differs(a->settings[i].range.to, b->settings[i].range.to)))
                return false;
    }
    return true;
}

/* A rule whose marks would crowd the plot has none: its card and the table say it better. */
enum { MOST_FLAGS = 6 };

struct plot {
    struct chart_series series[CHART_MOST_SERIES];
    struct chart_limit limits[16];
    struct chart_mark marks[CHART_MOST_MARKS];
    struct chart chart;
};

static bool has_band(const struct guideline_curve *curve, size_t count) {
    for (size_t i = 0; i < count; i++)
        if (curve->low[i] < curve->y[i] || curve->high[i] > curve->y[i])
            return true;
    return false;
}

/* A board looks the same in every chapter that compares boards only. */
static bool compares_boards_only(const struct study_chapter *chapter) {
    for (size_t v = 0; v < chapter->variant_count; v++)
        for (size_t w = 0; w < v; w++)
            if (chapter->variants[v].stackup == chapter->variants[w].stackup)
                return false;
    return chapter->variants[0].stackup != NULL;
}

static size_t board_index(const struct study *study, const struct study_stackup *stackup) {
    size_t b = 0;
    while (b < study->stackup_count && &study->stackups[b] != stackup)
        b++;
    return b;
}

/* Flags that only say what was solved leave the curve alone. */
static bool casts_doubt(const struct model *model, unsigned flags) {
    for (size_t i = 0; i < model->flag_count; i++)
        if ((flags >> i & 1u) != 0 && !model->flags[i].informs)
            return true;
    return false;
}

static void add_series(struct flow *flow, const struct guideline_chapter *chapter,
                       const struct study_chart *asked, struct plot *plot) {
    const struct study_vary *vary = &chapter->chapter->vary;
    const struct study *study = flow->guideline->study;
    bool boards = asked->output_count == 1 && compares_boards_only(chapter->chapter);
    /* One variant needs no name beside its outputs. */
    bool lone = asked->output_count > 1 && chapter->chapter->variant_count == 1;
    plot->chart.style_count = boards ? study->stackup_count : 0;
    for (size_t o = 0; o < asked->output_count; o++)
        for (size_t v = 0; v < chapter->chapter->variant_count; v++) {
            const struct guideline_curve *curve =
                guideline_find_curve(chapter, v, asked->outputs[o]);
            if (curve == NULL || plot->chart.series_count == CHART_MOST_SERIES)
                continue;
            const struct model_output *output =
                &chapter->chapter->model->outputs[asked->outputs[o]];
            const char *name = chapter->chapter->variants[v].label;
            const char *what = output->symbol != NULL ? output->symbol : output->title;
            const char *label = name == NULL || lone ? output->title
                                : asked->output_count == 1
                                    ? flow_escape(flow, name)
                                    : flow_print(flow, "%s, %s", what, flow_escape(flow, name));
            bool band = has_band(curve, vary->point_count);
            bool *doubtful = arena_new(flow->arena, vary->point_count, bool, flow->error);
            for (size_t i = 0; doubtful != NULL && i < vary->point_count; i++)
                doubtful[i] = casts_doubt(chapter->chapter->model, curve->flags[i]);
            plot->series[plot->chart.series_count] = (struct chart_series){
                .label = label,
                .x = vary->points,
                .y = curve->y,
                .count = vary->point_count,
                .low = band ? curve->low : NULL,
                .high = band ? curve->high : NULL,
                .style = boards ? board_index(study, chapter->chapter->variants[v].stackup)
                                : plot->chart.series_count,
                .doubtful = doubtful};
            plot->chart.series_count++;
        }
}

static void add_limit(struct plot *plot, double value, const char *label, bool below) {
    for (size_t i = 0; i < plot->chart.limit_count; i++)
        if (plot->limits[i].value == value)
            return;
    if (plot->chart.limit_count < sizeof plot->limits / sizeof *plot->limits)
        plot->limits[plot->chart.limit_count++] = (struct chart_limit){value, label, below};
}

static double limit_of(const struct study_rule *rule, const struct study_variant *variant) {
    if (rule->condition.against == STUDY_BUDGET && variant->victim != NULL)
        return rule->condition.share * variant->victim->noise_margin * variant->victim->share;
    return rule->condition.limit;
}

/* Two boards that come to the same value share one mark. */
static bool is_marked(const struct plot *plot, double value) {
    for (size_t i = 0; i < plot->chart.mark_count; i++)
        if (plot->marks[i].x == value)
            return true;
    return false;
}

static void add_rule(struct flow *flow, const struct guideline_chapter *chapter,
                     const struct study_chart *asked, const struct guideline_rule *result,
                     struct plot *plot) {
    const struct study_rule *rule = result->rule;
    if (!draws(asked, rule->condition.output) || !judges_the_curves(chapter, rule))
        return;
    const struct model_output *output = &chapter->chapter->model->outputs[rule->condition.output];
    bool marked = rule->find == chapter->chapter->vary.input &&
                  plot->chart.mark_count + rule->variant_count <= MOST_FLAGS;
    for (size_t v = 0; v < rule->variant_count; v++) {
        const struct guideline_finding *finding = &result->findings[v];
        if (rule->condition.against != STUDY_REFERENCE) {
            double limit = limit_of(rule, &rule->variants[v]);
            add_limit(plot, limit,
                      flow_print(flow, "%s: %s", flow_escape(flow, rule->id),
                                 words_value(flow, limit, output->dimension)),
                      !rule->condition.at_most);
        }
        if (!marked || finding->status != GUIDELINE_FOUND)
            continue;
        if (is_marked(plot, finding->value))
            continue;
        enum dimension dimension = chapter->chapter->model->inputs[rule->find].dimension;
        plot->marks[plot->chart.mark_count++] =
            (struct chart_mark){finding->value,
                                /* A reference is judged in another situation than the curves. */
                                rule->condition.against == STUDY_REFERENCE ? NAN : finding->worst,
                                flow_print(flow, "%s: %s", flow_escape(flow, rule->id),
                                           words_grid(flow, finding->value, rule->grid, dimension)),
                                plot->series[v].style};
    }
}

static const char *chart_title(struct flow *flow, const struct study_chapter *chapter,
                               const struct study_chart *asked) {
    if (asked->title != NULL)
        return flow_escape(flow, asked->title);
    const char *text = "";
    for (size_t o = 0; o < asked->output_count; o++)
        text = flow_print(flow, "%s%s%s", text, o > 0 ? " and " : "",
                          chapter->model->outputs[asked->outputs[o]].title);
    if (*text >= 'a' && *text <= 'z')
        text = flow_print(flow, "%c%s", *text - 32, text + 1);
    return flow_print(flow, "%s against %s", text,
                      words_name(flow, chapter->model->inputs[chapter->vary.input].name));
}

static struct scene *draw_chart(struct flow *flow, const struct guideline_chapter *chapter,
                                const struct study_chart *asked, const char *name, double width) {
    const struct study_chapter *question = chapter->chapter;
    const struct model_input *input = &question->model->inputs[question->vary.input];
    const struct model_output *output = &question->model->outputs[asked->outputs[0]];
    struct plot *plot = arena_new(flow->arena, 1, struct plot, flow->error);
    if (plot == NULL)
        return NULL;
    add_series(flow, chapter, asked, plot);
    for (size_t i = 0; i < question->limit_count; i++)
        if (draws(asked, question->limits[i].output))
            add_limit(
                plot, question->limits[i].value,
                question->limits[i].label != NULL ? flow_escape(flow, question->limits[i].label)
                                                  : NULL,
                question->model->outputs[question->limits[i].output].worse == MODEL_LOWER_IS_WORSE);
    for (size_t r = 0; r < question->rule_count; r++)
        add_rule(flow, chapter, asked, &chapter->rules[r], plot);
    plot->chart.name = name;
    plot->chart.title = chart_title(flow, question, asked);
    plot->chart.x = (struct chart_axis){words_name(flow, input->name), input->dimension,
                                        asked->x_logarithmic, 0, 0};
    plot->chart.y = (struct chart_axis){asked->output_count == 1 ? output->title : NULL,
                                        output->dimension, asked->y_logarithmic, 0, 0};
    if (asked->output_count > 1)
        plot->chart.y.label = dimension_name(output->dimension) + 2;
    plot->chart.lengths = flow->guideline->study->document.lengths;
    plot->chart.series = plot->series;
    plot->chart.limits = plot->limits;
    plot->chart.marks = plot->marks;
    double height = question->chart_count > 1 ? 180.0 : 232.0; /* two on a page */
    return chart_draw(&plot->chart, width, height, flow->setter, flow->arena, NULL, flow->error);
}

static bool anything_to_show(const struct guideline_chapter *chapter,
                             const struct study_chart *asked) {
    for (size_t c = 0; c < chapter->curve_count; c++)
        for (size_t i = 0;
             draws(asked, chapter->curves[c].output) && i < chapter->chapter->vary.point_count; i++)
            if (isfinite(chapter->curves[c].y[i]))
                return true;
    return false;
}

enum { SENTENCE_LINES = 16 }; /* of names as long as a study may have them */

static void charts(struct flow *flow, const struct guideline_chapter *chapter) {
    double width = flow->page.right - flow->page.left;
    for (size_t i = 0; i < chapter->chapter->chart_count && !flow_failed(flow); i++) {
        const struct study_chart *asked = &chapter->chapter->charts[i];
        if (!anything_to_show(chapter, asked)) {
            flow_gap(flow, 10.0);
            flow_text(flow, THEME_BODY,
                      flow_print(flow, "%s: does not apply to this geometry.",
                                 chart_title(flow, chapter->chapter, asked)));
            continue;
        }
        const char *name = flow_print(flow, "%s-%zu", chapter->chapter->id, i + 1);
        struct scene *scene = draw_chart(flow, chapter, asked, name, width);
        if (scene == NULL)
            return;
        const char *sentence = flow_shorten(
            flow, THEME_BODY, sentence_of_chart(flow, chapter, asked), width, SENTENCE_LINES);
        flow_gap(flow, 10.0);
        flow_need(flow, scene->height + flow_text_height(flow, THEME_BODY, sentence, width) + 6.0);
        flow_place(flow, scene, flow->page.left);
        flow_gap(flow, 4.0);
        flow_text(flow, THEME_BODY, sentence);
        flow_figure(flow, name, chart_title(flow, chapter->chapter, asked), scene);
    }
}

/* ---- the rest ---- */

static void practice(struct flow *flow, const struct study_chapter *chapter) {
    for (size_t i = 0; i < chapter->saying_count; i++) {
        if (i == 0)
            flow_gap(flow, 8.0);
        flow_text(flow, THEME_NOTE,
                  flow_print(flow, "Common practice, no source: “%s”",
                             flow_escape(flow, chapter->sayings[i])));
    }
}

static void given(struct flow *flow, const struct study_chapter *chapter) {
    const struct study_variant *variant = &chapter->variants[0];
    const char *text = "";
    for (size_t i = 0; i < chapter->model->input_count; i++) {
        const struct study_setting *setting = &variant->settings[i];
        const struct model_input *input = &chapter->model->inputs[i];
        if (setting->origin != STUDY_GIVEN && setting->origin != STUDY_FROM_SIGNAL)
            continue;
        const char *value =
            input->words != NULL && setting->range.to > setting->range.from
                ? flow_print(flow, "%s or %s", words_input(flow, input, setting->range.from),
                             words_input(flow, input, setting->range.to))
            : setting->range.to > setting->range.from
                ? words_range(flow, setting->range, input->dimension)
                : words_input(flow, input, setting->value);
        text = flow_print(flow, "%s%s%s %s", text, *text != '\0' ? ", " : "",
                          words_name(flow, input->name), value);
    }
    if (*text != '\0')
        flow_text(
            flow, THEME_NOTE,
            flow_print(flow,
                       "Given: %s. Curves show the worst over what is a range; bands show the "
                       "tolerance of the board.",
                       text));
}

static void method(struct flow *flow, const struct guideline_chapter *chapter) {
    const struct model *model = chapter->chapter->model;
    unsigned flags = 0;
    double error = 0.0;
    for (size_t c = 0; c < chapter->curve_count; c++) {
        error = fmax(error, chapter->curves[c].error);
        for (size_t i = 0; i < chapter->chapter->vary.point_count; i++)
            flags |= chapter->curves[c].flags[i];
    }
    const char *text = flow_print(
        flow, "Method of the model %s, revision %u: see Methods and sources. %s",
        flow_escape(flow, model->name), model->revision, flow_escape(flow, model->validity));
    if (error > 0.0)
        text = flow_print(flow,
                          "%s Largest estimated error along the curves: %s of the value, or of a "
                          "hundredth of the curve’s largest.",
                          text, words_digits(flow, error, DIMENSION_RATIO, -1));
    for (size_t i = 0; i < model->flag_count; i++)
        if ((flags >> i & 1u) != 0)
            text = flow_print(flow, "%s %s: %s", text,
                              model->flags[i].informs ? "Note" : "Flagged here",
                              flow_escape(flow, model->flags[i].meaning));
    double width = flow->page.right - flow->page.left;
    flow_gap(flow, 10.0);
    flow_need(flow, flow_text_height(flow, THEME_NOTE, text, width) + 20.0);
    flow_text(flow, THEME_STRONG, "Method and validity");
    flow_gap(flow, 2.0);
    flow_text(flow, THEME_NOTE, text);
}

void pages_chapter(struct flow *flow, size_t index) {
    const struct guideline_chapter *chapter = &flow->guideline->chapters[index];
    const struct study_chapter *asked = chapter->chapter;
    flow_heading(flow, 0, asked->title, pages_destination(flow, "chapter", asked->id), 0.0);
    flow_text(flow, THEME_LEAD, flow_escape(flow, asked->question));
    if (asked->note != NULL) {
        flow_gap(flow, 4.0);
        flow_text(flow, THEME_BODY, flow_escape(flow, asked->note));
    }
    flow_gap(flow, 4.0);
    given(flow, asked);
    geometry(flow, asked);
    charts(flow, chapter);
    chapter_table(flow, chapter);
    practice(flow, asked);
    for (size_t r = 0; r < asked->rule_count && !flow_failed(flow); r++) {
        pages_rule_card(flow, chapter, &chapter->rules[r]);
        chapter_rule_table(flow, chapter, &chapter->rules[r]);
    }
    method(flow, chapter);
}
