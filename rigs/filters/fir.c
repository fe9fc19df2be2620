#include "rigs/filters/fir.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void fir_q15_init(struct fir_q15* filter, const int16_t* taps, int16_t* ring, uint16_t count) {
    filter->taps = taps;
    filter->ring = ring;
    filter->count = count;
    fir_q15_reset(filter);
}

void fir_q15_reset(struct fir_q15* filter) {
    memset(filter->ring, 0, filter->count * sizeof *filter->ring);
    filter->position = 0;
}

void fir_q15_process(struct fir_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int64_t sum = 0;
        uint16_t k, at = filter->position;
        filter->ring[at] = *in++;
        for (k = 0; k < filter->count; k++) { /* newest sample first */
            sum += (int32_t)filter->taps[k] * filter->ring[at];
            at = (uint16_t)((at == 0 ? filter->count : at) - 1);
        }
        filter->position = (uint16_t)(filter->position + 1u == filter->count ? 0u : filter->position + 1u);
        *out++ = saturate_q15(round_half_up(sum, 15));
    }
}
