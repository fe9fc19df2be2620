#include "rigs/filters/moving_average_offset.h"

static int32_t average(struct moving_average_q15* filter, int32_t signed_sample) {
    int16_t x = (int16_t)signed_sample;
    moving_average_q15_process(filter, &x, &x, 1);
    return x;
}

void moving_average_u8_process(struct moving_average_q15* filter, const uint8_t* in, uint8_t* out, uint16_t count) {
    for (; count > 0; count--) *out++ = (uint8_t)(average(filter, *in++ - 128) + 128);
}

void moving_average_u12_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out, uint16_t count) {
    for (; count > 0; count--) *out++ = (uint16_t)(average(filter, (*in++ & 0x0FFF) - 2048) + 2048);
}

void moving_average_u12_left_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out,
                                     uint16_t count) {
    for (; count > 0; count--) *out++ = (uint16_t)((uint32_t)(average(filter, (*in++ >> 4) - 2048) + 2048) << 4);
}

void moving_average_u16_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out, uint16_t count) {
    for (; count > 0; count--) *out++ = (uint16_t)(average(filter, *in++ - 32768) + 32768);
}

void moving_average_i16_big_process(struct moving_average_q15* filter, const uint8_t* in, uint8_t* out,
                                    uint16_t count) {
    for (; count > 0; count--, in += 2, out += 2) {
        const uint32_t y = (uint32_t)average(filter, (int16_t)(uint16_t)(in[0] << 8 | in[1]));
        out[0] = (uint8_t)(y >> 8 & 0xFFu);
        out[1] = (uint8_t)(y & 0xFFu);
    }
}
