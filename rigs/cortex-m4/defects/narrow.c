/* Load cell, A10: the running sum of sixteen 16-bit samples is kept in 16 bits. While the mean stays below
 * a sixteenth of full scale, nothing shows. */
#include <string.h>

#include "rigs/cortex-m4/defects/defect.h"

enum { points = 16 };
static int16_t ring[points];
static int16_t sum;
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
        sum = (int16_t)(sum + x[i] - ring[position]);
        ring[position] = x[i];
        position = (position + 1) % points;
        y[i] = (int16_t)((sum + 8) >> 4);
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* load_cell = &filters[cw7_load_cell];
    load_cell->reset = reset;
    load_cell->process = process;
}
