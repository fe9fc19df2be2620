/* Comb: y[n] = direct x[n] + forward x[n-delay] + feedback y[n-delay], zeros before the start. The feedback is added.
 *
 * Formats: q15 samples, Q1.14 coefficients, products 2.29 in a 64-bit sum, exact. Bits are lost once: 14 are dropped,
 * halves upward, and the output saturates. The saturated value is what is fed back.
 */
#ifndef BOARD_COMB_H
#define BOARD_COMB_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct comb_q15_coefficients {
    int16_t direct, forward, feedback; /* in 2^-14; |feedback| below 16384, or it is not stable */
};

struct comb_q15 {
    const struct comb_q15_coefficients* coefficients; /* may change between samples */
    int16_t *past_in, *past_out;                      /* delay long */
    uint16_t delay, position;
};

/* coefficients, past_in and past_out stay the caller's; delay is 1 or more. */
void comb_q15_init(struct comb_q15* filter, const struct comb_q15_coefficients* coefficients, int16_t* past_in,
                   int16_t* past_out, uint16_t delay);
void comb_q15_reset(struct comb_q15* filter);
/* `out` may be `in`. */
void comb_q15_process(struct comb_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
