#include "reader.h"

#include "groundrules/text.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

static void add(const struct reader *reader, const struct node *node, size_t offset,
                const char *format, va_list arguments) {
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *message =
        length < 0 ? NULL : arena_new(reader->arena, (size_t)length + 1, char, reader->error);
    const char *path = tree_path(node, reader->arena, reader->error);
    if (message != NULL && path != NULL) {
        vsnprintf(message, (size_t)length + 1, format, again);
        findings_add_text(reader->findings, offset, path, message);
    }
    va_end(again);
}

bool reader_refuse(const struct reader *reader, const struct node *node, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    add(reader, node, node->offset, format, arguments);
    va_end(arguments);
    return false;
}

bool reader_refuse_key(const struct reader *reader, const struct node *node, const char *format,
                       ...) {
    va_list arguments;
    va_start(arguments, format);
    add(reader, node, node->key_offset, format, arguments);
    va_end(arguments);
    return false;
}

const char *reader_shown(const struct reader *reader, const struct node *node) {
    const char *text = node->text == NULL ? tree_kind_name(node->kind)
                                          : tree_excerpt(node->text, reader->arena, reader->error);
    return text == NULL ? "" : text;
}

enum { MOST_LISTED = 48 };

const char *reader_advice(const struct reader *reader, const char *word, const char *const *names,
                          size_t count) {
    struct text advice = text_start(reader->arena, reader->error);
    const char *nearest = text_nearest(word, names, count);
    if (nearest != NULL)
        text_format(&advice, "; did you mean \"%s\"?", nearest);
    if (count == 0)
        text_add(&advice, "; none is defined");
    for (size_t i = 0; i < count && count <= MOST_LISTED; i++)
        text_format(&advice, "%s%s",
                    i > 0             ? ", "
                    : nearest != NULL ? " Allowed: "
                                      : "; allowed: ",
                    names[i]);
    const char *whole = text_end(&advice);
    return whole == NULL ? "" : whole;
}

const char *reader_value_text(const struct reader *reader, const struct node *node,
                              enum dimension dimension) {
    bool pure = dimension == DIMENSION_NUMBER || dimension == DIMENSION_COUNT ||
                dimension == DIMENSION_RATIO || dimension == DIMENSION_WORD;
    if (node->kind == NODE_TEXT || (node->kind == NODE_NUMBER && pure))
        return node->text;
    if (node->kind == NODE_NUMBER)
        reader_refuse(reader, node,
                      "the number %s has no unit; expected %s in quotes, such as \"%s\"",
                      node->text, dimension_name(dimension), dimension_example(dimension));
    else
        reader_refuse(reader, node, "found %s; expected %s in quotes, such as \"%s\"",
                      tree_kind_name(node->kind), dimension_name(dimension),
                      dimension_example(dimension));
    return NULL;
}

/* `reaching`: the text whose tolerance gives the value, NULL when the value itself was written. */
static bool in_bounds(const struct reader *reader, const struct node *node,
                      enum dimension dimension, struct bounds bounds, double value,
                      const char *reaching) {
    if (value >= bounds.lowest && value <= bounds.highest)
        return true;
    char found[64];
    char low[64];
    char high[64];
    quantity_print(found, sizeof found, value, dimension, -6, QUANTITY_ASCII, QUANTITY_MILLIMETRES);
    quantity_print(low, sizeof low, bounds.lowest, dimension, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    quantity_print(high, sizeof high, bounds.highest, dimension, -6, QUANTITY_ASCII,
                   QUANTITY_MILLIMETRES);
    if (reaching != NULL)
        return reader_refuse(reader, node, "\"%s\" reaches %s, out of range; allowed: %s to %s",
                             reaching, found, low, high);
    return reader_refuse(reader, node, "%s is out of range; allowed: %s to %s", found, low, high);
}

bool reader_in_bounds(const struct reader *reader, const struct node *node,
                      enum dimension dimension, struct bounds bounds, double value) {
    return in_bounds(reader, node, dimension, bounds, value, NULL);
}

bool reader_quantity(const struct reader *reader, const struct node *node, enum dimension dimension,
                     struct bounds bounds, bool exact, struct quantity *quantity) {
    struct error error = {0};
    struct quantity read = {0};
    const char *text = reader_value_text(reader, node, dimension);
    if (text == NULL)
        return false;
    if (!quantity_parse(text, dimension, &read, &error))
        return reader_refuse(reader, node, "%s", error.message);
    if (exact && (read.minus > 0 || read.plus > 0))
        return reader_refuse(reader, node, "\"%s\": no tolerance is accepted here",
                             reader_shown(reader, node));
    const char *shown = reader_shown(reader, node);
    if (!in_bounds(reader, node, dimension, bounds, read.value, NULL) ||
        !in_bounds(reader, node, dimension, bounds, read.value - read.minus, shown) ||
        !in_bounds(reader, node, dimension, bounds, read.value + read.plus, shown))
        return false;
    *quantity = read;
    return true;
}

bool reader_number(const struct reader *reader, const struct node *node, enum dimension dimension,
                   struct bounds bounds, double *value) {
    struct quantity quantity;
    if (!reader_quantity(reader, node, dimension, bounds, true, &quantity))
        return false;
    *value = quantity.value;
    return true;
}

static bool is_level(const char *from, const char *to) {
    if (from == to)
        return false;
    bool point = false;
    for (; from < to; from++) {
        if (*from == '.' && !point)
            point = true;
        else if (*from < '0' || *from > '9')
            return false;
    }
    return true;
}

/* Percent as a ratio, from digits that is_level accepted; through quantities: no locale. */
static bool read_level(const char *from, const char *to, double *level) {
    char text[32];
    struct quantity quantity;
    if (to - from > 20)
        return false;
    snprintf(text, sizeof text, "%.*s %%", (int)(to - from), from);
    if (!quantity_parse(text, DIMENSION_RATIO, &quantity, NULL))
        return false;
    *level = quantity.value;
    return true;
}

const char reader_levels_hint[] = "; its levels stand once, at the end: \"1.2 ns 10-90\"";

bool reader_split_levels(const char *text, struct arena *arena, const char **rest,
                         struct levels *levels, struct error *error) {
    size_t length = strlen(text);
    while (length > 0 && text[length - 1] == ' ')
        length--;
    const char *end = text + length;
    const char *start = end;
    while (start > text && start[-1] != ' ')
        start--;
    const char *dash = memchr(start, '-', (size_t)(end - start));
    *rest = text;
    *levels = (struct levels){0.0, 1.0};
    if (start == text || dash == NULL || !is_level(start, dash) || !is_level(dash + 1, end))
        return true;
    struct levels read;
    if (!read_level(start, dash, &read.low) || !read_level(dash + 1, end, &read.high) ||
        !(read.low < read.high && read.high <= 1.0))
        return error_set(error, ERROR_INPUT,
                         "\"%.*s\": the levels of an edge are percentages, the lower first, such "
                         "as \"10-90\" or \"20-80\"",
                         (int)(end - start < 40 ? end - start : 40), start);
    while (start > text && start[-1] == ' ')
        start--;
    char *front = arena_copy_length(arena, text, (size_t)(start - text), error);
    if (front == NULL)
        return false;
    *rest = front;
    *levels = read;
    return true;
}

static double stretch(double value, double share, struct bounds bounds) {
    double whole = value / share;
    /* "up to" and "at least" must come out exactly at the bound that they went in with. */
    if (fabs(whole - bounds.lowest) <= 1e-12 * bounds.lowest)
        return bounds.lowest;
    return fabs(whole - bounds.highest) <= 1e-12 * bounds.highest ? bounds.highest : whole;
}

bool reader_span(const struct reader *reader, const struct node *node, enum dimension dimension,
                 struct bounds bounds, struct levels *levels, struct quantity *quantity,
                 struct interval *range, bool *is_range) {
    struct error error = {0};
    struct levels between = {0.0, 1.0};
    const char *text = reader_value_text(reader, node, dimension);
    if (text == NULL)
        return false;
    if (levels != NULL && !reader_split_levels(text, reader->arena, &text, &between, &error))
        return reader_refuse(reader, node, "%s", error.message);
    double share = between.high - between.low;
    struct quantity read = {0};
    struct interval span = {0.0, 0.0};
    bool spans = false;
    if (!quantity_parse_range(text, dimension, bounds.lowest * share, bounds.highest * share, &read,
                              &span, &spans, &error))
        return reader_refuse(reader, node, "%s%s", error.message,
                             levels != NULL ? reader_levels_hint : "");
    if (share < 1.0) {
        span =
            (struct interval){stretch(span.from, share, bounds), stretch(span.to, share, bounds)};
        read.value /= share;
        read.minus /= share;
        read.plus /= share;
    }
    if (levels != NULL)
        *levels = between;
    *quantity = read;
    *range = span;
    *is_range = spans;
    return true;
}

size_t reader_word(const struct reader *reader, const struct node *node, const char *const *words) {
    size_t count = 0;
    for (; words[count] != NULL; count++)
        if (node->text != NULL && strcmp(words[count], node->text) == 0)
            return count;
    if (node->text == NULL)
        reader_refuse(reader, node, "found %s; expected a word%s", tree_kind_name(node->kind),
                      reader_advice(reader, "", words, count));
    else
        reader_refuse(reader, node, "unknown word \"%s\"%s", reader_shown(reader, node),
                      reader_advice(reader, node->text, words, count));
    return SIZE_MAX;
}

const char *reader_text(const struct node *node) {
    return node == NULL ? NULL : node->text;
}
