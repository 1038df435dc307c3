#ifndef REPORT_DRAWING_H
#define REPORT_DRAWING_H

#include "report/text.h"

#include "groundrules/sketch.h"
#include "groundrules/study.h"

/* Scale drawings: x and y at one scale, a scale bar, dimension lines with values. */

struct drawing_options {
    const char *name; /* of the scene's group */
    enum quantity_lengths lengths;
    double width;                                   /* pt */
    double most_height;                             /* pt, 0 = 240 */
    const char *(*input_symbol)(const char *input); /* markup for a dimension, NULL = the name */
};

/* What had to be done so that everything can be seen. */
struct drawing_report {
    double scale;         /* pt per m */
    bool copper_enlarged; /* copper drawn thicker than to scale; said in the drawing too */
    bool plane_enlarged;
};

/* The section of a model, or its plan.  Lateral extent: all finite copper with a margin of its own
 * size or three heights, whichever is less; infinite solids run out of the picture.  Fails:
 * ERROR_INPUT for a sketch without finite copper; ERROR_MEMORY; NULL then. */
struct scene *drawing_sketch(const struct sketch *sketch, const struct drawing_options *options,
                             struct text_setter *setter, struct arena *arena,
                             struct drawing_report *report, struct error *error);

/* A board layer by layer, to scale in height, names and thicknesses beside it. */
struct scene *drawing_stackup(const struct study_stackup *stackup,
                              const struct drawing_options *options, struct text_setter *setter,
                              struct arena *arena, struct drawing_report *report,
                              struct error *error);

#endif
