#include "rigs/filters/moving_average_i24.h"

static int32_t average(struct moving_average_i32* filter, int32_t x) {
    moving_average_i32_process(filter, &x, &x, 1);
    return x;
}

void moving_average_i24_left_process(struct moving_average_i32* filter, const int32_t* in, int32_t* out,
                                     uint16_t count) {
    for (; count > 0; count--) *out++ = (int32_t)((uint32_t)average(filter, *in++ >> 8) << 8);
}

void moving_average_i24_packed_process(struct moving_average_i32* filter, const uint8_t* in, uint8_t* out,
                                       uint16_t count) {
    for (; count > 0; count--, in += 3, out += 3) {
        /* Put together at the top of the word, so that the shift down extends the sign. */
        const uint32_t top = (uint32_t)in[0] << 8 | (uint32_t)in[1] << 16 | (uint32_t)in[2] << 24;
        const uint32_t y = (uint32_t)average(filter, (int32_t)top >> 8);
        out[0] = (uint8_t)(y & 0xFFu);
        out[1] = (uint8_t)(y >> 8 & 0xFFu);
        out[2] = (uint8_t)(y >> 16 & 0xFFu);
    }
}
