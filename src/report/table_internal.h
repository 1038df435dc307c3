#ifndef REPORT_TABLE_INTERNAL_H
#define REPORT_TABLE_INTERNAL_H

#include "report/table.h"
#include "report/theme.h"

/* What table.c (measuring, breaking) and table_draw.c share. */

#define TABLE_PAD_Y 2.5 /* inside a cell, above and below */

struct table_layout {
    const struct table *table;
    struct text_setter *setter;
    struct arena *arena;
    struct error *error;
    double left[TABLE_MOST_COLUMNS];  /* inner left edge, from the table's left */
    double width[TABLE_MOST_COLUMNS]; /* inner */
    double point[TABLE_MOST_COLUMNS]; /* TABLE_DECIMAL: from the inner left to the decimal point */
    double room;                      /* the width that was given */
    double pad;                       /* inside a cell, on either side */
    double total;
    double caption;       /* height */
    double *head_heights; /* [head_count] */
    double *row_heights;  /* [row_count] */
    double *note_heights; /* [note_count] */
    double heads, notes;  /* their sums; heads: with the caption */
};

struct scene_text table_head_text(const struct table_head *head);
struct scene_text table_cell_text(const struct table *table, size_t row, size_t column);
struct scene_text table_heading_text(const struct table_layout *layout, size_t row, bool again);
struct scene_text table_note_text(const char *markup);
struct scene_text table_caption_text(const struct table *table, const char *more);

/* The text set to the width; one that would fill a page is cut with an ellipsis. */
struct scene_text table_wrapped(const struct table_layout *layout, struct scene_text text,
                                double width);

/* What each column needs at the least to be read, paddings and all, pt.  [column_count] */
bool table_least(const struct table *table, struct text_setter *setter, struct arena *arena,
                 double *least, struct error *error);

/* The heading whose group the row belongs to; the row itself when it is one or has none.  A part
 * that begins within a group names it again. */
size_t table_group(const struct table_layout *layout, size_t first);

/* Inner width of `span` columns from `first` on, with the paddings between. */
double table_span(const struct table_layout *layout, size_t first, size_t span);

/* Width of the cell's text before the decimal point of its first number (or after its last digit);
 * false when it holds no number. */
bool table_before_point(const struct table_layout *layout, const struct scene_text *text,
                        double *width);

#endif
