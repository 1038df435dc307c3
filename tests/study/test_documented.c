/* docs/study.md holds what src/study accepts: every key of every table, and no other. */

#include "keys.h"
#include "reading.h"

#include <ctype.h>

static char *page; /* docs/study.md */

/* The section of a table: from its heading, "### A stackup" for "a stackup", to the next. */
static const char *section_of(const struct key_table *table, size_t *length) {
    for (const char *at = page; (at = strstr(at, "\n### ")) != NULL;) {
        at += strlen("\n### ");
        size_t name = strlen(table->name);
        if (tolower((unsigned char)at[0]) == tolower((unsigned char)table->name[0]) &&
            strncmp(at + 1, table->name + 1, name - 1) == 0 && at[name] == '\n') {
            const char *end = strstr(at, "\n##");
            *length = end == NULL ? strlen(at) : (size_t)(end - at);
            return at;
        }
    }
    print_error("no section \"### %s\"\n", table->name);
    fail();
    return NULL;
}

/* The next row of a table of keys, "| `name` | ...", in the section; NULL when there is none. */
static const char *next_row(const char *at, const char *end) {
    while (at != NULL && at < end) {
        at = strchr(at, '\n');
        if (at != NULL && ++at < end && strncmp(at, "| `", 3) == 0)
            return at;
    }
    return NULL;
}

static char *row_of(const struct key_table *table, const struct key *key) {
    size_t length = 0;
    const char *section = section_of(table, &length);
    char start[64];
    snprintf(start, sizeof start, "| `%s` |", key->name);
    for (const char *row = section; (row = next_row(row, section + length)) != NULL;)
        if (strncmp(row, start, strlen(start)) == 0) {
            size_t size = strcspn(row, "\n");
            char *copy = malloc(size + 1);
            assert_non_null(copy);
            memcpy(copy, row, size);
            copy[size] = '\0';
            return copy;
        }
    print_error("%s: no row for \"%s\"\n", table->name, key->name);
    fail();
    return NULL;
}

static void assert_says(const struct key_table *table, const struct key *key, const char *row,
                        const char *wanted, bool yes) {
    if ((strstr(row, wanted) != NULL) != yes) {
        print_error("%s, \"%s\": \"%s\" should%s be in: %s\n", table->name, key->name, wanted,
                    yes ? "" : " not", row);
        fail();
    }
}

static void check_row(const struct key_table *table, const struct key *key) {
    char text[64];
    char *row = row_of(table, key);
    assert_says(table, key, row, "| required |", key->required);
    assert_says(table, key, row, "| not yet |", key->not_yet != NULL);
    if (key->kind == KEY_VALUE && key->not_yet == NULL) {
        const char *article_end = strchr(dimension_name(key->dimension), ' ');
        assert_says(table, key, row, article_end + 1, true);
    }
    for (size_t i = 0; key->kind == KEY_WORD && key->words[i] != NULL; i++) {
        snprintf(text, sizeof text, "`\"%s\"`", key->words[i]);
        assert_says(table, key, row, text, true);
    }
    if (key->most > 0) {
        snprintf(text, sizeof text, "%zu", key->most);
        assert_says(table, key, row, text, true);
    }
    free(row);
}

static void test_every_key_has_its_row_with_type_words_and_limits(void **state) {
    (void)state;
    for (size_t t = 0; t < keys_all_count; t++)
        for (size_t i = 0; i < keys_all[t]->count; i++)
            check_row(keys_all[t], &keys_all[t]->keys[i]);
}

static bool has_key(const struct key_table *table, const char *name, size_t length) {
    for (size_t i = 0; i < table->count; i++)
        if (strlen(table->keys[i].name) == length && memcmp(table->keys[i].name, name, length) == 0)
            return true;
    return false;
}

static void test_no_row_is_about_a_key_that_is_not_accepted(void **state) {
    (void)state;
    for (size_t t = 0; t < keys_all_count; t++) {
        size_t length = 0;
        const char *section = section_of(keys_all[t], &length);
        size_t rows = 0;
        for (const char *row = section; (row = next_row(row, section + length)) != NULL; rows++) {
            const char *name = row + 3;
            if (!has_key(keys_all[t], name, strcspn(name, "`"))) {
                print_error("%s: %.40s\n", keys_all[t]->name, row);
                fail();
            }
        }
        assert_int_equal(rows, keys_all[t]->count);
    }
}

/* ---- ranges ---- */

static void test_every_range_on_the_page_is_the_one_that_is_held(void **state) {
    static const struct {
        const struct key_table *table;
        const char *key;
        const char *study; /* around the value */
        const char *value; /* beyond the range */
    } cases[] = {
        {&keys_layer, "copper",
         "{\"stackups\": {\"a\": {\"layers\": [{\"role\": \"plane\", "
         "\"copper\": \"%s\"}]}}}",
         "1 m"},
        {&keys_layer, "dielectric",
         "{\"stackups\": {\"a\": {\"layers\": [{\"dk\": 4, \"dielectric\": \"%s\"}]}}}", "1 m"},
        {&keys_layer, "dk",
         "{\"stackups\": {\"a\": {\"layers\": [{\"dielectric\": \"1 mm\", "
         "\"dk\": \"%s\"}]}}}",
         "100"},
        {&keys_smallest, "width", "{\"stackups\": {\"a\": {\"smallest\": {\"width\": \"%s\"}}}}",
         "2 m"},
        {&keys_smallest, "gap", "{\"stackups\": {\"a\": {\"smallest\": {\"gap\": \"%s\"}}}}",
         "0 m"},
        {&keys_smallest, "drill", "{\"stackups\": {\"a\": {\"smallest\": {\"drill\": \"%s\"}}}}",
         "2 m"},
        {&keys_signal, "swing", "{\"signals\": {\"a\": {\"swing\": \"%s\"}}}", "1 MV"},
        {&keys_signal, "edge", "{\"signals\": {\"a\": {\"edge\": \"%s\"}}}", "1 fs"},
        {&keys_signal, "source", "{\"signals\": {\"a\": {\"source\": \"%s\"}}}", "-1 ohm"},
        {&keys_signal, "load", "{\"signals\": {\"a\": {\"load\": \"%s\"}}}", "-1 ohm"},
        {&keys_signal, "load_capacitance", "{\"signals\": {\"a\": {\"load_capacitance\": \"%s\"}}}",
         "1 mF"},
        {&keys_victim, "noise_margin",
         "{\"signals\": {\"a\": {\"victim\": {\"noise_margin\": \"%s\"}}}}", "1 MV"},
        {&keys_victim, "share", "{\"signals\": {\"a\": {\"victim\": {\"share\": \"%s\"}}}}",
         "101 %"},
    };
    (void)state;
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        char text[200] = "";
        const char *hole = strstr(cases[i].study, "%s");
        struct key key = {.name = cases[i].key};
        snprintf(text, sizeof text, "%.*s%s%s", (int)(hole - cases[i].study), cases[i].study,
                 cases[i].value, hole + 2);
        struct reading reading = read_study(text);
        const char *allowed = NULL;
        for (size_t p = 0; p < reading.problems.count && allowed == NULL; p++)
            if (strstr(reading.problems.items[p].path, cases[i].key) != NULL)
                allowed = strstr(reading.problems.items[p].message, "allowed: ");
        if (allowed == NULL) {
            print_error("\"%s\" of %s is not refused\n", cases[i].value, cases[i].key);
            fail();
        }
        char *row = row_of(cases[i].table, &key);
        assert_says(cases[i].table, &key, row, allowed + strlen("allowed: "), true);
        free(row);
        reading_end(&reading);
    }
}

/* ---- examples ---- */

/* The parts in ```json frames, joined as the members of one object. */
static char *join_examples(void) {
    char *joined = malloc(strlen(page) + 16);
    size_t used = 1;
    assert_non_null(joined);
    joined[0] = '{';
    for (const char *at = page; (at = strstr(at, "```json\n")) != NULL;) {
        at += strlen("```json\n");
        const char *end = strstr(at, "\n```");
        assert_non_null(end);
        if (used > 1)
            joined[used++] = ',';
        memcpy(joined + used, at, (size_t)(end - at));
        used += (size_t)(end - at);
        at = end;
    }
    memcpy(joined + used, "}", 2);
    return joined;
}

static void test_the_examples_together_are_a_sound_study(void **state) {
    (void)state;
    char *text = join_examples();
    struct reading reading = read_sound(text);
    assert_int_equal(reading.study.stackup_count, 2);
    assert_int_equal(reading.study.signal_count, 2);
    assert_int_equal(reading.study.product_count, 1);
    assert_int_equal(reading.study.chapter_count, 2);
    reading_end(&reading);
    free(text);
}

static void test_every_key_has_an_example(void **state) {
    (void)state;
    char *text = join_examples();
    for (size_t t = 0; t < keys_all_count; t++)
        for (size_t i = 0; i < keys_all[t]->count; i++) {
            const struct key *key = &keys_all[t]->keys[i];
            char wanted[64];
            snprintf(wanted, sizeof wanted, "\"%s\":", key->name);
            /* A study with a previous issue needs that file; its example stands in its row. */
            if (key->not_yet != NULL || strcmp(key->name, "previous") == 0)
                continue;
            assert_says(keys_all[t], key, text, wanted, true);
        }
    free(text);
}

int main(int argc, char **argv) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_key_has_its_row_with_type_words_and_limits),
        cmocka_unit_test(test_no_row_is_about_a_key_that_is_not_accepted),
        cmocka_unit_test(test_every_range_on_the_page_is_the_one_that_is_held),
        cmocka_unit_test(test_the_examples_together_are_a_sound_study),
        cmocka_unit_test(test_every_key_has_an_example),
    };
    char path[1024];
    size_t length = 0;
    snprintf(path, sizeof path, "%s/docs/study.md", argc > 1 ? argv[1] : ".");
    page = read_bytes(path, &length);
    if (page == NULL)
        return 1;
    int failed = cmocka_run_group_tests(tests, NULL, NULL);
    free(page);
    return failed;
}
