#ifndef TESTS_FUZZ_FUZZ_H
#define TESTS_FUZZ_FUZZ_H

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

/* What the fuzz targets share: a promise that does not hold ends the run with the place. */

#define promise(condition)                                                                         \
    do {                                                                                           \
        if (!(condition)) {                                                                        \
            fprintf(stderr, "%s:%d: broken promise: %s\n", __FILE__, __LINE__, #condition);        \
            abort();                                                                               \
        }                                                                                          \
    } while (0)

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

/* A zero-terminated copy in a block of its own, so that the sanitizer sees the ends of it. */
static inline char *fuzz_text(const uint8_t *data, size_t size) {
    char *text = malloc(size + 1);
    if (text == NULL)
        abort();
    for (size_t i = 0; i < size; i++)
        text[i] = (char)data[i];
    text[size] = '\0';
    return text;
}

/* FNV-1a of all bytes: one input always takes the same way. */
static inline size_t fuzz_sum(const uint8_t *data, size_t size) {
    uint64_t sum = 14695981039346656037u;
    for (size_t i = 0; i < size; i++)
        sum = (sum ^ data[i]) * 1099511628211u;
    return (size_t)(sum >> 17);
}

#endif
