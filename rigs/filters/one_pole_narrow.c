#include "rigs/filters/one_pole_narrow.h"

void one_pole_narrow_q15_init(struct one_pole_narrow_q15* filter, uint8_t shift) {
    filter->shift = shift;
    one_pole_narrow_q15_reset(filter);
}

void one_pole_narrow_q15_reset(struct one_pole_narrow_q15* filter) { filter->y = 0; }

void one_pole_narrow_q15_process(struct one_pole_narrow_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        const int32_t difference = (int32_t)*in++ - filter->y;
        filter->y = (int16_t)(filter->y + (difference >> filter->shift));
        *out++ = filter->y;
    }
}
