/* CIC filters (Hogenauer 1981): a decimator and an interpolator of q15 samples, differential delay 1.
 *
 * The registers are 32 bits wide and wrap, as they must: what wraps in the integrators comes back in the combs, as long
 * as 15 + sign + order * log2(factor) bits fit. At the output `shift` bits are dropped, toward minus infinity, and the
 * result saturates.
 */
#ifndef BOARD_CIC_H
#define BOARD_CIC_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#define CIC_MOST_ORDER 4

struct cic_q15 {
    uint32_t integrators[CIC_MOST_ORDER], combs[CIC_MOST_ORDER];
    uint16_t factor, waits; /* samples until a decimator returns */
    uint8_t order, shift;
};

void cic_q15_init(struct cic_q15* filter, uint8_t order, uint16_t factor, uint8_t shift);
void cic_q15_reset(struct cic_q15* filter);

/* Takes a sample; 1 with the last one of each `factor`, and then `*out` is the output. */
int cic_q15_decimate(struct cic_q15* filter, int16_t in, int16_t* out);
/* The samples written: one for each `factor` taken. `out` may be `in`. */
uint16_t cic_decimator_q15_process(struct cic_q15* filter, const int16_t* in, int16_t* out, uint16_t count);
/* `factor` samples for each. `out` may lie so far before `in` that none is overwritten before it is read. */
uint16_t cic_interpolator_q15_process(struct cic_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
