#include "rigs/filters/biquad_q15_transposed.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

/* Sums of 32 bits wrap, as the processor's registers do; C leaves the overflow of signed ones undefined. */
static int32_t add_wrapping(int32_t a, int32_t b) { return (int32_t)((uint32_t)a + (uint32_t)b); }

void biquad_t32_init(struct biquad_t32* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_t32_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_t32_reset(filter);
}

void biquad_t32_reset(struct biquad_t32* filter) { memset(filter->state, 0, filter->sections * sizeof *filter->state); }

void biquad_t32_process(struct biquad_t32* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) {
            const struct biquad_q15_coefficients* c = &filter->coefficients[i];
            struct biquad_t32_state* s = &filter->state[i];
            const int16_t x = value;
            value = saturate_q15(round_half_up(add_wrapping(s->s1, (int32_t)c->b0 * x), 14));
            s->s1 = add_wrapping(s->s2, (int32_t)c->b1 * x);
            s->s1 = add_wrapping(s->s1, (int32_t)c->a1 * value);
            s->s2 = add_wrapping((int32_t)c->b2 * x, (int32_t)c->a2 * value);
        }
        *out++ = value;
    }
}

void biquad_t64_init(struct biquad_t64* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_t64_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_t64_reset(filter);
}

void biquad_t64_reset(struct biquad_t64* filter) { memset(filter->state, 0, filter->sections * sizeof *filter->state); }

void biquad_t64_process(struct biquad_t64* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) {
            const struct biquad_q15_coefficients* c = &filter->coefficients[i];
            struct biquad_t64_state* s = &filter->state[i];
            const int16_t x = value;
            value = saturate_q15(round_half_up(s->s1 + (int64_t)c->b0 * x, 14));
            s->s1 = s->s2 + (int64_t)c->b1 * x + (int64_t)c->a1 * value;
            s->s2 = (int64_t)c->b2 * x + (int64_t)c->a2 * value;
        }
        *out++ = value;
    }
}
