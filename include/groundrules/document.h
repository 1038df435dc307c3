#ifndef GROUNDRULES_DOCUMENT_H
#define GROUNDRULES_DOCUMENT_H

#include "groundrules/guideline.h"

/* The finished document of a guideline: laid out as scenes, painted to PDF, every figure as SVG
 * too. */

struct document_options {
    const char *fonts; /* folder with the font configuration; NULL = the installed or source one */
    long long date; /* seconds since 1970 for the metadata: SOURCE_DATE_EPOCH or the document's own
                       date */
};

/* Files, in the order they are to be written: "guideline.pdf", "figures/board-<id>.svg",
 * "figures/<chapter>-geometry-<n>.svg", "figures/<chapter>-<n>.svg" ...
 * Bytes are owned by `arena`; written only on success.  Fails: ERROR_SYSTEM (fonts, cairo),
 * ERROR_MEMORY, ERROR_INTERNAL (a link without its destination). */
bool document_render(const struct guideline *guideline, const struct document_options *options,
                     struct arena *arena, struct guideline_file **files, size_t *count,
                     struct error *error);

#endif
