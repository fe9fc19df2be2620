#include "rigs/filters/median.h"

#include <string.h>

void median_q15_reset(struct median_q15* filter) { memset(filter, 0, sizeof *filter); }

/* Insertion sort: 5 numbers need at most 10 comparisons. */
static int16_t middle(const int16_t* past) {
    int16_t sorted[MEDIAN_POINTS];
    int i, at;
    for (i = 0; i < MEDIAN_POINTS; i++) {
        for (at = i; at > 0 && sorted[at - 1] > past[i]; at--) sorted[at] = sorted[at - 1];
        sorted[at] = past[i];
    }
    return sorted[MEDIAN_POINTS / 2];
}

void median_q15_process(struct median_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        filter->past[filter->position] = *in++;
        filter->position = (uint8_t)(filter->position + 1u == MEDIAN_POINTS ? 0u : filter->position + 1u);
        *out++ = middle(filter->past);
    }
}
