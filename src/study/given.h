#ifndef STUDY_GIVEN_H
#define STUDY_GIVEN_H

#include "sections.h"

/* What one "given" object, of a chapter or of a rule, says. */
struct given {
    const struct node *node; /* NULL: nothing is given */
    const struct study_stackup *stackup;
    const struct study_signal *aggressor, *victim;
    const struct node *stackup_node, *aggressor_node, *victim_node;
    const struct node *input_nodes[MODEL_MOST_INPUTS]; /* NULL: not given, or refused */
    struct study_setting settings[MODEL_MOST_INPUTS];
};

void given_read(const struct reader *reader, const struct node *node, const struct model *model,
                struct given *given);

/* The input that a key names; SIZE_MAX: a finding was added at the key.  `table`: what else may
 * stand there, NULL = nothing. */
size_t given_input(const struct reader *reader, const struct node *node, const struct model *model,
                   const struct key_table *table);

/* A word that must name an input, standing in the node's text. */
size_t given_input_word(const struct reader *reader, const struct node *node, const char *word,
                        const struct model *model);

/* An output; SIZE_MAX: a finding was added at the node. */
size_t given_output_word(const struct reader *reader, const struct node *node, const char *word,
                         const struct model *model);

/* Whether the input is an edge, which may be written with levels. */
bool given_is_edge(const struct model_input *input);

/* One value, with or without tolerance, a range, or a word, checked against the declaration. */
bool given_setting(const struct reader *reader, const struct node *node,
                   const struct model_input *input, struct study_setting *setting);

/* The same, but only one exact value will do. */
bool given_value(const struct reader *reader, const struct node *node,
                 const struct model_input *input, double *value);

/* A range or one value, no tolerance: {from, to}. */
bool given_interval(const struct reader *reader, const struct node *node,
                    const struct model_input *input, struct interval *interval);

/* What a 0 of this input stands for where it is no small value but nothing at all, as an edge
 * distance of 0 is an infinite plane; NULL for all other inputs. */
const char *given_absent(const char *input);

/* Whether an interval of it may begin there. */
bool given_begins_soundly(const struct reader *reader, const struct node *node,
                          const struct model_input *input, double from);

/* "stackup", "aggressor", "victim". */
bool given_is_source(const char *key);

/* The value that stands for a range: geometric middle when it spans more than a decade. */
double given_middle(const struct model_input *input, struct interval range);

#endif
