#include "rigs/filters/cic_pruned.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

/* Low bits that each register does not have. */
static const uint8_t integrator_cuts[CIC_PRUNED_ORDER] = {1, 4, 7, 10};
static const uint8_t comb_cuts[CIC_PRUNED_ORDER] = {11, 12, 13, 14};

void cic_pruned_q15_reset(struct cic_pruned_q15* filter) {
    memset(filter->integrators, 0, sizeof filter->integrators);
    memset(filter->combs, 0, sizeof filter->combs);
    filter->waits = CIC_PRUNED_FACTOR;
}

static uint32_t cut(uint32_t value, unsigned bits) { return value >> bits << bits; }

uint16_t cic_pruned_q15_process(struct cic_pruned_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    int16_t* const begin = out;
    for (; count > 0; count--) {
        uint32_t value = (uint32_t)(int32_t)*in++;
        unsigned i;
        for (i = 0; i < CIC_PRUNED_ORDER; i++) {
            filter->integrators[i] += cut(value, integrator_cuts[i]);
            value = filter->integrators[i];
        }
        if (--filter->waits != 0) continue;
        filter->waits = CIC_PRUNED_FACTOR;
        for (i = 0; i < CIC_PRUNED_ORDER; i++) {
            const uint32_t newest = cut(value, comb_cuts[i]);
            value = newest - filter->combs[i];
            filter->combs[i] = newest;
        }
        *out++ = saturate_q15((int32_t)value >> 16);
    }
    return (uint16_t)(out - begin);
}
