#include "rigs/filters/comb.h"

#include <string.h>

#include "rigs/filters/fixed_point.h"

void comb_q15_init(struct comb_q15* filter, const struct comb_q15_coefficients* coefficients, int16_t* past_in,
                   int16_t* past_out, uint16_t delay) {
    filter->coefficients = coefficients;
    filter->past_in = past_in;
    filter->past_out = past_out;
    filter->delay = delay;
    comb_q15_reset(filter);
}

void comb_q15_reset(struct comb_q15* filter) {
    memset(filter->past_in, 0, filter->delay * sizeof *filter->past_in);
    memset(filter->past_out, 0, filter->delay * sizeof *filter->past_out);
    filter->position = 0;
}

void comb_q15_process(struct comb_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    const struct comb_q15_coefficients* c = filter->coefficients;
    for (; count > 0; count--) {
        const uint16_t at = filter->position;
        const int16_t x = *in++;
        int64_t sum = (int64_t)c->direct * x;
        sum += (int64_t)c->forward * filter->past_in[at];
        sum += (int64_t)c->feedback * filter->past_out[at];
        filter->past_in[at] = x;
        filter->past_out[at] = saturate_q15(round_half_up(sum, 14));
        *out++ = filter->past_out[at];
        filter->position = (uint16_t)(at + 1u == filter->delay ? 0u : at + 1u);
    }
}
