/* Cascade of second-order sections in transposed direct form II, q15; the signs of biquad_q15.h:
 *
 *   y = (s1 + b0 x) rounded;   s1 = s2 + b1 x + a1 y;   s2 = b2 x + a2 y
 *
 * Formats: q15 samples, Q1.14 coefficients. The states keep all the bits of a product: 2.29 in 32 bits (biquad_t32), or
 * the same with 32 bits of room above in 64 (biquad_t64). Bits are lost once a section: 14 are dropped, halves upward,
 * and the output saturates; the saturated value is what the states are made of. Sums in 32 bits wrap beyond +-4 of full
 * scale, the one with b0 x too; since y is saturated, they never get there while |b0| + |b1| + |b2| + |a1| + |a2| is
 * less than 4.
 */
#ifndef BOARD_BIQUAD_Q15_TRANSPOSED_H
#define BOARD_BIQUAD_Q15_TRANSPOSED_H

#include "rigs/filters/biquad_q15.h"

#ifdef __cplusplus
extern "C" {
#endif

struct biquad_t32_state {
    int32_t s1, s2;
};

struct biquad_t32 {
    const struct biquad_q15_coefficients* coefficients;
    struct biquad_t32_state* state;
    uint8_t sections;
};

/* coefficients and state hold `sections` elements and stay the caller's. `out` may be `in`. */
void biquad_t32_init(struct biquad_t32* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_t32_state* state, uint8_t sections);
void biquad_t32_reset(struct biquad_t32* filter);
void biquad_t32_process(struct biquad_t32* filter, const int16_t* in, int16_t* out, uint16_t count);

struct biquad_t64_state {
    int64_t s1, s2;
};

struct biquad_t64 {
    const struct biquad_q15_coefficients* coefficients;
    struct biquad_t64_state* state;
    uint8_t sections;
};

void biquad_t64_init(struct biquad_t64* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_t64_state* state, uint8_t sections);
void biquad_t64_reset(struct biquad_t64* filter);
void biquad_t64_process(struct biquad_t64* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
