#include "page.h"

#include <string.h>

static const struct scene_style style = {.size = 10, .colour = {0, 0, 0, 1}};

static double width(struct page *page, const char *markup) {
    double wide = text_width(page->setter, markup, style, &page->error);
    assert_true(isfinite(wide));
    return wide;
}

/* Lato's own advance widths (hmtx of the Regular face, 2000 units per em): digits 1160. */
static void test_digits_are_tabular_and_as_wide_as_the_font_says(void **state) {
    struct page *page = *state;
    assert_near(width(page, "0"), 5.8, 0.01);
    assert_near(width(page, "1111111111"), width(page, "0000000000"), 1e-6);
}

static void test_plain_text_becomes_markup_and_back(void **state) {
    struct page *page = *state;
    char *markup = text_escape(page->arena, "a < b & \"c\" > -3", &page->error);
    assert_non_null(markup);
    char *plain = text_plain(page->arena, markup, &page->error);
    assert_string_equal(plain, "a < b & \"c\" > −3");
    assert_string_equal(text_plain(page->arena, "K<sub>L</sub> &lt; <b>2</b>", &page->error),
                        "KL < 2");
}

static void test_lines_break_at_words_and_stay_within_the_width(void **state) {
    struct page *page = *state;
    const char *words = "one two three four five six seven eight nine ten eleven twelve";
    struct scene_text text = {.markup = words, .style = style, .width = 80};
    struct text_size size;
    assert_true(text_measure(page->setter, &text, &size, &page->error));
    assert_true(size.lines >= 4);
    assert_true(size.width <= 80 + 1e-6);
    assert_near(size.height, size.ascent + (double)(size.lines - 1) * size.leading + size.descent,
                1e-6);
}

static void test_markup_that_is_not_closed_is_refused(void **state) {
    struct page *page = *state;
    static const char *const wrong[] = {"<b>bold", "a < b", "<i>x</b>", "&nonsense;", "<u>no</u>"};
    for (size_t i = 0; i < sizeof wrong / sizeof *wrong; i++) {
        struct error error = {0};
        assert_true(isnan(text_width(page->setter, wrong[i], style, &error)));
        assert_int_equal(error.kind, ERROR_INTERNAL);
    }
}

static void test_glyphs_that_the_font_lacks_are_counted(void **state) {
    struct page *page = *state;
    size_t missing = 99;
    assert_true(text_missing(page->setter, "Ω µ ≤ ≥ ± − – “ ” × °", style, &missing, &page->error));
    assert_int_equal(missing, 0);
    assert_true(text_missing(page->setter, "漢字", style, &missing, &page->error));
    assert_int_equal(missing, 2);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        page_test(test_digits_are_tabular_and_as_wide_as_the_font_says),
        page_test(test_plain_text_becomes_markup_and_back),
        page_test(test_lines_break_at_words_and_stay_within_the_width),
        page_test(test_markup_that_is_not_closed_is_refused),
        page_test(test_glyphs_that_the_font_lacks_are_counted),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
