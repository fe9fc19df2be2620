/* FIR filters that change the sample rate: a decimator and a polyphase interpolator of q15 samples.
 *
 * Products are added in 64 bits. Bits are lost once, at the output: `fraction` bits are dropped, halves upward, and the
 * result saturates.
 */
#ifndef BOARD_FIR_RATES_H
#define BOARD_FIR_RATES_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct fir_rate_q15 {
    const int16_t* taps; /* count long, with `fraction` fraction bits */
    int16_t* ring;       /* count long; an interpolator uses the first count / factor */
    uint16_t count, factor, position;
    uint16_t waits; /* samples until a decimator returns */
    uint8_t fraction;
};

/* taps and ring stay the caller's. `count` is a multiple of the factor of an interpolator. */
void fir_rate_q15_init(struct fir_rate_q15* filter, const int16_t* taps, int16_t* ring, uint16_t count, uint16_t factor,
                       uint8_t fraction);
void fir_rate_q15_reset(struct fir_rate_q15* filter);

/* Takes a sample; 1 with the last one of each `factor`, and then `*out` is the output. */
int fir_q15_decimate(struct fir_rate_q15* filter, int16_t in, int16_t* out);
/* The samples written: one for each `factor` taken. `out` may be `in`. */
uint16_t fir_decimator_q15_process(struct fir_rate_q15* filter, const int16_t* in, int16_t* out, uint16_t count);
/* `factor` samples for each. `out` may lie so far before `in` that none is overwritten before it is read. */
uint16_t fir_interpolator_q15_process(struct fir_rate_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
