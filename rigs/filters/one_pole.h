/* One-pole low-pass (exponential average) without a multiplication: y[n] = y[n-1] + (x[n] - y[n-1]) / 2^shift, zero
 * before the start. The state is wider than a sample by `shift` bits, so nothing of it is ever dropped.
 *
 *   one_pole_q15_process          s += x - (s >> shift);            y = s >> shift
 *   one_pole_q15_process_rounded  s += x - ((s + half) >> shift);   y = (s + half) >> shift,   half = 2^(shift-1)
 *
 * Formats: q15 samples, state 1.15 + shift bits in 32. Bits are lost where the state is cut to 16 bits, floored or
 * halves upward, at the output and, by the same cut, in what is fed back. A constant input is reached exactly. |s|
 * stays within 2^(15 + shift), and y within the range of the samples: no saturation.
 */
#ifndef BOARD_ONE_POLE_H
#define BOARD_ONE_POLE_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#define ONE_POLE_Q15_MOST_SHIFT 15

struct one_pole_q15 {
    int32_t state;
    uint8_t shift;
};

/* shift: 1 .. ONE_POLE_Q15_MOST_SHIFT. */
void one_pole_q15_init(struct one_pole_q15* filter, uint8_t shift);
void one_pole_q15_reset(struct one_pole_q15* filter);
/* `out` may be `in`. */
void one_pole_q15_process(struct one_pole_q15* filter, const int16_t* in, int16_t* out, uint16_t count);
void one_pole_q15_process_rounded(struct one_pole_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
