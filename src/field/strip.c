/* Two strips and an image: k(s) - k(s'), k(s) = l ln((l + q)/s) - q + s, q = sqrt(l^2 + s^2),
 * averaged over both.  The logarithm's average is closed (second antiderivatives of ln|z|); where
 * the strips are small against their distance Gauss is better, and there the difference is taken in
 * one piece. */
#include "strip.h"

#include <math.h>

/* Second antiderivative in u of ln sqrt(u^2 + v^2), even in u and v; constants in u dropped. */
static double along(double u, double v) {
    double square = u * u + v * v;
    if (square == 0.0)
        return 0.0;
    double angle = v != 0.0 ? u * v * atan(u / v) : 0.0;
    return 0.25 * (u * u - v * v) * log(square) + angle - 0.75 * u * u;
}

/* Antiderivative in u and in v of the same, odd in both. */
static double crossed(double u, double v) {
    double square = u * u + v * v;
    if (square == 0.0)
        return 0.0;
    double angles = 0.0;
    if (u != 0.0)
        angles += 0.5 * u * u * atan(v / u);
    if (v != 0.0)
        angles += 0.5 * v * v * atan(u / v);
    return 0.5 * u * v * (log(square) - 3.0) + angles;
}

static double mean_logarithm(const struct strip *a, const struct strip *b) {
    double area = (a->to - a->from) * (b->to - b->from);
    if (a->upright == b->upright) {
        double v = a->at - b->at;
        return (along(b->from - a->to, v) + along(b->to - a->from, v) -
                along(b->from - a->from, v) - along(b->to - a->to, v)) /
               area;
    }
    const struct strip *level = a->upright ? b : a, *upright = a->upright ? a : b;
    double right = level->to - upright->at, left = level->from - upright->at;
    double high = upright->to - level->at, low = upright->from - level->at;
    return (crossed(right, high) - crossed(left, high) - crossed(right, low) + crossed(left, low)) /
           area;
}

/* l ln(l + q) - q + s, what the logarithm leaves. */
static double remainder_of(double length, double square) {
    double q = sqrt(length * length + square);
    return length * log(length + q) - q + sqrt(square);
}

/* k(s) - k(s') for s'^2 = s^2 + more, without cancelling. */
static double difference(double length, double square, double more) {
    double s = sqrt(square), image = sqrt(square + more);
    double q = sqrt(length * length + square), q_image = sqrt(length * length + square + more);
    double step = more / (q + q_image);
    return length * (0.5 * log1p(more / square) - log1p(step / (length + q))) + step -
           more / (s + image);
}

struct point {
    double x, z;
};

static struct point point_on(const struct strip *strip, double t) {
    double along_it = 0.5 * ((strip->to + strip->from) + t * (strip->to - strip->from));
    return strip->upright ? (struct point){strip->at, along_it}
                          : (struct point){along_it, strip->at};
}

static struct strip image_of(const struct strip *strip) {
    struct strip image = *strip;
    if (strip->upright) {
        image.from = -strip->to;
        image.to = -strip->from;
    } else {
        image.at = -strip->at;
    }
    return image;
}

static const double GAUSS = 0.57735026918962576451;

/* Squared distance of the points of the i-th pair of four. */
static double square_between(const struct strip *a, const struct strip *b, int i) {
    struct point p = point_on(a, (i & 1) != 0 ? GAUSS : -GAUSS);
    struct point q = point_on(b, (i & 2) != 0 ? GAUSS : -GAUSS);
    return (p.x - q.x) * (p.x - q.x) + (p.z - q.z) * (p.z - q.z);
}

static double far_coupling(const struct strip *a, const struct strip *b, double length) {
    double sum = 0.0;
    for (int i = 0; i < 4; i++) {
        struct point p = point_on(a, (i & 1) != 0 ? GAUSS : -GAUSS);
        struct point q = point_on(b, (i & 2) != 0 ? GAUSS : -GAUSS);
        double x = p.x - q.x, z = p.z - q.z;
        sum += difference(length, x * x + z * z, 4.0 * p.z * q.z);
    }
    return sum / 4.0;
}

/* k(s) at Gauss points: exact enough where the strips are small against their distance. */
static double mean_kernel(const struct strip *a, const struct strip *b, double length) {
    double sum = 0.0;
    for (int i = 0; i < 4; i++) {
        double square = square_between(a, b, i);
        sum += remainder_of(length, square) - 0.5 * length * log(square);
    }
    return sum / 4.0;
}

/* The logarithm in closed form, the rest by Gauss; a strip's mean distance from itself is a third
 * of its width. */
static double near_kernel(const struct strip *a, const struct strip *b, double length) {
    double sum = 0.0;
    for (int i = 0; i < 4; i++)
        sum += remainder_of(length, a == b ? (a->to - a->from) * (a->to - a->from) / 9.0
                                           : square_between(a, b, i));
    return sum / 4.0 - length * mean_logarithm(a, b);
}

static bool apart(const struct strip *a, const struct strip *b) {
    struct point p = point_on(a, 0.0), q = point_on(b, 0.0);
    double reach = 3.0 * ((a->to - a->from) + (b->to - b->from));
    return (p.x - q.x) * (p.x - q.x) + (p.z - q.z) * (p.z - q.z) > reach * reach;
}

double strip_coupling(const struct strip *a, const struct strip *b, double length) {
    if (apart(a, b))
        return far_coupling(a, b, length);
    struct strip image = image_of(b);
    return near_kernel(a, b, length) -
           (apart(a, &image) ? mean_kernel(a, &image, length) : near_kernel(a, &image, length));
}
