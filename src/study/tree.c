/* The JSON library decodes; the places come from the prescan, which saw the same values in the same
 * order.  Depth is bounded by the prescan, so recursion is. */

#include "tree.h"

#include "groundrules/text.h"

#include <cjson/cJSON.h>
#include <stdlib.h>
#include <string.h>

struct builder {
    const struct source *source;
    const struct prescan *scan;
    size_t next_start;
    struct node *nodes;
    size_t used, most;
    struct arena *arena;
    struct findings *findings;
    struct error *error;
};

static bool take_start(struct builder *builder, size_t *offset) {
    if (builder->next_start >= builder->scan->count)
        return error_set(builder->error, ERROR_INTERNAL, "the two readings of the study differ");
    *offset = builder->scan->starts[builder->next_start++];
    return true;
}

static enum node_kind kind_of(const cJSON *json) {
    if (cJSON_IsObject(json))
        return NODE_OBJECT;
    if (cJSON_IsArray(json))
        return NODE_LIST;
    if (cJSON_IsString(json))
        return NODE_TEXT;
    if (cJSON_IsNumber(json))
        return NODE_NUMBER;
    return cJSON_IsNull(json) ? NODE_NULL : NODE_TRUTH;
}

/* Numbers are kept as written: the library's double has lost what was said. */
static char *number_text(const struct builder *builder, size_t offset) {
    const char *text = builder->scan->text + offset;
    return arena_copy_length(builder->arena, text, strspn(text, "+-.0123456789eE"), builder->error);
}

static bool fill(struct builder *builder, const cJSON *json, struct node *node) {
    if (!take_start(builder, &node->offset))
        return false;
    node->kind = kind_of(json);
    if (node->kind == NODE_TEXT)
        node->text = arena_copy(builder->arena, json->valuestring, builder->error);
    else if (node->kind == NODE_NUMBER)
        node->text = number_text(builder, node->offset);
    return node->text != NULL || (node->kind != NODE_TEXT && node->kind != NODE_NUMBER);
}

static bool build(struct builder *builder, const cJSON *json, struct node *node) {
    if (!fill(builder, json, node))
        return false;
    struct node **link = &node->first;
    for (const cJSON *item = json->child; item != NULL; item = item->next) {
        if (builder->used == builder->most)
            return error_set(builder->error, ERROR_INTERNAL, "the study has more values than read");
        struct node *child = &builder->nodes[builder->used++];
        child->parent = node;
        child->index = node->count++;
        if (node->kind == NODE_OBJECT) {
            child->key = arena_copy(builder->arena, item->string, builder->error);
            if (child->key == NULL || !take_start(builder, &child->key_offset))
                return false;
        }
        if (!build(builder, item, child))
            return false;
        if (node->kind != NODE_OBJECT)
            child->key_offset = child->offset;
        *link = child;
        link = &child->next;
    }
    return true;
}

static int by_key(const void *a, const void *b) {
    const struct node *one = *(const struct node *const *)a;
    const struct node *two = *(const struct node *const *)b;
    int order = strcmp(one->key, two->key);
    if (order != 0)
        return order;
    return one->index < two->index ? -1 : one->index > two->index;
}

static bool find_duplicates(struct builder *builder, struct node *object) {
    struct node **sorted = arena_new(builder->arena, object->count, struct node *, builder->error);
    if (sorted == NULL)
        return false;
    size_t count = 0;
    for (struct node *child = object->first; child != NULL; child = child->next)
        sorted[count++] = child;
    if (count > 1)
        qsort(sorted, count, sizeof *sorted, by_key);
    for (size_t i = 1; i < count; i++) {
        if (strcmp(sorted[i]->key, sorted[i - 1]->key) != 0)
            continue;
        unsigned line, column;
        source_position(builder->source, sorted[i - 1]->key_offset, &line, &column);
        const char *path = tree_path(sorted[i], builder->arena, builder->error);
        const char *key = tree_excerpt(sorted[i]->key, builder->arena, builder->error);
        if (path == NULL || key == NULL)
            return false;
        findings_add(builder->findings, sorted[i]->key_offset, path,
                     "the key \"%s\" stands in this object already, at %u:%u", key, line, column);
        sorted[i]->bad = true;
    }
    return true;
}

static bool find_all_duplicates(struct builder *builder) {
    for (size_t i = 0; i < builder->used; i++)
        if (builder->nodes[i].kind == NODE_OBJECT && builder->nodes[i].count > 1 &&
            !find_duplicates(builder, &builder->nodes[i]))
            return false;
    return true;
}

struct node *tree_build(const struct source *source, const struct prescan *scan,
                        struct arena *arena, struct findings *findings, struct error *error) {
    struct builder builder = {.source = source,
                              .scan = scan,
                              .arena = arena,
                              .findings = findings,
                              .error = error,
                              .most = scan->count};
    builder.nodes = arena_new(arena, scan->count, struct node, error);
    if (builder.nodes == NULL)
        return NULL;
    const char *end = NULL;
    cJSON *json = cJSON_ParseWithLengthOpts(scan->text, source->length + 1, &end, true);
    if (json == NULL) {
        /* The prescan accepted it, so what is left is memory. */
        error_set(error, ERROR_MEMORY, "out of memory while reading the study");
        return NULL;
    }
    builder.used = 1;
    bool ok = build(&builder, json, &builder.nodes[0]) && find_all_duplicates(&builder);
    cJSON_Delete(json);
    return ok ? &builder.nodes[0] : NULL;
}

static bool is_plain(const char *key) {
    size_t length = strspn(key, "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789_-");
    return length > 0 && key[length] == '\0';
}

enum { MOST_SHOWN = 60 };

const char *tree_excerpt(const char *text, struct arena *arena, struct error *error) {
    size_t length = strlen(text);
    if (length <= MOST_SHOWN)
        return text;
    for (length = MOST_SHOWN; length > 0 && ((unsigned char)text[length] & 0xC0) == 0x80;)
        length--;
    return arena_print(arena, error, "%.*s...", (int)length, text);
}

const char *tree_path(const struct node *node, struct arena *arena, struct error *error) {
    const struct node *steps[STUDY_MOST_DEPTH + 1];
    size_t count = 0;
    for (; node->parent != NULL && count <= STUDY_MOST_DEPTH; node = node->parent)
        steps[count++] = node;
    struct text path = text_start(arena, error);
    while (count > 0) {
        node = steps[--count];
        if (node->key == NULL) {
            text_format(&path, "[%zu]", node->index);
            continue;
        }
        const char *key = tree_excerpt(node->key, arena, error);
        const char *quote = is_plain(node->key) ? "" : "\"";
        if (key != NULL)
            text_format(&path, "%s%s%s%s", path.length > 0 ? "." : "", quote, key, quote);
    }
    char *whole = text_end(&path);
    if (whole != NULL)
        source_disarm(whole);
    return whole;
}

struct node *tree_get(const struct node *object, const char *key) {
    if (object == NULL || object->kind != NODE_OBJECT)
        return NULL;
    for (struct node *child = object->first; child != NULL; child = child->next)
        if (strcmp(child->key, key) == 0)
            return child->bad ? NULL : child;
    return NULL;
}

const char *tree_kind_name(enum node_kind kind) {
    static const char *const names[] = {
        [NODE_OBJECT] = "an object", [NODE_LIST] = "a list",         [NODE_TEXT] = "a text",
        [NODE_NUMBER] = "a number",  [NODE_TRUTH] = "a truth value", [NODE_NULL] = "null"};
    return names[kind];
}
