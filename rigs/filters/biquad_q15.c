#include "rigs/filters/biquad_q15.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void biquad_q15_init(struct biquad_q15* filter, const struct biquad_q15_coefficients* coefficients,
                     struct biquad_q15_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_q15_reset(filter);
}

void biquad_q15_reset(struct biquad_q15* filter) { memset(filter->state, 0, filter->sections * sizeof *filter->state); }

static int16_t section(const struct biquad_q15_coefficients* c, struct biquad_q15_state* s, int16_t x) {
    int64_t sum;
    sum = (int64_t)c->b0 * x;
    sum += (int64_t)c->b1 * s->x1;
    sum += (int64_t)c->b2 * s->x2;
    sum += (int64_t)c->a1 * s->y1;
    sum += (int64_t)c->a2 * s->y2;
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = saturate_q15(round_half_up(sum, 14));
    return s->y1;
}

void biquad_q15_process(struct biquad_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
