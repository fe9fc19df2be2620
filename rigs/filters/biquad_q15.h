/* Cascade of second-order sections in direct form I, q15:
 * y[n] = b0 x[n] + b1 x[n-1] + b2 x[n-2] + a1 y[n-1] + a2 y[n-2], zeros before the start.
 *
 * The feedback is added: a1 and a2 are stored with the opposite sign of H(z) = B(z) / (1 + a1 z^-1 + a2 z^-2).
 * Formats: q15 samples, Q1.14 coefficients, products 2.29 in a 64-bit accumulator. Bits are lost once a section: 14 are
 * dropped, halves upward, and the section's output saturates. The saturated value is what is fed back.
 */
#ifndef BOARD_BIQUAD_Q15_H
#define BOARD_BIQUAD_Q15_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_q15_coefficients {
    int16_t b0, b1, b2, a1, a2;
};

struct biquad_q15_state {
    int16_t x1, x2, y1, y2;
};

struct biquad_q15 {
    const struct biquad_q15_coefficients* coefficients; /* of each section; may change between samples */
    struct biquad_q15_state* state;
    uint8_t sections;
};

/* coefficients and state hold `sections` elements and stay the caller's. */
void biquad_q15_init(struct biquad_q15* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_q15_state* state, uint8_t sections);
void biquad_q15_reset(struct biquad_q15* filter);
/* `out` may be `in`. */
void biquad_q15_process(struct biquad_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
