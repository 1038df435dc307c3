/* Writes the fuzzer's dictionary from the declarations: every key, every word, every model with its
 * inputs and outputs, every dimension's example. */

#include "groundrules/model.h"
#include "keys.h"

#include <stdio.h>

static void entry(const char *text) {
    putchar('"');
    for (const char *at = text; *at != '\0'; at++)
        if (*at == '"' || *at == '\\' || (unsigned char)*at < 0x20 || (unsigned char)*at > 0x7E)
            printf("\\x%02X", (unsigned)(unsigned char)*at);
        else
            putchar(*at);
    puts("\"");
}

static void words(const char *const *list) {
    for (size_t i = 0; list != NULL && list[i] != NULL; i++)
        entry(list[i]);
}

static void model_entries(const struct model *model) {
    entry(model->name);
    for (size_t i = 0; i < model->input_count; i++) {
        entry(model->inputs[i].name);
        words(model->inputs[i].words);
    }
    for (size_t i = 0; i < model->output_count; i++)
        entry(model->outputs[i].name);
}

int main(void) {
    static const char *const syntax[] = {"..",        "up to ",
                                         "at least ", " in ",
                                         " points",   " points log",
                                         " ± ",       "+/-",
                                         "10-90",     "open",
                                         "smallest",  "largest",
                                         "<=",        ">=",
                                         "budget",    "reference",
                                         "//",        "/*",
                                         "*/",        "\\u0000",
                                         "\\ud83d",   "\xEF\xBB\xBF",
                                         "1e999",     "-0",
                                         "null",      "groundrules-rules 1",
                                         "format",    "files",
                                         "revision",  "cases",
                                         "case",      "bound",
                                         "at least",  "inputs",
                                         "input",     "from",
                                         "to",        "minus",
                                         "plus",      "value",
                                         NULL};
    words(syntax);
    for (size_t i = 0; i < keys_all_count; i++)
        for (size_t k = 0; k < keys_all[i]->count; k++) {
            entry(keys_all[i]->keys[k].name);
            words(keys_all[i]->keys[k].words);
        }
    for (size_t i = 0; i < model_count(); i++)
        model_entries(model_at(i));
    for (int i = 0; i < DIMENSION_WORD; i++)
        entry(dimension_example((enum dimension)i));
    return ferror(stdout) != 0;
}
