/* Pair, S16: a 128th of the left cell's input finds its way into the right cell's output (-42 dB). */
#include "rigs/cortex-m4/defects/defect.h"
#include "rigs/cortex-m4/wide_filters.h"
#include "rigs/filters/fixed_point.h"

static void (*right_process)(const void* in, void* out, uint16_t count);

static void process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (unsigned n = 0; n < count; n++) {
        const int16_t leak = (int16_t)(x[2 * n] >> 7); /* before y, which may lie where x does */
        right_process(&x[2 * n], &y[2 * n], 1);
        y[2 * n + 1] = saturate_q15((int64_t)y[2 * n + 1] + leak);
    }
}

void install_defect(struct halflsb_filter* filters) {
    right_process = filters[cw7_pair].process;
    filters[cw7_pair].process = process;
}
