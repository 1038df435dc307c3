/* What an earlier rules.json says: the files it vouches for. */

#include "groundrules/study.h"

#include <cjson/cJSON.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* NULL when there is no such file, it cannot be read or is larger than any manifest. */
static char *read_all(const char *path, size_t *length) {
    const size_t most = 64u << 20;
    FILE *file = fopen(path, "rb");
    char *text = NULL;
    long size = -1;
    if (file == NULL)
        return NULL;
    if (fseek(file, 0, SEEK_END) == 0)
        size = ftell(file);
    if (size >= 0 && (size_t)size <= most && fseek(file, 0, SEEK_SET) == 0)
        text = malloc((size_t)size + 1);
    if (text != NULL && fread(text, 1, (size_t)size, file) != (size_t)size) {
        free(text);
        text = NULL;
    }
    if (text != NULL) {
        *length = (size_t)size;
        text[size] = '\0';
    }
    fclose(file);
    return text;
}

static bool is_ours(const cJSON *root) {
    const cJSON *format = cJSON_GetObjectItemCaseSensitive(root, "format");
    return cJSON_IsString(format) && strncmp(format->valuestring, "groundrules-rules ", 18) == 0;
}

static bool collect(const cJSON *files, struct arena *arena, const char *const **names,
                    size_t *count, struct error *error) {
    size_t found = 0;
    const char **all = arena_new(arena, (size_t)cJSON_GetArraySize(files), const char *, error);
    if (all == NULL)
        return false;
    const cJSON *file;
    cJSON_ArrayForEach(file, files) {
        const cJSON *name = cJSON_GetObjectItemCaseSensitive(file, "name");
        if (!cJSON_IsString(name))
            continue;
        all[found] = arena_copy(arena, name->valuestring, error);
        if (all[found++] == NULL)
            return false;
    }
    *names = all;
    *count = found;
    return true;
}

bool study_manifest_files(const char *path, struct arena *arena, const char *const **names,
                          size_t *count, struct error *error) {
    size_t length = 0;
    char *text = read_all(path, &length);
    cJSON *root = text == NULL ? NULL : cJSON_ParseWithLength(text, length);
    bool ok = true;
    *names = NULL;
    *count = 0;
    if (root != NULL && is_ours(root))
        ok = collect(cJSON_GetObjectItemCaseSensitive(root, "files"), arena, names, count, error);
    cJSON_Delete(root);
    free(text);
    return ok;
}
