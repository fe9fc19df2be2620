#include "rigs/filters/moving_average_i8.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void moving_average_i8_init(struct moving_average_i8* filter, int8_t* ring, uint16_t points) {
    filter->ring = ring;
    filter->points = points;
    moving_average_i8_reset(filter);
}

void moving_average_i8_reset(struct moving_average_i8* filter) {
    memset(filter->ring, 0, filter->points * sizeof *filter->ring);
    filter->position = 0;
    filter->sum = 0;
}

void moving_average_i8_process(struct moving_average_i8* filter, const int8_t* in, int8_t* out, uint16_t count) {
    for (; count > 0; count--) {
        const int8_t x = *in++;
        filter->sum += x - filter->ring[filter->position];
        filter->ring[filter->position] = x;
        filter->position = (uint16_t)(filter->position + 1u);
        if (filter->position == filter->points) filter->position = 0;
        *out++ = (int8_t)divide_half_up(filter->sum, filter->points);
    }
}
