#include "sections.h"

#include <string.h>

static bool is_date(const char *text) {
    static const char shape[] = "dddd-dd-dd";
    if (strlen(text) != strlen(shape))
        return false;
    for (size_t i = 0; shape[i] != '\0'; i++)
        if (shape[i] == 'd' ? text[i] < '0' || text[i] > '9' : text[i] != '-')
            return false;
    int year =
        (text[0] - '0') * 1000 + (text[1] - '0') * 100 + (text[2] - '0') * 10 + text[3] - '0';
    int month = (text[5] - '0') * 10 + text[6] - '0';
    int day = (text[8] - '0') * 10 + text[9] - '0';
    static const int days[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    bool leap = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
    return year >= 1970 && month >= 1 && month <= 12 && day >= 1 &&
           day <= days[month - 1] + (month == 2 && leap);
}

static const char *read_date(const struct reader *reader, const struct node *node) {
    if (node != NULL && !is_date(node->text))
        reader_refuse(reader, node,
                      "\"%s\" is no date; expected YYYY-MM-DD, such as \"2026-11-30\"",
                      reader_shown(reader, node));
    return reader_text(node);
}

static bool read_reviewers(const struct reader *reader, const struct node *node) {
    struct study_document *document = &reader->study->document;
    if (node == NULL)
        return true;
    const char **names = arena_new(reader->arena, node->count, const char *, reader->error);
    if (names == NULL)
        return false;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        names[document->reviewer_count++] = child->text;
    document->reviewers = names;
    return true;
}

static size_t word_of(const struct reader *reader, const struct node *node,
                      const char *const *words) {
    return node == NULL ? 0 : reader_word(reader, node, words);
}

bool document_read(const struct reader *reader, const struct node *node) {
    struct study_document *document = &reader->study->document;
    document->number = reader_text(tree_get(node, "number"));
    document->title = reader_text(tree_get(node, "title"));
    document->subtitle = reader_text(tree_get(node, "subtitle"));
    document->revision = reader_text(tree_get(node, "revision"));
    document->status = reader_text(tree_get(node, "status"));
    document->date = read_date(reader, tree_get(node, "date"));
    document->owner = reader_text(tree_get(node, "owner"));
    document->organisation = reader_text(tree_get(node, "organisation"));
    document->page = (enum study_page)word_of(reader, tree_get(node, "page"), keys_pages);
    document->lengths =
        (enum quantity_lengths)word_of(reader, tree_get(node, "lengths"), keys_lengths);
    return read_reviewers(reader, tree_get(node, "reviewers"));
}

bool products_read(const struct reader *reader, const struct node *node) {
    if (node == NULL)
        return true;
    struct study_product *products =
        arena_new(reader->arena, node->count, struct study_product, reader->error);
    if (products == NULL)
        return false;
    size_t count = 0;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        if (child->bad)
            continue;
        const struct node *stackup = tree_get(child, "stackup");
        if (stackup != NULL)
            boards_find(reader, stackup);
        products[count++] =
            (struct study_product){child->key, reader_text(tree_get(child, "name")),
                                   reader_text(stackup), reader_text(tree_get(child, "note"))};
    }
    reader->study->products = products;
    reader->study->product_count = count;
    return true;
}
