#include "groundrules/document.h"

#include "pages.h"

#include <stdio.h>
#include <string.h>
#include <time.h>

static void lay_out(struct flow *flow) {
    pages_cover(flow);
    pages_changes(flow);
    pages_glance(flow);
    pages_boards(flow);
    pages_products(flow);
    pages_signals(flow);
    for (size_t i = 0; i < flow->guideline->study->chapter_count && !flow_failed(flow); i++)
        pages_chapter(flow, i);
    pages_appendices(flow);
}

/* Cover, contents, the rest: page numbers are known only after layout, so contents come in last. */
static size_t bind(struct flow *flow, struct scene ***pages) {
    size_t inserted = pages_contents_count(flow), count = flow->page_count + inserted;
    struct scene **all = arena_new(flow->arena, count, struct scene *, flow->error);
    const char **heads = arena_new(flow->arena, count, const char *, flow->error);
    if (all == NULL || heads == NULL)
        return 0;
    size_t laid_out = flow->page_count;
    pages_contents(flow, all + 1, inserted);
    all[0] = flow->pages[0];
    for (size_t i = 0; i < inserted; i++)
        heads[1 + i] = "Contents";
    for (size_t i = 1; i < laid_out; i++) {
        all[inserted + i] = flow->pages[i];
        heads[inserted + i] = flow->heads[i];
    }
    pages_running(flow, all, heads, count);
    *pages = all;
    return count;
}

static struct paint_entry *outline(struct flow *flow) {
    struct paint_entry *entries =
        arena_new(flow->arena, flow->entry_count, struct paint_entry, flow->error);
    for (size_t i = 0; entries != NULL && i < flow->entry_count; i++)
        entries[i] = (struct paint_entry){flow->entries[i].title, flow->entries[i].destination,
                                          flow->entries[i].level};
    return entries;
}

size_t pages_all(struct flow *flow, struct scene ***pages) {
    lay_out(flow);
    return flow_failed(flow) ? 0 : bind(flow, pages);
}

static bool paint(struct flow *flow, const struct document_options *options,
                  struct guideline_file *file) {
    const struct study_document *document = &flow->guideline->study->document;
    struct scene **pages = NULL;
    size_t count = pages_all(flow, &pages);
    struct paint_entry *entries = outline(flow);
    if (flow_failed(flow))
        return false;
    char created[32];
    time_t seconds = (time_t)options->date;
    struct tm date;
    if (gmtime_r(&seconds, &date) == NULL ||
        strftime(created, sizeof created, "%Y-%m-%dT%H:%M:%SZ", &date) == 0)
        return error_set(flow->error, ERROR_INPUT, "the document's date cannot be written");
    struct paint_document painted = {
        .title = document->title,
        .author = document->owner,
        .subject = flow_print(flow, "%s, revision %s; fingerprint %s",
                              document->number != NULL ? document->number : "",
                              document->revision != NULL ? document->revision : "",
                              flow->guideline->fingerprint),
        .keywords = "printed circuit board, ground, crosstalk, layout rules",
        .created = created,
        .pages = (const struct scene *const *)pages,
        .page_count = count,
        .outline = entries,
        .outline_count = flow->entry_count,
    };
    struct paint_bytes bytes;
    if (!paint_pdf(flow->setter, &painted, flow->arena, &bytes, flow->error))
        return false;
    *file = (struct guideline_file){"guideline.pdf", bytes.bytes, bytes.length};
    return true;
}

static bool paint_figures(struct flow *flow, struct guideline_file *files) {
    for (size_t i = 0; i < flow->figure_count; i++) {
        const struct flow_figure *figure = &flow->figures[i];
        struct paint_bytes bytes;
        char *title = text_plain(flow->arena, figure->title, flow->error);
        if (title == NULL ||
            !paint_svg(flow->setter, figure->scene, title, flow->arena, &bytes, flow->error))
            return error_in(flow->error, "figure %s", figure->name);
        files[i] = (struct guideline_file){flow_print(flow, "figures/%s.svg", figure->name),
                                           bytes.bytes, bytes.length};
    }
    return !flow_failed(flow);
}

bool document_render(const struct guideline *guideline, const struct document_options *options,
                     struct arena *arena, struct guideline_file **files, size_t *count,
                     struct error *error) {
    bool ok = false;
    struct flow flow;
    struct text_setter *setter = text_setter_create(NULL, error);
    if (setter == NULL)
        return false;
    struct guideline_file *made = NULL;
    struct guideline_file pdf = {0};
    if (!flow_start(&flow, guideline, setter, arena, error) || !paint(&flow, options, &pdf))
        goto out;
    made = arena_new(arena, flow.figure_count + 1, struct guideline_file, error);
    if (made == NULL || !paint_figures(&flow, made + 1))
        goto out;
    made[0] = pdf;
    *files = made;
    *count = flow.figure_count + 1;
    ok = true;
out:
    text_setter_free(setter);
    return ok;
}
