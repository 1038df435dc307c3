#include "report/spread.h"

#include <assert.h>
#include <math.h>

/* Isotonic regression by pooling adjacent violators on the targets less the distances, then held
 * within the bounds: the least-squares answer under both. */
void spread_apart(double *centres, const double *heights, size_t count, double low, double high) {
    assert(count <= SPREAD_MOST);
    double mean[SPREAD_MOST], offset = 0, total = 0;
    size_t size[SPREAD_MOST], pools = 0;
    for (size_t i = 0; i < count; i++) {
        if (i > 0)
            offset += (heights[i - 1] + heights[i]) / 2;
        mean[pools] = centres[i] - offset;
        size[pools++] = 1;
        while (pools > 1 && mean[pools - 2] > mean[pools - 1]) {
            double a = (double)size[pools - 2], b = (double)size[pools - 1];
            mean[pools - 2] = (a * mean[pools - 2] + b * mean[pools - 1]) / (a + b);
            size[pools - 2] += size[pools - 1];
            pools--;
        }
        total = offset;
    }
    if (count == 0)
        return;
    double least = low + heights[0] / 2, most = high - heights[count - 1] / 2 - total;
    offset = 0;
    for (size_t i = 0, pool = 0, inside = 0; i < count; i++) {
        if (i > 0)
            offset += (heights[i - 1] + heights[i]) / 2;
        centres[i] = fmax(least, fmin(most, mean[pool])) + offset;
        if (++inside == size[pool]) {
            pool++;
            inside = 0;
        }
    }
}
