#ifndef CLI_COMMANDS_H
#define CLI_COMMANDS_H

#include "exit_code.h"

/* argc, argv: what follows the command's name. */
enum exit_code command_build(int argc, char **argv);
enum exit_code command_check(int argc, char **argv);
enum exit_code command_evaluate(int argc, char **argv);
enum exit_code command_models(int argc, char **argv);
enum exit_code command_schema(int argc, char **argv);

struct study_problems;
/* One problem a line on standard error: file:line:column: path: message. */
void print_problems(const char *path, const struct study_problems *problems);

#endif
