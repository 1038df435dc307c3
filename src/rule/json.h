#ifndef RULE_JSON_H
#define RULE_JSON_H

#include "groundrules/text.h"

#include <stdbool.h>

/* A small writer of JSON: indents by two, numbers with six digits, no NaN (null instead). */
struct json {
    struct text text;
    unsigned depth;
    bool fresh; /* nothing yet in the innermost object or array */
};

struct json json_start(struct arena *arena, struct error *error);
/* `key` NULL inside arrays. */
void json_open(struct json *json, const char *key, char bracket);      /* '{' or '[' */
void json_close(struct json *json, char bracket);                      /* '}' or ']' */
void json_text(struct json *json, const char *key, const char *value); /* NULL: null */
void json_number(struct json *json, const char *key, double value);
void json_whole(struct json *json, const char *key, long long value);
char *json_end(struct json *json);

#endif
