#include "options.h"

#include "groundrules/text.h"

#include <stdlib.h>
#include <string.h>

struct option {
    const char *name;
    const char *letter; /* NULL = none */
    char key;
    bool takes_value;
};

static const struct option known[] = {
    {"--output", "-o", 'o', true},    {"--jobs", "-j", 'j', true},    {"--quiet", "-q", 'q', false},
    {"--json", NULL, 'J', false},     {"--strict", NULL, 's', false}, {"--study", NULL, 'S', true},
    {"--markdown", NULL, 'm', false},
};
enum { KNOWN = sizeof known / sizeof *known };

static bool set_jobs(struct options *options, const char *value, struct error *error) {
    char *end = NULL;
    long jobs = strtol(value, &end, 10);
    if (end == value || *end != '\0' || jobs < 1 || jobs > 1024)
        return error_set(error, ERROR_USAGE, "--jobs takes a whole number from 1 to 1024, not '%s'",
                         value);
    options->jobs = (int)jobs;
    return true;
}

static bool apply(struct options *options, char key, const char *value, struct error *error) {
    switch (key) {
    case 'o':
        options->output = value;
        return true;
    case 'S':
        options->study = value;
        return true;
    case 'j':
        return set_jobs(options, value, error);
    case 'q':
        options->quiet = true;
        return true;
    case 'J':
        options->json = true;
        return true;
    case 'm':
        options->markdown = true;
        return true;
    default:
        options->strict = true;
        return true;
    }
}

/* "--output=DIR" as well as "--output DIR". */
static const struct option *match(const char *word, const char **joined) {
    *joined = NULL;
    for (size_t i = 0; i < KNOWN; i++) {
        size_t length = strlen(known[i].name);
        if (strcmp(word, known[i].name) == 0 ||
            (known[i].letter != NULL && strcmp(word, known[i].letter) == 0))
            return &known[i];
        if (known[i].takes_value && strncmp(word, known[i].name, length) == 0 &&
            word[length] == '=') {
            *joined = word + length + 1;
            return &known[i];
        }
    }
    return NULL;
}

static bool refuse(const char *word, struct error *error) {
    const char *names[KNOWN];
    for (size_t i = 0; i < KNOWN; i++)
        names[i] = known[i].name;
    const char *nearest = text_nearest(word, names, KNOWN);
    if (nearest != NULL)
        return error_set(error, ERROR_USAGE, "unknown option '%s'; did you mean %s?", word,
                         nearest);
    return error_set(error, ERROR_USAGE, "unknown option '%s'; see groundrules --help", word);
}

bool options_read(int argc, char **argv, const char *allowed, const char **words,
                  struct options *options, struct error *error) {
    struct options read = {.words = words};
    bool only_words = false;
    for (int i = 0; i < argc; i++) {
        if (only_words || argv[i][0] != '-' || argv[i][1] == '\0') {
            words[read.word_count++] = argv[i];
            continue;
        }
        if (strcmp(argv[i], "--") == 0) {
            only_words = true;
            continue;
        }
        const char *value = NULL;
        const struct option *option = match(argv[i], &value);
        if (option == NULL)
            return refuse(argv[i], error);
        if (strchr(allowed, option->key) == NULL)
            return error_set(error, ERROR_USAGE, "this command takes no %s", option->name);
        if (option->takes_value && value == NULL) {
            if (i + 1 >= argc)
                return error_set(error, ERROR_USAGE, "%s needs a value", option->name);
            value = argv[++i];
        }
        if (!apply(&read, option->key, value, error))
            return false;
    }
    *options = read;
    return true;
}
