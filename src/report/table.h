#ifndef REPORT_TABLE_H
#define REPORT_TABLE_H

#include "report/text.h"

/* Tables: measured columns, wrapping cells, decimal alignment, group heads, breaking over pages
 * with repeated heads. */

enum table_align { TABLE_LEFT, TABLE_CENTRE, TABLE_RIGHT, TABLE_DECIMAL };

struct table_column {
    enum table_align align; /* TABLE_DECIMAL: at the decimal point of the cell's first number */
    double least, most;     /* pt, inner width; 0 = as measured */
};

/* One cell of a head row over `span` columns; text NULL or "" = empty. */
struct table_head {
    const char *text; /* markup */
    size_t span;      /* 0 counts as 1 */
};

struct table_head_row {
    const struct table_head *cells; /* spans add up to the columns */
    size_t count;
};

struct table_row {
    const char *const *cells; /* [column_count], markup; NULL = empty */
    bool strong;              /* bold */
    bool heading;             /* cells[0] spans the row: a group of rows; kept with the next row */
    bool rule;                /* a fine rule above */
    bool keep;                /* not parted from the next row */
    bool tinted;              /* on a tint, to single a row out */
};

struct table {
    const char *name;    /* of the scene's group */
    const char *caption; /* markup, above the heads of every part; NULL = none */
    size_t leading;      /* columns repeated in every block of table_split; 0 = never split */
    const struct table_column *columns;
    size_t column_count;
    const struct table_head_row *heads;
    size_t head_count;
    const struct table_row *rows;
    size_t row_count;
    const char *const *notes; /* markup, below the last row */
    size_t note_count;
    bool stretch; /* to the full width; else as wide as the content asks */
};

enum { TABLE_MOST_COLUMNS = 64 };

struct table_layout;

/* Measures everything for a table at most `width` pt wide.  `table` must outlive the layout; owned
 * by the arena.  Fails: ERROR_INPUT when the columns cannot be squeezed into the width;
 * ERROR_INTERNAL for a table whose spans do not add up; ERROR_MEMORY; NULL then. */
struct table_layout *table_layout(const struct table *table, double width,
                                  struct text_setter *setter, struct arena *arena,
                                  struct error *error);

/* A table whose columns do not go side by side into `width` as blocks that do, the leading columns
 * in each, as few and as even as possible; one when it fits or has no leading columns.  [count],
 * owned by the arena; shares the texts.  Fails as table_layout. */
struct table *table_split(const struct table *table, double width, struct text_setter *setter,
                          struct arena *arena, size_t *count, struct error *error);

double table_width(const struct table_layout *layout);
size_t table_rows(const struct table_layout *layout);
/* Height of rows first .. end-1 with caption and heads, and with the notes if end is the last. */
double table_height(const struct table_layout *layout, size_t first, size_t end);
/* The row after the last that fits into `height` with heads when starting at `first` (and notes
 * must fit with the last row); `first` itself when not even one row fits, or not all that is kept
 * together.  No single row is left over for the next page where two can go. */
size_t table_fit(const struct table_layout *layout, size_t first, double height);
/* The same without regard to what is kept together: for a page that cannot hold it. */
size_t table_fit_anyhow(const struct table_layout *layout, size_t first, double height);
/* The least that a page must hold of the table's start: caption, heads and two rows, or all up to a
 * place where the table may part. */
double table_start(const struct table_layout *layout);
/* Draws rows first .. end-1 with heads (and notes when end is the last) with the top left at
 * (x, y). */
bool table_draw(const struct table_layout *layout, size_t first, size_t end, struct scene *scene,
                double x, double y);

#endif
