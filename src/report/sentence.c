/* What a chart says, in one computed sentence: the curves compared where the sweep is in its
 * middle, and how far each goes over the sweep. */

#include "pages.h"

#include "words.h"

#include <math.h>
#include <string.h>

static const char *name_of(struct flow *flow, const struct study_variant *variant) {
    return variant->label != NULL ? flow_escape(flow, variant->label) : "the board";
}

/* The table's middle point when there is one, else the sweep's. */
static size_t middle(const struct study_chapter *chapter) {
    if (chapter->table_point_count == 0)
        return chapter->vary.point_count / 2;
    double wanted = chapter->table_points[chapter->table_point_count / 2];
    size_t best = 0;
    for (size_t i = 1; i < chapter->vary.point_count; i++)
        if (fabs(chapter->vary.points[i] - wanted) < fabs(chapter->vary.points[best] - wanted))
            best = i;
    return best;
}

struct extremes {
    size_t low, high; /* variants */
    double lowest, highest;
    size_t seen;
};

static struct extremes extremes_at(const struct guideline_chapter *chapter, size_t output,
                                   size_t point) {
    struct extremes found = {0, 0, INFINITY, -INFINITY, 0};
    for (size_t v = 0; v < chapter->chapter->variant_count; v++) {
        const struct guideline_curve *curve = guideline_find_curve(chapter, v, output);
        if (curve == NULL || !isfinite(curve->y[point]))
            continue;
        found.seen++;
        if (curve->y[point] < found.lowest) {
            found.lowest = curve->y[point];
            found.low = v;
        }
        if (curve->y[point] > found.highest) {
            found.highest = curve->y[point];
            found.high = v;
        }
    }
    return found;
}

static const char *factor(struct flow *flow, double ratio) {
    return words_digits(flow, ratio, DIMENSION_NUMBER, -2);
}

static const char *at_words(struct flow *flow, const struct study_chapter *chapter, size_t point) {
    const struct model_input *input = &chapter->model->inputs[chapter->vary.input];
    if (input->dimension == DIMENSION_COUNT)
        return flow_print(flow, "With %s",
                          words_count(flow, input->name, chapter->vary.points[point]));
    return flow_print(flow, "At %s of %s", words_article(flow, input->name),
                      words_value(flow, chapter->vary.points[point], input->dimension));
}

static bool is_level(enum dimension dimension) {
    return dimension == DIMENSION_LEVEL;
}

static const char *compare(struct flow *flow, const struct guideline_chapter *chapter,
                           size_t output, size_t point, struct extremes found) {
    const struct study_chapter *asked = chapter->chapter;
    const struct model_output *declared = &asked->model->outputs[output];
    const char *high = words_digits(flow, found.highest, declared->dimension, -2);
    const char *low = words_digits(flow, found.lowest, declared->dimension, -2);
    const char *place = at_words(flow, asked, point);
    if (found.seen < 2 || found.low == found.high)
        return flow_print(flow, "%s the %s is %s", place, declared->title, high);
    const char *text =
        flow_print(flow, "%s the %s is %s for %s and %s for %s", place, declared->title, high,
                   name_of(flow, &asked->variants[found.high]), low,
                   name_of(flow, &asked->variants[found.low]));
    if (!is_level(declared->dimension) && found.lowest > 0.0)
        text = flow_print(flow, "%s, a factor of %s", text,
                          factor(flow, found.highest / found.lowest));
    return text;
}

/* "; over the sweep it falls 25 times (A), 310 times (B)" for curves of one sign. */
static const char *trends(struct flow *flow, const struct guideline_chapter *chapter,
                          size_t output) {
    const struct study_chapter *asked = chapter->chapter;
    size_t last = asked->vary.point_count - 1, told = 0;
    const char *text = "";
    bool falls = false;
    for (size_t v = 0; v < asked->variant_count && v < 3; v++) {
        const struct guideline_curve *curve = guideline_find_curve(chapter, v, output);
        if (curve == NULL || !(curve->y[0] > 0.0) || !(curve->y[last] > 0.0))
            return "";
        bool down = curve->y[last] < curve->y[0];
        if (told > 0 && down != falls)
            return "";
        falls = down;
        double ratio = down ? curve->y[0] / curve->y[last] : curve->y[last] / curve->y[0];
        text = flow_print(flow, "%s%s%s times for %s", text, told > 0 ? ", " : "",
                          factor(flow, ratio), name_of(flow, &asked->variants[v]));
        told++;
    }
    if (told == 0 || is_level(asked->model->outputs[output].dimension))
        return "";
    const struct model_input *input = &asked->model->inputs[asked->vary.input];
    return flow_print(flow, "; from %s to %s it %s %s",
                      words_value(flow, asked->vary.points[0], input->dimension),
                      words_value(flow, asked->vary.points[last], input->dimension),
                      falls ? "falls" : "grows", text);
}

const char *sentence_of_chart(struct flow *flow, const struct guideline_chapter *chapter,
                              const struct study_chart *chart) {
    const char *text = "";
    size_t point = middle(chapter->chapter);
    for (size_t i = 0; i < chart->output_count && i < 2; i++) {
        struct extremes found = extremes_at(chapter, chart->outputs[i], point);
        if (found.seen == 0)
            continue;
        text = flow_print(flow, "%s%s%s%s.", text, *text != '\0' ? " " : "",
                          compare(flow, chapter, chart->outputs[i], point, found),
                          chart->output_count == 1 ? trends(flow, chapter, chart->outputs[i]) : "");
    }
    return text;
}
