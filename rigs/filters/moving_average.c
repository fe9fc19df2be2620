#include "rigs/filters/moving_average.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void moving_average_q15_init(struct moving_average_q15* filter, int16_t* ring, uint16_t points) {
    filter->ring = ring;
    filter->points = points;
    filter->shift = 0;
    if ((points & (points - 1u)) == 0)
        while (1u << filter->shift < points) filter->shift++;
    moving_average_q15_reset(filter);
}

void moving_average_q15_reset(struct moving_average_q15* filter) {
    memset(filter->ring, 0, filter->points * sizeof *filter->ring);
    filter->position = 0;
    filter->sum = 0;
}

static int16_t average_q15(const struct moving_average_q15* filter) {
    if (filter->shift > 0) return (int16_t)((filter->sum + (1 << (filter->shift - 1))) >> filter->shift);
    return (int16_t)divide_half_up(filter->sum, filter->points);
}

void moving_average_q15_process(struct moving_average_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        const int16_t x = *in++;
        filter->sum += x - filter->ring[filter->position];
        filter->ring[filter->position] = x;
        filter->position = (uint16_t)(filter->position + 1u);
        if (filter->position == filter->points) filter->position = 0;
        *out++ = average_q15(filter);
    }
}

void moving_average_i32_init(struct moving_average_i32* filter, int32_t* ring, uint16_t points) {
    filter->ring = ring;
    filter->points = points;
    moving_average_i32_reset(filter);
}

void moving_average_i32_reset(struct moving_average_i32* filter) {
    memset(filter->ring, 0, filter->points * sizeof *filter->ring);
    filter->position = 0;
    filter->sum = 0;
}

void moving_average_i32_process(struct moving_average_i32* filter, const int32_t* in, int32_t* out, uint16_t count) {
    for (; count > 0; count--) {
        const int32_t x = *in++;
        filter->sum += (int64_t)x - filter->ring[filter->position];
        filter->ring[filter->position] = x;
        filter->position = (uint16_t)(filter->position + 1u);
        if (filter->position == filter->points) filter->position = 0;
        *out++ = (int32_t)divide_half_up(filter->sum, filter->points);
    }
}
