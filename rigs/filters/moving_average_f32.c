#include "rigs/filters/moving_average_f32.h"

void moving_average_f32_init(struct moving_average_f32* filter, float* ring, uint16_t points) {
    filter->ring = ring;
    filter->points = points;
    moving_average_f32_reset(filter);
}

void moving_average_f32_reset(struct moving_average_f32* filter) {
    uint16_t i;
    for (i = 0; i < filter->points; i++) filter->ring[i] = 0.0f;
    filter->position = 0;
    filter->sum = 0.0f;
}

static float average(struct moving_average_f32* filter, float x) {
    filter->sum -= filter->ring[filter->position];
    filter->sum += x;
    filter->ring[filter->position] = x;
    filter->position = (uint16_t)(filter->position + 1u);
    if (filter->position == filter->points) filter->position = 0;
    return filter->sum / (float)filter->points;
}

void moving_average_f32_process(struct moving_average_f32* filter, const float* in, float* out, uint16_t count) {
    for (; count > 0; count--) *out++ = average(filter, *in++);
}

static int16_t code_of(float value) {
    const float scaled = value * 32768.0f;
    if (scaled >= 32767.0f) return INT16_MAX;
    if (scaled <= -32768.0f) return INT16_MIN;
    return (int16_t)scaled;
}

void moving_average_f32_process_q15(struct moving_average_f32* filter, const int16_t* in, int16_t* out,
                                    uint16_t count) {
    for (; count > 0; count--) *out++ = code_of(average(filter, (float)*in++ / 32768.0f));
}
