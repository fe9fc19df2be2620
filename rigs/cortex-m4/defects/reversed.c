/* Quick smoothing, C10: the taps lie in memory the other way round than the loop walks. The magnitude of the
 * response stays as it was. */
#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/filters/coefficients/quick-smoothing.h"
#include "rigs/filters/fir.h"

static int16_t taps[QUICK_SMOOTHING_TAPS], ring[QUICK_SMOOTHING_TAPS];
static struct fir_q15 quick;

static void reset(void) {
    for (unsigned i = 0; i < QUICK_SMOOTHING_TAPS; i++) taps[i] = quick_smoothing_taps[QUICK_SMOOTHING_TAPS - 1 - i];
    fir_q15_init(&quick, taps, ring, QUICK_SMOOTHING_TAPS);
}

static void process(const void* in, void* out, uint16_t count) { fir_q15_process(&quick, in, out, count); }

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* quick_smoothing = &filters[cw7_quick_smoothing];
    quick_smoothing->reset = reset;
    quick_smoothing->process = process;
}
