#include "json.h"

#include <math.h>

struct json json_start(struct arena *arena, struct error *error) {
    return (struct json){.text = text_start(arena, error), .fresh = true};
}

static void quoted(struct json *json, const char *value) {
    text_add(&json->text, "\"");
    for (const unsigned char *at = (const unsigned char *)value; *at != '\0'; at++) {
        if (*at == '"' || *at == '\\')
            text_format(&json->text, "\\%c", *at);
        else if (*at < 0x20)
            text_format(&json->text, "\\u%04x", *at);
        else
            text_add_length(&json->text, (const char *)at, 1);
    }
    text_add(&json->text, "\"");
}

static void lead(struct json *json, const char *key) {
    if (json->depth > 0)
        text_add(&json->text, json->fresh ? "\n" : ",\n");
    for (unsigned i = 0; i < json->depth; i++)
        text_add(&json->text, "  ");
    json->fresh = false;
    if (key != NULL) {
        quoted(json, key);
        text_add(&json->text, ": ");
    }
}

void json_open(struct json *json, const char *key, char bracket) {
    lead(json, key);
    text_add_length(&json->text, &bracket, 1);
    json->depth++;
    json->fresh = true;
}

void json_close(struct json *json, char bracket) {
    json->depth--;
    if (!json->fresh) {
        text_add(&json->text, "\n");
        for (unsigned i = 0; i < json->depth; i++)
            text_add(&json->text, "  ");
    }
    text_add_length(&json->text, &bracket, 1);
    json->fresh = false;
}

void json_text(struct json *json, const char *key, const char *value) {
    lead(json, key);
    if (value == NULL)
        text_add(&json->text, "null");
    else
        quoted(json, value);
}

void json_number(struct json *json, const char *key, double value) {
    lead(json, key);
    if (isfinite(value))
        text_format(&json->text, "%.6g", value);
    else if (isinf(value) && value > 0)
        quoted(json, "open");
    else
        text_add(&json->text, "null");
}

void json_whole(struct json *json, const char *key, long long value) {
    lead(json, key);
    text_format(&json->text, "%lld", value);
}

char *json_end(struct json *json) {
    text_add(&json->text, "\n");
    return text_end(&json->text);
}
