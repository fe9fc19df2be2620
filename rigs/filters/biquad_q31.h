/* Cascade of second-order sections in direct form I, q31; the equation and signs of biquad_q15.h.
 *
 * Formats: q31 samples, Q1.30 coefficients. A product has 62 bits and five of them do not fit 64, so each sample is cut
 * into its upper 16 bits (signed) and its lower 16 (unsigned), and the two sums of products are joined at the end:
 * exact. Bits are lost once a section: 30 are dropped, halves upward, and the section's output saturates. The
 * saturated value is what is fed back.
 */
#ifndef BOARD_BIQUAD_Q31_H
#define BOARD_BIQUAD_Q31_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_q31_coefficients {
    int32_t b0, b1, b2, a1, a2;
};

struct biquad_q31_state {
    int32_t x1, x2, y1, y2;
};

struct biquad_q31 {
    const struct biquad_q31_coefficients* coefficients;
    struct biquad_q31_state* state;
    uint8_t sections;
};

void biquad_q31_init(struct biquad_q31* filter, const struct biquad_q31_coefficients* coefficients,
                     struct biquad_q31_state* state, uint8_t sections);
void biquad_q31_reset(struct biquad_q31* filter);
void biquad_q31_process(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
