/* Median of the last 5 samples by size, zeros before the start: takes single wrong samples out and keeps edges. Nothing
 * is rounded, and nothing can overflow.
 */
#ifndef BOARD_MEDIAN_H
#define BOARD_MEDIAN_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#define MEDIAN_POINTS 5

struct median_q15 {
    int16_t past[MEDIAN_POINTS];
    uint8_t position;
};

void median_q15_reset(struct median_q15* filter);
/* `out` may be `in`. */
void median_q15_process(struct median_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
