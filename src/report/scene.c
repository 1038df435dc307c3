#include "groundrules/scene.h"

#include <assert.h>
#include <math.h>
#include <string.h>

struct scene *scene_create(double width, double height, struct arena *arena, struct error *error) {
    struct scene *scene = arena_new(arena, 1, struct scene, error);
    if (scene == NULL)
        return NULL;
    *scene = (struct scene){.width = width, .height = height, .arena = arena, .error = error};
    return scene;
}

/* A scene without a listener would forget its first failure, so it must have one. */
static bool failed(const struct scene *scene) {
    return scene->error != NULL && scene->error->kind != ERROR_NONE;
}

static struct scene_item *append(struct scene *scene, enum scene_kind kind) {
    if (failed(scene))
        return NULL;
    if (scene->count == scene->capacity) {
        size_t capacity = scene->capacity == 0 ? 64 : 2 * scene->capacity;
        struct scene_item *items =
            arena_new(scene->arena, capacity, struct scene_item, scene->error);
        if (items == NULL)
            return NULL;
        if (scene->count > 0)
            memcpy(items, scene->items, scene->count * sizeof *items);
        scene->items = items;
        scene->capacity = capacity;
    }
    struct scene_item *item = &scene->items[scene->count++];
    *item = (struct scene_item){.kind = kind};
    return item;
}

/* An item whose text could not be copied is taken off again: what is in a scene is complete. */
static bool keep(struct scene *scene, bool complete) {
    if (!complete)
        scene->count--;
    return complete;
}

bool scene_path(struct scene *scene, const struct scene_path *path) {
    assert(path->filled || path->stroked);
    assert(path->dash_count <= sizeof path->dashes / sizeof path->dashes[0]);
    struct scene_item *item = append(scene, SCENE_PATH);
    if (item == NULL)
        return false;
    item->path = *path;
    struct scene_segment *segments =
        arena_new(scene->arena, path->count, struct scene_segment, scene->error);
    if (segments != NULL && path->count > 0)
        memcpy(segments, path->segments, path->count * sizeof *segments);
    item->path.segments = segments;
    return keep(scene, segments != NULL);
}

bool scene_text(struct scene *scene, const struct scene_text *text) {
    struct scene_item *item = append(scene, SCENE_TEXT);
    if (item == NULL)
        return false;
    item->text = *text;
    item->text.markup = arena_copy(scene->arena, text->markup, scene->error);
    return keep(scene, item->text.markup != NULL);
}

bool scene_rectangle(struct scene *scene, double x, double y, double width, double height,
                     struct scene_colour fill) {
    struct scene_segment segments[] = {
        {SCENE_MOVE, {x}, {y}},
        {SCENE_LINE, {x + width}, {y}},
        {SCENE_LINE, {x + width}, {y + height}},
        {SCENE_LINE, {x}, {y + height}},
        {SCENE_CLOSE, {0}, {0}},
    };
    return scene_path(scene, &(struct scene_path){
                                 .segments = segments, .count = 5, .filled = true, .fill = fill});
}

bool scene_line(struct scene *scene, double x0, double y0, double x1, double y1, double width,
                struct scene_colour colour) {
    struct scene_segment segments[] = {{SCENE_MOVE, {x0}, {y0}}, {SCENE_LINE, {x1}, {y1}}};
    return scene_path(
        scene,
        &(struct scene_path){
            .segments = segments, .count = 2, .stroked = true, .stroke = colour, .width = width});
}

static bool append_box(struct scene *scene, enum scene_kind kind, double x, double y, double width,
                       double height, const char *name) {
    struct scene_item *item = append(scene, kind);
    if (item == NULL)
        return false;
    item->x = x;
    item->y = y;
    item->width = width;
    item->height = height;
    if (name == NULL)
        return true;
    item->name = arena_copy(scene->arena, name, scene->error);
    return keep(scene, item->name != NULL);
}

bool scene_clip(struct scene *scene, double x, double y, double width, double height) {
    return append_box(scene, SCENE_CLIP, x, y, width, height, NULL);
}

bool scene_group(struct scene *scene, const char *name) {
    return append_box(scene, SCENE_GROUP, 0, 0, 0, 0, name);
}

bool scene_end(struct scene *scene) {
    return append_box(scene, SCENE_END, 0, 0, 0, 0, NULL);
}

bool scene_link(struct scene *scene, double x, double y, double width, double height,
                const char *destination) {
    return append_box(scene, SCENE_LINK, x, y, width, height, destination);
}

bool scene_destination(struct scene *scene, const char *name, double x, double y) {
    return append_box(scene, SCENE_DESTINATION, x, y, 0, 0, name);
}

static bool place_path(struct scene *scene, const struct scene_path *path, double x, double y) {
    if (!scene_path(scene, path))
        return false;
    struct scene_path *placed = &scene->items[scene->count - 1].path;
    /* The copy was made by scene_path from this scene's own arena. */
    struct scene_segment *segments = (struct scene_segment *)placed->segments;
    for (size_t i = 0; i < placed->count; i++)
        for (size_t k = 0; k < 3; k++) {
            segments[i].x[k] += x;
            segments[i].y[k] += y;
        }
    return true;
}

bool scene_place(struct scene *scene, const struct scene *part, double x, double y) {
    for (size_t i = 0; i < part->count; i++) {
        const struct scene_item *item = &part->items[i];
        if (item->kind == SCENE_PATH) {
            if (!place_path(scene, &item->path, x, y))
                return false;
        } else if (item->kind == SCENE_TEXT) {
            struct scene_text text = item->text;
            text.x += x;
            text.y += y;
            if (!scene_text(scene, &text))
                return false;
        } else if (!append_box(scene, item->kind, item->x + x, item->y + y, item->width,
                               item->height, item->name)) {
            return false;
        }
    }
    return true;
}
