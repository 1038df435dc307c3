/* Steps: check the names, make the folders, stage every file, look at the targets, keep a second
 * link to what will be replaced, rename, sync the folders, drop the second links, remove what is
 * stale.  Until the renames begin everything made so far is in the registry below, where a signal
 * handler finds it. */

#include "groundrules/output.h"

#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdatomic.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

enum state { IDLE, STAGING, RENAMING, ABANDONED };

/* Paths of what exists only because of the set in work.  Signals are held back while an entry is
 * made, so a handler never sees a file without its entry, nor an entry that is not ours. */
static struct {
    atomic_int state;
    atomic_size_t file_count, folder_count;
    const char **files;   /* temporaries */
    const char **folders; /* in the order they were made */
} registry;

struct set {
    const char *folder;
    const struct output_file *files;
    size_t count;
    const char **targets; /* [count] */
    const char **temporaries;
    const char **backups; /* second links of replaced files, NULL where there is none */
    bool *is_first;       /* nothing was there to be replaced */
    struct arena *arena;
    struct error *error;
};

bool output_name_is_safe(const char *name) {
    const char *start = name;
    for (const char *at = name;; at++) {
        if (*at == '/' || *at == '\0') {
            size_t length = (size_t)(at - start);
            if (length == 0 || (length == 1 && start[0] == '.') ||
                (length == 2 && start[0] == '.' && start[1] == '.'))
                return false;
            if (*at == '\0')
                return true;
            start = at + 1;
        } else if ((unsigned char)*at < 0x20 || *at == 0x7F || *at == '\\') {
            return false;
        }
    }
}

static void remove_registered(void) {
    for (size_t i = atomic_load(&registry.file_count); i > 0; i--)
        unlink(registry.files[i - 1]);
    for (size_t i = atomic_load(&registry.folder_count); i > 0; i--)
        rmdir(registry.folders[i - 1]);
}

bool output_abandon(void) {
    int saved = errno;
    int expected = STAGING;
    if (atomic_compare_exchange_strong(&registry.state, &expected, ABANDONED))
        remove_registered();
    errno = saved;
    return expected != RENAMING;
}

static bool fail(const struct set *set, const char *what, const char *path) {
    return error_set(set->error, ERROR_SYSTEM, "%s %s: %s", what, path, strerror(errno));
}

static void hold_signals(sigset_t *before) {
    sigset_t all;
    sigfillset(&all);
    sigprocmask(SIG_BLOCK, &all, before);
}

static bool is_folder(const char *path) {
    struct stat status;
    return stat(path, &status) == 0 && S_ISDIR(status.st_mode);
}

static bool make_folder(const struct set *set, const char *path) {
    if (is_folder(path))
        return true;
    sigset_t before;
    hold_signals(&before);
    int failed = mkdir(path, 0777);
    int reason = errno;
    if (failed == 0) {
        size_t count = atomic_load(&registry.folder_count);
        registry.folders[count] = path;
        atomic_store(&registry.folder_count, count + 1);
    }
    sigprocmask(SIG_SETMASK, &before, NULL);
    if (failed == 0)
        return true;
    if (reason == EEXIST)
        return is_folder(path) || error_set(set->error, ERROR_SYSTEM, "%s is not a folder", path);
    errno = reason;
    return fail(set, "cannot make the folder", path);
}

/* Every folder on the way to `path`, not `path` itself. */
static bool make_folders(const struct set *set, const char *path) {
    for (const char *at = path + 1; *at != '\0'; at++)
        if (*at == '/' && at[-1] != '/') {
            char *part = arena_copy_length(set->arena, path, (size_t)(at - path), set->error);
            if (part == NULL || !make_folder(set, part))
                return false;
        }
    return true;
}

static int open_new(const char *path) {
    sigset_t before;
    hold_signals(&before);
    int descriptor = open(path, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC | O_NOFOLLOW, 0666);
    int reason = errno;
    if (descriptor >= 0) {
        size_t count = atomic_load(&registry.file_count);
        registry.files[count] = path;
        atomic_store(&registry.file_count, count + 1);
    }
    sigprocmask(SIG_SETMASK, &before, NULL);
    errno = reason;
    return descriptor;
}

/* "figures/.spacing-1.svg.4711-0.part" */
static char *beside(const struct set *set, const char *target, unsigned attempt, const char *end) {
    const char *slash = strrchr(target, '/');
    size_t folder = slash == NULL ? 0 : (size_t)(slash - target) + 1;
    return arena_print(set->arena, set->error, "%.*s.%s.%ld-%u.%s", (int)folder, target,
                       target + folder, (long)getpid(), attempt, end);
}

static bool write_all(int descriptor, const unsigned char *bytes, size_t length) {
    while (length > 0) {
        size_t most = length < (1u << 30) ? length : 1u << 30;
        ssize_t written = write(descriptor, bytes, most);
        if (written < 0 && errno == EINTR)
            continue;
        if (written <= 0) {
            errno = written == 0 ? ENOSPC : errno;
            return false;
        }
        bytes += written;
        length -= (size_t)written;
    }
    return true;
}

enum { MOST_ATTEMPTS = 1000 };

static bool stage_file(struct set *set, size_t i) {
    int descriptor = -1;
    char *path = NULL;
    for (unsigned attempt = 0; descriptor < 0 && attempt < MOST_ATTEMPTS; attempt++) {
        path = beside(set, set->targets[i], attempt, "part");
        if (path == NULL)
            return false;
        descriptor = open_new(path);
        if (descriptor < 0 && errno != EEXIST)
            return fail(set, "cannot write", path);
    }
    if (descriptor < 0)
        return fail(set, "cannot write", path);
    set->temporaries[i] = path;
    bool ok =
        write_all(descriptor, set->files[i].bytes, set->files[i].length) && fsync(descriptor) == 0;
    int reason = errno;
    if (close(descriptor) != 0 && ok) {
        reason = errno;
        ok = false;
    }
    errno = reason;
    return ok || fail(set, "cannot write", set->targets[i]);
}

static bool check_names(const struct set *set) {
    for (size_t i = 0; i < set->count; i++) {
        const char *name = set->files[i].name;
        if (!output_name_is_safe(name))
            return error_set(set->error, ERROR_INTERNAL, "\"%s\" is no file name", name);
        for (size_t j = 0; j < i; j++)
            if (strcmp(name, set->files[j].name) == 0)
                return error_set(set->error, ERROR_INTERNAL, "the file %s comes twice", name);
    }
    return true;
}

static bool make_set(struct set *set) {
    size_t slashes = 0;
    for (const char *at = set->folder; *at != '\0'; at++)
        slashes += *at == '/';
    for (size_t i = 0; i < set->count; i++)
        for (const char *at = set->files[i].name; *at != '\0'; at++)
            slashes += *at == '/';
    set->targets = arena_new(set->arena, set->count, const char *, set->error);
    set->temporaries = arena_new(set->arena, set->count, const char *, set->error);
    set->backups = arena_new(set->arena, set->count, const char *, set->error);
    set->is_first = arena_new(set->arena, set->count, bool, set->error);
    registry.files = arena_new(set->arena, set->count, const char *, set->error);
    registry.folders = arena_new(set->arena, slashes + 1, const char *, set->error);
    if (set->targets == NULL || set->temporaries == NULL || set->backups == NULL ||
        set->is_first == NULL || registry.files == NULL || registry.folders == NULL)
        return false;
    for (size_t i = 0; i < set->count; i++) {
        set->targets[i] =
            arena_print(set->arena, set->error, "%s/%s", set->folder, set->files[i].name);
        if (set->targets[i] == NULL)
            return false;
    }
    return true;
}

static bool check_targets(const struct set *set) {
    for (size_t i = 0; i < set->count; i++) {
        struct stat status;
        if (lstat(set->targets[i], &status) == 0) {
            if (!S_ISREG(status.st_mode) && !S_ISLNK(status.st_mode))
                return error_set(set->error, ERROR_SYSTEM, "%s is in the way, it is not a file",
                                 set->targets[i]);
        } else if (errno != ENOENT) {
            return fail(set, "cannot replace", set->targets[i]);
        }
    }
    return true;
}

static bool stage(struct set *set) {
    for (size_t i = 0; i < set->count; i++)
        if (!make_folders(set, set->targets[i]))
            return false;
    if (set->count == 0 && !make_folder(set, set->folder))
        return false;
    if (!check_targets(set))
        return false;
    for (size_t i = 0; i < set->count; i++)
        if (atomic_load(&registry.state) != STAGING || !stage_file(set, i))
            return false;
    return true;
}

/* A second link brings the earlier file back when a later rename fails.  Some file systems have no
 * links: then a failing rename, which was not foreseen by check_targets, leaves a mixture that the
 * manifest gives away. */
static void keep_earlier(struct set *set) {
    for (size_t i = 0; i < set->count; i++) {
        char *path = beside(set, set->targets[i], 0, "old");
        if (path == NULL)
            return;
        unlink(path);
        if (link(set->targets[i], path) == 0)
            set->backups[i] = path;
        else
            set->is_first[i] = errno == ENOENT;
    }
}

static void undo_renames(const struct set *set, size_t renamed) {
    for (size_t i = renamed; i > 0; i--) {
        if (set->backups[i - 1] != NULL)
            rename(set->backups[i - 1], set->targets[i - 1]);
        else if (set->is_first[i - 1])
            unlink(set->targets[i - 1]);
    }
}

static void drop_backups(const struct set *set) {
    for (size_t i = 0; i < set->count; i++)
        if (set->backups[i] != NULL)
            unlink(set->backups[i]);
}

static bool rename_all(struct set *set) {
    keep_earlier(set);
    for (size_t i = 0; i < set->count; i++)
        if (rename(set->temporaries[i], set->targets[i]) != 0) {
            fail(set, "cannot replace", set->targets[i]);
            undo_renames(set, i);
            drop_backups(set);
            return false;
        }
    drop_backups(set);
    return true;
}

/* Some file systems cannot sync a folder and say EINVAL; the renames stand nevertheless. */
static bool sync_folder(const struct set *set, const char *path) {
    int descriptor = open(path, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    if (descriptor < 0)
        return fail(set, "cannot open the folder", path);
    bool ok = fsync(descriptor) == 0 || errno == EINVAL || errno == ENOTSUP || errno == EROFS;
    if (!ok)
        fail(set, "cannot sync the folder", path);
    if (close(descriptor) != 0 && ok)
        ok = fail(set, "cannot close the folder", path);
    return ok;
}

static bool sync_folders(const struct set *set) {
    const char *last = NULL;
    size_t last_length = 0;
    for (size_t i = 0; i < set->count; i++) {
        const char *target = set->targets[i];
        size_t length = (size_t)(strrchr(target, '/') - target);
        if (last != NULL && length == last_length && memcmp(last, target, length) == 0)
            continue;
        char *path = arena_copy_length(set->arena, target, length, set->error);
        if (path == NULL || !sync_folder(set, path[0] == '\0' ? "/" : path))
            return false;
        last = target;
        last_length = length;
    }
    return true;
}

static bool is_new(const struct set *set, const char *name) {
    for (size_t i = 0; i < set->count; i++)
        if (strcmp(set->files[i].name, name) == 0)
            return true;
    return false;
}

/* Whether every folder on the way below set->folder is one, and no link out of it. */
static bool leads_inside(char *path, size_t from) {
    for (size_t i = from + 1; path[i] != '\0'; i++) {
        if (path[i] != '/')
            continue;
        struct stat status;
        path[i] = '\0';
        bool inside = lstat(path, &status) == 0 && S_ISDIR(status.st_mode);
        path[i] = '/';
        if (!inside)
            return false;
    }
    return true;
}

static void remove_stale(const struct set *set, const char *name, struct output_result *result) {
    if (!output_name_is_safe(name) || is_new(set, name))
        return;
    char *path = arena_print(set->arena, NULL, "%s/%s", set->folder, name);
    struct stat status;
    if (path == NULL || !leads_inside(path, strlen(set->folder)) || lstat(path, &status) != 0 ||
        !S_ISREG(status.st_mode))
        return;
    if (unlink(path) != 0) {
        result->kept++;
        return;
    }
    result->removed++;
    size_t root = strlen(set->folder);
    for (char *slash = strrchr(path, '/'); slash != NULL && (size_t)(slash - path) > root;
         slash = strrchr(path, '/')) {
        *slash = '\0';
        if (rmdir(path) != 0) /* not empty: it stays */
            break;
    }
}

/* Everything is undone here, unless a handler was faster. */
static bool give_up(const struct set *set) {
    int expected = STAGING;
    if (atomic_compare_exchange_strong(&registry.state, &expected, ABANDONED) ||
        expected == RENAMING)
        remove_registered();
    else
        error_set(set->error, ERROR_SYSTEM, "interrupted");
    atomic_store(&registry.state, IDLE);
    return false;
}

bool output_write(const char *folder, const struct output_file *files, size_t count,
                  const char *const *stale, size_t stale_count, struct arena *scratch,
                  struct output_result *result, struct error *error) {
    struct set set = {
        .folder = folder, .files = files, .count = count, .arena = scratch, .error = error};
    if (folder[0] == '\0')
        return error_set(error, ERROR_SYSTEM, "the output folder has no name");
    if (!check_names(&set) || !make_set(&set))
        return false;
    atomic_store(&registry.file_count, 0);
    atomic_store(&registry.folder_count, 0);
    atomic_store(&registry.state, STAGING);
    if (!stage(&set))
        return give_up(&set);
    int expected = STAGING;
    if (!atomic_compare_exchange_strong(&registry.state, &expected, RENAMING) || !rename_all(&set))
        return give_up(&set);
    atomic_store(&registry.state, IDLE);
    if (!sync_folders(&set))
        return false;
    struct output_result done = {0, 0};
    for (size_t i = 0; i < stale_count; i++)
        remove_stale(&set, stale[i], &done);
    if (result != NULL)
        *result = done;
    return true;
}
