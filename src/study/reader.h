#ifndef STUDY_READER_H
#define STUDY_READER_H

#include "tree.h"

/* What all readers of a study share.  They return true when they have a value; false means that a
 * finding was added or that memory ran out (reader->error). */
struct reader {
    struct arena *arena;
    struct error *error;
    struct findings *findings;
    const struct source *source;
    struct study *study; /* filled section by section; later sections look names up in it */
    bool stackups_refused, signals_refused; /* the whole section: its names are not known */
};

/* Always false. */
bool reader_refuse(const struct reader *reader, const struct node *node, const char *format, ...)
    __attribute__((format(printf, 3, 4)));
/* At the key instead of the value. */
bool reader_refuse_key(const struct reader *reader, const struct node *node, const char *format,
                       ...) __attribute__((format(printf, 3, 4)));

/* What is shown of the node's text in a message. */
const char *reader_shown(const struct reader *reader, const struct node *node);

/* "; did you mean "width"?" (when one is near) and "; allowed: width, gap" (when they are not too
 * many). */
const char *reader_advice(const struct reader *reader, const char *word, const char *const *names,
                          size_t count);

struct bounds {
    double lowest, highest;
};

bool reader_in_bounds(const struct reader *reader, const struct node *node,
                      enum dimension dimension, struct bounds bounds, double value);

/* The text of a value: a text, or a bare number where the dimension has no unit.  NULL: refused. */
const char *reader_value_text(const struct reader *reader, const struct node *node,
                              enum dimension dimension);

/* One value within bounds.  `exact`: a tolerance is refused. */
bool reader_quantity(const struct reader *reader, const struct node *node, enum dimension dimension,
                     struct bounds bounds, bool exact, struct quantity *quantity);
bool reader_number(const struct reader *reader, const struct node *node, enum dimension dimension,
                   struct bounds bounds, double *value);

/* One value, a value with tolerance or a range; levels "10-90" at the end are applied when `levels`
 * is not NULL. */
struct levels {
    double low, high; /* 0..1 */
};
bool reader_span(const struct reader *reader, const struct node *node, enum dimension dimension,
                 struct bounds bounds, struct levels *levels, struct quantity *quantity,
                 struct interval *range, bool *is_range);

/* "1 ns .. 3 ns 10-90" -> "1 ns .. 3 ns" and {0.1, 0.9}; {0, 1} when no levels are written.  False:
 * the levels make no sense (a reason in `error`). */
bool reader_split_levels(const char *text, struct arena *arena, const char **rest,
                         struct levels *levels, struct error *error);

/* Follows what is said about an edge that cannot be read. */
extern const char reader_levels_hint[];

/* Index of the node's word; SIZE_MAX: refused. */
size_t reader_word(const struct reader *reader, const struct node *node, const char *const *words);

/* A copy that the study keeps; NULL when the node is NULL. */
const char *reader_text(const struct node *node);

#endif
