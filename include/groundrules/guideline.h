#ifndef GROUNDRULES_GUIDELINE_H
#define GROUNDRULES_GUIDELINE_H

#include "groundrules/study.h"

/* What was computed for a study: curves, rules with their proofs, tables.  The report draws it, the
 * exports write it; neither computes physics.  All owned by the arena given to guideline_compute.
 */

#define GUIDELINE_SMALL_SHARE 0.01

/* One output of one variant along the chapter's sweep.  Where the variant has ranges (edges,
 * drivers, receiver at either end) y is the worst over them, found as a rule finds it. */
struct guideline_curve {
    size_t variant;
    size_t output;
    const double *y;   /* [points], nominal board; NAN where the model has no answer */
    const double *low; /* [points], over the tolerance corners; equal to y without tolerance */
    const double *high;
    const unsigned *flags; /* [points], the model's validity flags */
    double error;          /* largest estimated error along the curve, relative to the value or to
                              GUIDELINE_SMALL_SHARE of the curve's largest, whichever is more */
};

enum guideline_status {
    GUIDELINE_FOUND,
    GUIDELINE_MET_EVERYWHERE, /* the condition holds over the whole range searched */
    GUIDELINE_CANNOT_BE_MET,  /* nowhere in the range searched */
    GUIDELINE_BELOW_FAB,      /* only by what the fab cannot make */
};

/* What would meet a condition that cannot be met. */
enum guideline_remedy_kind {
    GUIDELINE_OTHER_VALUE, /* of `input`, the found one at its permitted end */
    GUIDELINE_TIED_COPPER, /* a strip of `strip_width` between, tied everywhere */
    GUIDELINE_OTHER_BOARD,
};
struct guideline_remedy {
    enum guideline_remedy_kind kind;
    size_t input;  /* what `value` is of: the found one with copper or another board */
    bool at_least; /* else at most */
    double value, grid;
    double strip_width;                  /* m */
    const struct study_stackup *stackup; /* of GUIDELINE_OTHER_BOARD */
};
enum { GUIDELINE_MOST_REMEDIES = 8 };

/* A rule's answer for one variant (or one cell of its table). */
struct guideline_finding {
    enum guideline_status status;
    long multiple; /* of the rule's grid; FOUND and MET_EVERYWHERE */
    double value;  /* multiple * grid, SI: the bound that the rule states */
    double limit; /* what the output was held against (budget in V; the reference's own value at the
                     worst case) */
    double worst; /* the output at the worst case permitted by the rule */
    double worst_inputs[MODEL_MOST_INPUTS]; /* where that was */
    double margin;    /* (limit - worst)/limit for at_most: >= 0 when the rule holds */
    double error;     /* estimated relative error of `worst` */
    size_t solutions; /* cases solved for this proof */
    double nearest;   /* the output one grid step beyond the bound: what the rule keeps away; NAN if
                         none */
    double fab_smallest; /* the fab's smallest of this input, 0 = not stated */
    struct guideline_remedy remedies[GUIDELINE_MOST_REMEDIES]; /* of CANNOT_BE_MET; not of cells */
    size_t remedy_count;
    unsigned flags;
};

struct guideline_rule {
    const struct study_rule *rule;
    const struct guideline_finding *findings; /* [rule->variant_count] */
    /* The table, if the rule has one: cells[(variant * rows + row) * columns + column]. */
    const struct guideline_finding *cells;
};

struct guideline_chapter {
    const struct study_chapter *chapter;
    const struct guideline_curve
        *curves; /* for every output drawn in any chart: [variant][distinct output] */
    size_t curve_count;
    const struct guideline_rule *rules; /* [chapter->rule_count] */
};

/* The chapter's curve of one variant and output; NULL when no chart draws it. */
const struct guideline_curve *guideline_find_curve(const struct guideline_chapter *chapter,
                                                   size_t variant, size_t output);

/* A change against the previous issue of the rules. */
enum guideline_change_kind {
    GUIDELINE_NEW,
    GUIDELINE_GONE,
    GUIDELINE_STRICTER,
    GUIDELINE_LOOSER,
    GUIDELINE_SAME
};
struct guideline_change {
    enum guideline_change_kind kind;
    const char *rule_id, *variant;
    double before, after; /* SI; NAN where there is none */
    enum dimension dimension;
    const char *why; /* which inputs changed: "height 1.51 mm -> 1.40 mm" */
};

struct guideline {
    const struct study *study;
    const struct guideline_chapter *chapters; /* [study->chapter_count] */
    char fingerprint[65]; /* SHA-256 over the sorted resolved inputs and method revisions,
                             hexadecimal */
    size_t cases_asked, cases_solved;
    size_t fields_asked, fields_solved;
    const struct guideline_change *changes;
    size_t change_count;
    const char *previous_revision; /* NULL when the study names no earlier issue */
};

/* Called from one thread at a time with 0 <= done <= total; may be NULL. */
typedef void guideline_progress(void *context, const char *what, size_t done, size_t total);

struct guideline_options {
    int jobs; /* threads; 0 = all cores.  The result does not depend on it. */
    guideline_progress *progress;
    void *context;
};

bool guideline_compute(const struct study *study, const struct guideline_options *options,
                       struct arena *arena, struct guideline *guideline, struct error *error);

/* One named output held in memory until everything is complete. */
struct guideline_file {
    const char *name; /* "rules.csv", "figures/spacing-1.svg" */
    const unsigned char *bytes;
    size_t length;
};

/* rules.csv, one CSV a curve set (curves/<chapter>-<n>.csv); texts owned by the arena. */
bool guideline_export(const struct guideline *guideline, struct arena *arena,
                      struct guideline_file **files, size_t *count, struct error *error);

/* rules.json, the manifest: format, models and revisions, resolved inputs, findings with proof, and
 * the SHA-256 of each of the other files. */
bool guideline_manifest(const struct guideline *guideline, const struct guideline_file *files,
                        size_t count, struct arena *arena, struct guideline_file *manifest,
                        struct error *error);

#endif
