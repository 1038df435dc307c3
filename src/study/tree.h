#ifndef STUDY_TREE_H
#define STUDY_TREE_H

#include "prescan.h"

/* The JSON values of a study with their places. */

enum node_kind { NODE_OBJECT, NODE_LIST, NODE_TEXT, NODE_NUMBER, NODE_TRUTH, NODE_NULL };

struct node {
    enum node_kind kind;
    bool bad;          /* already reported: its reader passes over it */
    const char *key;   /* of a member, else NULL */
    const char *meant; /* of an unknown key: the known one that was most likely meant, or NULL */
    const char *text;  /* NODE_TEXT: decoded; NODE_NUMBER: as written */
    size_t offset, key_offset;
    const struct node *parent;
    struct node *first, *next;
    size_t index; /* among its siblings */
    size_t count; /* of its children */
};

/* Adds a finding for every key that comes twice; the first one counts.  NULL: a finding was added,
 * or memory ran out. */
struct node *tree_build(const struct source *source, const struct prescan *scan,
                        struct arena *arena, struct findings *findings, struct error *error);

/* "chapters[1].given.width"; "" for the root.  Keys that are no plain names stand in quotes. */
const char *tree_path(const struct node *node, struct arena *arena, struct error *error);

/* What is shown of a text in a message: at most 60 bytes, cut between characters. */
const char *tree_excerpt(const char *text, struct arena *arena, struct error *error);

/* A member that is there and not bad, else NULL. */
struct node *tree_get(const struct node *object, const char *key);

/* "an object", "a list", "a text", "a number", "a truth value", "null". */
const char *tree_kind_name(enum node_kind kind);

#endif
