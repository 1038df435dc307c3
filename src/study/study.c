/* From the bytes of a file to a resolved study: index lines, prescan, tree, structural check
 * against the key table, then section by section. */

#include "sections.h"

#include <errno.h>
#include <fcntl.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

/* A path in the study is meant from the study's own folder. */
static const char *beside_study(const struct reader *reader, const struct node *node) {
    if (node == NULL || node->text[0] == '/')
        return reader_text(node);
    const char *slash = strrchr(reader->study->path, '/');
    if (slash == NULL)
        return node->text;
    return arena_print(reader->arena, reader->error, "%.*s/%s", (int)(slash - reader->study->path),
                       reader->study->path, node->text);
}

static bool read_earlier(const struct reader *reader, const struct node *node) {
    struct study *study = reader->study;
    study->previous = beside_study(reader, node);
    if (study->previous == NULL)
        return reader->error->kind == ERROR_NONE;
    struct error own = {0};
    struct study_earlier *earlier =
        arena_new(reader->arena, 1, struct study_earlier, reader->error);
    if (earlier == NULL)
        return false;
    study->earlier = earlier;
    if (access(study->previous, R_OK) != 0) {
        reader_refuse(reader, node, "cannot read \"%s\": %s", reader_shown(reader, node),
                      strerror(errno));
        return true;
    }
    if (study_earlier_read(study->previous, reader->arena, earlier, &own))
        return true;
    if (own.kind != ERROR_INPUT) {
        *reader->error = own;
        return false;
    }
    reader_refuse(reader, node,
                  "\"%s\" is no rules.json; expected the one that was written with the last issue",
                  reader_shown(reader, node));
    return true;
}

static bool read_sections(struct reader *reader, struct node *root) {
    keys_check(reader, root, &keys_study);
    if (root->kind != NODE_OBJECT)
        return true;
    reader->stackups_refused = keys_refused(root, "stackups");
    reader->signals_refused = keys_refused(root, "signals");
    return read_earlier(reader, tree_get(root, "previous")) &&
           document_read(reader, tree_get(root, "document")) &&
           boards_read(reader, tree_get(root, "stackups")) &&
           signals_read(reader, tree_get(root, "signals")) &&
           products_read(reader, tree_get(root, "products")) &&
           chapters_read(reader, tree_get(root, "chapters"));
}

static bool read_text(struct reader *reader, struct source *source) {
    struct prescan scan;
    if (!prescan(source, reader->arena, reader->findings, &scan, reader->error))
        return false;
    struct node *root = tree_build(source, &scan, reader->arena, reader->findings, reader->error);
    return root != NULL && read_sections(reader, root);
}

bool study_read_text(const char *path, const char *text, size_t length, struct arena *arena,
                     struct study *study, struct study_problems *problems, struct error *error) {
    struct error own = {0};
    struct source source;
    struct study read = {.path = arena_copy(arena, path, &own)};
    struct findings findings = {.source = &source, .arena = arena, .error = &own};
    struct reader reader = {
        .arena = arena, .error = &own, .findings = &findings, .source = &source, .study = &read};
    struct study_problems found = {0};
    if (read.path != NULL && source_index(&source, text, length, arena, &own)) {
        read_text(&reader, &source);
        if (own.kind == ERROR_NONE)
            findings_report(&findings, &found);
    }
    if (own.kind != ERROR_NONE)
        return error_set(error, own.kind, "%s: %s", path, own.message);
    *problems = found;
    if (found.count > 0)
        return false;
    *study = read;
    return true;
}

/* One byte more than accepted is enough to know that the file is too large. */
static bool read_file(int descriptor, char *buffer, size_t size, size_t *length) {
    *length = 0;
    while (*length < size) {
        ssize_t got = read(descriptor, buffer + *length, size - *length);
        if (got < 0 && errno == EINTR)
            continue;
        if (got < 0)
            return false;
        if (got == 0)
            break;
        *length += (size_t)got;
    }
    return true;
}

static bool cannot_read(const char *path, struct error *error) {
    return error_set(error, ERROR_SYSTEM, "cannot read %s: %s", path, strerror(errno));
}

bool study_read(const char *path, struct arena *arena, struct study *study,
                struct study_problems *problems, struct error *error) {
    const size_t size = (size_t)STUDY_MOST_BYTES + 1;
    struct stat status;
    size_t length = 0;
    bool ok = false;
    int descriptor = open(path, O_RDONLY | O_CLOEXEC);
    if (descriptor < 0)
        return cannot_read(path, error);
    char *buffer = malloc(size);
    if (buffer == NULL) {
        error_set(error, ERROR_MEMORY, "out of memory while reading %s", path);
        goto out;
    }
    if (fstat(descriptor, &status) == 0 && S_ISDIR(status.st_mode)) {
        error_set(error, ERROR_SYSTEM, "cannot read %s: it is a folder", path);
        goto out;
    }
    if (!read_file(descriptor, buffer, size, &length)) {
        cannot_read(path, error);
        goto out;
    }
    ok = study_read_text(path, buffer, length, arena, study, problems, error);
out:
    free(buffer);
    close(descriptor);
    return ok;
}
