/* The cascade of biquad_q31.h with accumulators that a 32-bit processor has; the same coefficients, Q1.30.
 *
 *   biquad_q31_process_shifted   products 2.61 in 64 bits, which wrap beyond +-4 of full scale; y = sum >> 30, floored,
 * and cut to 32 bits: it wraps, too biquad_q31_process_fast      of each product only the upper 32 bits are kept,
 * rounded halves upward, 2.29 in a 32-bit accumulator, which wraps; y is the sum shifted up by two, saturated
 *
 * The two lowest bits of a fast output are zeros: 29 bits of fraction are all there is.
 */
#ifndef BOARD_BIQUAD_Q31_FAST_H
#define BOARD_BIQUAD_Q31_FAST_H

#include "rigs/filters/biquad_q31.h"

#ifdef __cplusplus
extern "C" {
#endif

/* Init and reset are those of biquad_q31. `out` may be `in`. */
void biquad_q31_process_shifted(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count);
void biquad_q31_process_fast(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
