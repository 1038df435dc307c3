#ifndef CLI_POINT_H
#define CLI_POINT_H

#include "groundrules/model.h"

/* A point asked for on the command line: "name=value" words for one model. */
struct point {
    const struct model *model;
    double inputs[MODEL_MOST_INPUTS]; /* resolved, SI */
    const char *stackup;              /* of stackup=ID, NULL if none */
    size_t wrong; /* how many words were refused; each has been told on standard error */
};

/* Reads every word and tells all that is wrong, one line each.  Inputs not given stay NAN. */
void point_read(struct point *point, const char *const *words, size_t count);

#endif
