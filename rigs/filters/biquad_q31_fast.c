#include "rigs/filters/biquad_q31_fast.h"

#include "rigs/filters/fixed_point.h"

/* Both accumulators are unsigned: they wrap as registers do, and C defines it. */

static uint64_t product(int32_t c, int32_t v) { return (uint64_t)((int64_t)c * v); }

static uint32_t upper_half(int32_t c, int32_t v) { return (uint32_t)(int32_t)(((int64_t)c * v + 0x80000000LL) >> 32); }

static int32_t shift_in(struct biquad_q31_state* s, int32_t x, int32_t y) {
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = y;
    return y;
}

static int32_t section_shifted(const struct biquad_q31_coefficients* c, struct biquad_q31_state* s, int32_t x) {
    uint64_t sum = product(c->b0, x);
    sum += product(c->b1, s->x1);
    sum += product(c->b2, s->x2);
    sum += product(c->a1, s->y1);
    sum += product(c->a2, s->y2);
    return shift_in(s, x, (int32_t)(uint32_t)(uint64_t)((int64_t)sum >> 30));
}

static int32_t section_fast(const struct biquad_q31_coefficients* c, struct biquad_q31_state* s, int32_t x) {
    uint32_t sum = upper_half(c->b0, x);
    sum += upper_half(c->b1, s->x1);
    sum += upper_half(c->b2, s->x2);
    sum += upper_half(c->a1, s->y1);
    sum += upper_half(c->a2, s->y2);
    return shift_in(s, x, saturate_q31((int64_t)(int32_t)sum * 4));
}

void biquad_q31_process_shifted(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int32_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++)
            value = section_shifted(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}

void biquad_q31_process_fast(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int32_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section_fast(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
