/* Replaced by the first real source of this folder. */
extern int field_placeholder;
int field_placeholder;
