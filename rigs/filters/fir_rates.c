#include "rigs/filters/fir_rates.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void fir_rate_q15_init(struct fir_rate_q15* filter, const int16_t* taps, int16_t* ring, uint16_t count, uint16_t factor,
                       uint8_t fraction) {
    filter->taps = taps;
    filter->ring = ring;
    filter->count = count;
    filter->factor = factor;
    filter->fraction = fraction;
    fir_rate_q15_reset(filter);
}

void fir_rate_q15_reset(struct fir_rate_q15* filter) {
    memset(filter->ring, 0, filter->count * sizeof *filter->ring);
    filter->position = 0;
    filter->waits = filter->factor;
}

static void take(struct fir_rate_q15* filter, uint16_t length, int16_t in) {
    filter->position = (uint16_t)(filter->position + 1u >= length ? 0u : filter->position + 1u);
    filter->ring[filter->position] = in;
}

/* Each stride-th tap from the first on, the newest sample first. */
static int16_t sum_of(const struct fir_rate_q15* filter, uint16_t first, uint16_t stride, uint16_t length) {
    int64_t sum = 0;
    uint16_t k, at = filter->position;
    for (k = first; k < filter->count; k = (uint16_t)(k + stride)) {
        sum += (int32_t)filter->taps[k] * filter->ring[at];
        at = (uint16_t)((at == 0 ? length : at) - 1);
    }
    return saturate_q15(round_half_up(sum, filter->fraction));
}

int fir_q15_decimate(struct fir_rate_q15* filter, int16_t in, int16_t* out) {
    take(filter, filter->count, in);
    if (--filter->waits != 0) return 0;
    filter->waits = filter->factor;
    *out = sum_of(filter, 0, 1, filter->count);
    return 1;
}

uint16_t fir_decimator_q15_process(struct fir_rate_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    int16_t* const begin = out;
    for (; count > 0; count--) out += fir_q15_decimate(filter, *in++, out);
    return (uint16_t)(out - begin);
}

uint16_t fir_interpolator_q15_process(struct fir_rate_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    const uint16_t length = (uint16_t)(filter->count / filter->factor);
    int16_t* const begin = out;
    for (; count > 0; count--) {
        uint16_t phase;
        take(filter, length, *in++);
        for (phase = 0; phase < filter->factor; phase++) *out++ = sum_of(filter, phase, filter->factor, length);
    }
    return (uint16_t)(out - begin);
}
