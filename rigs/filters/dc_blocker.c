#include "rigs/filters/dc_blocker.h"

#include "rigs/filters/fixed_point.h"

void dc_blocker_q15_init(struct dc_blocker_q15* filter, int16_t leak) {
    filter->leak = leak;
    dc_blocker_q15_reset(filter);
}

void dc_blocker_q15_reset(struct dc_blocker_q15* filter) {
    filter->state = 0;
    filter->previous = 0;
}

void dc_blocker_q15_process(struct dc_blocker_q15* filter, const int16_t* in, int16_t* out, uint16_t count) {
    for (; count > 0; count--) {
        const int16_t x = *in++;
        filter->state += ((int64_t)x - filter->previous) * 32768 - filter->leak * (filter->state >> 15);
        filter->previous = x;
        *out++ = saturate_q15(filter->state >> 15);
    }
}
