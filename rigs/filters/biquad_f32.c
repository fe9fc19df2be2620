#include "rigs/filters/biquad_f32.h"

void biquad_f32_init(struct biquad_f32* filter, const struct biquad_f32_coefficients* coefficients,
                     struct biquad_f32_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_f32_reset(filter);
}

void biquad_f32_reset(struct biquad_f32* filter) {
    static const struct biquad_f32_state zero = {0.0f, 0.0f, 0.0f, 0.0f};
    uint8_t i;
    for (i = 0; i < filter->sections; i++) filter->state[i] = zero;
}

static float section(const struct biquad_f32_coefficients* c, struct biquad_f32_state* s, float x) {
    float sum = c->b0 * x;
    sum += c->b1 * s->x1;
    sum += c->b2 * s->x2;
    sum += c->a1 * s->y1;
    sum += c->a2 * s->y2;
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = sum;
    return sum;
}

void biquad_f32_process(struct biquad_f32* filter, const float* in, float* out, uint16_t count) {
    for (; count > 0; count--) {
        float value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
