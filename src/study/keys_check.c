#include "keys.h"

#include "groundrules/text.h"

#include <stdint.h>
#include <string.h>

enum { MOST_KEYS = 32, MOST_TEXT = 2000, MOST_NAME = 40 };

static const struct key *find_key(const struct key_table *table, const char *name) {
    for (size_t i = 0; i < table->count; i++)
        if (strcmp(table->keys[i].name, name) == 0)
            return &table->keys[i];
    return NULL;
}

static size_t names_of(const struct key_table *table, const char *names[MOST_KEYS]) {
    size_t count = 0;
    for (size_t i = 0; i < table->count && count < MOST_KEYS; i++)
        if (table->keys[i].not_yet == NULL)
            names[count++] = table->keys[i].name;
    return count;
}

static const char *expected(enum key_kind kind) {
    switch (kind) {
    case KEY_OBJECT:
    case KEY_MAP:
        return "an object { }";
    case KEY_OBJECTS:
    case KEY_TEXTS:
        return "a list [ ]";
    default:
        return "a text in quotes";
    }
}

static bool check_kind(const struct reader *reader, const struct node *node,
                       const struct key *key) {
    enum node_kind wanted = NODE_TEXT;
    if (key->kind == KEY_FREE || key->kind == KEY_VALUE)
        return true;
    if (key->kind == KEY_OBJECT || key->kind == KEY_MAP)
        wanted = NODE_OBJECT;
    else if (key->kind == KEY_OBJECTS || key->kind == KEY_TEXTS)
        wanted = NODE_LIST;
    return node->kind == wanted ||
           reader_refuse(reader, node, "found %s; expected %s: %s", tree_kind_name(node->kind),
                         expected(key->kind), key->meaning);
}

static bool check_text(const struct reader *reader, const struct node *node) {
    if (node->kind != NODE_TEXT)
        return reader_refuse(reader, node, "found %s; expected a text in quotes",
                             tree_kind_name(node->kind));
    if (node->text[0] == '\0')
        return reader_refuse(reader, node, "the text is empty");
    if (strlen(node->text) > MOST_TEXT)
        return reader_refuse(reader, node, "the text has %zu bytes; at most %d are accepted",
                             strlen(node->text), MOST_TEXT);
    for (const char *at = node->text; *at != '\0'; at++)
        if ((unsigned char)*at < 0x20 || *at == 0x7F)
            return reader_refuse(reader, node,
                                 "the text holds a control character (0x%02X); texts are one "
                                 "paragraph, without line breaks",
                                 (unsigned)(unsigned char)*at);
    return true;
}

static bool is_name(const char *text) {
    static const char allowed[] =
        "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_";
    size_t length = strspn(text, allowed);
    return length > 0 && length <= MOST_NAME && text[length] == '\0' && text[0] != '-';
}

static const char name_rule[] =
    "is no identifier; allowed: up to 40 letters (A to Z), digits, \"-\" and \"_\"";

static bool check_name(const struct reader *reader, const struct node *node) {
    return is_name(node->text) ||
           reader_refuse(reader, node, "\"%s\" %s", reader_shown(reader, node), name_rule);
}

static bool check_size(const struct reader *reader, const struct node *node,
                       const struct key *key) {
    if (key->most == 0 || node->count <= key->most)
        return true;
    return reader_refuse(reader, node, "%zu entries; at most %zu are accepted", node->count,
                         key->most);
}

static void check_texts(const struct reader *reader, struct node *node) {
    for (struct node *child = node->first; child != NULL; child = child->next)
        child->bad = !check_text(reader, child);
}

static void check_map(const struct reader *reader, struct node *node, const struct key *key) {
    for (struct node *child = node->first; child != NULL; child = child->next) {
        if (child->bad)
            continue;
        if (!is_name(child->key)) {
            const char *shown = tree_excerpt(child->key, reader->arena, reader->error);
            reader_refuse_key(reader, child, "\"%s\" %s", shown == NULL ? "" : shown, name_rule);
        }
        keys_check(reader, child, key->table);
    }
}

static void check_member(const struct reader *reader, struct node *node, const struct key *key) {
    node->bad = !check_kind(reader, node, key) || !check_size(reader, node, key);
    if (node->bad)
        return;
    switch (key->kind) {
    case KEY_TEXT:
        node->bad = !check_text(reader, node);
        break;
    case KEY_NAME:
        node->bad = !check_name(reader, node);
        break;
    case KEY_WORD:
        node->bad = reader_word(reader, node, key->words) == SIZE_MAX;
        break;
    case KEY_TEXTS:
        check_texts(reader, node);
        break;
    case KEY_OBJECT:
        keys_check(reader, node, key->table);
        break;
    case KEY_OBJECTS:
        for (struct node *child = node->first; child != NULL; child = child->next)
            keys_check(reader, child, key->table);
        break;
    case KEY_MAP:
        check_map(reader, node, key);
        break;
    default:
        break;
    }
}

static void refuse_unknown(const struct reader *reader, struct node *node,
                           const struct key_table *table) {
    const char *names[MOST_KEYS];
    size_t count = names_of(table, names);
    const char *shown = tree_excerpt(node->key, reader->arena, reader->error);
    reader_refuse_key(reader, node, "unknown key \"%s\" in %s%s", shown == NULL ? "" : shown,
                      table->name, reader_advice(reader, node->key, names, count));
    node->bad = true;
    node->meant = text_nearest(node->key, names, count);
}

bool keys_refused(const struct node *object, const char *name) {
    for (const struct node *child = object == NULL ? NULL : object->first; child != NULL;
         child = child->next)
        if (child->bad && child->key != NULL &&
            (strcmp(child->key, name) == 0 ||
             (child->meant != NULL && strcmp(child->meant, name) == 0)))
            return true;
    return false;
}

static void find_missing(const struct reader *reader, const struct node *node,
                         const struct key_table *table) {
    for (size_t i = 0; i < table->count; i++) {
        const struct key *key = &table->keys[i];
        if (key->required && tree_get(node, key->name) == NULL && !keys_refused(node, key->name))
            reader_refuse(reader, node, "\"%s\" is missing in %s: %s", key->name, table->name,
                          key->meaning);
    }
}

void keys_check(const struct reader *reader, struct node *node, const struct key_table *table) {
    if (node->kind != NODE_OBJECT) {
        reader_refuse(reader, node, "found %s; expected an object { }: %s",
                      tree_kind_name(node->kind), table->name);
        node->bad = true;
        return;
    }
    for (struct node *child = node->first; child != NULL; child = child->next) {
        const struct key *key = find_key(table, child->key);
        if (child->bad)
            continue; /* a duplicate, reported */
        if (key != NULL && key->not_yet != NULL) {
            reader_refuse_key(reader, child, "\"%s\" is not yet supported: %s", child->key,
                              key->not_yet);
            child->bad = true;
        } else if (key != NULL) {
            check_member(reader, child, key);
        } else if (table->others == NULL) {
            refuse_unknown(reader, child, table);
        }
    }
    find_missing(reader, node, table);
}
