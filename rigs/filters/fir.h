/* FIR: y[n] = sum taps[k] x[n-k], zeros before the start.
 *
 * Formats: q15 samples, q15 taps, products 2.30, a 64-bit accumulator that cannot overflow (65535 taps x 2^30 is below
 * 2^46). Bits are lost once, at the output: 15 are dropped, halves upward, and the result saturates.
 */
#ifndef BOARD_FIR_H
#define BOARD_FIR_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct fir_q15 {
    const int16_t* taps; /* count long; may change between samples */
    int16_t* ring;       /* count long */
    uint16_t count, position;
};

/* taps and ring stay the caller's; count is 1 or more. */
void fir_q15_init(struct fir_q15* filter, const int16_t* taps, int16_t* ring, uint16_t count);
void fir_q15_reset(struct fir_q15* filter);
/* `out` may be `in`. */
void fir_q15_process(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
