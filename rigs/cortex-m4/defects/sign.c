/* Mains notch, C07: the design program subtracts its feedback, this filter adds it, and a1 was copied as it stood. */
#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/coefficients/mains-notch.h"

static struct biquad_q15_coefficients coefficients[MAINS_NOTCH_SECTIONS];
static struct biquad_q15_state state[MAINS_NOTCH_SECTIONS];
static struct biquad_q15 notch;

static void reset(void) {
    for (unsigned i = 0; i < MAINS_NOTCH_SECTIONS; i++) {
        coefficients[i] = mains_notch_q15[i];
        coefficients[i].a1 = (int16_t)-mains_notch_q15[i].a1;
    }
    biquad_q15_init(&notch, coefficients, state, MAINS_NOTCH_SECTIONS);
}

static void process(const void* in, void* out, uint16_t count) { biquad_q15_process(&notch, in, out, count); }

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* mains_notch = &filters[cw7_mains_notch];
    mains_notch->reset = reset;
    mains_notch->process = process;
}
