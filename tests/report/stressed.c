/* Writes a document that tries the typesetting, to be looked at by a person.
 * usage: stressed FILE CHAPTERS RULES BOARDS CLASSES NAME NOTE [letter] */

#include "stress.h"

#include "groundrules/document.h"

#include <stdio.h>
#include <stdlib.h>

static size_t number(const char *text) {
    return (size_t)strtoul(text, NULL, 10);
}

int main(int count, char **words) {
    struct error error = {0};
    struct arena *arena = arena_create(&error);
    struct guideline guideline;
    struct guideline_file *files = NULL;
    size_t made = 0;
    bool ok = false;
    if (count < 8 || arena == NULL)
        goto out;
    struct stress stress = {number(words[2]), number(words[3]), number(words[4]), number(words[5]),
                            number(words[6]), number(words[7]), count > 8};
    if (!stress_make(&stress, arena, &guideline, &error) ||
        !document_render(&guideline, &(struct document_options){0}, arena, &files, &made, &error))
        goto out;
    FILE *file = fopen(words[1], "wb");
    ok = file != NULL && fwrite(files[0].bytes, 1, files[0].length, file) == files[0].length;
    ok = (file == NULL || fclose(file) == 0) && ok;
out:
    if (!ok)
        fprintf(stderr, "%s\n", error.message);
    arena_free(arena);
    return ok ? 0 : 1;
}
