#include "report/text.h"

#include <stdbool.h>
#include <string.h>

static bool fits(struct text_setter *setter, const char *markup, const struct scene_text *room,
                 size_t lines, struct error *error) {
    struct scene_text text = *room;
    struct text_size size = {0};
    text.markup = markup;
    if (lines == 1)
        text.width = 0;
    return text_measure(setter, &text, &size, error) && size.lines <= lines &&
           size.width <= room->width + 0.05;
}

/* The first `length` bytes, back to the end of a whole character and without the space before it.
 */
static char *cut(struct arena *arena, const char *plain, size_t length, struct error *error) {
    while (length > 0 && ((unsigned char)plain[length] & 0xC0) == 0x80)
        length--;
    while (length > 0 && (plain[length - 1] == ' ' || plain[length - 1] == ','))
        length--;
    char *start = arena_copy_length(arena, plain, length, error);
    char *markup = start == NULL ? NULL : text_escape(arena, start, error);
    return markup == NULL ? NULL : arena_print(arena, error, "%s…", markup);
}

const char *text_shorten(struct text_setter *setter, const struct scene_text *text, size_t lines,
                         struct arena *arena, struct error *error) {
    if (fits(setter, text->markup, text, lines, error) || error->kind != ERROR_NONE)
        return text->markup;
    char *plain = text_plain(arena, text->markup, error);
    const char *best = "…";
    for (size_t low = 0, high = plain == NULL ? 0 : strlen(plain); low < high;) {
        size_t middle = low + (high - low) / 2;
        char *tried = cut(arena, plain, middle, error);
        if (tried == NULL)
            return text->markup;
        if (fits(setter, tried, text, lines, error)) {
            best = tried;
            low = middle + 1;
        } else
            high = middle;
    }
    return best;
}
