/* Load cell, S01: the value of the previous call is handed out, and only then the new one is computed. */
#include "rigs/cortex-m4/defects/defect.h"

static void (*right_reset)(void);
static void (*right_process)(const void* in, void* out, uint16_t count);
static int16_t result;

static void reset(void) {
    right_reset();
    result = 0;
}

static void process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (uint16_t i = 0; i < count; i++) {
        const int16_t previous = result;
        right_process(&x[i], &result, 1);
        y[i] = previous;
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* load_cell = &filters[cw7_load_cell];
    right_reset = load_cell->reset;
    right_process = load_cell->process;
    load_cell->reset = reset;
    load_cell->process = process;
}
