/* Cascade of second-order sections in direct form I, single precision; the equation and signs of biquad_q15.h.
 * Products and sums round to float, in the order b0, b1, b2, a1, a2. Nothing saturates. Build with
 * -ffp-contract=off where the processor has a fused multiply-add, or the last bits differ.
 */
#ifndef BOARD_BIQUAD_F32_H
#define BOARD_BIQUAD_F32_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_f32_coefficients {
    float b0, b1, b2, a1, a2;
};

struct biquad_f32_state {
    float x1, x2, y1, y2;
};

struct biquad_f32 {
    const struct biquad_f32_coefficients* coefficients;
    struct biquad_f32_state* state;
    uint8_t sections;
};

void biquad_f32_init(struct biquad_f32* filter, const struct biquad_f32_coefficients* coefficients,
                     struct biquad_f32_state* state, uint8_t sections);
void biquad_f32_reset(struct biquad_f32* filter);
void biquad_f32_process(struct biquad_f32* filter, const float* in, float* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
