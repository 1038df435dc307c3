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

/* Of what the logarithm leaves, l ln(l + q) - q + s, the part without image less the one with it,
 * s'^2 = s^2 + more, without cancelling. */
static double smooth_difference(double length, double square, double more) {
    double q = sqrt(length * length + square), q_image = sqrt(length * length + square + more);
    double step = more / (q + q_image);
    return step - length * log1p(step / (length + q)) - more / (sqrt(square) + sqrt(square + more));
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

/* A pair of Gauss points: squared distance, and what the image adds to it. */
struct pair {
    double square, more;
};

/* The i-th of four; the middles when there is only one. */
static struct pair pair_of(const struct strip *a, const struct strip *b, int pairs, int i) {
    double gauss = pairs == 1 ? 0.0 : 0.57735026918962576451;
    struct point p = point_on(a, (i & 1) != 0 ? gauss : -gauss);
    struct point q = point_on(b, (i & 2) != 0 ? gauss : -gauss);
    double x = p.x - q.x, z = p.z - q.z;
    return (struct pair){x * x + z * z, 4.0 * p.z * q.z};
}

/* A strip's mean distance from itself is a third of its width; taken for the image too, so that
 * what is wrong with it goes out of the difference. */
static double smooth(const struct strip *a, const struct strip *b, double length, int pairs) {
    double sum = 0.0, width = a->to - a->from;
    for (int i = 0; i < pairs; i++) {
        struct pair pair = pair_of(a, b, pairs, i);
        sum += smooth_difference(length, a == b ? width * width / 9.0 : pair.square, pair.more);
    }
    return sum / pairs;
}

/* Mean of ln(s'/s) where both strips are small against their distance. */
static double far_logarithm(const struct strip *a, const struct strip *b, int pairs) {
    double sum = 0.0;
    for (int i = 0; i < pairs; i++) {
        struct pair pair = pair_of(a, b, pairs, i);
        sum += log1p(pair.more / pair.square);
    }
    return sum / (2 * pairs);
}

static double gauss_logarithm(const struct strip *a, const struct strip *b) {
    double sum = 0.0;
    for (int i = 0; i < 4; i++)
        sum += log(pair_of(a, b, 4, i).square);
    return sum / 8.0;
}

static bool apart(const struct strip *a, const struct strip *b, double widths) {
    double reach = widths * ((a->to - a->from) + (b->to - b->from));
    return pair_of(a, b, 1, 0).square > reach * reach;
}

/* Four pairs of points are good to (1/6)^4 of a small part three widths apart, one to (1/120)^2. */
double strip_coupling(const struct strip *a, const struct strip *b, double length) {
    int pairs = apart(a, b, 60.0) ? 1 : 4;
    double rest = smooth(a, b, length, pairs);
    if (apart(a, b, 3.0))
        return length * far_logarithm(a, b, pairs) + rest;
    struct strip image = image_of(b);
    double logarithm =
        apart(a, &image, 3.0) ? gauss_logarithm(a, &image) : mean_logarithm(a, &image);
    return length * (logarithm - mean_logarithm(a, b)) + rest;
}
