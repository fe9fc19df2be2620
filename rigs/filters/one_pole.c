#include "rigs/filters/one_pole.h"

void one_pole_q15_init(struct one_pole_q15* filter, uint8_t shift) {
    filter->shift = shift;
    one_pole_q15_reset(filter);
}

void one_pole_q15_reset(struct one_pole_q15* filter) { filter->state = 0; }

void one_pole_q15_process(struct one_pole_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        filter->state += *in++ - (filter->state >> filter->shift);
        *out++ = (int16_t)(filter->state >> filter->shift);
    }
}

void one_pole_q15_process_rounded(struct one_pole_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    const int32_t half = (int32_t)1 << (filter->shift - 1);
    for (; count > 0; count--) {
        filter->state += *in++ - ((filter->state + half) >> filter->shift);
        *out++ = (int16_t)((filter->state + half) >> filter->shift);
    }
}
