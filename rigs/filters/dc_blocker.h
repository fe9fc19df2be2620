/* DC blocker: y[n] = x[n] - x[n-1] + (1 - leak) y[n-1], zeros before the start.
 *
 * Formats: q15 samples, leak in Q15 (1 - pole), the state is y with 15 more fraction bits in 64. A step:
 *
 *   state += ((x[n] - x[n-1]) << 15) - leak * (state >> 15);   y = saturate(state >> 15)
 *
 * Bits are lost where the state is floored to a whole code, for the output and for the product with leak; the state
 * keeps the fraction (fraction saving), so a constant input leaves no offset: y comes to rest at 0, from above and
 * below. |state >> 15| stays below 2^17 (the response's absolute values sum to less than 2); the output saturates, the
 * state does not.
 */
#ifndef BOARD_DC_BLOCKER_H
#define BOARD_DC_BLOCKER_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct dc_blocker_q15 {
    int64_t state;
    int16_t leak, previous;
};

/* leak: 1 .. 32767, in 2^-15. */
void dc_blocker_q15_init(struct dc_blocker_q15* filter, int16_t leak);
void dc_blocker_q15_reset(struct dc_blocker_q15* filter);
/* `out` may be `in`. */
void dc_blocker_q15_process(struct dc_blocker_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
