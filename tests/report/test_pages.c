/* Whole documents that try the typesetting: names of 8 to 120 characters, one to thirty chapters,
 * one to twelve boards, notes of a line and of half a page, on both papers.  What a careful
 * typographer would mark is looked for on every page. */

#include "boxes.h"
#include "report/flow.h"
#include "report/pages.h"
#include "stress.h"

#include <stdlib.h>
#include <string.h>

static const struct stress studies[] = {
    {2, 2, 3, 2, 20, 60, false},     /* as studies are */
    {30, 7, 3, 3, 20, 60, false},    /* very many chapters and rules */
    {3, 3, 3, 4, 80, 200, false},    /* long names */
    {2, 3, 3, 3, 120, 300, true},    /* very long ones */
    {1, 1, 3, 8, 34, 80, false},     /* eight classes by eight on three boards */
    {2, 3, 12, 2, 22, 80, false},    /* twelve boards side by side */
    {2, 2, 12, 4, 100, 300, true},   /* the same with long names */
    {1, 2, 3, 2, 120, 1900, false},  /* notes as long as a study may have them */
    {1, 1, 1, 1, 8, 10, false},      /* hardly anything */
    {2, 2, 50, 3, 30, 80, false},    /* as many boards as a study may have */
    {1, 2, 5, 4, 1900, 1900, false}, /* every text as long as it may be */
    {2, 1, 3, 11, 120, 40, true},    /* eleven classes by eleven with long names */
};
enum { STUDIES = sizeof studies / sizeof *studies };

struct laid_out {
    struct flow flow;
    struct scene **pages;
    size_t count;
};

static void lay_out(struct page *page, const struct stress *stress, struct laid_out *out) {
    struct guideline *guideline = arena_new(page->arena, 1, struct guideline, &page->error);
    bool ok = guideline != NULL && stress_make(stress, page->arena, guideline, &page->error) &&
              flow_start(&out->flow, guideline, page->setter, page->arena, &page->error);
    out->count = ok ? pages_all(&out->flow, &out->pages) : 0;
    if (page->error.kind != ERROR_NONE)
        print_error("%s\n", page->error.message);
    assert_int_equal(page->error.kind, ERROR_NONE);
    assert_true(out->count > 3);
}

/* All studies laid out, for the whole file; each has an arena of its own. */
static struct page sheets[STUDIES];
static struct laid_out laid[STUDIES];

static int lay_out_all(void **state) {
    (void)state;
    for (size_t s = 0; s < STUDIES; s++) {
        sheets[s].arena = arena_create(&sheets[s].error);
        sheets[s].setter = text_setter_create(NULL, &sheets[s].error);
        if (sheets[s].arena == NULL || sheets[s].setter == NULL)
            return 1;
        lay_out(&sheets[s], &studies[s], &laid[s]);
    }
    return 0;
}

static int forget_all(void **state) {
    (void)state;
    for (size_t s = 0; s < STUDIES; s++) {
        text_setter_free(sheets[s].setter);
        arena_free(sheets[s].arena);
    }
    return 0;
}

typedef void looker(struct page *page, const struct laid_out *out, size_t index, const char *where);

static void on_every_page(looker *look) {
    for (size_t s = 0; s < STUDIES; s++)
        for (size_t i = 0; i < laid[s].count; i++) {
            char where[64];
            snprintf(where, sizeof where, "study %zu, page %zu", s, i + 1);
            look(&sheets[s], &laid[s], i, where);
        }
}

static bool is_running(const struct laid_out *out, const struct box *box) {
    return box->text->y < out->flow.page.top - 12 || box->text->y > out->flow.page.bottom + 8;
}

static void look_for_overlaps(struct page *page, const struct laid_out *out, size_t index,
                              const char *where) {
    struct boxes boxes = boxes_of(page, out->pages[index]);
    assert_no_overlap(&boxes, where);
}

static void test_no_text_stands_on_another(void **state) {
    (void)state;
    on_every_page(look_for_overlaps);
}

static void look_at_margins(struct page *page, const struct laid_out *out, size_t index,
                            const char *where) {
    const struct theme_page *form = &out->flow.page;
    struct boxes boxes = boxes_of(page, out->pages[index]);
    struct box frame = {form->left, form->head - 10, form->right, form->foot + 3, NULL, NULL};
    assert_within(&boxes, &frame, where);
    size_t kept = 0;
    for (size_t i = 0; i < boxes.count; i++)
        if (!is_running(out, &boxes.items[i]))
            boxes.items[kept++] = boxes.items[i];
    boxes.count = kept;
    frame.top = form->top - 2;
    frame.bottom = form->bottom;
    assert_within(&boxes, &frame, where);
}

static void test_no_text_leaves_the_type_area(void **state) {
    (void)state;
    on_every_page(look_at_margins);
}

/* Headings, card heads and captions are bold and at least as large as the body. */
static bool is_heading(const struct box *box) {
    return box->text->style.weight == SCENE_BOLD && box->text->style.size >= 9.2;
}

static void look_at_the_foot(struct page *page, const struct laid_out *out, size_t index,
                             const char *where) {
    struct boxes boxes = boxes_of(page, out->pages[index]);
    const struct box *lowest = NULL;
    for (size_t i = 0; i < boxes.count; i++)
        if (!is_running(out, &boxes.items[i]) &&
            (lowest == NULL || boxes.items[i].bottom > lowest->bottom))
            lowest = &boxes.items[i];
    assert_non_null(lowest);
    if (is_heading(lowest))
        print_error("%s ends with \"%s\"\n", where, lowest->text->markup);
    assert_false(is_heading(lowest));
}

static void test_no_page_ends_with_a_heading(void **state) {
    (void)state;
    on_every_page(look_at_the_foot);
}

/* Of a table's part: its first head, and how many lines of cells follow. */
struct part {
    const char *name, *head;
    size_t rows;
};

static struct part part_at(const struct scene *scene, size_t group) {
    struct part part = {.name = scene->items[group].name};
    double last = -1;
    for (size_t i = group + 1; i < scene->count && scene->items[i].kind != SCENE_END; i++) {
        const struct scene_text *text = &scene->items[i].text;
        if (scene->items[i].kind != SCENE_TEXT)
            continue;
        if (part.head == NULL && text->style.weight == SCENE_MEDIUM)
            part.head = text->markup;
        bool body = text->style.size == theme_style(THEME_TABLE).size;
        part.rows += body && text->y != last;
        last = body ? text->y : last;
    }
    return part;
}

static bool is_table(const char *name) {
    return strstr(name, "-table-") != NULL || strstr(name, "-inputs") != NULL ||
           strcmp(name, "glance") == 0 || strcmp(name, "signals") == 0 ||
           strcmp(name, "products") == 0;
}

static void look_at_tables(struct page *page, const struct laid_out *out, size_t index,
                           const char *where) {
    (void)page;
    const struct scene *scene = out->pages[index];
    for (size_t i = 0; i < scene->count; i++) {
        if (scene->items[i].kind != SCENE_GROUP || !is_table(scene->items[i].name))
            continue;
        struct part part = part_at(scene, i);
        if (part.head == NULL || part.rows == 0)
            print_error("%s, table %s: %s head, %zu rows\n", where, part.name,
                        part.head == NULL ? "no" : "a", part.rows);
        assert_non_null(part.head);
        assert_true(part.rows > 0);
    }
}

static void test_every_part_of_a_table_has_its_heads_and_rows(void **state) {
    (void)state;
    on_every_page(look_at_tables);
}

/* All parts and blocks of a table begin with the same column. */
static void test_every_part_of_a_table_begins_with_the_same_column(void **state) {
    (void)state;
    const struct laid_out out = laid[5];
    size_t parts = 0;
    for (size_t p = 0; p < out.count; p++)
        for (size_t i = 0; i < out.pages[p]->count; i++)
            if (out.pages[p]->items[i].kind == SCENE_GROUP &&
                strcmp(out.pages[p]->items[i].name, "glance") == 0) {
                assert_string_equal(part_at(out.pages[p], i).head, "Rule");
                parts++;
            }
    assert_true(parts >= 3);
}

static size_t texts_with(const struct laid_out *out, const char *needle) {
    size_t count = 0;
    for (size_t p = 0; p < out->count; p++)
        for (size_t i = 0; i < out->pages[p]->count; i++)
            count += out->pages[p]->items[i].kind == SCENE_TEXT &&
                     strstr(out->pages[p]->items[i].text.markup, needle) != NULL;
    return count;
}

/* What goes on over a page says so: contents, a group of rules, a card. */
static void test_what_goes_on_is_named_again(void **state) {
    (void)state;
    assert_true(texts_with(&laid[1], "Contents, continued") >= 3);
    assert_true(texts_with(&laid[1], ", continued") >= 8);
    assert_int_equal(texts_with(&laid[7], "C1-1, continued"), 1);
}

/* Each link of the contents leads to a page whose number it gives. */
static void test_the_contents_give_the_right_pages(void **state) {
    (void)state;
    const struct laid_out out = laid[1];
    size_t checked = 0;
    for (size_t p = 1; p < out.count; p++) {
        const struct scene *scene = out.pages[p];
        for (size_t i = 0; i < scene->count; i++) {
            const struct scene_item *link = &scene->items[i];
            if (link->kind != SCENE_LINK)
                continue;
            /* The number is the text before the link's dots. */
            size_t number = 0;
            for (size_t k = i; k-- > 0 && number == 0;)
                if (scene->items[k].kind == SCENE_TEXT)
                    number = (size_t)strtoul(scene->items[k].text.markup, NULL, 10);
            assert_true(number >= 1 && number <= out.count);
            const struct scene *target = out.pages[number - 1];
            bool found = false;
            for (size_t k = 0; k < target->count; k++)
                found = found || (target->items[k].kind == SCENE_DESTINATION &&
                                  strcmp(target->items[k].name, link->name) == 0);
            assert_true(found);
            checked++;
        }
    }
    assert_true(checked > 240);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_no_text_stands_on_another),
        cmocka_unit_test(test_no_text_leaves_the_type_area),
        cmocka_unit_test(test_no_page_ends_with_a_heading),
        cmocka_unit_test(test_every_part_of_a_table_has_its_heads_and_rows),
        cmocka_unit_test(test_every_part_of_a_table_begins_with_the_same_column),
        cmocka_unit_test(test_what_goes_on_is_named_again),
        cmocka_unit_test(test_the_contents_give_the_right_pages),
    };
    return cmocka_run_group_tests(tests, lay_out_all, forget_all);
}
