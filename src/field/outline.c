#include "outline.h"

#include "corner.h"

#include <math.h>
#include <string.h>

static const double pi = 3.14159265358979323846;

static bool add(struct outline *outline, struct outline_face face, struct error *error) {
    if (face.conductor == OUTLINE_NOBODY && face.left == face.right)
        return true;
    if (outline->count == OUTLINE_MOST_FACES)
        return error_set(error, ERROR_INTERNAL, "section: more than %d faces", OUTLINE_MOST_FACES);
    face.power[0] = face.power[1] = 1;
    outline->face[outline->count++] = face;
    return true;
}

bool outline_add(struct outline *outline, double complex from, double complex to, double left,
                 double right, size_t conductor, struct error *error) {
    struct outline_face face = {
        .from = from, .to = to, .left = left, .right = right, .conductor = conductor};
    return add(outline, face, error);
}

bool outline_add_endless(struct outline *outline, double complex from, double complex along,
                         double left, double right, struct error *error) {
    struct outline_face face = {.from = from,
                                .to = along,
                                .endless = true,
                                .left = left,
                                .right = right,
                                .conductor = OUTLINE_NOBODY};
    return add(outline, face, error);
}

/* A face as it leaves a corner. */
struct spoke {
    double angle;     /* 0 .. 2 pi */
    double dk_beyond; /* of the sector that follows counterclockwise */
    bool metal;       /* surface of a conductor */
};

static double angle_of(double complex direction) {
    double angle = carg(direction);
    return angle < 0 ? angle + 2 * pi : angle;
}

static bool same_point(double complex one, double complex other) {
    return cabs(one - other) <= 1e-11 * (1 + cabs(one));
}

enum { MOST_SPOKES = 8 };

static size_t spokes_at(const struct outline *outline, double complex at, struct spoke *spokes) {
    size_t count = 0;
    for (size_t i = 0; i < outline->count; i++) {
        const struct outline_face *f = &outline->face[i];
        double complex along = f->endless ? f->to : f->to - f->from;
        for (size_t end = 0; end < (f->endless ? 1 : 2) && count < MOST_SPOKES; end++) {
            if (!same_point(end == 0 ? f->from : f->to, at))
                continue;
            struct spoke new = {angle_of(end == 0 ? along : -along), end == 0 ? f->left : f->right,
                                f->conductor != OUTLINE_NOBODY};
            size_t place = count++;
            for (; place > 0 && spokes[place - 1].angle > new.angle; place--)
                spokes[place] = spokes[place - 1];
            spokes[place] = new;
        }
    }
    return count;
}

/* The largest over all fans of dielectric between metal. */
static double power_at(const struct outline *outline, double complex at) {
    struct spoke spokes[MOST_SPOKES];
    struct corner_sector sectors[MOST_SPOKES];
    size_t count = spokes_at(outline, at, spokes), first = 0, fan = 0;
    while (first < count && !spokes[first].metal)
        first++;
    bool metal = first < count;
    if (!metal && count < 2)
        return 1;
    double power = 1;
    for (size_t k = 0; k < count; k++) {
        size_t now = ((metal ? first : 0) + k) % count, next = (now + 1) % count;
        double angle = spokes[next].angle - spokes[now].angle;
        if (spokes[now].dk_beyond == OUTLINE_METAL)
            continue;
        sectors[fan++] =
            (struct corner_sector){angle <= 0 ? angle + 2 * pi : angle, spokes[now].dk_beyond};
        if (metal && spokes[next].metal) {
            power = fmax(power, corner_power(sectors, fan, true));
            fan = 0;
        }
    }
    return metal ? power : corner_power(sectors, fan, false);
}

static void add_corner(struct outline *outline, double complex at) {
    for (size_t i = 0; i < outline->corners; i++)
        if (same_point(outline->corner[i], at))
            return;
    if (outline->corners < OUTLINE_MOST_CORNERS)
        outline->corner[outline->corners++] = at;
}

static void add_corner_images(struct outline *outline) {
    size_t count = outline->corners;
    for (size_t i = 0; i < count; i++) {
        double complex at = outline->corner[i];
        if (outline->map.kind == PLANE_BELOW || outline->map.kind == PLANE_TWO)
            add_corner(outline, conj(at));
        if (outline->map.kind == PLANE_TWO)
            add_corner(outline, conj(at) + 2 * I * outline->map.spacing);
        if (outline->map.kind == PLANE_HALF && creal(at) < outline->map.end)
            add_corner(outline, conj(at));
    }
}

/* Faces share ends: each is looked at once. */
struct visited {
    size_t count;
    double complex at[OUTLINE_MOST_CORNERS];
    double power[OUTLINE_MOST_CORNERS];
};

/* At the plane's end the exponent is 1/2 whatever the two dielectrics: sin(nu pi) cos(nu pi)
 * (1 + 1/dk) = 0. */
static double visit(const struct outline *outline, double complex at, struct visited *visited) {
    for (size_t i = visited->count; i > 0; i--)
        if (same_point(visited->at[i - 1], at))
            return visited->power[i - 1];
    bool plane_end = outline->map.kind == PLANE_HALF && same_point(at, outline->map.end);
    double power = plane_end ? 2 : power_at(outline, at);
    visited->at[visited->count] = at;
    visited->power[visited->count++] = power;
    return power;
}

void outline_find_corners(struct outline *outline) {
    struct visited visited = {.count = 0};
    outline->corners = 0;
    for (size_t i = 0; i < outline->count; i++) {
        struct outline_face *f = &outline->face[i];
        for (size_t end = 0; end < (f->endless ? 1 : 2); end++) {
            double complex at = end == 0 ? f->from : f->to;
            f->power[end] = visit(outline, at, &visited);
            if (f->power[end] > 1)
                add_corner(outline, at);
        }
    }
    add_corner_images(outline);
    if (outline->map.kind == PLANE_HALF)
        add_corner(outline, outline->map.end);
}

void outline_of_free_charge(const struct outline *outline, struct outline *conductors) {
    *conductors = *outline;
    conductors->count = 0;
    for (size_t i = 0; i < outline->count; i++) {
        struct outline_face face = outline->face[i];
        if (face.conductor == OUTLINE_NOBODY)
            continue;
        face.left = face.left == OUTLINE_METAL ? OUTLINE_METAL : 1;
        face.right = face.right == OUTLINE_METAL ? OUTLINE_METAL : 1;
        conductors->face[conductors->count++] = face;
    }
}

void outline_in_air(const struct outline *outline, struct outline *air) {
    outline_of_free_charge(outline, air);
    outline_find_corners(air);
}

void outline_left_half(const struct outline *outline, struct outline *half) {
    memcpy(half, outline, sizeof *half);
    half->count = 0;
    for (size_t i = 0; i < outline->count; i++) {
        struct outline_face face = outline->face[i];
        double from = creal(face.from);
        double to = face.endless ? creal(face.to) : creal(face.to);
        if (face.endless ? (to > 0 || from > 0) : (fmin(from, to) >= 0))
            continue;
        if (!face.endless && fmax(from, to) > 0) {
            double complex cut = face.from + (face.to - face.from) * (from / (from - to));
            cut = I * cimag(cut);
            size_t end = from > 0 ? 0 : 1;
            *(end == 0 ? &face.from : &face.to) = cut;
            face.power[end] = 1;
        }
        half->face[half->count++] = face;
    }
}
