/* The key table as JSON Schema (draft 2020-12): what an editor can check while a study is written.
 * Values stay texts there; what they mean is checked by study_read. */

#include "keys.h"

#include "groundrules/study.h"

#include <cjson/cJSON.h>
#include <stdlib.h>
#include <string.h>

static const char identifier[] = "^[A-Za-z0-9_][A-Za-z0-9_-]{0,39}$";

static cJSON *reference(const struct key_table *table) {
    char path[100] = "#/$defs/";
    size_t used = strlen(path);
    for (const char *at = table->name; *at != '\0' && used + 1 < sizeof path; at++)
        if (*at != '\'')
            path[used++] = *at == ' ' ? '-' : *at;
    path[used] = '\0';
    cJSON *made = cJSON_CreateObject();
    cJSON_AddStringToObject(made, "$ref", path);
    return made;
}

static const char *definition_name(const struct key_table *table, char *name, size_t size) {
    cJSON *made = reference(table);
    const cJSON *path = cJSON_GetObjectItemCaseSensitive(made, "$ref");
    name[0] = '\0';
    if (cJSON_IsString(path))
        strncat(name, path->valuestring + strlen("#/$defs/"), size - 1);
    cJSON_Delete(made);
    return name;
}

static cJSON *typed(const char *type) {
    cJSON *made = cJSON_CreateObject();
    cJSON_AddStringToObject(made, "type", type);
    return made;
}

static cJSON *text_schema(void) {
    cJSON *made = typed("string");
    cJSON_AddNumberToObject(made, "minLength", 1);
    return made;
}

static cJSON *list_of(cJSON *items, size_t most) {
    cJSON *made = typed("array");
    cJSON_AddItemToObject(made, "items", items);
    if (most > 0)
        cJSON_AddNumberToObject(made, "maxItems", (double)most);
    return made;
}

static cJSON *words_schema(const char *const *words) {
    cJSON *made = cJSON_CreateObject();
    cJSON *list = cJSON_AddArrayToObject(made, "enum");
    for (size_t i = 0; words[i] != NULL; i++)
        cJSON_AddItemToArray(list, cJSON_CreateString(words[i]));
    return made;
}

/* A value is a text with its unit; where there is no unit a bare number will do too. */
static cJSON *value_schema(enum dimension dimension) {
    cJSON *made = cJSON_CreateObject();
    if (dimension != DIMENSION_NUMBER && dimension != DIMENSION_RATIO) {
        cJSON_AddStringToObject(made, "type", "string");
        return made;
    }
    cJSON *types = cJSON_AddArrayToObject(made, "type");
    cJSON_AddItemToArray(types, cJSON_CreateString("string"));
    cJSON_AddItemToArray(types, cJSON_CreateString("number"));
    return made;
}

static cJSON *map_of(const struct key *key) {
    cJSON *made = typed("object");
    cJSON *names = cJSON_AddObjectToObject(made, "propertyNames");
    cJSON_AddStringToObject(names, "pattern", identifier);
    cJSON_AddItemToObject(made, "additionalProperties", reference(key->table));
    if (key->most > 0)
        cJSON_AddNumberToObject(made, "maxProperties", (double)key->most);
    return made;
}

static cJSON *key_schema(const struct key *key) {
    cJSON *made = NULL;
    switch (key->kind) {
    case KEY_TEXT:
    case KEY_CODED:
        made = text_schema();
        break;
    case KEY_NAME:
        made = typed("string");
        cJSON_AddStringToObject(made, "pattern", identifier);
        break;
    case KEY_WORD:
        made = words_schema(key->words);
        break;
    case KEY_VALUE:
        made = value_schema(key->dimension);
        break;
    case KEY_TEXTS:
        made = list_of(text_schema(), key->most);
        break;
    case KEY_OBJECT:
        made = reference(key->table);
        break;
    case KEY_OBJECTS:
        made = list_of(reference(key->table), key->most);
        break;
    case KEY_MAP:
        made = map_of(key);
        break;
    case KEY_FREE:
        made = cJSON_CreateObject();
        break;
    }
    cJSON_AddStringToObject(made, "description", key->meaning);
    return made;
}

/* Keys of later versions are left out, so that an editor marks them. */
static cJSON *table_schema(const struct key_table *table) {
    cJSON *made = typed("object");
    cJSON *properties = cJSON_AddObjectToObject(made, "properties");
    cJSON *required = cJSON_CreateArray();
    for (size_t i = 0; i < table->count; i++) {
        if (table->keys[i].not_yet != NULL)
            continue;
        cJSON_AddItemToObject(properties, table->keys[i].name, key_schema(&table->keys[i]));
        if (table->keys[i].required)
            cJSON_AddItemToArray(required, cJSON_CreateString(table->keys[i].name));
    }
    cJSON_AddItemToObject(made, "required", required);
    cJSON_AddBoolToObject(made, "additionalProperties", table->others != NULL);
    return made;
}

bool study_schema(struct arena *arena, const char **schema, struct error *error) {
    cJSON *root = table_schema(&keys_study);
    cJSON_AddStringToObject(root, "$schema", "https://json-schema.org/draft/2020-12/schema");
    cJSON_AddStringToObject(root, "title", "A study of groundrules");
    cJSON *definitions = cJSON_AddObjectToObject(root, "$defs");
    for (size_t i = 0; i < keys_all_count; i++) {
        char name[100];
        if (keys_all[i] != &keys_study)
            cJSON_AddItemToObject(definitions, definition_name(keys_all[i], name, sizeof name),
                                  table_schema(keys_all[i]));
    }
    char *printed = definitions == NULL ? NULL : cJSON_Print(root);
    cJSON_Delete(root);
    if (printed == NULL)
        return error_set(error, ERROR_MEMORY, "out of memory");
    const char *copy = arena_copy(arena, printed, error);
    cJSON_free(printed);
    if (copy == NULL)
        return false;
    *schema = copy;
    return true;
}
