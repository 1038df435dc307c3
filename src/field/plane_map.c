#include "plane_map.h"

static const double pi = 3.14159265358979323846;

double complex plane_map_at(const struct plane_map *map, double complex z) {
    switch (map->kind) {
    case PLANE_TWO:
        return cexp(pi / map->spacing * z);
    case PLANE_HALF:
        return I * csqrt(z - map->end);
    case PLANE_BELOW:
    case PLANE_NONE:
        break;
    }
    return z;
}

double complex plane_map_slope(const struct plane_map *map, double complex w) {
    switch (map->kind) {
    case PLANE_TWO:
        return pi / map->spacing * w;
    case PLANE_HALF:
        return -0.5 / w;
    case PLANE_BELOW:
    case PLANE_NONE:
        break;
    }
    return 1;
}
