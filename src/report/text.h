#ifndef REPORT_TEXT_H
#define REPORT_TEXT_H

#include "groundrules/arena.h"
#include "groundrules/scene.h"

/* Typesetting: what a scene's text measures, and how it is broken into lines.  Pango and HarfBuzz
 * with a private fontconfig that names Lato's files, so the machine's own fonts and settings change
 * nothing: no hinting, positions not rounded, resolution 72 (1 pt = 1 unit), language fixed.
 * Tabular lining figures and kerning are always on.  One setter for a document, one thread. */

struct text_setter;

/* `configuration`: a fontconfig file as text, NULL = fonts/fonts.conf as built in.  Only the faces
 * named in text.c are read from its <dir>s.  Fails: ERROR_SYSTEM naming the Debian package when a
 * face is missing; ERROR_MEMORY.  text_setter_free takes NULL. */
struct text_setter *text_setter_create(const char *configuration, struct error *error);
void text_setter_free(struct text_setter *setter);

/* Lato's proportions as shares of the size, from its hhea and OS/2 tables. */
#define TEXT_ASCENT 0.987
#define TEXT_DESCENT 0.213
#define TEXT_CAP_HEIGHT 0.717
#define TEXT_X_HEIGHT 0.507
#define TEXT_LEADING 1.36 /* baseline to baseline when scene_text.leading is 0 */

struct text_size {
    double width;   /* pt, of the widest line */
    double ascent;  /* pt from the first baseline up: TEXT_ASCENT * size */
    double descent; /* pt from the last baseline down */
    double leading; /* pt between baselines */
    double height;  /* ascent + (lines - 1) * leading + descent */
    size_t lines;
    double first, last; /* widths of the first and last line */
};

/* The size of `text` as it will be painted; x, y, align and turn play no part.  Lines are broken at
 * words to text->width if that is above 0 (a word wider than that is broken anywhere).  Fails:
 * ERROR_INTERNAL for markup that is not closed or not known; ERROR_INPUT for a character that the
 * font has no glyph for is NOT raised (text_missing asks); ERROR_MEMORY. */
bool text_measure(struct text_setter *setter, const struct scene_text *text, struct text_size *size,
                  struct error *error);

/* Width of one line of markup; NAN after a failure. */
double text_width(struct text_setter *setter, const char *markup, struct scene_style style,
                  struct error *error);

/* Number of characters that Lato cannot show (they would come out as boxes). */
bool text_missing(struct text_setter *setter, const char *markup, struct scene_style style,
                  size_t *missing, struct error *error);

/* text->markup itself when it takes at most `lines` lines of text->width; else as much of its plain
 * text as does, with an ellipsis.  For running heads and other places of fixed size.  Owned by the
 * arena; the markup itself after a failure. */
const char *text_shorten(struct text_setter *setter, const struct scene_text *text, size_t lines,
                         struct arena *arena, struct error *error);

/* Plain text as markup: & < > become entities; a hyphen directly before a digit at the start or
 * after a space becomes a real minus; owned by the arena; NULL after a failure. */
char *text_escape(struct arena *arena, const char *plain, struct error *error);

/* Markup as plain text: tags dropped, entities resolved. */
char *text_plain(struct arena *arena, const char *markup, struct error *error);

#endif
