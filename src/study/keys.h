#ifndef STUDY_KEYS_H
#define STUDY_KEYS_H

#include "reader.h"

/* The one table of what may stand in a study: it drives the structural check, its messages, the
 * documentation and the schema. */

enum key_kind {
    KEY_TEXT,    /* free text */
    KEY_NAME,    /* an identifier: letters, digits, "-" and "_" */
    KEY_WORD,    /* one of `words` */
    KEY_VALUE,   /* a value with a unit; `dimension` */
    KEY_CODED,   /* a text that its reader takes apart */
    KEY_TEXTS,   /* a list of texts */
    KEY_OBJECT,  /* `table` */
    KEY_OBJECTS, /* a list of `table` */
    KEY_MAP,     /* identifiers, each with a `table` */
    KEY_FREE,    /* several forms; its reader checks them */
};

struct key_table;

struct key {
    const char *name;
    enum key_kind kind;
    bool required;
    const char *meaning;           /* one line */
    const struct key_table *table; /* KEY_OBJECT, KEY_OBJECTS, KEY_MAP */
    const char *const *words;      /* KEY_WORD, NULL-terminated */
    enum dimension dimension;      /* KEY_VALUE */
    size_t most;                   /* entries of a list or map; 0 = not limited */
    const char *not_yet;           /* known to later versions: refused with this text */
};

struct key_table {
    const char *name; /* "a stackup" */
    const struct key *keys;
    size_t count;
    const char *others; /* what other keys are ("inputs of the model"); NULL: there are none */
};

extern const struct key_table keys_study, keys_document, keys_stackup, keys_layer, keys_mask,
    keys_smallest, keys_signal, keys_victim, keys_product, keys_chapter, keys_given, keys_compare,
    keys_chart, keys_rule, keys_reference, keys_rule_table, keys_cells;

/* Every table, for documentation. */
extern const struct key_table *const keys_all[];
extern const size_t keys_all_count;

extern const char *const keys_pages[],
    *const keys_lengths[], *const keys_roles[], *const keys_receivers[],
                                                    *const keys_aggressors[],
                                                        *const keys_switching[],
                                                            *const keys_strengths[],
                                                                *const keys_tolerances[],
                                                                    *const keys_kept[],
                                                                        *const keys_scales[];

/* Checks a node and all below it against a table; what is wrong is reported and marked bad. */
void keys_check(const struct reader *reader, struct node *node, const struct key_table *table);

/* Whether a member was refused that is `name` or, unknown, was most likely meant as it: what needs
 * it is then not reported as well. */
bool keys_refused(const struct node *object, const char *name);

#endif
