/* Charts that try the labels: up to ten curves that end close together, cross each other or all
 * leave at one point, on linear and logarithmic axes, with bands, limits and marks, under short and
 * long names.  No text stands on another, on a curve, on another label's leader or beyond the
 * chart. */

#include "boxes.h"
#include "report/chart.h"
#include "report/theme.h"

#include <string.h>

enum { POINTS = 40, MOST = 10 };

enum family { TOGETHER, CROSSING, FAN, EQUAL, LEAVING, STEPS, FAMILIES };

struct trial {
    enum family family;
    size_t curves;
    bool x_logarithmic, y_logarithmic, band, limits, marks, long_names;
    double width, height;
};

struct data {
    double x[POINTS], y[MOST][POINTS], low[MOST][POINTS], high[MOST][POINTS];
    struct chart_series series[MOST];
    struct chart_limit limits[3];
    struct chart_mark marks[3];
    struct chart chart;
};

static double value(enum family family, double at, size_t s, size_t count) {
    double k = (double)s / (double)count;
    switch (family) {
    case TOGETHER: /* one bundle that falls */
        return 0.4 / (1 + 40 * at) * (1 + 2e-3 * (double)s);
    case CROSSING: /* straight through each other in the middle */
        return 0.2 + (k - 0.5) * 0.3 * (1 - 2 * at);
    case FAN: /* apart at the left, together at the right */
        return 0.05 + (0.1 + k) * (1 - at) * (1 - at);
    case EQUAL:
        return 0.3 - 0.25 * at;
    case LEAVING: /* rising beyond a forced end */
        return 0.02 + (0.5 + k) * at * at;
    default: /* ends on a few levels */
        return 0.05 + 0.1 * (double)(s % 3) + 0.2 * (1 - at);
    }
}

static void fill(const struct trial *trial, struct data *data) {
    static const char *const names[2][MOST] = {
        {"A", "B", "C", "D<sub>2</sub>", "E", "F", "G", "H", "I, 1.2 ns", "J"},
        {"Two layers, 1.6 mm, nothing between", "Two layers, 1.6 mm, floating strip between",
         "Two layers, 1.6 mm, tied", "Two layers, 0.8 mm", "Two layers, 0.8 mm, floating",
         "Two layers, 0.8 mm, tied at both ends and in the middle", "Four layers",
         "Four layers, floating", "Four layers, tied",
         "A board with a rather long name, tied at one end"}};
    *data = (struct data){0};
    for (size_t i = 0; i < POINTS; i++) {
        double at = (double)i / (POINTS - 1);
        data->x[i] = trial->x_logarithmic ? 0.2e-3 * pow(50, at) : 0.2e-3 + 9.8e-3 * at;
        for (size_t s = 0; s < trial->curves; s++) {
            data->y[s][i] = value(trial->family, at, s, trial->curves);
            data->low[s][i] = 0.9 * data->y[s][i];
            data->high[s][i] = 1.1 * data->y[s][i];
        }
    }
    for (size_t s = 0; s < trial->curves; s++)
        data->series[s] = (struct chart_series){.label = names[trial->long_names][s],
                                                .x = data->x,
                                                .y = data->y[s],
                                                .low = trial->band ? data->low[s] : NULL,
                                                .high = trial->band ? data->high[s] : NULL,
                                                .count = POINTS,
                                                .style = s};
    data->limits[0] = (struct chart_limit){0.1, "R-1: 100 mV", false};
    data->limits[1] = (struct chart_limit){0.105, "R-2: 105 mV", false};
    data->limits[2] = (struct chart_limit){0.055, "a limit with a rather long label: 55 mV", true};
    for (size_t m = 0; m < 3; m++)
        data->marks[m] =
            (struct chart_mark){3e-3 + 0.2e-3 * (double)m, 0.1, "R-1: 3.2 mm", m % trial->curves};
    data->chart = (struct chart){
        .name = "trial",
        .title = trial->long_names ? "Larger crosstalk peak of the two ends of the victim against "
                                     "the free distance between the feet of the two traces, for "
                                     "every board of the family and every strip between"
                                   : "Peak against gap",
        .x = {"gap", DIMENSION_LENGTH, trial->x_logarithmic, 0, 0},
        .y = {"peak", DIMENSION_VOLTAGE, trial->y_logarithmic, 0.01,
              trial->family == LEAVING ? 0.4 : 0},
        .series = data->series,
        .series_count = trial->curves,
        .limits = data->limits,
        .limit_count = trial->limits ? 3 : 0,
        .marks = data->marks,
        .mark_count = trial->marks ? 3 : 0};
}

/* Whether the piece from (x0, y0) to (x1, y1) passes through the box: by points a quarter of a
 * point apart. */
static bool passes(double x0, double y0, double x1, double y1, const struct box *box) {
    double length = hypot(x1 - x0, y1 - y0);
    size_t steps = 1 + (size_t)(4 * length);
    for (size_t k = 0; k <= steps; k++) {
        double at = (double)k / (double)steps, x = x0 + at * (x1 - x0), y = y0 + at * (y1 - y0);
        if (x > box->left + 0.3 && x < box->right - 0.3 && y > box->top + 0.3 &&
            y < box->bottom - 0.3)
            return true;
    }
    return false;
}

static bool path_passes(const struct scene_path *path, const struct box *box) {
    for (size_t k = 1; k < path->count; k++)
        if (path->segments[k].verb == SCENE_LINE &&
            passes(path->segments[k - 1].x[0], path->segments[k - 1].y[0], path->segments[k].x[0],
                   path->segments[k].y[0], box))
            return true;
    return false;
}

/* A white ground under a text is drawn where there is no free place; what it covers is no longer
 * in the text's way. */
static bool on_ground(const struct scene *scene, size_t line, const struct box *box) {
    for (size_t i = line + 1; i < scene->count; i++) {
        const struct scene_path *path = &scene->items[i].path;
        if (scene->items[i].kind == SCENE_PATH && path->filled && path->fill.red > 0.99 &&
            path->fill.green > 0.99 && path->fill.blue > 0.99 && path->count >= 4 &&
            path->segments[0].x[0] <= box->left && path->segments[2].x[0] >= box->right)
            return true;
    }
    return false;
}

/* Curves are 1 pt and more, limits 0.9; leaders and the stems of marks are 0.5 and 0.6; hair lines,
 * ticks and hatches are thinner or of another kind and may pass under a label on the plot. */
static bool is_in_the_way(const struct scene_path *path) {
    return path->stroked && !path->filled &&
           (path->width >= 0.89 || fabs(path->width - 0.6) < 1e-9 ||
            (fabs(path->width - 0.5) < 1e-9 && path->count == 3));
}

static size_t grounds;

static void assert_clear(const struct scene *scene, const struct boxes *boxes, const char *where) {
    for (size_t b = 0; b < boxes->count; b++)
        for (size_t i = 0; i < scene->count; i++) {
            const struct box *box = &boxes->items[b];
            if (scene->items[i].kind != SCENE_PATH || !is_in_the_way(&scene->items[i].path) ||
                !path_passes(&scene->items[i].path, box))
                continue;
            if (on_ground(scene, i, box)) {
                grounds++;
                continue;
            }
            print_error("%s: a line of %.2f pt through \"%s\" (%.1f %.1f to %.1f %.1f)\n", where,
                        scene->items[i].path.width, box->text->markup, box->left, box->top,
                        box->right, box->bottom);
            fail();
        }
}

static void try(struct page *page, const struct trial *trial, const char *where) {
    static struct data data;
    fill(trial, &data);
    struct scene *scene = chart_draw(&data.chart, trial->width, trial->height, page->setter,
                                     page->arena, NULL, &page->error);
    if (scene == NULL)
        print_error("%s: %s\n", where, page->error.message);
    assert_non_null(scene);
    struct boxes boxes = boxes_of(page, scene);
    struct box frame = {0, 0, scene->width, scene->height, NULL, NULL};
    assert_true(boxes.count >= trial->curves);
    assert_within(&boxes, &frame, where);
    assert_no_overlap(&boxes, where);
    assert_clear(scene, &boxes, where);
}

static void test_labels_keep_clear_of_labels_curves_and_frame(void **state) {
    struct page *page = *state;
    static const size_t counts[] = {1, 3, 10};
    size_t tried = 0;
    for (unsigned bits = 0; bits < 64; bits++)
        for (int family = 0; family < FAMILIES; family++)
            for (size_t c = 0; c < 3; c++)
                for (int size = 0; size < 2; size++) {
                    struct trial trial = {.family = (enum family)family,
                                          .curves = counts[c],
                                          .x_logarithmic = bits & 1,
                                          .y_logarithmic = bits >> 1 & 1,
                                          .band = bits >> 2 & 1,
                                          .limits = bits >> 3 & 1,
                                          .marks = bits >> 4 & 1,
                                          .long_names = bits >> 5 & 1,
                                          .width = 480,
                                          .height = size == 0 ? 180 : 232};
                    char where[96];
                    snprintf(where, sizeof where, "family %d, %zu curves, bits %u, height %g",
                             family, trial.curves, bits, trial.height);
                    try(page, &trial, where);
                    tried++;
                }
    assert_int_equal(tried, 64 * FAMILIES * 3 * 2);
    print_message("# %zu charts, %zu lines under a white ground\n", tried, grounds);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_labels_keep_clear_of_labels_curves_and_frame),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
