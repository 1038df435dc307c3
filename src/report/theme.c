#include "report/theme.h"

#include <assert.h>
#include <math.h>

static const double GUTTER = 12;
static const double TEXT_WIDTH = 480; /* both page sizes: a figure fits either */

struct theme_page theme_page(enum study_page page) {
    struct theme_page made = {.gutter = GUTTER};
    if (page == STUDY_LETTER) {
        made.width = 612;
        made.height = 792;
        made.left = 70;
        made.top = 72;
        made.bottom = 724;
        made.head = 44;
        made.foot = 758;
    } else {
        made.width = 210 / 25.4 * 72;
        made.height = 297 / 25.4 * 72;
        made.left = 62;
        made.top = 76;
        made.bottom = 776;
        made.head = 46;
        made.foot = 808;
    }
    made.right = made.left + TEXT_WIDTH;
    made.column = (TEXT_WIDTH - (THEME_COLUMNS - 1) * GUTTER) / THEME_COLUMNS;
    return made;
}

double theme_column(const struct theme_page *page, size_t first, size_t span, double *width) {
    assert(span > 0 && first + span <= THEME_COLUMNS);
    *width = (double)span * page->column + (double)(span - 1) * page->gutter;
    return page->left + (double)first * (page->column + page->gutter);
}

double theme_snap(const struct theme_page *page, double y) {
    return page->top + ceil((y - page->top) / THEME_BASELINE - 1e-6) * THEME_BASELINE;
}

static struct scene_colour rgb(unsigned hex) {
    return (struct scene_colour){(double)(hex >> 16 & 255) / 255, (double)(hex >> 8 & 255) / 255,
                                 (double)(hex & 255) / 255, 1};
}

static const struct {
    double size;
    double leading;
    enum scene_weight weight;
    bool italic;
    enum theme_ink ink;
} TEXTS[THEME_TEXTS] = {
    [THEME_TITLE] = {30, 36, SCENE_BOLD, false, THEME_INK},
    [THEME_CHAPTER] = {19, 24, SCENE_BOLD, false, THEME_INK},
    [THEME_SECTION] = {12.5, 16, SCENE_BOLD, false, THEME_INK},
    [THEME_LEAD] = {11.5, 16, SCENE_REGULAR, true, THEME_INK},
    [THEME_BODY] = {9.2, 12, SCENE_REGULAR, false, THEME_INK},
    [THEME_STRONG] = {9.2, 12, SCENE_BOLD, false, THEME_INK},
    [THEME_TABLE] = {8.2, 10, SCENE_REGULAR, false, THEME_INK},
    [THEME_HEAD] = {7.8, 10, SCENE_MEDIUM, false, THEME_INK},
    [THEME_NOTE] = {7.6, 10, SCENE_REGULAR, false, THEME_QUIET},
    [THEME_RUNNING] = {7.2, 10, SCENE_REGULAR, false, THEME_QUIET},
    [THEME_TICK] = {7.6, 10, SCENE_REGULAR, false, THEME_QUIET},
    [THEME_LABEL] = {7.8, 10, SCENE_REGULAR, false, THEME_INK},
    [THEME_FIGURE] = {9, 12, SCENE_MEDIUM, false, THEME_INK},
};

struct scene_style theme_style(enum theme_text text) {
    return (struct scene_style){.size = TEXTS[text].size,
                                .weight = TEXTS[text].weight,
                                .italic = TEXTS[text].italic,
                                .colour = theme_colour(TEXTS[text].ink)};
}

double theme_leading(enum theme_text text) {
    return TEXTS[text].leading;
}

struct scene_colour theme_colour(enum theme_ink ink) {
    static const unsigned INKS[THEME_INKS] = {
        [THEME_INK] = 0x1B1F24,   [THEME_QUIET] = 0x5A626B, [THEME_HAIR] = 0xD3D7DB,
        [THEME_TINT] = 0xF4F4F0,  [THEME_PAPER] = 0xFFFFFF, [THEME_ACCENT] = 0x1B6A70,
        [THEME_ALARM] = 0x9C2F2A,
    };
    return rgb(INKS[ink]);
}

/* Dark to light, L* 13, 24, 33, 39, 48, 56, 61, 70; blues and warm hues in turn. */
static const unsigned RAMP[8] = {0x14213D, 0x6B1A3F, 0x1C4E8A, 0xA33B1A,
                                 0x1B8077, 0xC8700F, 0x7196D0, 0xC2A93B};

/* Which of the ramp serve `count` curves: far apart in lightness first, then along the axis from
 * blue to yellow that all common kinds of colour blindness keep. */
static const unsigned char CHOICE[9][8] = {
    {0},
    {0},
    {0, 5},
    {0, 3, 6},
    {0, 3, 6, 7},
    {0, 2, 3, 5, 7},
    {0, 1, 2, 4, 5, 7},
    {0, 1, 2, 4, 5, 6, 7},
    {0, 1, 2, 3, 4, 5, 6, 7},
};

static const struct {
    double lengths[6];
    size_t count;
} DASHES[12] = {
    {{0}, 0},
    {{7, 2.2}, 2},
    {{2.6, 1.8}, 2},
    {{8, 2, 1.4, 2}, 4},
    {{13, 2.6}, 2},
    {{1.3, 1.6}, 2},
    {{8, 1.8, 1.4, 1.8, 1.4, 1.8}, 6},
    {{4.6, 3.4}, 2},
    {{16, 2, 3, 2}, 4},
    {{5, 1.6, 2.2, 1.6}, 4},
    {{1.3, 3.2}, 2},
    {{10, 5}, 2},
};

struct theme_curve theme_curve(size_t index, size_t count) {
    size_t shown = count < 1 ? 1 : count > 8 ? 8 : count;
    size_t dash = index % (sizeof DASHES / sizeof DASHES[0]);
    struct theme_curve curve = {
        .colour = rgb(RAMP[CHOICE[shown][index % shown]]),
        .dash_count = DASHES[dash].count,
        .marker = (enum theme_marker)(index % THEME_MARKERS),
    };
    /* Lighter inks look thinner. */
    curve.width = 1.25 + 0.4 * theme_lightness(curve.colour) / 70;
    for (size_t i = 0; i < curve.dash_count; i++)
        curve.dashes[i] = DASHES[dash].lengths[i];
    return curve;
}

static double linear(double channel) {
    return channel <= 0.04045 ? channel / 12.92 : pow((channel + 0.055) / 1.055, 2.4);
}

double theme_lightness(struct scene_colour colour) {
    /* Luminance of sRGB's primaries under D65 (IEC 61966-2-1), then CIE 15. */
    double y =
        0.2126 * linear(colour.red) + 0.7152 * linear(colour.green) + 0.0722 * linear(colour.blue);
    return y > 216.0 / 24389 ? 116 * cbrt(y) - 16 : y * 24389.0 / 27;
}

struct theme_solid theme_solid(enum sketch_role role) {
    struct scene_colour slate = rgb(0x47505A), bronze = rgb(0xA9792F), paper = rgb(0xFFFFFF);
    switch (role) {
    case SKETCH_PLANE:
        return (struct theme_solid){.fill = slate};
    case SKETCH_DIELECTRIC:
        return (struct theme_solid){.fill = rgb(0xF5F1E4), .hatch = 7, .hatching = rgb(0xE3DCC6)};
    case SKETCH_MASK:
        return (struct theme_solid){.fill = rgb(0xB9CDBB)};
    case SKETCH_COVER:
        return (struct theme_solid){.fill = slate};
    case SKETCH_TRACE:
        return (struct theme_solid){.fill = bronze, .edge = rgb(0x5F431A), .edge_width = 0.5};
    case SKETCH_AGGRESSOR:
        return (struct theme_solid){
            .fill = rgb(0x5A1E3C), .edge = rgb(0x5A1E3C), .edge_width = 0.5};
    case SKETCH_VICTIM:
        return (struct theme_solid){
            .fill = rgb(0xE0B54A), .edge = rgb(0x5F431A), .edge_width = 0.7};
    case SKETCH_TIED:
        return (struct theme_solid){.fill = rgb(0x8B949D), .edge = slate, .edge_width = 0.6};
    case SKETCH_FLOATING:
        return (struct theme_solid){
            .fill = paper, .edge = slate, .edge_width = 0.7, .dashed = true};
    case SKETCH_TIED_ONE_END:
        return (struct theme_solid){
            .fill = paper, .edge = slate, .edge_width = 0.7, .hatch = 2.6, .hatching = slate};
    }
    return (struct theme_solid){.fill = bronze};
}

const char *theme_role_name(enum sketch_role role) {
    static const char *const NAMES[] = {
        [SKETCH_PLANE] = "ground plane",
        [SKETCH_DIELECTRIC] = "dielectric",
        [SKETCH_MASK] = "solder mask",
        [SKETCH_COVER] = "plane above",
        [SKETCH_TRACE] = "trace",
        [SKETCH_AGGRESSOR] = "aggressor",
        [SKETCH_VICTIM] = "victim",
        [SKETCH_TIED] = "ground copper, tied",
        [SKETCH_FLOATING] = "copper, floating",
        [SKETCH_TIED_ONE_END] = "copper, tied at one end",
    };
    return NAMES[role];
}
