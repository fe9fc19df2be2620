/* The FIR of fir.h on a processor without a wide accumulator:
 *
 *   fir_q15_process_narrow           products 2.30 in 32 bits, which wrap; rounds once, halves upward
 *   fir_q15_process_short_products   each product cut to q15 (floor) before it is added, in 32 bits
 *
 * narrow is right as long as the whole sum stays within +-2 of full scale, that is, taps whose absolute values sum to
 * less than 2; partial sums beyond that wrap and come back. With larger taps a full-scale input can turn the sign.
 * short_products cannot overflow (65535 taps), and loses up to a code a tap, always downward. Both saturate at the
 * output.
 */
#ifndef BOARD_FIR_NARROW_H
#define BOARD_FIR_NARROW_H

#include "rigs/filters/fir.h"

#ifdef __cplusplus
extern "C" {
#endif

/* `out` may be `in`. Init and reset are those of fir_q15. */
void fir_q15_process_narrow(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count);
void fir_q15_process_short_products(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
