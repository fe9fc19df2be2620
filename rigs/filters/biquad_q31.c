#include "rigs/filters/biquad_q31.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

/* A sum of products, exact: upper x 2^16 + lower. Each part stays below 5 x 2^31 x 2^16 < 2^50. */
struct exact_sum {
    int64_t upper, lower;
};

static void add_product(struct exact_sum* sum, int32_t coefficient, int32_t sample) {
    sum->upper += (int64_t)coefficient * (sample >> 16);
    sum->lower += (int64_t)coefficient * (sample & 0xFFFF);
}

/* floor((sum + 2^29) / 2^30): dropping the low 16 bits of a whole number first changes no floor. */
static int64_t without_30_bits(const struct exact_sum* sum) {
    const int64_t carried = sum->upper + ((sum->lower + ((int64_t)1 << 29)) >> 16);
    return carried >> 14;
}

void biquad_q31_init(struct biquad_q31* filter, const struct biquad_q31_coefficients* coefficients,
                     struct biquad_q31_state* state, uint8_t sections) {
    filter->coefficients = coefficients;
    filter->state = state;
    filter->sections = sections;
    biquad_q31_reset(filter);
}

void biquad_q31_reset(struct biquad_q31* filter) { memset(filter->state, 0, filter->sections * sizeof *filter->state); }

static int32_t section(const struct biquad_q31_coefficients* c, struct biquad_q31_state* s, int32_t x) {
    struct exact_sum sum = {0, 0};
    add_product(&sum, c->b0, x);
    add_product(&sum, c->b1, s->x1);
    add_product(&sum, c->b2, s->x2);
    add_product(&sum, c->a1, s->y1);
    add_product(&sum, c->a2, s->y2);
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = saturate_q31(without_30_bits(&sum));
    return s->y1;
}

void biquad_q31_process(struct biquad_q31* filter, const int32_t* in, int32_t* out, uint16_t count) {
    for (; count > 0; count--) {
        int32_t value = *in++;
        uint8_t i;
        for (i = 0; i < filter->sections; i++) value = section(&filter->coefficients[i], &filter->state[i], value);
        *out++ = value;
    }
}
