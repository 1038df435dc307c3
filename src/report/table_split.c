/* A table with more columns than the page is wide becomes blocks, one below the other: each holds
 * the leading columns again and its share of the others. */

#include "report/table_internal.h"

#include <math.h>
#include <string.h>

/* Which columns a block holds: the leading ones and first .. end - 1. */
struct cut {
    size_t leading, first, end;
};

static bool holds(const struct cut *cut, size_t column) {
    return column < cut->leading || (column >= cut->first && column < cut->end);
}

static size_t columns_of(const struct cut *cut) {
    return cut->leading + cut->end - cut->first;
}

/* A head over several columns stands over those of them that the block holds. */
static bool cut_head(const struct table_head_row *from, const struct cut *cut, struct arena *arena,
                     struct table_head_row *to, struct error *error) {
    struct table_head *cells = arena_new(arena, columns_of(cut), struct table_head, error);
    size_t count = 0, column = 0;
    if (cells == NULL)
        return false;
    for (size_t i = 0; i < from->count; i++) {
        size_t span = from->cells[i].span > 1 ? from->cells[i].span : 1, held = 0;
        for (size_t c = column; c < column + span; c++)
            held += holds(cut, c);
        if (held > 0)
            cells[count++] = (struct table_head){from->cells[i].text, held};
        column += span;
    }
    *to = (struct table_head_row){cells, count};
    return true;
}

static bool cut_row(const struct table *table, const struct table_row *from, const struct cut *cut,
                    struct arena *arena, struct table_row *to, struct error *error) {
    const char **cells = arena_new(arena, columns_of(cut), const char *, error);
    size_t count = 0;
    if (cells == NULL)
        return false;
    for (size_t c = 0; c < table->column_count && !from->heading; c++)
        if (holds(cut, c))
            cells[count++] = from->cells[c];
    if (from->heading)
        cells[0] = from->cells[0];
    *to = *from;
    to->cells = cells;
    return true;
}

static bool cut_out(const struct table *table, const struct cut *cut, struct arena *arena,
                    struct table *block, struct error *error) {
    struct table_column *columns = arena_new(arena, columns_of(cut), struct table_column, error);
    struct table_head_row *heads =
        arena_new(arena, table->head_count, struct table_head_row, error);
    struct table_row *rows = arena_new(arena, table->row_count, struct table_row, error);
    size_t count = 0;
    if (columns == NULL || heads == NULL || rows == NULL)
        return false;
    for (size_t c = 0; c < table->column_count; c++)
        if (holds(cut, c))
            columns[count++] = table->columns[c];
    for (size_t h = 0; h < table->head_count; h++)
        if (!cut_head(&table->heads[h], cut, arena, &heads[h], error))
            return false;
    for (size_t r = 0; r < table->row_count; r++)
        if (!cut_row(table, &table->rows[r], cut, arena, &rows[r], error))
            return false;
    *block = *table;
    block->columns = columns;
    block->column_count = count;
    block->heads = heads;
    block->rows = rows;
    block->note_count = cut->end == table->column_count ? table->note_count : 0;
    return true;
}

/* The most columns from `first` on that fit beside the leading ones; one at least. */
static size_t fill(const struct table *table, const double *least, size_t first, size_t most,
                   double width) {
    double taken = 0;
    size_t end = first;
    for (size_t c = 0; c < table->leading; c++)
        taken += least[c];
    while (end < table->column_count && end - first < most &&
           (end == first || taken + least[end] <= width))
        taken += least[end++];
    return end;
}

static size_t count_blocks(const struct table *table, const double *least, size_t most,
                           double width) {
    size_t count = 0;
    for (size_t first = table->leading; first < table->column_count; count++)
        first = fill(table, least, first, most, width);
    return count;
}

/* As few blocks as will do, and then as even as that number allows. */
static size_t even(const struct table *table, const double *least, double width) {
    size_t others = table->column_count - table->leading;
    size_t blocks = count_blocks(table, least, others, width);
    size_t most = (others + blocks - 1) / blocks;
    while (most < others && count_blocks(table, least, most, width) > blocks)
        most++;
    return most;
}

struct table *table_split(const struct table *table, double width, struct text_setter *setter,
                          struct arena *arena, size_t *count, struct error *error) {
    double *least = arena_new(arena, table->column_count, double, error);
    double all = 0;
    if (least == NULL || !table_least(table, setter, arena, least, error))
        return NULL;
    for (size_t c = 0; c < table->column_count; c++)
        all += least[c];
    bool whole = table->leading == 0 || table->column_count < table->leading + 2 || all <= width;
    size_t most = whole ? table->column_count : even(table, least, width);
    size_t blocks = whole ? 1 : count_blocks(table, least, most, width);
    struct table *made = arena_new(arena, blocks, struct table, error);
    if (made == NULL)
        return NULL;
    if (whole)
        made[0] = *table;
    for (size_t i = 0, first = table->leading; i < blocks && !whole; i++) {
        struct cut cut = {table->leading, first, fill(table, least, first, most, width)};
        if (!cut_out(table, &cut, arena, &made[i], error))
            return NULL;
        first = cut.end;
    }
    *count = blocks;
    return made;
}
