#ifndef TESTS_REPORT_BOXES_H
#define TESTS_REPORT_BOXES_H

#include "page.h"

#include "groundrules/scene.h"

/* What stands where in a scene: every text's ink as a box, every stroke as straight pieces. */

struct box {
    double left, top, right, bottom;
    const struct scene_text *text;
    const char *group; /* the innermost */
};

struct boxes {
    struct box *items; /* of the arena */
    size_t count;
};

/* Capital letters reach 0.717 of the size up, descenders 0.19 down (Lato's tables). */
static inline struct box boxes_text(struct page *page, const struct scene_text *text) {
    struct text_size size = {0};
    assert_true(text_measure(page->setter, text, &size, &page->error));
    double wide = size.width, tall = (double)(size.lines - 1) * size.leading;
    double left = text->align == SCENE_LEFT    ? text->x
                  : text->align == SCENE_RIGHT ? text->x - wide
                                               : text->x - wide / 2;
    return (struct box){left,        text->y - 0.717 * text->style.size,
                        left + wide, text->y + tall + 0.19 * text->style.size,
                        text,        ""};
}

static inline struct boxes boxes_of(struct page *page, const struct scene *scene) {
    struct boxes boxes = {arena_new(page->arena, scene->count, struct box, &page->error), 0};
    const char *groups[16] = {""};
    size_t depth = 0;
    assert_non_null(boxes.items);
    for (size_t i = 0; i < scene->count; i++) {
        const struct scene_item *item = &scene->items[i];
        if (item->kind == SCENE_GROUP || item->kind == SCENE_CLIP) {
            assert_true(depth + 1 < 16);
            groups[depth + 1] = item->kind == SCENE_GROUP ? item->name : groups[depth];
            depth++;
        } else if (item->kind == SCENE_END)
            depth--;
        else if (item->kind == SCENE_TEXT && item->text.turn == 0) {
            boxes.items[boxes.count] = boxes_text(page, &item->text);
            boxes.items[boxes.count++].group = groups[depth];
        }
    }
    return boxes;
}

static inline bool boxes_overlap(const struct box *a, const struct box *b) {
    const double hair = 0.3; /* pt; texts may touch, not overlap */
    return a->left < b->right - hair && b->left < a->right - hair && a->top < b->bottom - hair &&
           b->top < a->bottom - hair;
}

/* The first pair that overlaps is told. */
static inline void assert_no_overlap(const struct boxes *boxes, const char *where) {
    for (size_t i = 0; i < boxes->count; i++)
        for (size_t j = 0; j < i; j++)
            if (boxes_overlap(&boxes->items[i], &boxes->items[j])) {
                const struct box *a = &boxes->items[j], *b = &boxes->items[i];
                print_error("%s: \"%s\" (%.1f %.1f to %.1f %.1f) and \"%s\" (%.1f %.1f to %.1f "
                            "%.1f)\n",
                            where, a->text->markup, a->left, a->top, a->right, a->bottom,
                            b->text->markup, b->left, b->top, b->right, b->bottom);
                fail();
            }
}

static inline void assert_within(const struct boxes *boxes, const struct box *frame,
                                 const char *where) {
    const double hair = 0.6;
    for (size_t i = 0; i < boxes->count; i++) {
        const struct box *box = &boxes->items[i];
        if (box->left >= frame->left - hair && box->right <= frame->right + hair &&
            box->top >= frame->top - hair && box->bottom <= frame->bottom + hair)
            continue;
        print_error("%s: \"%s\" leaves the frame: %.1f %.1f to %.1f %.1f\n", where,
                    box->text->markup, box->left, box->top, box->right, box->bottom);
        fail();
    }
}

#endif
