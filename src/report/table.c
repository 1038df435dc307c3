#include "report/table_internal.h"

#include <assert.h>
#include <ctype.h>
#include <math.h>
#include <string.h>

static const double NOTES_GAP = 4, CAPTION_GAP = 2;
static const double PAD = 5, NARROW_PAD = 3; /* the second where many columns share the width */
enum { MANY_COLUMNS = 8 };
static const double LONGEST_WORD = 84;     /* pt; what is longer may be parted anywhere */
enum { HEAD_LINES = 12, CELL_LINES = 32 }; /* more would not leave a page room for a row */
static const double MOST_HEAD = 90;        /* pt that a head asks for; it takes more lines then */
static const double READABLE = 60;         /* pt that running text gets where the page has them */

/* ---- texts ---- */

struct scene_text table_head_text(const struct table_head *head) {
    return (struct scene_text){.markup = head->text == NULL ? "" : head->text,
                               .style = theme_style(THEME_HEAD),
                               .leading = theme_leading(THEME_HEAD)};
}

struct scene_text table_cell_text(const struct table *table, size_t row, size_t column) {
    const struct table_row *content = &table->rows[row];
    const char *markup = content->cells[column];
    struct scene_text text = {.markup = markup == NULL ? "" : markup,
                              .style = theme_style(THEME_TABLE),
                              .leading = theme_leading(THEME_TABLE)};
    if (content->strong || content->heading)
        text.style.weight = SCENE_BOLD;
    return text;
}

struct scene_text table_caption_text(const struct table *table, const char *more) {
    return (struct scene_text){.markup = more != NULL ? more : table->caption,
                               .style = theme_style(THEME_STRONG),
                               .leading = theme_leading(THEME_STRONG)};
}

struct scene_text table_heading_text(const struct table_layout *layout, size_t row, bool again) {
    struct scene_text text = table_cell_text(layout->table, row, 0);
    char *more =
        again ? arena_print(layout->arena, layout->error, "%s, continued", text.markup) : NULL;
    if (more != NULL)
        text.markup = more;
    return text;
}

struct scene_text table_note_text(const char *markup) {
    return (struct scene_text){
        .markup = markup, .style = theme_style(THEME_NOTE), .leading = theme_leading(THEME_NOTE)};
}

double table_span(const struct table_layout *layout, size_t first, size_t span) {
    double width = 2 * layout->pad * (double)(span - 1);
    for (size_t i = first; i < first + span; i++)
        width += layout->width[i];
    return width;
}

/* The markup up to the point with the tags closed that are open there. */
static char *prefix(struct arena *arena, const char *markup, size_t length, struct error *error) {
    const char *open[8];
    size_t depth = 0;
    for (const char *at = markup; at < markup + length; at++) {
        if (*at != '<')
            continue;
        if (at[1] == '/')
            depth -= depth > 0;
        else if (depth < sizeof open / sizeof open[0])
            open[depth++] = at + 1;
    }
    char *made = arena_copy_length(arena, markup, length, error);
    while (made != NULL && depth-- > 0) {
        int name = (int)strcspn(open[depth], ">");
        made = arena_print(arena, error, "%s</%.*s>", made, name, open[depth]);
    }
    return made;
}

bool table_before_point(const struct table_layout *layout, const struct scene_text *text,
                        double *width) {
    const char *at = text->markup;
    bool in_tag = false;
    while (*at != '\0' && (in_tag || !isdigit((unsigned char)*at))) {
        if (*at == '<' || *at == '>')
            in_tag = *at == '<';
        at++;
    }
    if (*at == '\0')
        return false;
    while (isdigit((unsigned char)*at))
        at++;
    char *before = prefix(layout->arena, text->markup, (size_t)(at - text->markup), layout->error);
    if (before == NULL)
        return false;
    *width = text_width(layout->setter, before, text->style, layout->error);
    return true;
}

/* ---- widths ---- */

/* What a column needs: with its head in one line, unbroken otherwise, to be read with ease, and at
 * the least (its longest word). */
struct need {
    double wide, natural, decent, least;
    double before, after; /* the decimal point */
};

static double longest_word(struct table_layout *layout, const struct scene_text *text) {
    char *plain = text_plain(layout->arena, text->markup, layout->error);
    double longest = 0;
    for (char *save = NULL, *word = plain == NULL ? NULL : strtok_r(plain, " \n", &save);
         word != NULL; word = strtok_r(NULL, " \n", &save)) {
        char *markup = text_escape(layout->arena, word, layout->error);
        if (markup == NULL)
            return 0;
        longest = fmax(longest, text_width(layout->setter, markup, text->style, layout->error));
    }
    return longest;
}

static void need_text(struct table_layout *layout, const struct scene_text *text, bool breakable,
                      struct need *need) {
    double width = text_width(layout->setter, text->markup, text->style, layout->error);
    double word = breakable ? longest_word(layout, text) : width;
    need->natural = fmax(need->natural, width);
    need->least = fmax(need->least, breakable ? fmin(word, LONGEST_WORD) : width);
}

/* A head may take several lines: it must not widen its column much. */
static void need_head(struct table_layout *layout, const struct scene_text *text,
                      struct need *need) {
    struct need own = {0};
    need_text(layout, text, true, &own);
    need->wide = fmax(need->wide, own.natural);
    need->natural = fmax(need->natural, fmin(own.natural, fmax(own.least, MOST_HEAD)));
    need->least = fmax(need->least, own.least);
}

static void need_prose(struct table_layout *layout, const struct scene_text *text,
                       struct need *need) {
    double width = text_width(layout->setter, text->markup, text->style, layout->error);
    need_text(layout, text, true, need);
    need->decent = fmax(need->decent, fmin(READABLE, width));
}

static void need_decimal(struct table_layout *layout, const struct scene_text *text,
                         struct need *need) {
    double before = 0;
    double width = text_width(layout->setter, text->markup, text->style, layout->error);
    if (table_before_point(layout, text, &before)) {
        need->before = fmax(need->before, before);
        need->after = fmax(need->after, width - before);
    } else {
        need->natural = fmax(need->natural, width);
        need->least = fmax(need->least, width);
    }
}

static void measure_columns(struct table_layout *layout, struct need *needs) {
    const struct table *table = layout->table;
    for (size_t h = 0; h < table->head_count; h++)
        for (size_t i = 0, column = 0; i < table->heads[h].count; i++) {
            const struct table_head *head = &table->heads[h].cells[i];
            struct scene_text text = table_head_text(head);
            if (head->span <= 1)
                need_head(layout, &text, &needs[column]);
            column += head->span > 1 ? head->span : 1;
        }
    for (size_t r = 0; r < table->row_count; r++)
        for (size_t c = 0; c < table->column_count && !table->rows[r].heading; c++) {
            struct scene_text text = table_cell_text(table, r, c);
            if (table->columns[c].align == TABLE_DECIMAL)
                need_decimal(layout, &text, &needs[c]);
            else if (table->columns[c].align == TABLE_LEFT)
                need_prose(layout, &text, &needs[c]);
            else
                need_text(layout, &text, table->columns[c].align == TABLE_CENTRE, &needs[c]);
        }
    for (size_t c = 0; c < table->column_count; c++) {
        const struct table_column *column = &table->columns[c];
        double number = needs[c].before + needs[c].after;
        needs[c].natural = fmax(fmax(needs[c].natural, number), column->least);
        needs[c].least = fmax(fmax(needs[c].least, number), column->least);
        needs[c].decent = fmax(needs[c].decent, needs[c].least);
        if (column->most > 0)
            needs[c].natural = fmax(needs[c].decent, fmin(needs[c].natural, column->most));
        needs[c].natural = fmax(needs[c].natural, needs[c].decent);
    }
}

/* A head over several columns may need more than they do. */
static void widen_for_spans(struct table_layout *layout, struct need *needs) {
    const struct table *table = layout->table;
    for (size_t h = 0; h < table->head_count; h++)
        for (size_t i = 0, column = 0; i < table->heads[h].count; i++) {
            const struct table_head *head = &table->heads[h].cells[i];
            size_t span = head->span > 1 ? head->span : 1;
            struct scene_text text = table_head_text(head);
            struct need need = {0};
            double natural = 2 * layout->pad * (double)(span - 1), least = natural,
                   decent = natural;
            for (size_t c = column; c < column + span; c++) {
                natural += needs[c].natural;
                decent += needs[c].decent;
                least += needs[c].least;
            }
            if (span > 1)
                need_text(layout, &text, true, &need);
            for (size_t c = column; c < column + span && span > 1; c++) {
                needs[c].natural += fmax(0, need.natural - natural) / (double)span;
                needs[c].least += fmax(0, need.least - least) / (double)span;
                needs[c].decent += fmax(0, need.least - decent) / (double)span;
                needs[c].natural = fmax(needs[c].natural, needs[c].decent);
            }
            column += span;
        }
}

static void stretch(struct table_layout *layout, double room) {
    const struct table *table = layout->table;
    size_t takers = 0;
    for (size_t c = 0; c < table->column_count; c++)
        takers += table->columns[c].align == TABLE_LEFT;
    for (size_t c = 0; c < table->column_count; c++)
        if (takers == 0 || table->columns[c].align == TABLE_LEFT)
            layout->width[c] += room / (double)(takers == 0 ? table->column_count : takers);
}

/* What reads well is the least where the page has the room. */
static void prefer_decent(struct need *needs, size_t count, double inner) {
    double decent = 0;
    for (size_t c = 0; c < count; c++)
        decent += needs[c].decent;
    for (size_t c = 0; c < count && decent <= inner; c++)
        needs[c].least = needs[c].decent;
}

/* Room that is left goes to the heads that are broken for want of it.  Returns what they took. */
static double widen_for_heads(struct table_layout *layout, const struct need *needs, double room) {
    double wish = 0, taken = 0;
    for (size_t c = 0; c < layout->table->column_count; c++)
        wish += fmax(0, needs[c].wide - needs[c].natural);
    for (size_t c = 0; c < layout->table->column_count && wish > 0; c++) {
        double more = fmax(0, needs[c].wide - needs[c].natural) * fmin(1, room / wish);
        layout->width[c] += more;
        taken += more;
    }
    return taken;
}

static bool fit_columns(struct table_layout *layout, struct need *needs, double width) {
    const struct table *table = layout->table;
    double natural = 0, least = 0;
    double inner = width - 2 * layout->pad * (double)table->column_count;
    prefer_decent(needs, table->column_count, inner);
    for (size_t c = 0; c < table->column_count; c++) {
        natural += needs[c].natural;
        least += needs[c].least;
    }
    if (least > inner + 0.01)
        return error_set(layout->error, ERROR_INPUT,
                         "the table needs at least %.0f pt, there are %.0f", least + width - inner,
                         width);
    double share = natural > inner ? (inner - least) / fmax(natural - least, 1e-9) : 1;
    for (size_t c = 0; c < table->column_count; c++)
        layout->width[c] = needs[c].least + share * (needs[c].natural - needs[c].least);
    if (natural < inner)
        natural += widen_for_heads(layout, needs, inner - natural);
    if (table->stretch && natural < inner)
        stretch(layout, inner - natural);
    double x = 0;
    for (size_t c = 0; c < table->column_count; c++) {
        layout->left[c] = x + layout->pad;
        x += layout->width[c] + 2 * layout->pad;
        layout->point[c] =
            (layout->width[c] - needs[c].before - needs[c].after) / 2 + needs[c].before;
    }
    layout->total = x;
    return true;
}

/* ---- heights ---- */

struct scene_text table_wrapped(const struct table_layout *layout, struct scene_text text,
                                double width) {
    bool head = text.style.weight != SCENE_REGULAR;
    /* A hair of room keeps a text of exactly the column's width on its line. */
    text.width = width + 0.05;
    text.markup = text_shorten(layout->setter, &text, head ? HEAD_LINES : CELL_LINES, layout->arena,
                               layout->error);
    return text;
}

static double height_of(struct table_layout *layout, struct scene_text text, double width) {
    struct text_size size = {0};
    text = table_wrapped(layout, text, width);
    if (!text_measure(layout->setter, &text, &size, layout->error))
        return 0;
    return (double)size.lines * text.leading;
}

static double row_height(struct table_layout *layout, size_t row) {
    const struct table *table = layout->table;
    double most = theme_leading(THEME_TABLE);
    if (table->rows[row].heading) /* with the room that it needs where its group goes on */
        return 2 * TABLE_PAD_Y + height_of(layout, table_heading_text(layout, row, true),
                                           layout->total - 2 * layout->pad);
    for (size_t c = 0; c < table->column_count; c++)
        most = fmax(most, height_of(layout, table_cell_text(table, row, c), layout->width[c]));
    return most + 2 * TABLE_PAD_Y;
}

static double head_height(struct table_layout *layout, size_t row) {
    const struct table_head_row *heads = &layout->table->heads[row];
    double most = theme_leading(THEME_HEAD);
    for (size_t i = 0, column = 0; i < heads->count; i++) {
        size_t span = heads->cells[i].span > 1 ? heads->cells[i].span : 1;
        most = fmax(most, height_of(layout, table_head_text(&heads->cells[i]),
                                    table_span(layout, column, span)));
        column += span;
    }
    return most + 2 * TABLE_PAD_Y;
}

static bool measure_heights(struct table_layout *layout) {
    const struct table *table = layout->table;
    layout->head_heights = arena_new(layout->arena, table->head_count, double, layout->error);
    layout->row_heights = arena_new(layout->arena, table->row_count, double, layout->error);
    layout->note_heights = arena_new(layout->arena, table->note_count, double, layout->error);
    if (layout->error->kind != ERROR_NONE)
        return false;
    if (table->caption != NULL) { /* with the room that it needs where the table goes on */
        const char *longest =
            arena_print(layout->arena, layout->error, "%s, continued", table->caption);
        if (longest != NULL)
            layout->caption =
                CAPTION_GAP + height_of(layout, table_caption_text(table, longest), layout->room);
    }
    layout->heads = layout->caption;
    for (size_t h = 0; h < table->head_count; h++)
        layout->heads += layout->head_heights[h] = head_height(layout, h);
    for (size_t r = 0; r < table->row_count; r++)
        layout->row_heights[r] = row_height(layout, r);
    for (size_t n = 0; n < table->note_count; n++)
        layout->notes += layout->note_heights[n] =
            height_of(layout, table_note_text(table->notes[n]), layout->total - 2 * layout->pad);
    if (table->note_count > 0)
        layout->notes += NOTES_GAP;
    return layout->error->kind == ERROR_NONE;
}

static bool check_spans(const struct table *table, struct error *error) {
    if (table->column_count == 0 || table->column_count > TABLE_MOST_COLUMNS)
        return error_set(error, ERROR_INTERNAL, "a table of %zu columns", table->column_count);
    for (size_t h = 0; h < table->head_count; h++) {
        size_t columns = 0;
        for (size_t i = 0; i < table->heads[h].count; i++)
            columns += table->heads[h].cells[i].span > 1 ? table->heads[h].cells[i].span : 1;
        if (columns != table->column_count)
            return error_set(error, ERROR_INTERNAL,
                             "head row %zu spans %zu columns of a table of %zu", h, columns,
                             table->column_count);
    }
    return true;
}

static double pad_of(const struct table *table) {
    return table->column_count > MANY_COLUMNS ? NARROW_PAD : PAD;
}

bool table_least(const struct table *table, struct text_setter *setter, struct arena *arena,
                 double *least, struct error *error) {
    struct need needs[TABLE_MOST_COLUMNS] = {0};
    struct table_layout layout = {
        .table = table, .setter = setter, .arena = arena, .error = error, .pad = pad_of(table)};
    if (!check_spans(table, error))
        return false;
    measure_columns(&layout, needs);
    for (size_t c = 0; c < table->column_count; c++)
        least[c] = needs[c].decent + 2 * layout.pad;
    return error->kind == ERROR_NONE;
}

struct table_layout *table_layout(const struct table *table, double width,
                                  struct text_setter *setter, struct arena *arena,
                                  struct error *error) {
    struct need needs[TABLE_MOST_COLUMNS] = {0};
    struct error *kept = arena_new(arena, 1, struct error, error);
    struct table_layout *layout =
        kept == NULL ? NULL : arena_new(arena, 1, struct table_layout, error);
    if (layout == NULL)
        return NULL;
    *layout = (struct table_layout){.table = table,
                                    .setter = setter,
                                    .arena = arena,
                                    .error = kept,
                                    .pad = pad_of(table),
                                    .room = width};
    if (check_spans(table, kept)) {
        measure_columns(layout, needs);
        widen_for_spans(layout, needs);
        if (kept->kind == ERROR_NONE && fit_columns(layout, needs, width))
            measure_heights(layout);
    }
    if (kept->kind == ERROR_NONE)
        return layout;
    error_set(error, kept->kind, "%s", kept->message);
    error_in(error, "table %s", table->name == NULL ? "" : table->name);
    return NULL;
}

/* ---- breaking ---- */

double table_width(const struct table_layout *layout) {
    return layout->total;
}

size_t table_group(const struct table_layout *layout, size_t first) {
    const struct table_row *rows = layout->table->rows;
    for (size_t r = first + 1; r-- > 0;)
        if (r < layout->table->row_count && rows[r].heading)
            return r;
    return first;
}

size_t table_rows(const struct table_layout *layout) {
    return layout->table->row_count;
}

double table_height(const struct table_layout *layout, size_t first, size_t end) {
    assert(first <= end && end <= layout->table->row_count);
    size_t group = table_group(layout, first);
    double height = layout->heads + (group < first ? layout->row_heights[group] : 0);
    for (size_t r = first; r < end; r++)
        height += layout->row_heights[r];
    return height + (end == layout->table->row_count ? layout->notes : 0);
}

static bool keeps(const struct table_layout *layout, size_t row) {
    return layout->table->rows[row].heading || layout->table->rows[row].keep;
}

static bool may_part(const struct table_layout *layout, size_t end) {
    return end == layout->table->row_count || !keeps(layout, end - 1);
}

size_t table_fit_anyhow(const struct table_layout *layout, size_t first, double height) {
    size_t end = layout->table->row_count;
    while (end > first && table_height(layout, first, end) > height + 0.01)
        end--;
    return end;
}

size_t table_fit(const struct table_layout *layout, size_t first, double height) {
    size_t rows = layout->table->row_count, end = table_fit_anyhow(layout, first, height);
    bool lonely = end + 1 == rows && end > first + 2;
    if (lonely)
        end--;
    while (end > first && !may_part(layout, end))
        end--;
    return end;
}

double table_start(const struct table_layout *layout) {
    size_t rows = layout->table->row_count, end = rows < 2 ? rows : 2;
    while (end < rows && !may_part(layout, end))
        end++;
    return table_height(layout, 0, end);
}
