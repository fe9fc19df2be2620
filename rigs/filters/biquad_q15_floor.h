/* The cascade of biquad_q15.h with its 14 bits dropped in two other ways:
 *
 *   biquad_q15_process_floor   y = saturate(sum >> 14): half a code too low on average, times the gain of the feedback
 *   biquad_saving_q15          the same, and the bits dropped are added to the next sum (fraction saving, or
 * first-order error feedback): no offset and no limit cycle at DC
 *
 * Formats: q15 samples, Q1.14 coefficients, products 2.29 in a 64-bit accumulator. The remainder is 14 bits, 0 ..
 * 16383, and is what was dropped before the output saturated.
 */
#ifndef BOARD_BIQUAD_Q15_FLOOR_H
#define BOARD_BIQUAD_Q15_FLOOR_H

#include "rigs/filters/biquad_q15.h"

#ifdef __cplusplus
extern "C" {
#endif

/* Init and reset are those of biquad_q15. `out` may be `in`. */
void biquad_q15_process_floor(struct biquad_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

struct biquad_saving_q15 {
    struct biquad_q15 cascade;
    int16_t* remainder; /* of each section */
};

/* remainder, too, holds `sections` elements and stays the caller's. */
void biquad_saving_q15_init(struct biquad_saving_q15* filter, const struct biquad_q15_coefficients* coefficients,
                            struct biquad_q15_state* state, int16_t* remainder, uint8_t sections);
void biquad_saving_q15_reset(struct biquad_saving_q15* filter);
void biquad_saving_q15_process(struct biquad_saving_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
