#include "groundrules/error.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

bool error_set(struct error *error, enum error_kind kind, const char *format, ...) {
    if (error == NULL || error->kind != ERROR_NONE)
        return false;
    error->kind = kind;
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(error->message, sizeof error->message, format, arguments);
    va_end(arguments);
    return false;
}

bool error_in(struct error *error, const char *format, ...) {
    if (error == NULL || error->kind == ERROR_NONE)
        return false;
    char context[sizeof error->message];
    va_list arguments;
    va_start(arguments, format);
    int length = vsnprintf(context, sizeof context, format, arguments);
    va_end(arguments);
    size_t taken = length < 0 ? 0 : (size_t)length;
    /* A context that would leave no room for the reason is left out: the reason matters more. */
    if (taken + 3 > sizeof context / 2)
        return false;
    size_t room = sizeof context - taken - 2;
    size_t kept = strlen(error->message);
    if (kept >= room)
        kept = room - 1;
    memmove(error->message + taken + 2, error->message, kept);
    error->message[taken + 2 + kept] = '\0';
    memcpy(error->message, context, taken);
    memcpy(error->message + taken, ": ", 2);
    return false;
}
