#include "rigs/filters/moving_average_division.h"

#include "rigs/filters/fixed_point.h"

static int32_t next_sum(struct moving_average_q15* filter, int16_t x) {
    filter->sum += x - filter->ring[filter->position];
    filter->ring[filter->position] = x;
    filter->position = (uint16_t)(filter->position + 1u);
    if (filter->position == filter->points) filter->position = 0;
    return filter->sum;
}

void moving_average_q15_process_divided(struct moving_average_q15* filter, const int16_t* in, int16_t* out,
                                        uint16_t count) {
    for (; count > 0; count--) *out++ = (int16_t)(next_sum(filter, *in++) / (int32_t)filter->points);
}

void moving_average_q15_process_reciprocal(struct moving_average_q15* filter, const int16_t* in, int16_t* out,
                                           uint16_t count) {
    const int32_t reciprocal = (int32_t)((65536u + filter->points / 2u) / filter->points);
    for (; count > 0; count--) *out++ = saturate_q15(round_half_up((int64_t)next_sum(filter, *in++) * reciprocal, 16));
}
