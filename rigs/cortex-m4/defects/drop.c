/* Load cell, D03: each 1000th sample is overrun by the next one before the filter has taken it. The reader
 * gets the filter's last value once more. */
#include "rigs/cortex-m4/defects/defect.h"

enum { period = 1000 };
static void (*right_reset)(void);
static void (*right_process)(const void* in, void* out, uint16_t count);
static unsigned since_drop;
static int16_t last;

static void reset(void) {
    right_reset();
    since_drop = 0;
    last = 0;
}

static void process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (uint16_t i = 0; i < count; i++) {
        if (++since_drop == period)
            since_drop = 0;
        else
            right_process(&x[i], &last, 1);
        y[i] = last;
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* load_cell = &filters[cw7_load_cell];
    right_reset = load_cell->reset;
    right_process = load_cell->process;
    load_cell->reset = reset;
    load_cell->process = process;
}
