/* Cascade of second-order sections in transposed direct form II, single precision; the signs of biquad_q15.h:
 *
 *   y = s1 + b0 x;   s1 = (s2 + b1 x) + a1 y;   s2 = b2 x + a2 y
 *
 * Each product and each sum rounds to float, in this order. Nothing saturates. Build with -ffp-contract=off where the
 * processor has a fused multiply-add, or the last bits differ.
 */
#ifndef BOARD_BIQUAD_F32_TRANSPOSED_H
#define BOARD_BIQUAD_F32_TRANSPOSED_H

#include "rigs/filters/biquad_f32.h"

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_f32_transposed_state {
    float s1, s2;
};

struct biquad_f32_transposed {
    const struct biquad_f32_coefficients* coefficients;
    struct biquad_f32_transposed_state* state;
    uint8_t sections;
};

/* coefficients and state hold `sections` elements and stay the caller's. `out` may be `in`. */
void biquad_f32_transposed_init(struct biquad_f32_transposed* filter,
                                const struct biquad_f32_coefficients* coefficients,
                                struct biquad_f32_transposed_state* state, uint8_t sections);
void biquad_f32_transposed_reset(struct biquad_f32_transposed* filter);
void biquad_f32_transposed_process(struct biquad_f32_transposed* filter, const float* in, float* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
