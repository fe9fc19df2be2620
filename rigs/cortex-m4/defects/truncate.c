/* Load cell, A01: the mean is cut off where it should be rounded; the half LSB before the shift is missing. */
#include <string.h>

#include "rigs/cortex-m4/defects/defect.h"

enum { points = 16 };
static int16_t ring[points];
static int32_t sum;
static unsigned position;

static void reset(void) {
    memset(ring, 0, sizeof ring);
    sum = 0;
    position = 0;
}

static void process(const void* in, void* out, uint16_t count) {
    const int16_t* x = in;
    int16_t* y = out;
    for (uint16_t i = 0; i < count; i++) {
        sum += x[i] - ring[position];
        ring[position] = x[i];
        position = (position + 1) % points;
        y[i] = (int16_t)(sum >> 4);
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* load_cell = &filters[cw7_load_cell];
    load_cell->reset = reset;
    load_cell->process = process;
}
