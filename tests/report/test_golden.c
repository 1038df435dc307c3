/* Scenes dumped as text against files of this folder: a change of layout is seen and decided on.
 * GROUNDRULES_GOLDEN=write in the environment writes them anew.  usage: test_golden FOLDER */
#include "page.h"
#include "report/chart.h"
#include "report/drawing.h"
#include "report/dump.h"
#include "report/flow.h"
#include "report/pages.h"
#include "report/table.h"
#include "stress.h"

#include <stdlib.h>
#include <string.h>

static const char *folder;

static void compare(struct page *page, const struct scene *scene, const char *name) {
    assert_non_null(scene);
    char *text = dump_scene(scene, page->arena, &page->error);
    assert_non_null(text);
    char *path = arena_print(page->arena, &page->error, "%s/%s.txt", folder, name);
    if (getenv("GROUNDRULES_GOLDEN") != NULL) {
        FILE *file = fopen(path, "w");
        assert_non_null(file);
        assert_true(fputs(text, file) >= 0);
        assert_int_equal(fclose(file), 0);
        return;
    }
    FILE *file = fopen(path, "r");
    assert_non_null(file);
    char *line = NULL;
    size_t room = 0, number = 0;
    ssize_t length;
    const char *at = text;
    while ((length = getline(&line, &room, file)) > 0) {
        number++;
        if (strncmp(at, line, (size_t)length) != 0) {
            print_error("%s:%zu: the golden has\n  %sthe scene has\n  %.*s\n", path, number, line,
                        (int)strcspn(at, "\n"), at);
            fail();
        }
        at += length;
    }
    assert_string_equal(at, "");
    free(line);
    assert_int_equal(fclose(file), 0);
}

static void test_a_chart_with_band_limit_and_mark(void **state) {
    struct page *page = *state;
    enum { POINTS = 9 };
    double x[POINTS], y[2][POINTS], low[POINTS], high[POINTS];
    for (size_t i = 0; i < POINTS; i++) {
        x[i] = 0.25e-3 * (double)(1 << i) / 4;
        for (size_t s = 0; s < 2; s++)
            y[s][i] = (s == 0 ? 0.9 : 0.2) / (1 + 1e6 * x[i] * x[i]);
        low[i] = 0.9 * y[0][i];
        high[i] = 1.1 * y[0][i];
    }
    const struct chart_series series[] = {
        {.label = "Two layers", .x = x, .y = y[0], .count = POINTS, .low = low, .high = high},
        {.label = "Four layers", .x = x, .y = y[1], .count = POINTS, .style = 1}};
    const struct chart_limit limits[] = {{0.1, "R-1: 100 mV", false}};
    const struct chart_mark marks[] = {{2.9e-3, 0.1, "R-1: 2.9 mm", 0}};
    struct chart chart = {.name = "golden",
                          .title = "Peak against gap",
                          .x = {"gap", DIMENSION_LENGTH, true, 0, 0},
                          .y = {"peak", DIMENSION_VOLTAGE, true, 0, 0},
                          .series = series,
                          .series_count = 2,
                          .limits = limits,
                          .limit_count = 1,
                          .marks = marks,
                          .mark_count = 1};
    compare(page, chart_draw(&chart, 482, 232, page->setter, page->arena, NULL, &page->error),
            "chart");
}

static void test_a_section_drawn_to_scale(void **state) {
    struct page *page = *state;
    struct sketch sketch = {0};
    sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6, 0,
                                                    "ground plane"});
    sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0,
                                                    1.5e-3, "dk 4.3"});
    sketch_add_solid(
        &sketch, (struct sketch_solid){SKETCH_TRACE, -0.4e-3, 0.4e-3, 1.5e-3, 1.535e-3, "trace"});
    sketch_add_dimension(
        &sketch, (struct sketch_dimension){false, -0.4e-3, 0.4e-3, 1.535e-3, "width", 0.8e-3});
    struct drawing_options options = {.name = "section", .width = 240};
    compare(page, drawing_sketch(&sketch, &options, page->setter, page->arena, NULL, &page->error),
            "section");
}

static void test_a_table_with_groups(void **state) {
    struct page *page = *state;
    const struct table_column columns[] = {{0}, {.align = TABLE_DECIMAL}, {.align = TABLE_DECIMAL}};
    const struct table_head groups[] = {{"", 1}, {"peak, mV", 2}};
    const struct table_head names[] = {{"Gap", 1}, {"far", 1}, {"near", 1}};
    const struct table_head_row heads[] = {{groups, 2}, {names, 3}};
    const char *first[] = {"0.3 mm", "125", "12.5"}, *second[] = {"1 mm", "40.1", "−1.25"};
    const struct table_row rows[] = {{.cells = first}, {.cells = second, .strong = true}};
    const char *notes[] = {"Largest of both ends."};
    struct table table = {.name = "table",
                          .columns = columns,
                          .column_count = 3,
                          .heads = heads,
                          .head_count = 2,
                          .rows = rows,
                          .row_count = 2,
                          .notes = notes,
                          .note_count = 1};
    struct table_layout *layout =
        table_layout(&table, 300, page->setter, page->arena, &page->error);
    assert_non_null(layout);
    struct scene *scene = scene_create(300, 100, page->arena, &page->error);
    assert_true(table_draw(layout, 0, 2, scene, 0, 0));
    compare(page, scene, "table");
}

/* Rules of twelve boards with long names at a glance: the table in blocks. */
static void test_the_glance_of_twelve_boards(void **state) {
    struct page *page = *state;
    const struct stress stress = {4, 2, 12, 1, 60, 40, false};
    struct guideline *guideline = arena_new(page->arena, 1, struct guideline, &page->error);
    static struct flow flow;
    struct scene **pages = NULL;
    assert_true(stress_make(&stress, page->arena, guideline, &page->error));
    assert_true(flow_start(&flow, guideline, page->setter, page->arena, &page->error));
    assert_true(pages_all(&flow, &pages) > 4);
    compare(page, pages[2], "glance");
}

int main(int count, char **arguments) {
    folder = count > 1 ? arguments[1] : ".";
    const struct CMUnitTest tests[] = {
        page_test(test_a_chart_with_band_limit_and_mark),
        page_test(test_a_section_drawn_to_scale),
        page_test(test_a_table_with_groups),
        page_test(test_the_glance_of_twelve_boards),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
