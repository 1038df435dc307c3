#define _XOPEN_SOURCE 700
#include "check.h"
#include "groundrules/output.h"

#include <dirent.h>
#include <errno.h>
#include <fcntl.h>
#include <ftw.h>
#include <signal.h>
#include <stdlib.h>
#include <string.h>
#include <sys/mount.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <time.h>
#include <unistd.h>

static char root[] = "/tmp/groundrules-output-XXXXXX";
static char folder[200];
static struct arena *arena;

static int remove_one(const char *path, const struct stat *status, int kind, struct FTW *walk) {
    (void)status;
    (void)kind;
    (void)walk;
    return remove(path);
}

static int set_up(void **state) {
    (void)state;
    strcpy(root, "/tmp/groundrules-output-XXXXXX");
    arena = arena_create(NULL);
    if (mkdtemp(root) == NULL)
        return -1;
    snprintf(folder, sizeof folder, "%s/made/here", root);
    return arena == NULL ? -1 : 0;
}

static int tear_down(void **state) {
    (void)state;
    arena_free(arena);
    return nftw(root, remove_one, 16, FTW_DEPTH | FTW_PHYS);
}

static int count_one(const char *path, const struct stat *status, int kind, struct FTW *walk) {
    (void)path;
    (void)status;
    (void)walk;
    return kind == FTW_F || kind == FTW_SL ? 1 : 0;
}

static int found;
static int tally(const char *path, const struct stat *status, int kind, struct FTW *walk) {
    found += count_one(path, status, kind, walk);
    return 0;
}

static int files_below(const char *path) {
    found = 0;
    nftw(path, tally, 16, FTW_PHYS);
    return found;
}

static const char *path_of(const char *name) {
    static char path[400];
    snprintf(path, sizeof path, "%s/%s", folder, name);
    return path;
}

static bool holds(const char *name, const char *content) {
    char buffer[64] = "";
    FILE *file = fopen(path_of(name), "r");
    if (file == NULL)
        return false;
    size_t length = fread(buffer, 1, sizeof buffer - 1, file);
    fclose(file);
    return length == strlen(content) && memcmp(buffer, content, length) == 0;
}

static bool write_set(const char *a, const char *b, const char *manifest, const char *const *stale,
                      size_t stale_count, struct output_result *result, struct error *error) {
    const struct output_file files[] = {
        {"a.csv", a, strlen(a)},
        {"figures/b.svg", b, strlen(b)},
        {"rules.json", manifest, strlen(manifest)},
    };
    return output_write(folder, files, 3, stale, stale_count, arena, result, error);
}

static void test_a_set_is_written_into_folders_that_were_not_there(void **state) {
    (void)state;
    struct error error = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    assert_true(holds("a.csv", "a1") && holds("figures/b.svg", "b1") && holds("rules.json", "m1"));
    assert_int_equal(files_below(root), 3);
    assert_ok(write_set("a2", "b2", "m2", NULL, 0, NULL, &error));
    assert_true(holds("a.csv", "a2") && holds("figures/b.svg", "b2") && holds("rules.json", "m2"));
    assert_int_equal(files_below(root), 3);
}

static void test_stale_files_go_and_nothing_outside_is_touched(void **state) {
    (void)state;
    struct error error = {0};
    struct output_result result = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    const struct output_file old[] = {{"old/x.svg", "x", 1}, {"old.csv", "y", 1}};
    assert_ok(output_write(folder, old, 2, NULL, 0, arena, NULL, &error));
    char outside[300];
    snprintf(outside, sizeof outside, "%s/outside", root);
    fclose(fopen(outside, "w"));
    assert_int_equal(symlink(root, path_of("link")), 0);
    const char *const stale[] = {"old/x.svg",    "old.csv", "a.csv",     outside, "../../outside",
                                 "link/outside", "figures", "not/there", "",      "link"};
    assert_ok(write_set("a2", "b2", "m2", stale, sizeof stale / sizeof stale[0], &result, &error));
    assert_int_equal(result.removed, 2);
    assert_int_equal(result.kept, 0);
    assert_int_equal(access(path_of("old.csv"), F_OK), -1);
    assert_int_equal(access(path_of("old"), F_OK), -1);
    assert_int_equal(access(outside, F_OK), 0);
    assert_true(holds("a.csv", "a2"));
}

static void test_names_that_lead_outside_are_refused(void **state) {
    (void)state;
    static const char *const names[] = {"",    "/etc/x", "..",  "../x", "a/../x", "a//b",
                                        "./a", "a/",     "a\n", "a\\b", "a/./b"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        struct error error = {0};
        struct output_file file = {names[i], "x", 1};
        assert_false(output_name_is_safe(names[i]));
        assert_false(output_write(folder, &file, 1, NULL, 0, arena, NULL, &error));
        assert_int_equal(error.kind, ERROR_INTERNAL);
    }
    assert_true(output_name_is_safe("figures/..a.svg"));
    assert_int_equal(files_below(root), 0);
    assert_int_equal(access(folder, F_OK), -1);
}

static void test_the_same_name_twice_is_refused(void **state) {
    (void)state;
    struct error error = {0};
    const struct output_file files[] = {{"a", "x", 1}, {"a", "y", 1}};
    assert_false(output_write(folder, files, 2, NULL, 0, arena, NULL, &error));
    assert_int_equal(error.kind, ERROR_INTERNAL);
}

static void test_a_folder_that_is_a_file_or_a_device_is_refused(void **state) {
    (void)state;
    struct output_file file = {"a", "x", 1};
    char path[300];
    snprintf(path, sizeof path, "%s/file", root);
    fclose(fopen(path, "w"));
    char below[320];
    snprintf(below, sizeof below, "%s/file/below", root);
    const char *const folders[][2] = {{path, path},
                                      {below, path},
                                      {"/dev/full", "/dev/full"},
                                      {"/dev/null/x", "/dev/null"},
                                      {"/proc/nothing", "/proc/nothing"}};
    for (size_t i = 0; i < 5; i++) {
        struct error error = {0};
        assert_false(output_write(folders[i][0], &file, 1, NULL, 0, arena, NULL, &error));
        assert_int_equal(error.kind, ERROR_SYSTEM);
        assert_non_null(strstr(error.message, folders[i][1]));
    }
    assert_int_equal(files_below(root), 1);
}

static void test_a_target_that_is_a_folder_leaves_all_as_it_was(void **state) {
    (void)state;
    struct error error = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    assert_int_equal(unlink(path_of("rules.json")), 0);
    assert_int_equal(mkdir(path_of("rules.json"), 0777), 0);
    assert_false(write_set("a2", "b2", "m2", NULL, 0, NULL, &error));
    assert_int_equal(error.kind, ERROR_SYSTEM);
    assert_non_null(strstr(error.message, "rules.json is in the way, it is not a file"));
    assert_true(holds("a.csv", "a1") && holds("figures/b.svg", "b1"));
    assert_int_equal(files_below(root), 2);
}

static void test_a_file_that_outgrows_its_limit_leaves_all_as_it_was(void **state) {
    (void)state;
    struct error error = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    struct rlimit before;
    assert_int_equal(getrlimit(RLIMIT_FSIZE, &before), 0);
    signal(SIGXFSZ, SIG_IGN);
    struct rlimit limit = {100, before.rlim_max};
    assert_int_equal(setrlimit(RLIMIT_FSIZE, &limit), 0);
    static char large[5000];
    memset(large, 'x', sizeof large - 1);
    bool ok = write_set("a2", large, "m2", NULL, 0, NULL, &error);
    assert_int_equal(setrlimit(RLIMIT_FSIZE, &before), 0);
    assert_false(ok);
    assert_int_equal(error.kind, ERROR_SYSTEM);
    assert_non_null(strstr(error.message, "b.svg: File too large"));
    assert_true(holds("a.csv", "a1") && holds("figures/b.svg", "b1") && holds("rules.json", "m1"));
    assert_int_equal(files_below(root), 3);
}

static void test_a_full_disk_leaves_all_as_it_was(void **state) {
    (void)state;
    assert_int_equal(mkdir(path_of("../.."), 0777), -1);
    char parent[250];
    snprintf(parent, sizeof parent, "%s/made", root);
    assert_int_equal(mkdir(parent, 0777), 0);
    assert_int_equal(mkdir(folder, 0777), 0);
    if (mount("tmpfs", folder, "tmpfs", 0, "size=64k") != 0) {
        skip();
        return;
    }
    struct error error = {0};
    static char large[60000];
    memset(large, 'x', sizeof large - 1);
    bool first = write_set("a1", "b1", "m1", NULL, 0, NULL, &error);
    bool second = write_set("a2", large, "m2", NULL, 0, NULL, &error);
    bool kept = holds("a.csv", "a1") && holds("figures/b.svg", "b1") && holds("rules.json", "m1");
    int files = files_below(folder);
    umount(folder);
    assert_true(first && !second && kept);
    assert_int_equal(files, 3);
    assert_int_equal(error.kind, ERROR_SYSTEM);
    assert_non_null(strstr(error.message, "No space left on device"));
}

static void test_every_allocation_may_fail(void **state) {
    (void)state;
    struct error error = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    bool ok = false;
    for (size_t n = 1; !ok && n < 100; n++) {
        error = (struct error){0};
        arena_fail_after(n);
        ok = write_set("a2", "b2", "m2", NULL, 0, NULL, &error);
        arena_fail_after(0);
        assert_true(ok || error.kind == ERROR_MEMORY);
        assert_true(ok ? holds("a.csv", "a2") : files_below(root) == 3);
    }
    assert_true(ok);
}

static void leave(int signal_number) {
    if (output_abandon())
        _exit(100 + (signal_number > 0));
}

/* The writer is stopped by a signal at many moments; each time either the old set or the new one is
 * complete. */
static void test_an_interruption_leaves_the_old_set_or_the_new_one(void **state) {
    (void)state;
    struct error error = {0};
    assert_ok(write_set("a1", "b1", "m1", NULL, 0, NULL, &error));
    int interrupted = 0;
    for (int round = 0; round < 60; round++) {
        pid_t child = fork();
        if (child == 0) {
            struct sigaction action = {.sa_handler = leave};
            sigaction(SIGTERM, &action, NULL);
            for (;;) {
                struct error ignored = {0};
                write_set("a2", "b2", "m2", NULL, 0, NULL, &ignored);
                write_set("a1", "b1", "m1", NULL, 0, NULL, &ignored);
            }
        }
        struct timespec pause = {0, 3000000 + 77777 * round};
        nanosleep(&pause, NULL);
        kill(child, SIGTERM);
        int status = 0;
        for (int i = 0; i < 500 && waitpid(child, &status, WNOHANG) == 0; i++) {
            struct timespec wait = {0, 1000000};
            nanosleep(&wait, NULL);
            kill(child, SIGTERM); /* the first one may have met the renames */
        }
        interrupted += WIFEXITED(status) && WEXITSTATUS(status) == 101;
        bool one =
            holds("a.csv", "a1") && holds("figures/b.svg", "b1") && holds("rules.json", "m1");
        bool two =
            holds("a.csv", "a2") && holds("figures/b.svg", "b2") && holds("rules.json", "m2");
        assert_true(one || two);
        assert_int_equal(files_below(root), 3);
    }
    assert_true(interrupted > 0);
}

int main(void) {
#define CASE(name) cmocka_unit_test_setup_teardown(name, set_up, tear_down)
    const struct CMUnitTest tests[] = {
        CASE(test_a_set_is_written_into_folders_that_were_not_there),
        CASE(test_stale_files_go_and_nothing_outside_is_touched),
        CASE(test_names_that_lead_outside_are_refused),
        CASE(test_the_same_name_twice_is_refused),
        CASE(test_a_folder_that_is_a_file_or_a_device_is_refused),
        CASE(test_a_target_that_is_a_folder_leaves_all_as_it_was),
        CASE(test_a_file_that_outgrows_its_limit_leaves_all_as_it_was),
        CASE(test_a_full_disk_leaves_all_as_it_was),
        CASE(test_every_allocation_may_fail),
        CASE(test_an_interruption_leaves_the_old_set_or_the_new_one),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
