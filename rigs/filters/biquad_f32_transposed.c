#include "rigs/filters/biquad_f32_transposed.h"

void biquad_f32_transposed_init(struct biquad_f32_transposed* filter,
                                const struct biquad_f32_coefficients* coefficients,
                                struct biquad_f32_transposed_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_f32_transposed_reset(filter);
}

void biquad_f32_transposed_reset(struct biquad_f32_transposed* filter) {
    static const struct biquad_f32_transposed_state zero = {0.0f, 0.0f};
    uint8_t i;
    for (i = 0; i < filter->sections; i++) filter->state[i] = zero;
}

static float section(const struct biquad_f32_coefficients* c, struct biquad_f32_transposed_state* s, float x) {
    float sum, y;
    y = s->s1 + c->b0 * x;
    sum = s->s2 + c->b1 * x;
    s->s1 = sum + c->a1 * y;
    sum = c->b2 * x;
    s->s2 = sum + c->a2 * y;
    return y;
}

void biquad_f32_transposed_process(struct biquad_f32_transposed* filter, const float* in, float* out, uint16_t count) {
    for (; count > 0; count--) {
        float value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
