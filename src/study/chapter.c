#include "draft.h"

#include "groundrules/text.h"

#include <math.h>
#include <string.h>

static const struct model *read_model(const struct reader *reader, const struct node *node) {
    const char *names[64];
    size_t count = 0;
    const struct model *model = node == NULL ? NULL : model_find(node->text);
    if (node == NULL || model != NULL)
        return model;
    for (size_t i = 0; i < model_count() && count < 64; i++)
        names[count++] = model_at(i)->name;
    reader_refuse(reader, node, "there is no model \"%s\"%s", reader_shown(reader, node),
                  reader_advice(reader, node->text, names, count));
    /* The rest is read for what was most likely meant. */
    const char *meant = text_nearest(node->text, names, count);
    return meant == NULL ? NULL : model_find(meant);
}

static void read_practice(const struct reader *reader, struct draft *draft) {
    const struct node *node = tree_get(draft->node, "practice");
    if (node == NULL)
        return;
    const char **sayings = arena_new(reader->arena, node->count, const char *, reader->error);
    if (sayings == NULL)
        return;
    for (const struct node *child = node->first; child != NULL; child = child->next)
        sayings[draft->chapter.saying_count++] = child->text;
    draft->chapter.sayings = sayings;
}

/* "stackup", "stackup and between" */
static const char *compared(const struct reader *reader, const struct draft *draft) {
    if (draft->axis_count == 0)
        return NULL;
    if (draft->axis_count == 1)
        return draft->axes[0].key;
    return arena_print(reader->arena, reader->error, "%s and %s", draft->axes[0].key,
                       draft->axes[1].key);
}

static void resolve(const struct reader *reader, struct draft *draft) {
    struct study_chapter *chapter = &draft->chapter;
    struct study_variant *variants = NULL;
    if (!draft_resolve(reader, draft, NULL, &variants, &chapter->variant_count,
                       &draft->variant_nodes))
        return;
    chapter->variants = variants;
    const struct study_vary *vary = &chapter->vary;
    struct interval span = {NAN, NAN}; /* a sweep that was refused: only the rest is looked at */
    if (draft->vary_node != NULL)
        span = (struct interval){vary->points[0], vary->points[vary->point_count - 1]};
    for (size_t i = 0; i < chapter->variant_count; i++)
        draft_check_variant(reader, draft, &variants[i], draft->variant_nodes[i], draft->place,
                            vary->input, span, draft->vary_node);
}

static void read_chapter(const struct reader *reader, struct draft *draft, size_t *rules_left) {
    const struct node *node = draft->node;
    const struct node *title = tree_get(node, "title");
    struct study_chapter *chapter = &draft->chapter;
    chapter->id = reader_text(tree_get(node, "id"));
    chapter->question = reader_text(tree_get(node, "question"));
    chapter->note = reader_text(tree_get(node, "note"));
    source_position(reader->source, node->offset, &chapter->line, &chapter->column);
    read_practice(reader, draft);
    chapter->model = read_model(reader, tree_get(node, "model"));
    if (chapter->model == NULL)
        return; /* nothing more can be understood without it */
    chapter->title = title != NULL ? title->text : chapter->model->title;
    const struct node *given = tree_get(node, "given");
    draft->place = given != NULL ? given : node;
    given_read(reader, given, chapter->model, &draft->given);
    bool varied = draft_read_vary(reader, draft);
    bool comparable = draft_read_compare(reader, draft);
    draft_read_show(reader, draft);
    draft_read_limits(reader, draft);
    chapter->compared = compared(reader, draft);
    if (varied)
        draft_read_table(reader, draft);
    if (draft->swept_node != NULL && comparable)
        resolve(reader, draft);
    /* Without a sweep or a comparison the rules are still read for what is wrong in themselves. */
    if (!comparable)
        draft->vary_node = NULL;
    draft_read_rules(reader, draft, rules_left);
}

static void refuse_twice(const struct reader *reader, const struct node *node,
                         const struct node *earlier, const char *what) {
    unsigned line, column;
    source_position(reader->source, earlier->offset, &line, &column);
    reader_refuse(reader, node, "the %s \"%s\" is taken already, at %u:%u", what, node->text, line,
                  column);
}

/* Identifiers of chapters and, over all chapters, of rules. */
static void check_identifiers(const struct reader *reader, const struct node **nodes, size_t count,
                              const char *what) {
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < i; j++)
            if (strcmp(nodes[i]->text, nodes[j]->text) == 0) {
                refuse_twice(reader, nodes[i], nodes[j], what);
                break;
            }
}

static bool collect_identifiers(const struct reader *reader, const struct node *chapters) {
    const struct node **found = arena_new(reader->arena, STUDY_MOST_RULES + chapters->count,
                                          const struct node *, reader->error);
    if (found == NULL)
        return false;
    size_t count = 0;
    for (const struct node *chapter = chapters->first; chapter != NULL; chapter = chapter->next)
        if (tree_get(chapter, "id") != NULL)
            found[count++] = tree_get(chapter, "id");
    check_identifiers(reader, found, count, "chapter");
    count = 0;
    for (const struct node *chapter = chapters->first; chapter != NULL; chapter = chapter->next) {
        const struct node *rules = tree_get(chapter, "rules");
        for (const struct node *rule = rules == NULL ? NULL : rules->first;
             rule != NULL && count < STUDY_MOST_RULES; rule = rule->next)
            if (tree_get(rule, "id") != NULL)
                found[count++] = tree_get(rule, "id");
    }
    check_identifiers(reader, found, count, "rule");
    return true;
}

bool chapters_read(const struct reader *reader, const struct node *node) {
    size_t rules_left = STUDY_MOST_RULES;
    if (node == NULL)
        return true;
    if (node->count == 0)
        reader_refuse(reader, node, "the study has no chapter");
    struct study_chapter *chapters =
        arena_new(reader->arena, node->count, struct study_chapter, reader->error);
    struct draft *draft = arena_new(reader->arena, 1, struct draft, reader->error);
    if (chapters == NULL || draft == NULL || !collect_identifiers(reader, node))
        return false;
    size_t count = 0;
    for (const struct node *child = node->first; child != NULL; child = child->next) {
        if (child->kind != NODE_OBJECT)
            continue;
        memset(draft, 0, sizeof *draft);
        draft->node = child;
        read_chapter(reader, draft, &rules_left);
        chapters[count++] = draft->chapter;
    }
    reader->study->chapters = chapters;
    reader->study->chapter_count = count;
    return reader->error->kind == ERROR_NONE;
}
