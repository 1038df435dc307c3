/* Tubes.  The logarithm of the distance has a closed average over circles (Maxwell's geometric mean
 * distance); the rest is smooth and is averaged by Gauss or by the trapezium rule. */
#include "tube.h"

#include "quadrature.h"

#include <math.h>

enum { AXIS_NODES = 16, MOST_POINTS = 256 };

/* Smallest distance along the axis at which Grover's terms change their form. */
static double shortest(const struct filament_pair *along) {
    double offset = along->b - along->a, smallest = along->l + along->m;
    double z[4] = {offset, offset + along->m, offset - along->l, offset + along->m - along->l};
    for (int i = 0; i < 4; i++)
        if (fabs(z[i]) > 0.0)
            smallest = fmin(smallest, fabs(z[i]));
    return smallest;
}

/* Mean over the azimuth on one axis: halved towards 0, where the distance may vanish. */
static double on_one_axis(const struct tube_pair *pair, double overlap) {
    double node[AXIS_NODES], weight[AXIS_NODES], sum = 0.0, high = M_PI;
    double product = pair->radius[0] * pair->radius[1];
    double difference = pair->radius[0] - pair->radius[1];
    double fine = shortest(&pair->along) / sqrt(product);
    quadrature_gauss(AXIS_NODES, node, weight);
    for (int level = 0; level <= 20; level++) {
        double low = high > 4.0 * fine && level < 20 ? high / 2.0 : 0.0;
        for (int i = 0; i < AXIS_NODES; i++) {
            double half = sin((low + (high - low) * (1.0 + node[i]) / 2.0) / 2.0);
            double s = sqrt(difference * difference + 4.0 * product * half * half);
            double value = overlap > 0.0 ? filament_remainder(&pair->along, s)
                                         : filament_neumann(&pair->along, s);
            sum += (high - low) / 2.0 * weight[i] * value;
        }
        if (low == 0.0)
            break;
        high = low;
    }
    return sum / M_PI;
}

int tube_points(double radius_a, double radius_b, double distance) {
    double rate = fmax(radius_a / (distance - radius_b), radius_b / (distance - radius_a));
    double points = ceil(log(1e-11) / log(fmin(rate, 0.999)));
    return (int)fmax(8.0, fmin(points, MOST_POINTS));
}

/* Mean over both circles; mirror images about the line of centres count twice. */
static double apart(const struct tube_pair *pair, double overlap) {
    int points = tube_points(pair->radius[0], pair->radius[1], pair->distance);
    double sum = 0.0;
    for (int i = 0; 2 * i < points; i++)
        for (int j = 0; j < points; j++) {
            double a = 2.0 * M_PI * (i + 0.5) / points, b = 2.0 * M_PI * (j + 0.5) / points;
            double x = pair->distance + pair->radius[1] * cos(b) - pair->radius[0] * cos(a);
            double y = pair->radius[1] * sin(b) - pair->radius[0] * sin(a);
            double s = hypot(x, y);
            double value = overlap > 0.0 ? filament_remainder(&pair->along, s)
                                         : filament_neumann(&pair->along, s);
            sum += 2 * i + 1 == points ? value : 2.0 * value;
        }
    return sum / points / points;
}

double tube_neumann(const struct tube_pair *pair) {
    double overlap = filament_overlap(&pair->along);
    double mean_distance =
        pair->distance > 0.0 ? pair->distance : fmax(pair->radius[0], pair->radius[1]);
    double rest = pair->distance > 0.0 ? apart(pair, overlap) : on_one_axis(pair, overlap);
    return overlap > 0.0 ? rest - 2.0 * overlap * log(mean_distance) : rest;
}
