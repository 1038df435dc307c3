#ifndef REPORT_FLOW_H
#define REPORT_FLOW_H

#include "report/paint.h"
#include "report/table.h"
#include "report/text.h"
#include "report/theme.h"

#include "groundrules/guideline.h"

/* The document as it grows: pages one after the other, a cursor that moves down, headings that
 * become contents and outline.  The first failure sticks in `error`; later calls do nothing, so
 * layout reads as prose. */

enum { FLOW_MOST_PAGES = 2000, FLOW_MOST_ENTRIES = 4000, FLOW_MOST_FIGURES = 1000 };

struct flow_entry {
    const char *title; /* plain text */
    const char *destination;
    unsigned level;
    size_t page; /* index */
};

/* A drawing or chart that is written as SVG too. */
struct flow_figure {
    const char *name;  /* "spacing-1" */
    const char *title; /* markup */
    const struct scene *scene;
};

struct flow {
    const struct guideline *guideline;
    struct text_setter *setter;
    struct arena *arena;
    struct error *error;
    struct theme_page page;
    struct scene **pages;
    size_t page_count;
    struct scene *scene; /* the current page; NULL before the first */
    double y;            /* pt, top of what comes next */
    struct flow_entry *entries;
    size_t entry_count;
    struct flow_figure *figures;
    size_t figure_count;
    const char *running; /* what the running head says; NULL = none on this page */
    const char **heads;  /* [page] */
    bool products_set;   /* the cover had room for the products */
};

bool flow_start(struct flow *flow, const struct guideline *guideline, struct text_setter *setter,
                struct arena *arena, struct error *error);
bool flow_failed(const struct flow *flow);

/* A new page with the cursor at its top.  `running`: its head, NULL = none (cover). */
void flow_new_page(struct flow *flow, const char *running);
double flow_room(const struct flow *flow);
/* A new page when less than `height` is left. */
void flow_need(struct flow *flow, double height);
void flow_gap(struct flow *flow, double height);

/* Text over the columns first .. first + span - 1; breaks over pages only between calls. */
void flow_text_at(struct flow *flow, enum theme_text style, const char *markup, size_t first,
                  size_t span);
void flow_text(struct flow *flow, enum theme_text style, const char *markup);
double flow_text_height(struct flow *flow, enum theme_text style, const char *markup, double width);
/* Draws text with its top at (x, y) of the current page; the cursor stays.  Returns its height. */
double flow_text_box(struct flow *flow, enum theme_text style, const char *markup, double x,
                     double y, double width);

/* Level 0: a chapter (new page); 1: a section.  `keep`: room that must follow on the same page. */
void flow_heading(struct flow *flow, unsigned level, const char *title, const char *destination,
                  double keep);
/* `scene` is placed by the caller; `name` is unique within the document. */
void flow_figure(struct flow *flow, const char *name, const char *title, const struct scene *scene);
/* Into the outline without a heading of its own (rule cards). */
void flow_entry(struct flow *flow, unsigned level, const char *title, const char *destination);

/* A scene with its left edge at x, at the cursor. */
void flow_place(struct flow *flow, const struct scene *scene, double x);
/* A table over the full width, broken over pages; one that is too wide becomes several. */
void flow_table(struct flow *flow, const struct table *table);
/* What must stay together with the heading above a table. */
double flow_table_start(struct flow *flow, const struct table *table);

/* printf into the flow's arena; "" after a failure. */
const char *flow_print(struct flow *flow, const char *format, ...)
    __attribute__((format(printf, 2, 3)));
/* `markup` cut with an ellipsis to what takes `lines` lines of `width`. */
const char *flow_shorten(struct flow *flow, enum theme_text style, const char *markup, double width,
                         size_t lines);
/* Markup-safe copy of an author's text; "" for NULL. */
const char *flow_escape(struct flow *flow, const char *plain);

#endif
