/* Any bytes as the rules.json of an earlier issue, which a study may name and an output folder may
 * hold. */

#define _GNU_SOURCE /* memfd_create: a file without a name in any folder */

#include "fuzz.h"

#include "groundrules/study.h"

#include <string.h>
#include <sys/mman.h>
#include <unistd.h>

static void read_both(const char *path) {
    struct error error = {0};
    struct study_earlier earlier = {0};
    const char *const *names = NULL;
    size_t count = 0;
    struct arena *arena = arena_create(&error);
    if (arena == NULL)
        abort();
    if (study_earlier_read(path, arena, &earlier, &error)) {
        for (size_t i = 0; i < earlier.case_count; i++)
            promise(earlier.cases[i].rule != NULL && earlier.cases[i].input != NULL);
    } else
        promise(error.kind == ERROR_INPUT && error.message[0] != '\0');
    promise(study_manifest_files(path, arena, &names, &count, &error));
    for (size_t i = 0; i < count; i++)
        promise(names[i] != NULL && strlen(names[i]) < 1u << 20);
    arena_free(arena);
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size) {
    char path[64];
    int descriptor = memfd_create("rules.json", MFD_CLOEXEC);
    if (descriptor < 0 || write(descriptor, data, size) != (ssize_t)size)
        abort();
    snprintf(path, sizeof path, "/proc/self/fd/%d", descriptor);
    read_both(path);
    close(descriptor);
    return 0;
}
