#include "rigs/filters/cic.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void cic_q15_init(struct cic_q15* filter, uint8_t order, uint16_t factor, uint8_t shift) {
    filter->order = order;
    filter->factor = factor;
    filter->shift = shift;
    cic_q15_reset(filter);
}

void cic_q15_reset(struct cic_q15* filter) {
    memset(filter->integrators, 0, sizeof filter->integrators);
    memset(filter->combs, 0, sizeof filter->combs);
    filter->waits = filter->factor;
}

static uint32_t integrate(struct cic_q15* filter, uint32_t value) {
    uint8_t i;
    for (i = 0; i < filter->order; i++) value = filter->integrators[i] += value;
    return value;
}

static uint32_t difference(struct cic_q15* filter, uint32_t value) {
    uint8_t i;
    for (i = 0; i < filter->order; i++) {
        const uint32_t before = filter->combs[i];
        filter->combs[i] = value;
        value -= before;
    }
    return value;
}

static int16_t output(const struct cic_q15* filter, uint32_t value) {
    return saturate_q15((int32_t)value >> filter->shift);
}

int cic_q15_decimate(struct cic_q15* filter, int16_t in, int16_t* out) {
    const uint32_t sum = integrate(filter, (uint32_t)(int32_t)in);
    if (--filter->waits != 0) return 0;
    filter->waits = filter->factor;
    *out = output(filter, difference(filter, sum));
    return 1;
}

uint16_t cic_decimator_q15_process(struct cic_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    int16_t* const begin = out;
    for (; count > 0; count--) out += cic_q15_decimate(filter, *in++, out);
    return (uint16_t)(out - begin);
}

uint16_t cic_interpolator_q15_process(struct cic_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    int16_t* const begin = out;
    for (; count > 0; count--) {
        uint32_t value = difference(filter, (uint32_t)(int32_t)*in++);
        uint16_t i;
        for (i = 0; i < filter->factor; i++) {
            *out++ = output(filter, integrate(filter, value));
            value = 0; /* the zeros between the samples */
        }
    }
    return (uint16_t)(out - begin);
}
