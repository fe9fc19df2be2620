/* Cascade of second-order sections in direct form II, q15; the signs of biquad_q15.h:
 *
 *   w[n] = x[n] + a1 w[n-1] + a2 w[n-2];   y[n] = b0 w[n] + b1 w[n-1] + b2 w[n-2]
 *
 * Formats: q15 samples, Q1.14 coefficients, 64-bit sums. Inside, the signal has the gain of the poles alone, 1 / (1 -
 * a1 - a2) at 0 Hz (some 70 for a corner at a fiftieth of the rate), so w is q15 with 16 bits of room above in 32. Bits
 * are lost twice a section, in w and in y: 14 are dropped, halves upward, and both saturate, each in its word.
 */
#ifndef BOARD_BIQUAD_Q15_DIRECT2_H
#define BOARD_BIQUAD_Q15_DIRECT2_H

#include "rigs/filters/biquad_q15.h"

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_d2_state {
    int32_t w1, w2;
};

struct biquad_d2 {
    const struct biquad_q15_coefficients* coefficients;
    struct biquad_d2_state* state;
    uint8_t sections;
};

/* coefficients and state hold `sections` elements and stay the caller's. `out` may be `in`. */
void biquad_d2_init(struct biquad_d2* filter, const struct biquad_q15_coefficients* coefficients,
                    struct biquad_d2_state* state, uint8_t sections);
void biquad_d2_reset(struct biquad_d2* filter);
void biquad_d2_process(struct biquad_d2* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
