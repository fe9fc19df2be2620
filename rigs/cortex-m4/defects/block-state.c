/* Mains notch, S11: the state is worked on in local copies for speed, and its two outputs are written back in the
 * wrong order. It shows from each block boundary on; which samples are wrong depends on the block size. */
#include <string.h>

#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/coefficients/mains-notch.h"
#include "rigs/filters/fixed_point.h"

static struct biquad_q15_state state;

static void reset(void) { memset(&state, 0, sizeof state); }

static void process(const void* in, void* out, uint16_t count) {
    const struct biquad_q15_coefficients* c = &mains_notch_q15[0];
    const int16_t* x = in;
    int16_t* y = out;
    int16_t x1 = state.x1, x2 = state.x2, y1 = state.y1, y2 = state.y2;
    for (uint16_t i = 0; i < count; i++) {
        const int16_t x0 = x[i];
        int64_t sum = (int64_t)c->b0 * x0 + (int64_t)c->b1 * x1 + (int64_t)c->b2 * x2;
        sum += (int64_t)c->a1 * y1 + (int64_t)c->a2 * y2;
        x2 = x1;
        x1 = x0;
        y2 = y1;
        y1 = saturate_q15(round_half_up(sum, 14));
        y[i] = y1;
    }
    state.x1 = x1;
    state.x2 = x2;
    state.y1 = y2;
    state.y2 = y1;
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* mains_notch = &filters[cw7_mains_notch];
    mains_notch->reset = reset;
    mains_notch->process = process;
}
