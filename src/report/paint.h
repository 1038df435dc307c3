#ifndef REPORT_PAINT_H
#define REPORT_PAINT_H

#include "report/text.h"

#include <stdint.h>

/* The one painter: scenes to PDF, SVG and PNG, all into memory owned by the arena.  Bytes depend on
 * the arguments only.  Failures are kept by this code and reported with the page's number;
 * `bytes` is written only on success. */

struct paint_bytes {
    const unsigned char *bytes;
    size_t length;
};

/* One line of the outline (bookmarks). */
struct paint_entry {
    const char *title;       /* plain text */
    const char *destination; /* must exist on a page */
    unsigned level;          /* 0 = top; at most one deeper than the entry before */
};

struct paint_document {
    const char *title, *author, *subject, *keywords; /* plain text, NULL = none */
    const char *created; /* "2026-03-01" or "2026-03-01T12:00:00Z"; see paint_created */
    const struct scene *const *pages;
    size_t page_count;
    const struct paint_entry *outline;
    size_t outline_count;
};

/* Destination names: letters, digits, and . _ - : /.  Fails: ERROR_INTERNAL for a link or outline
 * entry whose destination does not exist, for two destinations of one name, for unbalanced groups
 * or clips, for a scene that has failed or holds a number that is not finite; ERROR_INPUT for a
 * page larger than 200 inches; ERROR_MEMORY. */
bool paint_pdf(struct text_setter *setter, const struct paint_document *document,
               struct arena *arena, struct paint_bytes *bytes, struct error *error);

/* A figure as SVG 1.1: glyphs as outlines (the same look everywhere, no font needed) under a
 * transparent <text> of the same width for searching, copying and reading aloud; identifiers count
 * from 1 within the file.  Links become nothing.  `title` goes into <title>. */
bool paint_svg(struct text_setter *setter, const struct scene *scene, const char *title,
               struct arena *arena, struct paint_bytes *bytes, struct error *error);

/* On white, `scale` pixels per pt; at most 20000 pixels a side. */
bool paint_png(struct text_setter *setter, const struct scene *scene, double scale,
               struct arena *arena, struct paint_bytes *bytes, struct error *error);

/* The date to print into the metadata: SOURCE_DATE_EPOCH (seconds since 1970) if that is set, else
 * `date` ("2026-03-01").  Fails: ERROR_INPUT when the one used is no date. */
bool paint_created(const char *date, char created[24], struct error *error);

#endif
