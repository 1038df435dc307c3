#include "report/table_internal.h"

#include <assert.h>
#include <math.h>

static const double RISE = 7.4; /* from a cell's inner top to its first baseline */
static const double CAPTION_RISE = 8.8;

static void draw_rule(struct scene *scene, double x, double y, double width, double thickness,
                      enum theme_ink ink) {
    scene_line(scene, x, y, x + width, y, thickness, theme_colour(ink));
}

static void draw_at(const struct table_layout *layout, struct scene *scene, struct scene_text text,
                    double x, double width, enum scene_align align, double baseline) {
    if (*text.markup == '\0')
        return;
    text.align = align;
    text.x = align == SCENE_LEFT ? x : align == SCENE_RIGHT ? x + width : x + width / 2;
    text.y = baseline;
    text = table_wrapped(layout, text, width);
    scene_text(scene, &text);
}

static enum scene_align align_of(enum table_align align) {
    return align == TABLE_LEFT ? SCENE_LEFT : align == TABLE_RIGHT ? SCENE_RIGHT : SCENE_CENTRE;
}

/* Heads stand on the bottom of their row; group heads have a rule over their columns. */
static void draw_head_row(const struct table_layout *layout, size_t row, struct scene *scene,
                          double x, double y) {
    const struct table_head_row *heads = &layout->table->heads[row];
    double bottom = y + layout->head_heights[row];
    for (size_t i = 0, column = 0; i < heads->count; i++) {
        size_t span = heads->cells[i].span > 1 ? heads->cells[i].span : 1;
        struct scene_text text = table_head_text(&heads->cells[i]);
        double width = table_span(layout, column, span);
        double left = x + layout->left[column];
        struct text_size size = {0};
        struct scene_text wrapped = table_wrapped(layout, text, width);
        if (!text_measure(layout->setter, &wrapped, &size, scene->error))
            return;
        double lines = (double)size.lines;
        double baseline = bottom - TABLE_PAD_Y - (lines - 1) * text.leading - 2.4;
        enum scene_align align =
            span > 1 ? SCENE_CENTRE : align_of(layout->table->columns[column].align);
        draw_at(layout, scene, text, left, width, align, baseline);
        if (span > 1 && *text.markup != '\0')
            draw_rule(scene, left, bottom - 0.5, width, 0.4, THEME_QUIET);
        column += span;
    }
}

static void draw_cell(const struct table_layout *layout, size_t row, size_t column,
                      struct scene *scene, double x, double y) {
    struct scene_text text = table_cell_text(layout->table, row, column);
    double left = x + layout->left[column], width = layout->width[column], before = 0;
    double baseline = y + TABLE_PAD_Y + RISE;
    enum table_align align = layout->table->columns[column].align;
    if (align == TABLE_DECIMAL && table_before_point(layout, &text, &before)) {
        text.x = left + layout->point[column] - before;
        text.y = baseline;
        scene_text(scene, &text);
        return;
    }
    draw_at(layout, scene, text, left, width, align_of(align), baseline);
}

static void draw_heading(const struct table_layout *layout, size_t row, bool again,
                         struct scene *scene, double x, double y) {
    draw_at(layout, scene, table_heading_text(layout, row, again), x + layout->pad,
            layout->total - 2 * layout->pad, SCENE_LEFT, y + TABLE_PAD_Y + RISE);
}

static void draw_row(const struct table_layout *layout, size_t row, struct scene *scene, double x,
                     double y) {
    const struct table_row *content = &layout->table->rows[row];
    if (content->tinted)
        scene_rectangle(scene, x, y, layout->total, layout->row_heights[row],
                        theme_colour(THEME_TINT));
    if (content->heading) {
        draw_heading(layout, row, false, scene, x, y);
        return;
    }
    for (size_t c = 0; c < layout->table->column_count; c++)
        draw_cell(layout, row, c, scene, x, y);
}

static void draw_notes(const struct table_layout *layout, struct scene *scene, double x, double y) {
    y += layout->notes;
    for (size_t n = 0; n < layout->table->note_count; n++)
        y -= layout->note_heights[n];
    for (size_t n = 0; n < layout->table->note_count; n++) {
        draw_at(layout, scene, table_note_text(layout->table->notes[n]), x + layout->pad,
                layout->total - 2 * layout->pad, SCENE_LEFT, y + RISE);
        y += layout->note_heights[n];
    }
}

static void draw_caption(const struct table_layout *layout, bool again, struct scene *scene,
                         double x, double y) {
    const char *more =
        !again ? NULL
               : arena_print(layout->arena, layout->error, "%s, continued", layout->table->caption);
    draw_at(layout, scene, table_caption_text(layout->table, more), x, layout->room, SCENE_LEFT,
            y + CAPTION_RISE);
}

bool table_draw(const struct table_layout *layout, size_t first, size_t end, struct scene *scene,
                double x, double y) {
    const struct table *table = layout->table;
    assert(first <= end && end <= table->row_count);
    scene_group(scene, table->name == NULL ? "table" : table->name);
    if (table->caption != NULL)
        draw_caption(layout, first > 0, scene, x, y);
    y += layout->caption;
    draw_rule(scene, x, y, layout->total, 0.8, THEME_INK);
    for (size_t h = 0; h < table->head_count; h++) {
        draw_head_row(layout, h, scene, x, y);
        y += layout->head_heights[h];
    }
    if (table->head_count > 0)
        draw_rule(scene, x, y, layout->total, 0.5, THEME_INK);
    size_t group = table_group(layout, first);
    if (group < first) {
        draw_heading(layout, group, true, scene, x, y);
        y += layout->row_heights[group];
        draw_rule(scene, x, y, layout->total, 0.35, THEME_HAIR);
    }
    for (size_t r = first; r < end; r++) {
        draw_row(layout, r, scene, x, y);
        if (r > first && table->rows[r].rule)
            draw_rule(scene, x, y, layout->total, 0.5, THEME_QUIET);
        else if (r > first)
            draw_rule(scene, x, y, layout->total, 0.35, THEME_HAIR);
        y += layout->row_heights[r];
    }
    draw_rule(scene, x, y, layout->total, 0.8, THEME_INK);
    if (end == table->row_count)
        draw_notes(layout, scene, x, y);
    return scene_end(scene) && layout->error->kind == ERROR_NONE;
}
