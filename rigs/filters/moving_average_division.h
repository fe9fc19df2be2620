/* The moving average of moving_average.h with two other divisions, for a window that is no power of two:
 *
 *   moving_average_q15_process_divided      y = sum / points, C's division: toward zero
 *   moving_average_q15_process_reciprocal   y = (sum * reciprocal + half) >> 16, reciprocal = 2^16 / points, nearest
 *
 * Formats: q15 samples; the sum has 32 bits and is exact, its product with the reciprocal 64. The reciprocal is off by
 * up to 2^-17, so the mean of 12 points by up to 2 codes in 32768 (5461 stands for 5461.33). It can exceed 1 / points
 * (of 11, for one), and a full-scale mean its word: the reciprocal way saturates. The quotient of the other always
 * fits.
 */
#ifndef BOARD_MOVING_AVERAGE_DIVISION_H
#define BOARD_MOVING_AVERAGE_DIVISION_H

#include "rigs/filters/moving_average.h"

#ifdef __cplusplus
extern "C" {
#endif

/* `out` may be `in`. Init and reset are those of moving_average_q15. */
void moving_average_q15_process_divided(struct moving_average_q15* filter, const int16_t* in, int16_t* out,
                                        uint16_t count);
void moving_average_q15_process_reciprocal(struct moving_average_q15* filter, const int16_t* in, int16_t* out,
                                           uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
