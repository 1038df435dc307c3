#include "slab_kernel.h"

#include "logarithm.h"
#include "vector.h"

void slab_kernel_set(struct slab_kernel *kernel, double reflection, size_t images) {
    kernel->images = images;
    kernel->reflection = reflection;
    section_image_weights(reflection, images, kernel->weight);
    for (size_t k = 0; k < images; k++)
        kernel->weight[k] *= 1 - reflection * reflection;
}

VECTOR_CLONES
void slab_kernel_evaluate(const struct slab_kernel *kernel, bool direct, size_t count,
                          const double *restrict across2, const double *restrict apart,
                          const double *restrict sum, double *restrict slab,
                          double *restrict vacuum) {
    /* Half weights: the logarithms are those of squared distances. */
    double first = 0.5 * kernel->weight[0], reflection = 0.5 * kernel->reflection;
    if (direct)
        for (size_t i = 0; i < count; i++) {
            double near = sum[i] - 2;
            double image = logarithm(across2[i] + sum[i] * sum[i]);
            double straight = logarithm(across2[i] + apart[i] * apart[i]);
            double mirrored = logarithm(across2[i] + near * near);
            vacuum[i] = 0.5 * (straight - image);
            slab[i] = 0.5 * straight - reflection * mirrored - first * image;
        }
    else
        for (size_t i = 0; i < count; i++) {
            double image = logarithm(across2[i] + sum[i] * sum[i]);
            vacuum[i] = -0.5 * image;
            slab[i] = -first * image;
        }
    for (size_t k = 1; k < kernel->images; k++) {
        double weight = 0.5 * kernel->weight[k], below = 2 * (double)k;
        for (size_t i = 0; i < count; i++) {
            double height = sum[i] + below;
            slab[i] -= weight * logarithm(across2[i] + height * height);
        }
    }
}
