#ifndef TESTS_REPORT_STRESS_H
#define TESTS_REPORT_STRESS_H

#include "groundrules/guideline.h"

/* Guidelines that try the typesetting: an invented company with as many chapters, rules, boards and
 * classes as asked for, and names as long.  The study is read like any other; what would have been
 * computed is filled in by formula, so that no field is solved. */

struct stress {
    size_t chapters;
    size_t rules;   /* of each chapter */
    size_t boards;  /* in the study; each chapter compares the first STUDY_MOST_VARIANTS of them */
    size_t classes; /* signals; above 1 the first rule has a table of class against class */
    size_t name;    /* least length of titles and names, characters */
    size_t note;    /* of notes and reasons */
    bool letter;    /* the paper */
};

bool stress_make(const struct stress *stress, struct arena *arena, struct guideline *guideline,
                 struct error *error);

#endif
