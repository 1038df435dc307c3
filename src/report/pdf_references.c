#include "pdf_references.h"

#include <stdbool.h>
#include <stdio.h>
#include <string.h>

enum { ENTRY = 20, MOST_TAIL = 64 };

/* A number of at most `digits` digits at `at`; SIZE_MAX when there is none. */
static size_t number_at(const char *bytes, size_t length, size_t at, size_t digits, size_t *end) {
    size_t value = 0, used = 0;
    while (used < digits && at + used < length && bytes[at + used] >= '0' &&
           bytes[at + used] <= '9')
        value = 10 * value + (size_t)(bytes[at + used++] - '0');
    if (end != NULL)
        *end = at + used;
    return used > 0 ? value : (size_t)-1;
}

static size_t skip_blanks(const char *bytes, size_t length, size_t at) {
    while (at < length && (bytes[at] == ' ' || bytes[at] == '\n' || bytes[at] == '\r'))
        at++;
    return at;
}

static size_t table_start(const char *bytes, size_t length) {
    static const char word[] = "startxref";
    for (size_t back = sizeof word; back < MOST_TAIL && back < length; back++)
        if (memcmp(bytes + length - back, word, sizeof word - 1) == 0)
            return number_at(bytes, length,
                             skip_blanks(bytes, length, length - back + sizeof word - 1), 12, NULL);
    return (size_t)-1;
}

static bool is_object(const char *bytes, size_t length, size_t offset, size_t number) {
    char head[32];
    int size = snprintf(head, sizeof head, "%zu 0 obj", number);
    return offset < length && length - offset > (size_t)size &&
           memcmp(bytes + offset, head, (size_t)size) == 0;
}

size_t pdf_references_repair(char *bytes, size_t length) {
    size_t at = table_start(bytes, length), freed = 0;
    if (at >= length || length - at < 8 || memcmp(bytes + at, "xref", 4) != 0)
        return 0;
    size_t first = number_at(bytes, length, skip_blanks(bytes, length, at + 4), 10, &at);
    size_t count = number_at(bytes, length, skip_blanks(bytes, length, at), 10, &at);
    if (first == (size_t)-1 || count == (size_t)-1)
        return 0;
    at = skip_blanks(bytes, length, at);
    for (size_t i = 0; i < count && length - at >= ENTRY; i++, at += ENTRY) {
        size_t offset = number_at(bytes, length, at, 10, NULL);
        if (bytes[at + 17] != 'n' || is_object(bytes, length, offset, first + i))
            continue;
        memcpy(bytes + at, "0000000000 65535 f", 18);
        freed++;
    }
    return freed;
}
