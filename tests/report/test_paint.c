#include "page.h"
#include "report/paint.h"
#include "report/pdf_references.h"

#include <stdlib.h>
#include <string.h>

static struct scene *simple_page(struct page *page, const char *destination, const char *link) {
    struct scene *scene = scene_create(300, 200, page->arena, &page->error);
    scene_destination(scene, destination, 10, 10);
    if (link != NULL)
        scene_link(scene, 10, 10, 50, 20, link);
    scene_text(scene, &(struct scene_text){.markup = "K<sub>L</sub> ≤ 2 % &amp; more",
                                           .style = {.size = 10, .colour = {0, 0, 0, 1}},
                                           .x = 20,
                                           .y = 40});
    scene_rectangle(scene, 20, 60, 40, 10, (struct scene_colour){0, 0.4, 0.4, 1});
    return scene;
}

static void test_the_same_scene_gives_the_same_bytes(void **state) {
    struct page *page = *state;
    const struct scene *pages[] = {simple_page(page, "one", "two"),
                                   simple_page(page, "two", "one")};
    const struct paint_entry outline[] = {{"First", "one", 0}, {"Second", "two", 1}};
    struct paint_document document = {.title = "Title",
                                      .created = "2026-03-01",
                                      .pages = pages,
                                      .page_count = 2,
                                      .outline = outline,
                                      .outline_count = 2};
    struct paint_bytes first, second;
    assert_true(paint_pdf(page->setter, &document, page->arena, &first, &page->error));
    assert_true(paint_pdf(page->setter, &document, page->arena, &second, &page->error));
    assert_int_equal(first.length, second.length);
    assert_memory_equal(first.bytes, second.bytes, first.length);
    assert_memory_equal(first.bytes, "%PDF-", 5);
    assert_true(paint_svg(page->setter, pages[0], "A figure", page->arena, &first, &page->error));
    assert_true(paint_svg(page->setter, pages[0], "A figure", page->arena, &second, &page->error));
    assert_int_equal(first.length, second.length);
    assert_memory_equal(first.bytes, second.bytes, first.length);
}

static void refused(struct page *page, const struct scene *const *pages, size_t count,
                    const char *expected) {
    struct paint_document document = {
        .title = "t", .created = "2026-03-01", .pages = pages, .page_count = count};
    struct paint_bytes bytes = {NULL, 7};
    struct error error = {0};
    assert_false(paint_pdf(page->setter, &document, page->arena, &bytes, &error));
    if (strstr(error.message, expected) == NULL)
        print_error("message: %s\n", error.message);
    assert_non_null(strstr(error.message, expected));
    assert_true(bytes.length == 7);
}

static void test_what_would_spoil_a_document_is_refused(void **state) {
    struct page *page = *state;
    const struct scene *nowhere[] = {simple_page(page, "one", "three")};
    refused(page, nowhere, 1, "three");
    const struct scene *twice[] = {simple_page(page, "one", NULL), simple_page(page, "one", NULL)};
    refused(page, twice, 2, "one");
    struct scene *endless = simple_page(page, "one", NULL);
    scene_line(endless, 0, 0, NAN, 5, 1, (struct scene_colour){0, 0, 0, 1});
    const struct scene *wrong[] = {endless};
    refused(page, wrong, 1, "page 1");
}

static void test_the_date_comes_from_the_environment_first(void **state) {
    (void)state;
    char created[24];
    struct error error = {0};
    assert_int_equal(setenv("SOURCE_DATE_EPOCH", "1767225600", 1), 0);
    assert_ok(paint_created("2026-03-01", created, &error));
    assert_string_equal(created, "2026-01-01T00:00:00Z");
    assert_int_equal(setenv("SOURCE_DATE_EPOCH", "soon", 1), 0);
    assert_false(paint_created("2026-03-01", created, &error));
    assert_int_equal(error.kind, ERROR_INPUT);
    assert_int_equal(unsetenv("SOURCE_DATE_EPOCH"), 0);
    error = (struct error){0};
    assert_ok(paint_created("2026-03-01", created, &error));
    assert_memory_equal(created, "2026-03-01", 10);
    assert_false(paint_created("2026-02-30", created, &error));
}

/* ISO 32000-1, 7.5.4: twenty bytes an entry; object 2 was never written. */
static void test_references_to_unwritten_objects_are_freed(void **state) {
    (void)state;
    char file[] = "%PDF-1.5\n1 0 obj\n<<>>\nendobj\n3 0 obj\n<<>>\nendobj\n"
                  "xref\n0 4\n0000000000 65535 f \n0000000009 00000 n \n0000000015 00000 n \n"
                  "0000000029 00000 n \ntrailer\n<<>>\nstartxref\n49\n%%EOF\n";
    assert_int_equal(strstr(file, "xref") - file, 49);
    assert_int_equal(pdf_references_repair(file, sizeof file - 1), 1);
    assert_non_null(strstr(file, "0000000009 00000 n \n0000000000 65535 f \n0000000029 00000 n "));
    assert_int_equal(pdf_references_repair(file, sizeof file - 1), 0);
    char cut[] = "%PDF-1.5\nstartxref\n900\n%%EOF\n";
    assert_int_equal(pdf_references_repair(cut, sizeof cut - 1), 0);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_the_same_scene_gives_the_same_bytes),
        page_test(test_what_would_spoil_a_document_is_refused),
        cmocka_unit_test(test_the_date_comes_from_the_environment_first),
        cmocka_unit_test(test_references_to_unwritten_objects_are_freed),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
