#include "rigs/filters/biquad_q15_floor.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

static int64_t sum_of_products(const struct biquad_q15_coefficients* c, const struct biquad_q15_state* s, int16_t x) {
    return (int64_t)c->b0 * x + (int64_t)c->b1 * s->x1 + (int64_t)c->b2 * s->x2 + (int64_t)c->a1 * s->y1 +
           (int64_t)c->a2 * s->y2;
}

static int16_t shift_in(struct biquad_q15_state* s, int16_t x, int64_t sum) {
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = saturate_q15(sum >> 14);
    return s->y1;
}

void biquad_q15_process_floor(struct biquad_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) {
            const int64_t sum = sum_of_products(&filter->coefficients[i], &filter->state[i], value);
            value = shift_in(&filter->state[i], value, sum);
        }
        *out++ = value;
    }
}

void biquad_saving_q15_init(struct biquad_saving_q15* filter, const struct biquad_q15_coefficients* coefficients,
                            struct biquad_q15_state* state, int16_t* remainder, uint8_t sections) {
    biquad_q15_init(&filter->cascade, coefficients, state, sections);
    filter->remainder = remainder;
    biquad_saving_q15_reset(filter);
}

void biquad_saving_q15_reset(struct biquad_saving_q15* filter) {
    biquad_q15_reset(&filter->cascade);
    memset(filter->remainder, 0, filter->cascade.sections * sizeof *filter->remainder);
}

void biquad_saving_q15_process(struct biquad_saving_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    struct biquad_q15* cascade = &filter->cascade;
    for (; count > 0; count--) {
        int16_t value = *in++;
        uint8_t i;
        for (i = 0; i < cascade->sections; i++) {
            int64_t sum = sum_of_products(&cascade->coefficients[i], &cascade->state[i], value);
            sum += filter->remainder[i];
            filter->remainder[i] = (int16_t)(sum & 0x3FFF);
            value = shift_in(&cascade->state[i], value, sum);
        }
        *out++ = value;
    }
}
