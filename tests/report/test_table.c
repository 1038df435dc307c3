#include "page.h"
#include "report/table.h"

#include <string.h>

enum { ROWS = 40 };

static const struct table_column columns[3] = {{.most = 90}, {.align = TABLE_DECIMAL}, {0}};
static const struct table_head head_cells[3] = {{"Gap", 1}, {"Peak, mV", 1}, {"Remark", 1}};
static const struct table_head_row head = {head_cells, 3};

static void fill(struct table_row *rows, const char *(*cells)[3]) {
    static const char *const numbers[] = {"1.25", "12.5", "125", "0.125"};
    for (size_t r = 0; r < ROWS; r++) {
        cells[r][0] = "0.35 mm";
        cells[r][1] = numbers[r % 4];
        cells[r][2] = "a remark that is long enough to be broken in a narrow column";
        rows[r] = (struct table_row){.cells = cells[r]};
    }
}

static struct table table_of(const struct table_row *rows) {
    return (struct table){.name = "t",
                          .columns = columns,
                          .column_count = 3,
                          .heads = &head,
                          .head_count = 1,
                          .rows = rows,
                          .row_count = ROWS};
}

static void test_a_table_breaks_over_pages_with_its_heads(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    struct table table = table_of(rows);
    struct table_layout *layout =
        table_layout(&table, 260, page->setter, page->arena, &page->error);
    assert_non_null(layout);
    size_t first = 0, pages = 0;
    while (first < ROWS) {
        size_t end = table_fit(layout, first, 200);
        assert_true(end > first);
        assert_true(table_height(layout, first, end) <= 200);
        struct scene *scene = scene_create(260, 200, page->arena, &page->error);
        assert_true(table_draw(layout, first, end, scene, 0, 0));
        size_t heads = 0;
        for (size_t i = 0; i < scene->count; i++)
            heads += scene->items[i].kind == SCENE_TEXT &&
                     strstr(scene->items[i].text.markup, "Remark") != NULL;
        assert_int_equal(heads, 1);
        first = end;
        pages++;
    }
    assert_true(pages >= 3);
}

/* Every number's decimal point (or its end, without one) stands on one vertical. */
static void test_numbers_stand_on_their_decimal_points(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    struct table table = table_of(rows);
    struct table_layout *layout =
        table_layout(&table, 400, page->setter, page->arena, &page->error);
    struct scene *scene = scene_create(400, 2000, page->arena, &page->error);
    assert_non_null(layout);
    assert_true(table_draw(layout, 0, 8, scene, 0, 0));
    double point = NAN;
    size_t seen = 0;
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_text *text = &scene->items[i].text;
        if (scene->items[i].kind != SCENE_TEXT || strspn(text->markup, "0123456789.") == 0 ||
            strstr(text->markup, "mm") != NULL)
            continue;
        char whole[16];
        size_t length = strcspn(text->markup, ".");
        memcpy(whole, text->markup, length);
        whole[length] = '\0';
        double start = text->x;
        if (text->align == SCENE_RIGHT)
            start -= text_width(page->setter, text->markup, text->style, &page->error);
        double at = start + text_width(page->setter, whole, text->style, &page->error);
        if (isnan(point))
            point = at;
        assert_near(at, point, 0.3);
        seen++;
    }
    assert_int_equal(seen, 8);
}

static void test_columns_that_cannot_be_squeezed_are_refused(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    struct table table = table_of(rows);
    struct error error = {0};
    assert_null(table_layout(&table, 40, page->setter, page->arena, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_a_table_breaks_over_pages_with_its_heads),
        page_test(test_numbers_stand_on_their_decimal_points),
        page_test(test_columns_that_cannot_be_squeezed_are_refused),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
