#include "page.h"
#include "report/drawing.h"
#include "report/theme.h"

#include <string.h>

static struct sketch pair_over(double height) {
    struct sketch sketch = {0};
    double top = height + 35e-6;
    sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_PLANE, -INFINITY, INFINITY, -35e-6, 0,
                                                    "ground plane"});
    sketch_add_solid(
        &sketch, (struct sketch_solid){SKETCH_DIELECTRIC, -INFINITY, INFINITY, 0, height, NULL});
    sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_AGGRESSOR, -0.8e-3, -0.5e-3, height, top,
                                                    "aggressor"});
    sketch_add_solid(&sketch,
                     (struct sketch_solid){SKETCH_VICTIM, 0.5e-3, 0.8e-3, height, top, "victim"});
    sketch_add_dimension(&sketch,
                         (struct sketch_dimension){false, -0.5e-3, 0.5e-3, top, "gap", 1e-3});
    sketch_add_dimension(&sketch,
                         (struct sketch_dimension){true, 0, height, 0.8e-3, "height", height});
    return sketch;
}

/* Filled rectangles of the scene by their extent. */
static bool has_rectangle(const struct scene *scene, double width, double tolerance) {
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_path *path = &scene->items[i].path;
        if (scene->items[i].kind != SCENE_PATH || !path->filled || path->count < 4)
            continue;
        double low = INFINITY, high = -INFINITY;
        for (size_t k = 0; k < path->count; k++)
            if (path->segments[k].verb != SCENE_CLOSE) {
                low = fmin(low, path->segments[k].x[0]);
                high = fmax(high, path->segments[k].x[0]);
            }
        if (fabs(high - low - width) <= tolerance)
            return true;
    }
    return false;
}

static void test_widths_are_to_scale_and_thin_copper_is_said_to_be_thicker(void **state) {
    struct page *page = *state;
    static const double heights[] = {1.6e-3, 0.19e-3};
    for (size_t k = 0; k < 2; k++) {
        struct sketch sketch = pair_over(heights[k]);
        struct drawing_options options = {.name = "pair", .width = 230};
        struct drawing_report report;
        struct scene *scene =
            drawing_sketch(&sketch, &options, page->setter, page->arena, &report, &page->error);
        assert_non_null(scene);
        assert_true(report.scale > 0);
        assert_true(has_rectangle(scene, 0.3e-3 * report.scale, 0.05));
        assert_true(scene->width <= 230 + 1e-6);
        bool said = false;
        for (size_t i = 0; i < scene->count; i++)
            said = said || (scene->items[i].kind == SCENE_TEXT &&
                            strstr(scene->items[i].text.markup, "thicker than to scale") != NULL);
        assert_int_equal(said, report.copper_enlarged || report.plane_enlarged);
    }
}

static void test_a_narrow_drawing_keeps_its_texts_apart(void **state) {
    struct page *page = *state;
    struct sketch sketch = pair_over(0.19e-3);
    struct drawing_options options = {.name = "pair", .width = 150, .most_height = 150};
    struct drawing_report report;
    struct scene *scene =
        drawing_sketch(&sketch, &options, page->setter, page->arena, &report, &page->error);
    assert_non_null(scene);
    for (size_t i = 0; i < scene->count; i++)
        for (size_t j = 0; j < i; j++) {
            const struct scene_text *a = &scene->items[i].text, *b = &scene->items[j].text;
            if (scene->items[i].kind != SCENE_TEXT || scene->items[j].kind != SCENE_TEXT ||
                fabs(a->y - b->y) > 5)
                continue;
            double wide_a = text_width(page->setter, a->markup, a->style, &page->error);
            double wide_b = text_width(page->setter, b->markup, b->style, &page->error);
            double left_a = a->x - (a->align == SCENE_RIGHT    ? wide_a
                                    : a->align == SCENE_CENTRE ? wide_a / 2
                                                               : 0);
            double left_b = b->x - (b->align == SCENE_RIGHT    ? wide_b
                                    : b->align == SCENE_CENTRE ? wide_b / 2
                                                               : 0);
            if (!(left_a >= left_b + wide_b - 0.5 || left_b >= left_a + wide_a - 0.5))
                print_error("\"%s\" and \"%s\" overlap\n", a->markup, b->markup);
            assert_true(left_a >= left_b + wide_b - 0.5 || left_b >= left_a + wide_a - 0.5);
        }
}

static void test_nothing_to_draw_is_refused(void **state) {
    struct page *page = *state;
    struct sketch sketch = {0};
    struct drawing_options options = {.width = 200};
    struct error error = {0};
    assert_null(drawing_sketch(&sketch, &options, page->setter, page->arena, NULL, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
}

static bool says(const struct scene *scene, const char *words) {
    for (size_t i = 0; i < scene->count; i++)
        if (scene->items[i].kind == SCENE_TEXT &&
            strstr(scene->items[i].text.markup, words) != NULL)
            return true;
    return false;
}

static size_t filled_with(const struct scene *scene, struct scene_colour colour) {
    size_t found = 0;
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_path *path = &scene->items[i].path;
        found += scene->items[i].kind == SCENE_PATH && path->filled &&
                 path->fill.red == colour.red && path->fill.green == colour.green &&
                 path->fill.blue == colour.blue;
    }
    return found;
}

/* Coating over board and copper, a plane above, a plane that ends, etched copper: all in the
 * picture; what finds no room beside it is told under it, and a narrow drawing is no failure. */
static void test_mask_cover_edge_and_etch_are_drawn(void **state) {
    struct page *page = *state;
    static const double widths[] = {420, 230, 150};
    for (size_t k = 0; k < 3; k++) {
        struct sketch sketch = pair_over(0.2e-3);
        sketch.etch = 20e-6;
        sketch.solids[0].right = 2e-3;
        sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_MASK, -INFINITY, INFINITY, 0.2e-3,
                                                        0.225e-3, NULL});
        sketch_add_solid(&sketch, (struct sketch_solid){SKETCH_COVER, -INFINITY, INFINITY, 0.5e-3,
                                                        0.535e-3, "plane above"});
        sketch_add_dimension(
            &sketch, (struct sketch_dimension){true, 0.2e-3, 0.225e-3, 0.8e-3, "mask", 25e-6});
        sketch_add_dimension(
            &sketch, (struct sketch_dimension){true, 0.2e-3, 0.5e-3, 0.8e-3, "cover", 0.3e-3});
        sketch_add_dimension(&sketch, (struct sketch_dimension){false, 0.65e-3, 2e-3, 0.2e-3,
                                                                "edge_distance", 1.35e-3});
        struct drawing_options options = {.name = "all", .width = widths[k]};
        struct drawing_report report;
        struct scene *scene =
            drawing_sketch(&sketch, &options, page->setter, page->arena, &report, &page->error);
        assert_non_null(scene);
        assert_true(says(scene, "mask") && says(scene, "25") && says(scene, "cover"));
        assert_true(says(scene, "plane above") && says(scene, "edge distance"));
        /* The layer, its swatch in the legend where it is told there, one coat for each trace. */
        size_t mask = filled_with(scene, theme_solid(SKETCH_MASK).fill);
        assert_true(mask == 3 || mask == 4);
        /* Both planes, and the swatch of the upper one. */
        assert_int_equal(filled_with(scene, theme_solid(SKETCH_PLANE).fill), 3);
        assert_true(has_rectangle(scene, 0.3e-3 * report.scale, 0.05));
        assert_true(scene->width <= widths[k] + 1e-6);
    }
}

/* Extent of the scene's filled paths with curves: the discs. */
static size_t discs_of(const struct scene *scene, double diameter) {
    size_t found = 0;
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_path *path = &scene->items[i].path;
        if (scene->items[i].kind != SCENE_PATH || !path->filled || path->count < 5 ||
            path->segments[1].verb != SCENE_CURVE)
            continue;
        assert_close(path->segments[0].x[0] - path->segments[2].x[2], diameter, 1e-6);
        assert_close(path->segments[1].y[2] - path->segments[3].y[2], diameter, 1e-6);
        found++;
    }
    return found;
}

static void test_a_plan_shows_discs_and_traces_to_scale(void **state) {
    struct page *page = *state;
    static const double widths[] = {420, 230, 150};
    for (size_t k = 0; k < 3; k++) {
        struct sketch plan = {.plan = true};
        sketch_add_solid(
            &plan, (struct sketch_solid){SKETCH_TRACE, -0.2e-3, 5.2e-3, -0.5e-3, 0.5e-3, "trace"});
        sketch_add_disc(&plan, (struct sketch_disc){SKETCH_TIED, 0, 0, 0.4e-3, "via"});
        sketch_add_disc(&plan, (struct sketch_disc){SKETCH_TIED, 5e-3, 0, 0.4e-3, "via"});
        sketch_add_dimension(&plan, (struct sketch_dimension){false, 0, 5e-3, 0, "length", 5e-3});
        sketch_add_dimension(&plan,
                             (struct sketch_dimension){true, -0.5e-3, 0.5e-3, 5e-3, "width", 1e-3});
        struct drawing_options options = {.name = "plan", .width = widths[k], .most_height = 110};
        struct drawing_report report;
        struct scene *scene =
            drawing_sketch(&plan, &options, page->setter, page->arena, &report, &page->error);
        assert_non_null(scene);
        assert_int_equal(discs_of(scene, 0.4e-3 * report.scale), 2);
        assert_true(has_rectangle(scene, 5.4e-3 * report.scale, 0.05));
        assert_true(says(scene, "length") && says(scene, "width") && says(scene, "via"));
        assert_true(scene->width <= widths[k] + 1e-6 && scene->height <= 110 + 1e-6);
    }
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_widths_are_to_scale_and_thin_copper_is_said_to_be_thicker),
        page_test(test_a_narrow_drawing_keeps_its_texts_apart),
        page_test(test_nothing_to_draw_is_refused),
        page_test(test_mask_cover_edge_and_etch_are_drawn),
        page_test(test_a_plan_shows_discs_and_traces_to_scale),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
