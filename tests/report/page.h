#ifndef TESTS_REPORT_PAGE_H
#define TESTS_REPORT_PAGE_H

#include "check.h"
#include "report/text.h"

/* A setter and an arena for one test. */
struct page {
    struct text_setter *setter;
    struct arena *arena;
    struct error error;
};

static inline int page_open(void **state) {
    static struct page page;
    page = (struct page){0};
    page.arena = arena_create(&page.error);
    page.setter = text_setter_create(NULL, &page.error);
    *state = &page;
    if (page.arena == NULL || page.setter == NULL)
        print_error("%s\n", page.error.message);
    return page.arena == NULL || page.setter == NULL;
}

static inline int page_close(void **state) {
    struct page *page = *state;
    text_setter_free(page->setter);
    arena_free(page->arena);
    return 0;
}

#define page_test(name) cmocka_unit_test_setup_teardown(name, page_open, page_close)

#endif
