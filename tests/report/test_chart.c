#include "page.h"
#include "report/chart.h"

#include <string.h>

enum { POINTS = 30 };

struct falling {
    double x[POINTS], y[3][POINTS];
    struct chart_series series[3];
    struct chart chart;
};

/* Three curves that nearly end together. */
static void fill(struct falling *data, bool logarithmic) {
    static const char *const labels[] = {"far board", "middle board", "near board"};
    *data = (struct falling){0};
    for (size_t i = 0; i < POINTS; i++) {
        data->x[i] = 0.2e-3 * pow(50, (double)i / (POINTS - 1));
        for (size_t s = 0; s < 3; s++)
            data->y[s][i] = 0.4 / (1 + pow(data->x[i] / 1e-3, 2)) * (1 + 0.01 * (double)s);
    }
    for (size_t s = 0; s < 3; s++)
        data->series[s] = (struct chart_series){
            .label = labels[s], .x = data->x, .y = data->y[s], .count = POINTS, .style = s};
    data->chart = (struct chart){.name = "falling",
                                 .title = "Peak against gap",
                                 .x = {"gap", DIMENSION_LENGTH, true, 0, 0},
                                 .y = {"peak", DIMENSION_VOLTAGE, logarithmic, 0, 0},
                                 .series = data->series,
                                 .series_count = 3};
}

static void test_labels_at_the_ends_keep_apart_and_inside(void **state) {
    struct page *page = *state;
    for (int logarithmic = 0; logarithmic < 2; logarithmic++) {
        struct falling data;
        struct chart_report report;
        fill(&data, logarithmic != 0);
        struct scene *scene =
            chart_draw(&data.chart, 480, 232, page->setter, page->arena, &report, &page->error);
        assert_non_null(scene);
        assert_false(report.legend);
        assert_int_equal(report.label_count, 3);
        for (size_t i = 0; i < 3; i++) {
            assert_true(report.labels[i].x >= report.plot_x + report.plot_width);
            assert_true(report.labels[i].x + report.labels[i].width <= 480 + 0.1);
            for (size_t j = 0; j < i; j++) {
                double above = fmin(report.labels[i].y, report.labels[j].y);
                double below = fmax(report.labels[i].y, report.labels[j].y);
                assert_true(below - above >= report.labels[i].height - 0.5);
            }
        }
    }
}

/* Ten curves that end within a hair of each other: labels neither overlap nor leave the page, or a
 * legend stands above. */
static void test_ten_curves_keep_their_labels_apart(void **state) {
    struct page *page = *state;
    enum { CURVES = 10 };
    static const char *const labels[CURVES] = {
        "Two layers, 1.6 mm, nothing",  "Two layers, 1.6 mm, floating",
        "Two layers, 1.6 mm, tied",     "Two layers, 0.8 mm, nothing",
        "Two layers, 0.8 mm, floating", "Two layers, 0.8 mm, tied",
        "Four layers, 1.6 mm, nothing", "Four layers, 1.6 mm, floating",
        "Four layers, 1.6 mm, tied",    "A board with a rather long name, tied at one end"};
    double x[POINTS], y[CURVES][POINTS];
    struct chart_series series[CURVES];
    static const double heights[] = {180, 232, 320};
    for (size_t i = 0; i < POINTS; i++)
        x[i] = 0.2e-3 * pow(50, (double)i / (POINTS - 1));
    for (size_t s = 0; s < CURVES; s++) {
        for (size_t i = 0; i < POINTS; i++)
            y[s][i] = 0.4 / (1 + x[i] / 1e-3) * (1 + 1e-3 * (double)s);
        series[s] = (struct chart_series){
            .label = labels[s], .x = x, .y = y[s], .count = POINTS, .style = s};
    }
    for (size_t h = 0; h < 3; h++) {
        struct chart chart = {.name = "ten",
                              .x = {"gap", DIMENSION_LENGTH, true, 0, 0},
                              .y = {"peak", DIMENSION_VOLTAGE, true, 0, 0},
                              .series = series,
                              .series_count = CURVES};
        struct chart_report report;
        assert_non_null(
            chart_draw(&chart, 480, heights[h], page->setter, page->arena, &report, &page->error));
        assert_true(report.legend || report.label_count == CURVES);
        for (size_t i = 0; i < report.label_count; i++) {
            assert_true(report.labels[i].x + report.labels[i].width <= 480 + 0.1);
            assert_true(report.labels[i].y >= -0.1);
            assert_true(report.labels[i].y + report.labels[i].height <= heights[h] + 0.1);
            for (size_t j = 0; j < i; j++)
                assert_true(
                    report.labels[i].y >= report.labels[j].y + report.labels[j].height - 0.5 ||
                    report.labels[j].y >= report.labels[i].y + report.labels[i].height - 0.5);
        }
    }
}

static void test_a_gap_in_the_data_is_a_gap_in_the_curve(void **state) {
    struct page *page = *state;
    struct falling data;
    fill(&data, false);
    size_t moves[2] = {0};
    for (int gap = 0; gap < 2; gap++) {
        if (gap)
            data.y[0][POINTS / 2] = NAN;
        struct scene *scene =
            chart_draw(&data.chart, 480, 232, page->setter, page->arena, NULL, &page->error);
        assert_non_null(scene);
        for (size_t i = 0; i < scene->count; i++)
            if (scene->items[i].kind == SCENE_PATH && scene->items[i].path.count > 8)
                for (size_t k = 0; k < scene->items[i].path.count; k++)
                    moves[gap] += scene->items[i].path.segments[k].verb == SCENE_MOVE;
    }
    assert_int_equal(moves[1], moves[0] + 1);
}

static void test_values_that_a_logarithm_cannot_show_make_the_axis_linear(void **state) {
    struct page *page = *state;
    struct falling data;
    struct chart_report report;
    fill(&data, true);
    data.y[1][3] = 0;
    assert_non_null(
        chart_draw(&data.chart, 480, 232, page->setter, page->arena, &report, &page->error));
    assert_true(report.y_linear && !report.x_linear);
}

static void test_nothing_finite_and_no_room_are_refused(void **state) {
    struct page *page = *state;
    struct falling data;
    fill(&data, false);
    struct error error = {0};
    assert_null(chart_draw(&data.chart, 100, 80, page->setter, page->arena, NULL, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    for (size_t s = 0; s < 3; s++)
        for (size_t i = 0; i < POINTS; i++)
            data.y[s][i] = NAN;
    error = (struct error){0};
    assert_null(chart_draw(&data.chart, 480, 232, page->setter, page->arena, NULL, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_labels_at_the_ends_keep_apart_and_inside),
        page_test(test_ten_curves_keep_their_labels_apart),
        page_test(test_a_gap_in_the_data_is_a_gap_in_the_curve),
        page_test(test_values_that_a_logarithm_cannot_show_make_the_axis_linear),
        page_test(test_nothing_finite_and_no_room_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
