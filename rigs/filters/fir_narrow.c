#include "rigs/filters/fir_narrow.h"

#include "rigs/filters/fixed_point.h"

static void push(struct fir_q15* filter, int16_t x) {
    filter->position = (uint16_t)((filter->position == 0 ? filter->count : filter->position) - 1u);
    filter->ring[filter->position] = x;
}

/* The sample k instants ago. */
static int16_t past(const struct fir_q15* filter, uint16_t k) {
    const uint32_t at = (uint32_t)filter->position + k;
    return filter->ring[at < filter->count ? at : at - filter->count];
}

void fir_q15_process_narrow(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        uint32_t sum = 0; /* wraps as the processor's register does, without C's undefined overflow */
        uint16_t k;
        push(filter, *in++);
        for (k = 0; k < filter->count; k++) sum += (uint32_t)((int32_t)filter->taps[k] * past(filter, k));
        *out++ = saturate_q15(round_half_up((int32_t)sum, 15));
    }
}

void fir_q15_process_short_products(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int32_t sum = 0;
        uint16_t k;
        push(filter, *in++);
        for (k = 0; k < filter->count; k++) sum += ((int32_t)filter->taps[k] * past(filter, k)) >> 15;
        *out++ = saturate_q15(sum);
    }
}
