/* Comments are blanked first, outside strings.  Then a machine with one byte of stack per level
 * (object or array) and a small state walks the text; it never recurses. */

#include "prescan.h"

#include <string.h>

enum { MOST_NUMBER = 40 }; /* characters; the library reads 63 */

struct scanner {
    const struct source *source;
    struct findings *findings;
    char *text; /* source->length + 1 */
    size_t at;
    size_t *starts;
    size_t count;
    char stack[STUDY_MOST_DEPTH];
    size_t depth;
};

static bool wrong(struct scanner *scanner, size_t offset, const char *message) {
    findings_add(scanner->findings, offset, "", "%s", message);
    return false;
}

static bool is_continuation(unsigned char byte) {
    return (byte & 0xC0) == 0x80;
}

/* Bytes of the character that starts here; 0 when it is not UTF-8 (RFC 3629). */
static size_t character_length(const unsigned char *at, size_t left) {
    if (at[0] < 0x80)
        return 1;
    if (at[0] >= 0xC2 && at[0] <= 0xDF)
        return left >= 2 && is_continuation(at[1]) ? 2 : 0;
    if (at[0] >= 0xE0 && at[0] <= 0xEF) {
        if (left < 3 || !is_continuation(at[1]) || !is_continuation(at[2]))
            return 0;
        bool overlong = at[0] == 0xE0 && at[1] < 0xA0;
        bool surrogate = at[0] == 0xED && at[1] > 0x9F;
        return overlong || surrogate ? 0 : 3;
    }
    if (at[0] >= 0xF0 && at[0] <= 0xF4) {
        if (left < 4 || !is_continuation(at[1]) || !is_continuation(at[2]) ||
            !is_continuation(at[3]))
            return 0;
        bool overlong = at[0] == 0xF0 && at[1] < 0x90;
        bool beyond = at[0] == 0xF4 && at[1] > 0x8F;
        return overlong || beyond ? 0 : 4;
    }
    return 0;
}

static bool check_marks(struct scanner *scanner) {
    const unsigned char *text = (const unsigned char *)scanner->source->text;
    size_t length = scanner->source->length;
    if (length >= 3 && text[0] == 0xEF && text[1] == 0xBB && text[2] == 0xBF)
        return wrong(scanner, 0,
                     "the file starts with a byte order mark; save it as UTF-8 without one");
    if (length >= 2 &&
        ((text[0] == 0xFF && text[1] == 0xFE) || (text[0] == 0xFE && text[1] == 0xFF)))
        return wrong(scanner, 0, "the file is UTF-16; save it as UTF-8");
    return true;
}

static bool check_encoding(struct scanner *scanner) {
    const unsigned char *text = (const unsigned char *)scanner->source->text;
    size_t length = scanner->source->length;
    if (!check_marks(scanner))
        return false;
    for (size_t i = 0; i < length;) {
        size_t step = character_length(text + i, length - i);
        if (text[i] == 0)
            return wrong(scanner, i, "a NUL byte; the file must be plain UTF-8 text");
        if (step == 0) {
            findings_add(scanner->findings, i, "",
                         "byte 0x%02X is not UTF-8; save the file as UTF-8", text[i]);
            return false;
        }
        i += step;
    }
    return true;
}

/* The offset after the string that starts at `at`, or the end of the text. */
static size_t skip_string(const char *text, size_t at, size_t length) {
    for (at++; at < length && text[at] != '"' && text[at] != '\n'; at++)
        if (text[at] == '\\' && at + 1 < length && text[at + 1] != '\n')
            at++;
    return at < length ? at + 1 : length;
}

static bool blank_comments(struct scanner *scanner) {
    char *text = scanner->text;
    size_t length = scanner->source->length;
    for (size_t i = 0; i < length;) {
        if (text[i] == '"') {
            i = skip_string(text, i, length);
        } else if (text[i] == '/' && i + 1 < length && text[i + 1] == '/') {
            for (; i < length && text[i] != '\n'; i++)
                text[i] = ' ';
        } else if (text[i] == '/' && i + 1 < length && text[i + 1] == '*') {
            const char *end = strstr(text + i + 2, "*/");
            if (end == NULL)
                return wrong(scanner, i, "this comment has no end (\"*/\")");
            for (; text + i < end + 2; i++)
                if (text[i] != '\n')
                    text[i] = ' ';
        } else {
            i++;
        }
    }
    return true;
}

static void skip_spaces(struct scanner *scanner) {
    while (scanner->at < scanner->source->length && strchr(" \t\r\n", scanner->text[scanner->at]))
        scanner->at++;
}

/* '\0' at the end: the text holds no NUL. */
static char here(const struct scanner *scanner) {
    return scanner->text[scanner->at];
}

static bool ended(struct scanner *scanner) {
    return wrong(scanner, scanner->source->length,
                 "the file ends too early; a bracket or a quote is not closed");
}

static bool remember(struct scanner *scanner) {
    if (scanner->count == PRESCAN_MOST_VALUES) {
        findings_add(scanner->findings, scanner->at, "", "more than %d keys and values",
                     PRESCAN_MOST_VALUES);
        return false;
    }
    scanner->starts[scanner->count++] = scanner->at;
    return true;
}

static int hexadecimal(char c) {
    if (c >= '0' && c <= '9')
        return c - '0';
    if (c >= 'a' && c <= 'f')
        return c - 'a' + 10;
    return c >= 'A' && c <= 'F' ? c - 'A' + 10 : -1;
}

/* The code unit of \uXXXX at the backslash, -1 when it is none. */
static int code_unit(const char *at) {
    int unit = 0;
    if (at[0] != '\\' || at[1] != 'u')
        return -1;
    for (int i = 2; i < 6; i++) {
        int digit = hexadecimal(at[i]);
        if (digit < 0)
            return -1;
        unit = unit * 16 + digit;
    }
    return unit;
}

static bool scan_escape(struct scanner *scanner) {
    const char *at = scanner->text + scanner->at;
    if (at[1] != 'u') {
        if (at[1] == '\0')
            return ended(scanner);
        if (strchr("\"\\/bfnrt", at[1]) == NULL)
            return wrong(scanner, scanner->at,
                         "this escape is not known; allowed: \\\" \\\\ \\/ \\b \\f \\n \\r \\t "
                         "\\uXXXX");
        scanner->at += 2;
        return true;
    }
    int unit = code_unit(at);
    if (unit < 0)
        return wrong(scanner, scanner->at, "\\u must be followed by four hexadecimal digits");
    if (unit == 0)
        return wrong(scanner, scanner->at, "\\u0000 is not accepted in a text");
    bool high = unit >= 0xD800 && unit <= 0xDBFF;
    int low = high ? code_unit(at + 6) : 0;
    if ((unit >= 0xDC00 && unit <= 0xDFFF) || (high && (low < 0xDC00 || low > 0xDFFF)))
        return wrong(scanner, scanner->at, "half of a surrogate pair stands alone");
    scanner->at += high ? 12 : 6;
    return true;
}

static bool scan_string(struct scanner *scanner) {
    size_t start = scanner->at++;
    for (;;) {
        char c = here(scanner);
        if (c == '"') {
            scanner->at++;
            return true;
        }
        if (c == '\0')
            return wrong(scanner, start, "this text is not closed, a quote is missing");
        if (c == '\n' || c == '\r')
            return wrong(scanner, start, "this text is not closed on its line, a quote is missing");
        if ((unsigned char)c < 0x20)
            return wrong(scanner, scanner->at,
                         c == '\t' ? "a tab inside a text; write \\t or a space"
                                   : "a control character inside a text");
        if (c != '\\')
            scanner->at++;
        else if (!scan_escape(scanner))
            return false;
    }
}

static bool is_digit(char c) {
    return c >= '0' && c <= '9';
}

/* Nothing but a comma, a bracket or a brace may follow a number. */
static bool unit_follows(const char *at) {
    at += strspn(at, " \t");
    return *at != '\0' && strchr("\r\n,:{}[]\"", *at) == NULL;
}

static bool scan_number(struct scanner *scanner) {
    const char *text = scanner->text + scanner->at;
    size_t i = text[0] == '-' ? 1 : 0;
    bool ok = is_digit(text[i]);
    if (text[i] == '0' && is_digit(text[i + 1]))
        return wrong(scanner, scanner->at, "a number must not start with 0");
    while (is_digit(text[i]))
        i++;
    if (ok && text[i] == '.') {
        ok = is_digit(text[++i]);
        while (is_digit(text[i]))
            i++;
    }
    if (ok && (text[i] == 'e' || text[i] == 'E')) {
        i++;
        if (text[i] == '+' || text[i] == '-')
            i++;
        ok = is_digit(text[i]);
        while (is_digit(text[i]))
            i++;
    }
    if (!ok || (text[i] != '\0' && strchr(" \t\r\n,]}", text[i]) == NULL))
        return wrong(scanner, scanner->at,
                     "this is not a number; a value with a unit is written in quotes, \"0.35 mm\"");
    if (unit_follows(text + i))
        return wrong(scanner, scanner->at,
                     "a value with its unit stands in double quotes, such as \"0.35 mm\"");
    if (i > MOST_NUMBER)
        return wrong(scanner, scanner->at, "this number has too many digits");
    scanner->at += i;
    return true;
}

static bool scan_literal(struct scanner *scanner) {
    static const char *const literals[] = {"true", "false", "null"};
    const char *text = scanner->text + scanner->at;
    size_t length = strcspn(text, " \t\r\n,:[]{}\"");
    for (size_t i = 0; i < 3; i++)
        if (strlen(literals[i]) == length && memcmp(text, literals[i], length) == 0) {
            scanner->at += length;
            return true;
        }
    if (text[0] == '\'')
        return wrong(scanner, scanner->at, "texts stand in double quotes");
    if (text[0] == '+' || text[0] == '.')
        return wrong(scanner, scanner->at, "a number starts with a digit or a minus sign");
    int shown = length < 40 ? (int)length : 40;
    while (shown > 0 && is_continuation((unsigned char)text[shown]))
        shown--;
    if (length == 0)
        findings_add(scanner->findings, scanner->at, "", "a value was expected, found \"%c\"",
                     text[0]);
    else
        findings_add(scanner->findings, scanner->at, "",
                     "\"%.*s\" is not JSON; texts and values with units stand in double quotes",
                     shown, text);
    return false;
}

static bool scan_key(struct scanner *scanner) {
    skip_spaces(scanner);
    if (here(scanner) == '\0')
        return ended(scanner);
    if (here(scanner) == '}')
        return wrong(scanner, scanner->at, "a comma before \"}\" has nothing to separate");
    if (here(scanner) != '"')
        return wrong(scanner, scanner->at, "a key in double quotes was expected");
    if (!remember(scanner) || !scan_string(scanner))
        return false;
    skip_spaces(scanner);
    if (here(scanner) == '\0')
        return ended(scanner);
    if (here(scanner) != ':')
        return wrong(scanner, scanner->at, "\":\" was expected after the key");
    scanner->at++;
    return true;
}

/* A value; *opened when it is an object or array that holds something. */
static bool scan_value(struct scanner *scanner, bool *opened) {
    *opened = false;
    skip_spaces(scanner);
    char c = here(scanner);
    if (c == '\0')
        return ended(scanner);
    if (!remember(scanner))
        return false;
    if (c == '"')
        return scan_string(scanner);
    if (c == '-' || is_digit(c))
        return scan_number(scanner);
    if (c != '{' && c != '[')
        return scan_literal(scanner);
    if (scanner->depth == STUDY_MOST_DEPTH) {
        findings_add(scanner->findings, scanner->at, "", "nested deeper than %d levels",
                     STUDY_MOST_DEPTH);
        return false;
    }
    scanner->at++;
    skip_spaces(scanner);
    if (here(scanner) == (c == '{' ? '}' : ']')) {
        scanner->at++;
        return true;
    }
    scanner->stack[scanner->depth++] = c;
    *opened = true;
    return c == '[' || scan_key(scanner);
}

/* After a value: closes what ends here, then stands before the next value or at the end. */
static bool scan_after_value(struct scanner *scanner) {
    while (scanner->depth > 0) {
        skip_spaces(scanner);
        bool object = scanner->stack[scanner->depth - 1] == '{';
        char c = here(scanner);
        if (c == ',') {
            scanner->at++;
            if (object)
                return scan_key(scanner);
            skip_spaces(scanner);
            return here(scanner) != ']' ||
                   wrong(scanner, scanner->at, "a comma before \"]\" has nothing to separate");
        }
        if (c == '\0')
            return ended(scanner);
        if (c != (object ? '}' : ']'))
            return wrong(scanner, scanner->at,
                         object ? "\",\" or \"}\" was expected" : "\",\" or \"]\" was expected");
        scanner->at++;
        scanner->depth--;
    }
    return true;
}

static bool scan(struct scanner *scanner) {
    bool opened = false;
    skip_spaces(scanner);
    if (here(scanner) == '\0')
        return wrong(scanner, 0, "the file is empty");
    do {
        if (!scan_value(scanner, &opened) || (!opened && !scan_after_value(scanner)))
            return false;
    } while (scanner->depth > 0);
    skip_spaces(scanner);
    return here(scanner) == '\0' ||
           wrong(scanner, scanner->at, "the study has ended before this; remove what follows");
}

bool prescan(const struct source *source, struct arena *arena, struct findings *findings,
             struct prescan *result, struct error *error) {
    struct scanner scanner = {.source = source, .findings = findings};
    if (source->length > STUDY_MOST_BYTES) {
        findings_add(findings, 0, "", "the file has %zu bytes; at most %d are read", source->length,
                     STUDY_MOST_BYTES);
        return false;
    }
    if (!check_encoding(&scanner))
        return false;
    size_t most = source->length < PRESCAN_MOST_VALUES ? source->length : PRESCAN_MOST_VALUES;
    scanner.text = arena_copy_length(arena, source->text, source->length, error);
    scanner.starts = arena_new(arena, most + 1, size_t, error);
    if (scanner.text == NULL || scanner.starts == NULL)
        return false;
    if (!blank_comments(&scanner) || !scan(&scanner))
        return false;
    *result = (struct prescan){scanner.text, scanner.starts, scanner.count};
    return true;
}
