#ifndef REPORT_DUMP_H
#define REPORT_DUMP_H

#include "groundrules/scene.h"

/* A scene as text for goldens: one item a line, groups indented, coordinates rounded to 0.1 pt,
 * colours as #rrggbb (with /alpha when not opaque), markup quoted.  Owned by the arena; NULL after
 * a failure. */
char *dump_scene(const struct scene *scene, struct arena *arena, struct error *error);

#endif
