/* A CIC decimator of q15 samples whose registers lose bits on the way (Hogenauer 1981): order 4, factor 16.
 *
 * All registers end at the top of a 32-bit word and wrap: 16 bits of a sample grow by 4 * log2(16). Each integrator and
 * each comb takes what comes with its low bits cleared, ever more of them, as hardware has registers that are ever
 * narrower. At the output 16 bits are dropped, toward minus infinity, and the result saturates.
 */
#ifndef BOARD_CIC_PRUNED_H
#define BOARD_CIC_PRUNED_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#define CIC_PRUNED_ORDER 4
#define CIC_PRUNED_FACTOR 16

struct cic_pruned_q15 {
    uint32_t integrators[CIC_PRUNED_ORDER], combs[CIC_PRUNED_ORDER];
    uint8_t waits; /* samples until it returns */
};

void cic_pruned_q15_reset(struct cic_pruned_q15* filter);
/* The samples written: one with the last of each CIC_PRUNED_FACTOR taken. `out` may be `in`. */
uint16_t cic_pruned_q15_process(struct cic_pruned_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
