#include "rigs/filters/biquad_q15_direct2.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void biquad_d2_init(struct biquad_d2* filter, const struct biquad_q15_coefficients* coefficients,
                    struct biquad_d2_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_d2_reset(filter);
}

void biquad_d2_reset(struct biquad_d2* filter) { memset(filter->state, 0, filter->sections * sizeof *filter->state); }

static int16_t section(const struct biquad_q15_coefficients* c, struct biquad_d2_state* s, int16_t x) {
    int64_t sum = (int64_t)x * 16384;
    int32_t w;
    sum += (int64_t)c->a1 * s->w1;
    sum += (int64_t)c->a2 * s->w2;
    w = saturate_q31(round_half_up(sum, 14)); /* 32 bits, whatever they mean */
    sum = (int64_t)c->b0 * w;
    sum += (int64_t)c->b1 * s->w1;
    sum += (int64_t)c->b2 * s->w2;
    s->w2 = s->w1;
    s->w1 = w;
    return saturate_q15(round_half_up(sum, 14));
}

void biquad_d2_process(struct biquad_d2* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
