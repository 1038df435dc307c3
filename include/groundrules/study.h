#ifndef GROUNDRULES_STUDY_H
#define GROUNDRULES_STUDY_H

#include "groundrules/model.h"

/* A study that has been read, checked and resolved: what the rest of the program works on.
 * Everything is owned by the arena given to study_read.  The file's syntax is described in
 * docs/study.md. */

/* ---- what is wrong with a study ---- */

struct study_problem {
    unsigned line;       /* from 1 */
    unsigned column;     /* from 1, in characters, not bytes */
    const char *path;    /* "chapters[1].given.width"; "" for the file itself */
    const char *message; /* what was found, what is allowed, the nearest valid name */
};

struct study_problems {
    struct study_problem *items; /* in the order of the file */
    size_t count;
    size_t left_out; /* beyond STUDY_MOST_PROBLEMS */
};

enum {
    STUDY_MOST_BYTES = 4 << 20,
    STUDY_MOST_DEPTH = 64,
    STUDY_MOST_PROBLEMS = 200,
    STUDY_MOST_POINTS = 1000,  /* of one sweep */
    STUDY_MOST_CASES = 200000, /* points x variants of one chapter */
    STUDY_MOST_VARIANTS = 12,
    STUDY_MOST_RULES = 1000,
};

/* ---- the document ---- */

enum study_page { STUDY_A4, STUDY_LETTER };

struct study_document {
    const char *number, *title, *subtitle, *revision, *status, *date, *owner, *organisation;
    const char *const *reviewers;
    size_t reviewer_count;
    enum study_page page;
    enum quantity_lengths lengths;
};

/* ---- boards ---- */

enum study_layer_kind { STUDY_LAYER_COPPER, STUDY_LAYER_DIELECTRIC };

struct study_layer {
    enum study_layer_kind kind;
    const char *name;          /* may be NULL */
    struct quantity thickness; /* m */
    struct quantity dk;        /* of a dielectric */
    double df;                 /* of a dielectric, 0 = not stated */
    double material_frequency; /* Hz, at which dk and df hold */
    bool plane;                /* of copper: a ground plane, else a signal layer */
};

/* The fab's sheet, top to bottom; what the models use of it is the top signal layer over the next
 * plane, and the coating over it. */
struct study_stackup {
    const char *id, *name, *fab; /* fab may be NULL */
    const struct study_layer *layers;
    size_t layer_count;
    struct quantity height;    /* foot of a top-side trace to the top of the next plane */
    struct quantity thickness; /* finished copper of the top layer */
    struct quantity dk;
    struct quantity mask, mask_dk; /* solder mask over the outer copper; 0 = bare */
    struct quantity etch;          /* what the top of a trace is narrower, per side */
    double df, material_frequency; /* of the dielectric under the trace */
    double smallest_width, smallest_gap, smallest_drill; /* m; 0 = not stated */
    unsigned line, column;
};

/* ---- signals ---- */

enum study_receiver { STUDY_RECEIVER_FAR, STUDY_RECEIVER_NEAR, STUDY_RECEIVER_EITHER };

struct study_signal {
    const char *id, *name, *note; /* note may be NULL */
    double swing;                 /* V */
    struct interval edge;         /* s, 0 to 100 %, converted */
    const char *edge_text;        /* as written, "1.2 ns .. 3 ns 10-90" */
    double edge_low, edge_high;   /* levels as written: 0.1, 0.9 */
    struct interval source;       /* ohm */
    double load;                  /* ohm, INFINITY = open */
    double load_capacitance;      /* F */
    double bit_time;              /* s, least time between two edges; 0 = a single edge */
    size_t aggressors;            /* index among the words 1, 2, 4 */
    bool independent;             /* they switch each on its own */
    bool is_victim;               /* has a noise budget */
    double noise_margin;          /* V */
    double share;                 /* of it for crosstalk, 0..1 */
    enum study_receiver receiver;
    double settling; /* s, from the aggressor's last edge to the sampling; 0 = edge-sensitive */
};

struct study_product {
    const char *id, *name, *stackup, *note; /* stackup: id */
};

struct study_earlier;

/* ---- a chapter: a question ---- */

enum study_origin {
    STUDY_STANDARD, /* the model's default */
    STUDY_GIVEN,
    STUDY_VARIED, /* the chapter's sweep; the value here is its first point */
    STUDY_COMPARED,
    STUDY_FROM_STACKUP,
    STUDY_FROM_SIGNAL,
};

/* One input of one variant. */
struct study_setting {
    double value; /* nominal; the middle of a range (geometric for log-like inputs) */
    struct interval
        range;          /* what the statement must hold over; {value, value} if it is one value */
    double minus, plus; /* tolerance around value, from the fab's sheet or as given; 0 = none */
    enum study_origin origin;
};

/* One combination of what is set side by side: one curve, one column. */
struct study_variant {
    const char *label;                    /* "Two layers, 1.6 mm", "tied" */
    const struct study_stackup *stackup;  /* NULL if the chapter has none */
    const struct study_signal *aggressor; /* NULL if none */
    const struct study_signal *victim;
    struct study_setting settings[MODEL_MOST_INPUTS]; /* [model->input_count] */
};

struct study_vary {
    size_t input;
    const double *points; /* ascending, SI */
    size_t point_count;
    bool logarithmic;
};

struct study_chart {
    const size_t *outputs; /* drawn in one chart; all of one dimension */
    size_t output_count;
    const char *title;  /* NULL = made from the outputs */
    bool x_logarithmic; /* standard: as the sweep */
    bool y_logarithmic; /* standard: false */
};

struct study_limit {
    size_t output;
    double value;
    const char *label; /* may be NULL */
};

enum study_strength { STUDY_MUST, STUDY_SHOULD, STUDY_MAY };
enum study_against { STUDY_CONSTANT, STUDY_BUDGET, STUDY_REFERENCE };
enum study_kept { STUDY_KEEP_WIDTH, STUDY_KEEP_IMPEDANCE };

/* "worst_peak <= 200 mV", "worst_peak <= budget", "worst_peak <= 105 % of reference". */
struct study_condition {
    size_t output;
    bool at_most; /* <=, else >= */
    enum study_against against;
    double limit;     /* STUDY_CONSTANT */
    double share;     /* of the budget or the reference, 1 = all of it */
    const char *text; /* as written */
};

/* "No worse than": the reference board's case; everything not said here is as in the variant
 * judged. */
struct study_reference {
    const struct study_stackup *stackup;
    double values[MODEL_MOST_INPUTS]; /* NAN = as in the variant judged */
    enum study_kept kept;
    const char *text; /* "Four layers at a gap of 0.3 mm", made by the reader */
};

/* An axis of a rule's table: ranges of one input ("up to 100 mm" or one value), or signal classes
 * in the place of the aggressor or the victim. */
struct study_cell_axis {
    const char *name;                          /* of the input, or "aggressor", "victim" */
    size_t input;                              /* of ranges */
    const struct interval *ranges;             /* NULL for signals */
    const struct study_signal *const *signals; /* NULL for an input */
    const char *const *labels;                 /* ranges as written, names of signals */
    size_t count;
};

struct study_rule {
    const char *id;    /* stays over revisions */
    const char *title; /* may be NULL */
    enum study_strength strength;
    size_t find;            /* input */
    bool find_smallest;     /* "smallest gap": permits everything larger up to within.to; else
                               everything smaller */
    struct interval within; /* where it is looked for and what it is proven over */
    double grid;            /* layout grid, SI */
    struct study_condition condition;
    struct study_reference reference;     /* when condition.against is STUDY_REFERENCE */
    bool nominal;                         /* true: tolerance left out on purpose */
    const struct study_variant *variants; /* the chapter's, with the rule's own `given` applied */
    size_t variant_count;
    struct study_cell_axis rows, columns; /* table; count 0 = none */
    /* [(variant * rows + row) * columns + column], where an axis has signals; NULL = `variants`. */
    const struct study_variant *cells;
    const char *applies_to, *why, *check; /* may be NULL */
    unsigned line, column;
};

struct study_chapter {
    const char *id, *title, *question;
    const char *note; /* the author's own remark, may be NULL */
    const struct model *model;
    struct study_vary vary;
    const struct study_variant *variants;
    size_t variant_count;
    const char *compared; /* what differs between variants: "stackup", "between"; NULL */
    const struct study_chart *charts;
    size_t chart_count;
    const struct study_limit *limits;
    size_t limit_count;
    const double *table_points; /* of the varied input; rows of the table */
    size_t table_point_count;
    const struct study_rule *rules;
    size_t rule_count;
    const char *const *sayings; /* "common practice" lines quoted beside our figures */
    size_t saying_count;
    unsigned line, column;
};

struct study_glossary_entry {
    const char *term, *meaning;
};

struct study {
    const char *path;
    struct study_document document;
    const struct study_stackup *stackups;
    size_t stackup_count;
    const struct study_signal *signals;
    size_t signal_count;
    const struct study_product *products;
    size_t product_count;
    const struct study_chapter *chapters;
    size_t chapter_count;
    const char
        *previous; /* path of an earlier rules.json, resolved against the study's folder; NULL */
    const struct study_earlier *earlier; /* what it states; NULL without one */
};

/* Reads and checks the whole file.  True: `study` is complete and `problems` empty.  False: either
 * `problems` lists everything wrong with the study (error->kind stays ERROR_NONE), or the file
 * could not be read, or memory ran out (`error`). */
bool study_read(const char *path, struct arena *arena, struct study *study,
                struct study_problems *problems, struct error *error);

/* The same on text in memory; `path` names it in messages. */
bool study_read_text(const char *path, const char *text, size_t length, struct arena *arena,
                     struct study *study, struct study_problems *problems, struct error *error);

/* What a board sets of any model's inputs. */
enum { STUDY_BOARD_VALUES = 8 };
struct study_board_value {
    const char *input;
    struct quantity value;
    bool stated; /* else the sheet does not say it: nothing, or the models' standard */
};
void study_board_values(const struct study_stackup *stackup,
                        struct study_board_value values[STUDY_BOARD_VALUES]);

/* Fills inputs that are NAN from a board (nominal values). */
void study_apply_stackup(const struct study_stackup *stackup, const struct model *model,
                         double *inputs);

/* The names of the other files that a rules.json written earlier lists, so that stale ones can be
 * removed.  A file that is missing or is no such manifest gives none; false only for ERROR_MEMORY.
 */
bool study_manifest_files(const char *path, struct arena *arena, const char *const **names,
                          size_t *count, struct error *error);

/* What an earlier rules.json states, to be compared with. */
struct study_earlier_input {
    const char *name;
    const char *text;                    /* of a choice, or "open"; NULL = a number */
    double value, from, to, minus, plus; /* SI; NAN where not stated */
};
struct study_earlier_case {
    const char *rule, *label, *stackup; /* label and stackup may be NULL */
    const char *model, *input;          /* what the rule finds; model may be NULL */
    bool at_least, bound;               /* bound: `value` is one */
    double value;
    const struct study_earlier_input *inputs;
    size_t input_count;
};
struct study_earlier {
    const char *revision; /* may be NULL */
    const struct study_earlier_case *cases;
    size_t case_count;
};

/* Fails: ERROR_INPUT with what is wrong with the file; ERROR_MEMORY. */
bool study_earlier_read(const char *path, struct arena *arena, struct study_earlier *earlier,
                        struct error *error);

const struct study_stackup *study_find_stackup(const struct study *study, const char *id);

/* The structure of a study as JSON Schema (draft 2020-12), made from the table of keys that the
 * check uses.  Values are texts there; units and ranges are study_read's. */
bool study_schema(struct arena *arena, const char **schema, struct error *error);

#endif
