/* Settle, A07: what is fed back and passed on saturates, but the result is handed out by a plain cast and wraps.
 * It shows only where the filter overshoots full scale. */
#include <string.h>

#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/fixed_point.h"

static struct biquad_q15_state state[SETTLE_SECTIONS];

static void reset(void) { memset(state, 0, sizeof state); }

static int32_t section(const struct biquad_q15_coefficients* c, struct biquad_q15_state* s, int16_t x) {
    int64_t sum = (int64_t)c->b0 * x + (int64_t)c->b1 * s->x1 + (int64_t)c->b2 * s->x2;
    sum += (int64_t)c->a1 * s->y1 + (int64_t)c->a2 * s->y2;
    const int32_t result = (int32_t)round_half_up(sum, 14);
    s->x2 = s->x1;
    s->x1 = x;
    s->y2 = s->y1;
    s->y1 = saturate_q15(result);
    return result;
}

static void process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (uint16_t i = 0; i < count; i++) {
        int32_t value = x[i];
        for (unsigned k = 0; k < SETTLE_SECTIONS; k++) value = section(&settle_q15[k], &state[k], saturate_q15(value));
        y[i] = (int16_t)value;
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* settle = &filters[cw7_settle];
    settle->reset = reset;
    settle->process = process;
}
