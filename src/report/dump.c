#include "report/dump.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct dump {
    char *text;
    size_t length, capacity;
    struct arena *arena;
    struct error *error;
    bool failed;
};

static void write_bytes(struct dump *dump, const char *bytes, size_t length) {
    if (dump->failed)
        return;
    if (dump->length + length + 1 > dump->capacity) {
        size_t capacity = 2 * (dump->capacity + length) + 4096;
        char *text = arena_new(dump->arena, capacity, char, dump->error);
        if (text == NULL) {
            dump->failed = true;
            return;
        }
        if (dump->length > 0)
            memcpy(text, dump->text, dump->length);
        dump->text = text;
        dump->capacity = capacity;
    }
    memcpy(dump->text + dump->length, bytes, length);
    dump->length += length;
    dump->text[dump->length] = '\0';
}

__attribute__((format(printf, 2, 3))) static void print(struct dump *dump, const char *format,
                                                        ...) {
    char line[512];
    va_list arguments;
    va_start(arguments, format);
    int length = vsnprintf(line, sizeof line, format, arguments);
    va_end(arguments);
    if (length > 0)
        write_bytes(dump, line, (size_t)length < sizeof line ? (size_t)length : sizeof line - 1);
}

/* Rounded to 0.1 without "-0.0", so that the last bits of another machine do not show. */
static double tenth(double value) {
    double rounded = round(value * 10) / 10;
    return rounded == 0 ? 0 : rounded;
}

static void number(struct dump *dump, double value) {
    print(dump, " %g", tenth(value));
}

static void colour(struct dump *dump, struct scene_colour colour) {
    print(dump, " #%02x%02x%02x", (unsigned)lround(colour.red * 255),
          (unsigned)lround(colour.green * 255), (unsigned)lround(colour.blue * 255));
    if (colour.alpha < 1)
        print(dump, "/%.2g", colour.alpha);
}

static void quoted(struct dump *dump, const char *text) {
    write_bytes(dump, " \"", 2);
    write_bytes(dump, text, strlen(text));
    write_bytes(dump, "\"", 1);
}

static void path(struct dump *dump, const struct scene_path *path) {
    static const char LETTERS[] = {'M', 'L', 'C', 'Z'};
    print(dump, "path");
    if (path->filled) {
        print(dump, " fill");
        colour(dump, path->fill);
    }
    if (path->stroked) {
        print(dump, " stroke");
        colour(dump, path->stroke);
        print(dump, " width %g", round(path->width * 100) / 100);
    }
    for (size_t i = 0; i < path->dash_count; i++)
        print(dump, "%s%g", i == 0 ? " dash " : ",", tenth(path->dashes[i]));
    if (path->round)
        print(dump, " round");
    print(dump, " :");
    for (size_t i = 0; i < path->count; i++) {
        const struct scene_segment *segment = &path->segments[i];
        print(dump, " %c", LETTERS[segment->verb]);
        size_t points = segment->verb == SCENE_CURVE ? 3 : segment->verb == SCENE_CLOSE ? 0 : 1;
        for (size_t k = 0; k < points; k++) {
            number(dump, segment->x[k]);
            number(dump, segment->y[k]);
        }
    }
}

static void text(struct dump *dump, const struct scene_text *text) {
    static const char *const WEIGHTS[] = {"regular", "medium", "bold"};
    static const char *const ALIGNS[] = {"left", "centre", "right"};
    print(dump, "text %s %g %g %s%s %g", ALIGNS[text->align], tenth(text->x), tenth(text->y),
          WEIGHTS[text->style.weight], text->style.italic ? " italic" : "",
          tenth(text->style.size));
    colour(dump, text->style.colour);
    if (text->width > 0)
        print(dump, " width %g", tenth(text->width));
    if (text->leading > 0)
        print(dump, " leading %g", tenth(text->leading));
    if (text->turn != 0)
        print(dump, " turn %g", tenth(text->turn));
    quoted(dump, text->markup);
}

static void item(struct dump *dump, const struct scene_item *item) {
    switch (item->kind) {
    case SCENE_PATH:
        path(dump, &item->path);
        break;
    case SCENE_TEXT:
        text(dump, &item->text);
        break;
    case SCENE_CLIP:
        print(dump, "clip %g %g %g %g", tenth(item->x), tenth(item->y), tenth(item->width),
              tenth(item->height));
        break;
    case SCENE_GROUP:
        print(dump, "group");
        quoted(dump, item->name == NULL ? "" : item->name);
        break;
    case SCENE_END:
        print(dump, "end");
        break;
    case SCENE_LINK:
        print(dump, "link %g %g %g %g", tenth(item->x), tenth(item->y), tenth(item->width),
              tenth(item->height));
        quoted(dump, item->name);
        break;
    case SCENE_DESTINATION:
        print(dump, "destination %g %g", tenth(item->x), tenth(item->y));
        quoted(dump, item->name);
        break;
    }
}

char *dump_scene(const struct scene *scene, struct arena *arena, struct error *error) {
    struct dump dump = {.arena = arena, .error = error};
    print(&dump, "scene %g x %g\n", tenth(scene->width), tenth(scene->height));
    size_t depth = 1;
    for (size_t i = 0; i < scene->count; i++) {
        enum scene_kind kind = scene->items[i].kind;
        if (kind == SCENE_END && depth > 1)
            depth--;
        for (size_t k = 0; k < depth; k++)
            print(&dump, "  ");
        item(&dump, &scene->items[i]);
        write_bytes(&dump, "\n", 1);
        if (kind == SCENE_GROUP || kind == SCENE_CLIP)
            depth++;
    }
    return dump.failed ? NULL : dump.text;
}
