/* Moving average of 24-bit samples: moving_average_i32 (64-bit sum, exact; the division rounds halves upward; the
 * quotient always fits) between words that are not 32-bit numbers.
 *
 * A sign-extended i24 in 4 bytes is an int32_t: moving_average_i32_process itself takes it. Here are the two others
 * that a converter's DMA leaves in memory.
 */
#ifndef BOARD_MOVING_AVERAGE_I24_H
#define BOARD_MOVING_AVERAGE_I24_H

#include "rigs/filters/moving_average.h"

#ifdef __cplusplus
extern "C" {
#endif

/* The 24 bits at the top of 4 bytes. The 8 below are not looked at, and are zeros in `out`. `out` may be `in`. */
void moving_average_i24_left_process(struct moving_average_i32* filter, const int32_t* in, int32_t* out,
                                     uint16_t count);
/* 3 bytes a sample, the least significant first, no padding: 3 x count bytes. `out` may be `in`. */
void moving_average_i24_packed_process(struct moving_average_i32* filter, const uint8_t* in, uint8_t* out,
                                       uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
