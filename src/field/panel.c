#include "panel.h"

#include "logarithm.h"
#include "quadrature.h"

#include <math.h>

void panel_potential(double re, double im, size_t terms, double *phi) {
    double plus = 0.5 * log((re + 1) * (re + 1) + im * im);
    double minus = 0.5 * log((re - 1) * (re - 1) + im * im);
    /* Only differences of the two angles matter; on the cut the mean of both sides is real. */
    double angle_plus = im == 0.0 ? 0.0 : atan2(im, re + 1);
    double angle_minus = im == 0.0 ? 0.0 : atan2(im, re - 1);
    double at_plus = re == -1.0 && im == 0.0 ? 0.0 : (re + 1) * plus - im * angle_plus;
    double at_minus = re == 1.0 && im == 0.0 ? 0.0 : (re - 1) * minus - im * angle_minus;
    phi[0] = 0.5 * (at_plus - at_minus) - 1.0;
    double q_re[PANEL_MOST_TERMS + 1], q_im[PANEL_MOST_TERMS + 1];
    q_re[0] = 0.5 * (plus - minus);
    q_im[0] = 0.5 * (angle_plus - angle_minus);
    q_re[1] = re * q_re[0] - im * q_im[0] - 1.0;
    q_im[1] = re * q_im[0] + im * q_re[0];
    for (size_t n = 1; n < terms; n++) {
        double k = (double)n;
        double b_re = re * q_re[n] - im * q_im[n];
        double b_im = re * q_im[n] + im * q_re[n];
        q_re[n + 1] = ((2 * k + 1) * b_re - k * q_re[n - 1]) / (k + 1);
        q_im[n + 1] = ((2 * k + 1) * b_im - k * q_im[n - 1]) / (k + 1);
        phi[n] = (q_re[n + 1] - q_re[n - 1]) / (2 * k + 1);
    }
}

static double clear(double between, double reach) {
    return fmax(0.0, fabs(between) - reach);
}

static double image_y(const struct panel *source, struct panel_image image) {
    return image.mirrored ? image.mirror - source->y : source->y;
}

double panel_distance(const struct panel *target, const struct panel *source,
                      struct panel_image image) {
    double reach_x = (target->upright ? 0 : target->half) + (source->upright ? 0 : source->half);
    double reach_y = (target->upright ? target->half : 0) + (source->upright ? source->half : 0);
    return hypot(clear(target->x - source->x, reach_x),
                 clear(target->y - image_y(source, image), reach_y));
}

static void test_functions(const double *t, const double *weight, size_t count,
                           double (*test)[PANEL_MOST_TERMS]) {
    for (size_t a = 0; a < count; a++) {
        quadrature_legendre(PANEL_MOST_TERMS, t[a], test[a]);
        for (size_t m = 0; m < PANEL_MOST_TERMS; m++)
            test[a][m] *= 0.5 * weight[a];
    }
}

/* Near: an outer integral over a target whose potential behaves like d ln d at its ends;
 * t = (3u - u^3)/2 doubles the order of the zero there, Gauss in u then converges as count^-8. */
void panel_rules_make(struct panel_rules *rules) {
    double weight[PANEL_NEAR_NODES];
    quadrature_gauss(PANEL_NEAR_NODES, rules->near, weight);
    for (size_t a = 0; a < PANEL_NEAR_NODES; a++) {
        double u = rules->near[a];
        rules->near[a] = 0.5 * u * (3 - u * u);
        weight[a] *= 1.5 * (1 - u) * (1 + u);
    }
    test_functions(rules->near, weight, PANEL_NEAR_NODES, rules->near_test);
    quadrature_gauss(PANEL_FAR_NODES, rules->far, weight);
    test_functions(rules->far, weight, PANEL_FAR_NODES, rules->far_test);
    quadrature_gauss(PANEL_IMAGE_NODES, rules->image, weight);
    test_functions(rules->image, weight, PANEL_IMAGE_NODES, rules->image_test);
}

static void add_near(const struct panel_rules *rules, const struct panel *target,
                     const struct panel *source, struct panel_image image, size_t terms,
                     double scale, bool transposed, double *block) {
    double own = log(source->half);
    double sense = image.mirrored ? -1.0 : 1.0;
    for (size_t a = 0; a < PANEL_NEAR_NODES; a++) {
        double dx = target->x - source->x, dy = target->y - image_y(source, image);
        *(target->upright ? &dy : &dx) += target->half * rules->near[a];
        double phi[PANEL_MOST_TERMS];
        if (source->upright)
            panel_potential(sense * dy / source->half, dx / source->half, terms, phi);
        else
            panel_potential(dx / source->half, dy / source->half, terms, phi);
        phi[0] += own;
        for (size_t m = 0; m < terms; m++)
            for (size_t n = 0; n < terms; n++)
                block[transposed ? n * terms + m : m * terms + n] +=
                    scale * rules->near_test[a][m] * phi[n];
    }
}

static void add_far(const struct panel_rules *rules, const struct panel *target,
                    const struct panel *source, struct panel_image image, size_t terms,
                    double scale, double *block) {
    double step = source->half * (source->upright && image.mirrored ? -1.0 : 1.0);
    for (size_t a = 0; a < PANEL_FAR_NODES; a++) {
        double inner[PANEL_MOST_TERMS] = {0};
        for (size_t b = 0; b < PANEL_FAR_NODES; b++) {
            double dx = target->x - source->x, dy = target->y - image_y(source, image);
            *(target->upright ? &dy : &dx) += target->half * rules->far[a];
            *(source->upright ? &dy : &dx) -= step * rules->far[b];
            double value = 0.5 * scale * logarithm(dx * dx + dy * dy);
            for (size_t n = 0; n < terms; n++)
                inner[n] += rules->far_test[b][n] * value;
        }
        for (size_t m = 0; m < terms; m++)
            for (size_t n = 0; n < terms; n++)
                block[m * terms + n] += rules->far_test[a][m] * inner[n];
    }
}

void panel_add_logarithm(const struct panel_rules *rules, const struct panel *target,
                         const struct panel *source, struct panel_image image, size_t terms,
                         double scale, double *block) {
    double longest = 2 * fmax(target->half, source->half);
    if (panel_distance(target, source, image) > longest)
        add_far(rules, target, source, image, terms, scale, block);
    else if (target->half <= source->half)
        add_near(rules, target, source, image, terms, scale, false, block);
    else
        add_near(rules, source, target, image, terms, scale, true, block);
}
