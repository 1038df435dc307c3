/* What an earlier rules.json says: the files it vouches for, the rules it states. */

#include "groundrules/study.h"

#include <cjson/cJSON.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

/* A pipe would keep the reader waiting for a writer. */
static bool is_file(const char *path) {
    struct stat status;
    return stat(path, &status) == 0 && S_ISREG(status.st_mode);
}

/* NULL when there is no such file, it cannot be read or is larger than any manifest. */
static char *read_all(const char *path, size_t *length) {
    const size_t most = 64u << 20;
    FILE *file = is_file(path) ? fopen(path, "rb") : NULL;
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

/* ---- the rules ---- */

static double number_of(const cJSON *object, const char *key) {
    const cJSON *item = cJSON_GetObjectItemCaseSensitive(object, key);
    return cJSON_IsNumber(item) ? item->valuedouble : NAN;
}

static const char *text_of(const cJSON *object, const char *key, struct arena *arena,
                           struct error *error) {
    const cJSON *item = cJSON_GetObjectItemCaseSensitive(object, key);
    return cJSON_IsString(item) ? arena_copy(arena, item->valuestring, error) : NULL;
}

static bool read_inputs(const cJSON *inputs, struct arena *arena, struct study_earlier_case *to,
                        struct error *error) {
    struct study_earlier_input *read =
        arena_new(arena, (size_t)cJSON_GetArraySize(inputs), struct study_earlier_input, error);
    if (read == NULL)
        return false;
    to->inputs = read;
    const cJSON *input;
    cJSON_ArrayForEach(input, inputs) read[to->input_count++] = (struct study_earlier_input){
        .name = arena_copy(arena, input->string != NULL ? input->string : "", error),
        .text = text_of(input, "value", arena, error),
        .value = number_of(input, "value"),
        .from = number_of(input, "from"),
        .to = number_of(input, "to"),
        .minus = number_of(input, "minus"),
        .plus = number_of(input, "plus")};
    return error->kind == ERROR_NONE;
}

static bool read_case(const cJSON *rule, const cJSON *item, struct arena *arena,
                      struct study_earlier_case *to, struct error *error) {
    const char *bound = text_of(rule, "bound", arena, error);
    *to = (struct study_earlier_case){.rule = text_of(rule, "id", arena, error),
                                      .label = text_of(item, "case", arena, error),
                                      .stackup = text_of(item, "stackup", arena, error),
                                      .model = text_of(rule, "model", arena, error),
                                      .input = text_of(rule, "input", arena, error),
                                      .at_least = bound != NULL && strcmp(bound, "at least") == 0,
                                      .value = number_of(item, "value")};
    to->bound = !isnan(to->value);
    if (error->kind == ERROR_NONE && (to->rule == NULL || to->input == NULL))
        return error_set(error, ERROR_INPUT, "it holds a rule without id or input");
    return read_inputs(cJSON_GetObjectItemCaseSensitive(item, "inputs"), arena, to, error);
}

static bool read_rules(const cJSON *root, struct arena *arena, struct study_earlier *earlier,
                       struct error *error) {
    const cJSON *rules = cJSON_GetObjectItemCaseSensitive(root, "rules"), *rule, *item;
    size_t count = 0;
    if (!cJSON_IsArray(rules))
        return error_set(error, ERROR_INPUT, "it holds no rules");
    cJSON_ArrayForEach(rule, rules) count +=
        (size_t)cJSON_GetArraySize(cJSON_GetObjectItemCaseSensitive(rule, "cases"));
    struct study_earlier_case *cases = arena_new(arena, count, struct study_earlier_case, error);
    if (cases == NULL)
        return false;
    earlier->revision = text_of(root, "revision", arena, error);
    earlier->cases = cases;
    cJSON_ArrayForEach(rule, rules) cJSON_ArrayForEach(
        item, cJSON_GetObjectItemCaseSensitive(
                  rule, "cases")) if (!read_case(rule, item, arena, &cases[earlier->case_count++],
                                                 error)) return false;
    return true;
}

bool study_earlier_read(const char *path, struct arena *arena, struct study_earlier *earlier,
                        struct error *error) {
    size_t length = 0;
    char *text = read_all(path, &length);
    cJSON *root = text == NULL ? NULL : cJSON_ParseWithLength(text, length);
    bool ok;
    *earlier = (struct study_earlier){0};
    if (text == NULL)
        ok = error_set(error, ERROR_INPUT, "it cannot be read");
    else if (root == NULL || !is_ours(root))
        ok = error_set(error, ERROR_INPUT, "it is no rules.json of this program");
    else
        ok = read_rules(root, arena, earlier, error);
    cJSON_Delete(root);
    free(text);
    return ok;
}
