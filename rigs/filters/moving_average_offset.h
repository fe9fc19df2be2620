/* Moving averages of converter codes in offset binary (the mid-code is zero) and of 16-bit words in big-endian bytes:
 * each turns a word into a signed sample, lets moving_average_q15 average it, and turns the mean back.
 *
 * Formats: subtracting the mid-code (128, 2048, 32768) leaves 8, 12 or 16 signed bits in an int16_t, exactly; the mean
 * of such samples stays in their range, so adding the mid-code never overflows: no saturation. Bits are lost once, in
 * the division of moving_average_q15, which rounds halves upward (of the code as of the signed sample: the mid-code is
 * a whole number). Before the start the signal is the mid-code. `out` may be `in` everywhere.
 */
#ifndef BOARD_MOVING_AVERAGE_OFFSET_H
#define BOARD_MOVING_AVERAGE_OFFSET_H

#include "rigs/filters/moving_average.h"

#ifdef __cplusplus
extern "C" {
#endif

void moving_average_u8_process(struct moving_average_q15* filter, const uint8_t* in, uint8_t* out, uint16_t count);
/* The low 12 bits; the 4 above are not looked at, and are zeros in `out`. */
void moving_average_u12_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out, uint16_t count);
/* The high 12 bits; the 4 below are not looked at, and are zeros in `out`. */
void moving_average_u12_left_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out,
                                     uint16_t count);
void moving_average_u16_process(struct moving_average_q15* filter, const uint16_t* in, uint16_t* out, uint16_t count);

/* Signed, 2 bytes a sample, the most significant first. */
void moving_average_i16_big_process(struct moving_average_q15* filter, const uint8_t* in, uint8_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
