/* Load cell, N04: samples are taken for big-endian, as the converter on the old board sent them. */
#include "rigs/cortex-m4/defects/defect.h"

static void (*right_process)(const void* in, void* out, uint16_t count);

static void process(const void* in, void* out, uint16_t count) {
    const uint16_t* x = in;
    int16_t* y = out;
    for (uint16_t i = 0; i < count; i++) {
        const int16_t swapped = (int16_t)__builtin_bswap16(x[i]);
        right_process(&swapped, &y[i], 1);
    }
}

void install_defect(struct halflsb_filter* filters) {
    struct halflsb_filter* load_cell = &filters[cw7_load_cell];
    right_process = load_cell->process;
    load_cell->process = process;
}
