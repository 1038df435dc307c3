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

/* ---- tables wider than the page ---- */

enum { WIDE = 30 };

struct wide {
    struct table_column columns[WIDE];
    struct table_head names[WIDE], groups[4];
    struct table_head_row heads[2];
    const char *cells[2][WIDE];
    struct table_row rows[3];
    struct table table;
};

/* A leading column, then three groups of different size. */
static void fill_wide(struct page *page, struct wide *wide) {
    const size_t spans[4] = {1, 9, 15, 5};
    const char *const titles[4] = {"", "first", "second", "third"};
    *wide = (struct wide){0};
    for (size_t g = 0; g < 4; g++)
        wide->groups[g] = (struct table_head){titles[g], spans[g]};
    for (size_t c = 0; c < WIDE; c++) {
        wide->names[c].text = arena_print(page->arena, &page->error, "column %zu", c);
        for (size_t r = 0; r < 2; r++)
            wide->cells[r][c] = arena_print(page->arena, &page->error, "cell %zu of %zu", c, r);
    }
    wide->heads[0] = (struct table_head_row){wide->groups, 4};
    wide->heads[1] = (struct table_head_row){wide->names, WIDE};
    wide->rows[0] = (struct table_row){.cells = wide->cells[0], .heading = true};
    wide->rows[1] = (struct table_row){.cells = wide->cells[0]};
    wide->rows[2] = (struct table_row){.cells = wide->cells[1]};
    wide->table = (struct table){.name = "wide",
                                 .leading = 1,
                                 .columns = wide->columns,
                                 .column_count = WIDE,
                                 .heads = wide->heads,
                                 .head_count = 2,
                                 .rows = wide->rows,
                                 .row_count = 3};
}

/* Every column is in one block and one only, in its order, under its own group; the first in all.
 */
static void test_a_table_wider_than_the_page_becomes_blocks(void **state) {
    struct page *page = *state;
    static struct wide wide;
    fill_wide(page, &wide);
    size_t count = 0, next = 1;
    struct table *blocks =
        table_split(&wide.table, 480, page->setter, page->arena, &count, &page->error);
    assert_non_null(blocks);
    assert_true(count >= 3);
    for (size_t b = 0; b < count; b++) {
        const struct table *block = &blocks[b];
        assert_non_null(table_layout(block, 480, page->setter, page->arena, &page->error));
        assert_string_equal(block->heads[1].cells[0].text, "column 0");
        assert_string_equal(block->rows[2].cells[0], "cell 0 of 1");
        assert_string_equal(block->rows[0].cells[0], "cell 0 of 0");
        size_t group = 0, left = 1;
        for (size_t c = 0; c < block->column_count; c++, left--) {
            if (left == 0)
                left = block->heads[0].cells[++group].span;
            if (c == 0)
                continue;
            assert_string_equal(block->heads[1].cells[c].text, wide.names[next].text);
            assert_string_equal(block->rows[2].cells[c], wide.cells[1][next]);
            assert_string_equal(block->heads[0].cells[group].text, next < 10   ? "first"
                                                                   : next < 25 ? "second"
                                                                               : "third");
            next++;
        }
        assert_true(block->column_count + 1 >= blocks[0].column_count || b + 1 == count);
    }
    assert_int_equal(next, WIDE);
}

static void test_a_table_that_fits_is_one_block(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    struct table table = table_of(rows);
    table.leading = 1;
    size_t count = 0;
    struct table *blocks =
        table_split(&table, 480, page->setter, page->arena, &count, &page->error);
    assert_non_null(blocks);
    assert_int_equal(count, 1);
    assert_int_equal(blocks[0].column_count, 3);
}

/* ---- what stays together ---- */

static void test_no_single_row_is_left_for_the_next_page(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    struct table table = table_of(rows);
    table.row_count = 6;
    struct table_layout *layout =
        table_layout(&table, 400, page->setter, page->arena, &page->error);
    assert_non_null(layout);
    double room = table_height(layout, 0, 5) + 1;
    assert_int_equal(table_fit_anyhow(layout, 0, room), 5);
    assert_int_equal(table_fit(layout, 0, room), 4);
}

static void test_a_group_that_goes_on_is_named_again(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    fill(rows, cells);
    cells[0][0] = "the group";
    rows[0].heading = true;
    struct table table = table_of(rows);
    table.caption = "the caption";
    struct table_layout *layout =
        table_layout(&table, 400, page->setter, page->arena, &page->error);
    struct scene *scene = scene_create(400, 400, page->arena, &page->error);
    assert_non_null(layout);
    double alone = table_height(layout, 7, 9);
    assert_true(table_draw(layout, 7, 9, scene, 0, 0));
    size_t again = 0;
    double lowest = 0;
    for (size_t i = 0; i < scene->count; i++) {
        if (scene->items[i].kind != SCENE_TEXT)
            continue;
        again += strcmp(scene->items[i].text.markup, "the group, continued") == 0;
        again += strcmp(scene->items[i].text.markup, "the caption, continued") == 0;
        lowest = fmax(lowest, scene->items[i].text.y);
    }
    assert_int_equal(again, 2);
    assert_true(lowest < alone);
}

/* A word of two hundred letters is parted rather than refused. */
static void test_a_word_as_wide_as_the_page_is_parted(void **state) {
    struct page *page = *state;
    struct table_row rows[ROWS];
    const char *cells[ROWS][3];
    char word[201] = "";
    memset(word, 'm', 200);
    fill(rows, cells);
    cells[3][0] = word;
    cells[4][2] = word;
    struct table table = table_of(rows);
    struct table_layout *layout =
        table_layout(&table, 300, page->setter, page->arena, &page->error);
    assert_non_null(layout);
    assert_true(table_width(layout) <= 300.01);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_a_table_breaks_over_pages_with_its_heads),
        page_test(test_numbers_stand_on_their_decimal_points),
        page_test(test_columns_that_cannot_be_squeezed_are_refused),
        page_test(test_a_table_wider_than_the_page_becomes_blocks),
        page_test(test_a_table_that_fits_is_one_block),
        page_test(test_no_single_row_is_left_for_the_next_page),
        page_test(test_a_group_that_goes_on_is_named_again),
        page_test(test_a_word_as_wide_as_the_page_is_parted),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
