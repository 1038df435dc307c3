/* Replaced by the first real source of this folder. */
extern int line_placeholder;
int line_placeholder;
