#ifndef GROUNDRULES_MODEL_H
#define GROUNDRULES_MODEL_H

#include "groundrules/arena.h"
#include "groundrules/quantity.h"
#include "groundrules/sketch.h"

/* A model answers one physical question.  It declares typed inputs and outputs; everything else
 * (sweeps, comparison, tolerance, rules, messages, documentation) is generic and follows from the
 * declarations. */

enum { MODEL_MOST_INPUTS = 40, MODEL_MOST_OUTPUTS = 40, MODEL_MOST_PREPARED = 512 };

enum model_input_kind {
    MODEL_SHAPE,  /* changes the field problem */
    MODEL_DRIVE,  /* changes only the response */
    MODEL_CHOICE, /* one of `words` */
};

struct model_input {
    const char *name;
    const char *meaning; /* one line */
    enum dimension dimension;
    enum model_input_kind kind;
    double standard; /* the value when not given; NAN = must be given */
    double lowest;   /* allowed, inclusive */
    double highest;
    bool open;                /* INFINITY ("open") is allowed too */
    const char *same_as;      /* not given: takes the value of this input; NULL = `standard` */
    const char *const *words; /* NULL-terminated, for MODEL_CHOICE */
    size_t words_yet;         /* of `words`, how many this version computes (0 = all) */
    const char *not_yet; /* not NULL: only `standard` is accepted; the text says what is missing */
};

enum model_worse { MODEL_NEITHER, MODEL_HIGHER_IS_WORSE, MODEL_LOWER_IS_WORSE };

struct model_output {
    const char *name;
    const char *title;  /* for axes and tables: "far-end peak" */
    const char *symbol; /* short, may be NULL */
    const char *meaning;
    enum dimension dimension;
    enum model_worse worse;
    const char *not_yet; /* not NULL: declared, refused with this text */
};

struct model_flag {
    const char *name;    /* "electrically-wide" */
    const char *meaning; /* one sentence for the document */
    bool informs;        /* says what was solved; the number is as good as any */
};

struct model_memo;   /* solved sections and loops, shared by all threads */
struct model_worker; /* what one thread keeps between two evaluations */

struct model {
    const char *name;
    const char *title;   /* "Traces side by side" */
    const char *summary; /* one sentence: the question that it answers */
    const char *method;  /* a short paragraph for the document */
    const char *validity;
    unsigned revision; /* raised when numbers may change; part of the fingerprint */
    const struct model_input *inputs;
    size_t input_count;
    const struct model_output *outputs;
    size_t output_count;
    const struct model_flag *flags; /* bit i of a result's flags is flags[i] */
    size_t flag_count;

    /* What single ranges cannot say: overlaps, impossible combinations.  May be NULL. */
    bool (*check)(const double *inputs, struct error *error);
    /* Solves what depends on shape and choice.  prepared[prepared_count]. */
    size_t prepared_count;
    bool (*prepare)(const double *inputs, double *prepared, struct model_memo *memo,
                    struct error *error);
    /* Outputs that do not apply are NAN.  errors[output_count]: estimated absolute error, or 0. */
    bool (*respond)(const double *inputs, const double *prepared, struct model_worker *worker,
                    double *outputs, double *errors, unsigned *flags, struct error *error);
    /* The geometry of these inputs; NULL for a model without one. */
    bool (*sketch)(const double *inputs, struct sketch *sketch, struct error *error);
    /* The same from above; NULL where a section says it all. */
    bool (*plan)(const double *inputs, struct sketch *plan, struct error *error);
    /* The longest run, m, that is so short against these inputs' edge that all outputs which rules
     * limit grow steadily with the input `length`: searches need not look between shorter ones.
     * NULL: not known. */
    double (*steady_length)(const double *inputs);
};

/* The registry: one line a model in src/model/registry.c. */
size_t model_count(void);
const struct model *model_at(size_t index);
const struct model *model_find(const char *name); /* NULL when there is none */

/* SIZE_MAX when there is none. */
size_t model_input_index(const struct model *model, const char *name);
size_t model_output_index(const struct model *model, const char *name);
/* Index of a word among the input's words; SIZE_MAX when there is none. */
size_t model_word_index(const struct model_input *input, const char *word);

/* One value against one input's declaration (range, words, not yet); messages say what is allowed.
 */
bool model_check_input(const struct model_input *input, double value, struct error *error);

/* Fills every input that is NAN with its standard or same_as value; ERROR_INPUT names all that must
 * be given. */
bool model_resolve(const struct model *model, double *inputs, struct error *error);

/* Resolved inputs: every range, then model->check. */
bool model_check(const struct model *model, const double *inputs, struct error *error);

/* The memo.  Thread safe; the same problem is solved once even when two threads ask at the same
 * time. */
struct model_memo *model_memo_create(struct error *error);
void model_memo_free(struct model_memo *memo);
bool model_memo_section(struct model_memo *memo, const struct section_problem *problem,
                        struct section_solution *solution, struct error *error);
struct model_memo_counts {
    size_t asked;
    size_t solved;
};
struct model_memo_counts model_memo_counts(const struct model_memo *memo);

struct model_worker *model_worker_create(struct error *error);
void model_worker_free(struct model_worker *worker);
/* The shortest edge, s, of the cases to come, where it is known: responses are prepared for it and
 * shared.  0 (as at first): by powers of four. */
void model_worker_expect(struct model_worker *worker, double shortest_edge);

/* One point: resolve is the caller's; check, prepare, respond.  outputs, errors [output_count]. */
bool model_evaluate(const struct model *model, const double *inputs, struct model_memo *memo,
                    struct model_worker *worker, double *outputs, double *errors, unsigned *flags,
                    struct error *error);

#endif
