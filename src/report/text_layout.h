#ifndef REPORT_TEXT_LAYOUT_H
#define REPORT_TEXT_LAYOUT_H

#include "report/text.h"

#include <pango/pango.h>

/* What the painters and the measuring share: a scene's text as a Pango layout.  Only text*.c and
 * paint*.c include this. */

/* The caller's to unref; NULL after a failure. */
PangoLayout *text_layout_create(struct text_setter *setter, const struct scene_text *text,
                                struct error *error);

double text_layout_leading(const struct scene_text *text);

/* Where line `index` starts, relative to (text->x, text->y), before turning. */
void text_layout_origin(PangoLayout *layout, const struct scene_text *text, int index, double *x,
                        double *y);

/* Markup taken apart: plain text (g_free) and attributes (pango_attr_list_unref). */
bool text_markup_parse(const char *markup, struct scene_style style, char **plain,
                       PangoAttrList **attributes, struct error *error);

#endif
