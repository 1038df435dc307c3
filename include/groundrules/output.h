#ifndef GROUNDRULES_OUTPUT_H
#define GROUNDRULES_OUTPUT_H

#include "groundrules/arena.h"

/* A set of files written as one: either all of them are there afterwards, or what was there before
 * is untouched.  Every file goes to a temporary beside its target, is synced and closed; only when
 * all are complete they are renamed, in the order given, so the last one (the manifest) vouches for
 * the others.  One set at a time in a process. */

struct output_file {
    const char *name; /* relative, below the folder: "rules.csv", "figures/spacing-1.svg" */
    const void *bytes;
    size_t length;
};

struct output_result {
    size_t removed; /* stale files taken away */
    size_t kept;    /* stale files that could not be removed */
};

/* `folder` and the folders inside it are made when missing.  `stale`: names that an earlier set
 * held; those that are no longer among `files` are removed after the renames.  Stale names that are
 * absolute, hold "..", lead through a symbolic link or are no regular files are left alone.
 * `result` may be NULL.
 *
 * Fails with ERROR_SYSTEM (no room, no permission, not a folder, a target that is no regular file,
 * interrupted), ERROR_INTERNAL (a name that is not allowed or comes twice) or ERROR_MEMORY: all
 * temporaries and new folders are gone then and every earlier file is as it was. */
bool output_write(const char *folder, const struct output_file *files, size_t count,
                  const char *const *stale, size_t stale_count, struct arena *scratch,
                  struct output_result *result, struct error *error);

/* For a signal handler, on the thread that writes: removes the temporaries and new folders of a set
 * that is being staged.  True: the process may end now.  False: the set is just being renamed and
 * will be complete in a moment; end after output_write has returned.  Async-signal-safe. */
bool output_abandon(void);

/* "figures/a.svg" is, "", "/a", "a/../b", "a//b", "./a", "a/" and names with control characters or
 * backslashes are not names inside a folder. */
bool output_name_is_safe(const char *name);

#endif
