/* Moving average by a running sum in single precision: sum = (sum - oldest) + newest, y = sum / points.
 *
 *   moving_average_f32_process       float samples
 *   moving_average_f32_process_q15   q15 samples: x = code / 32768, and back by a cast: toward zero, saturated
 *
 * The sum keeps what each addition rounded: with float samples it drifts, without end. With q15 samples it does not: 24
 * bits hold the sum of 256 codes exactly, and only the division and the cast lose bits.
 */
#ifndef BOARD_MOVING_AVERAGE_F32_H
#define BOARD_MOVING_AVERAGE_F32_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct moving_average_f32 {
    float* ring; /* points long */
    uint16_t points, position;
    float sum;
};

/* `ring` holds `points` samples and stays the caller's. */
void moving_average_f32_init(struct moving_average_f32* filter, float* ring, uint16_t points);
void moving_average_f32_reset(struct moving_average_f32* filter);
/* `out` may be `in`. */
void moving_average_f32_process(struct moving_average_f32* filter, const float* in, float* out, uint16_t count);
void moving_average_f32_process_q15(struct moving_average_f32* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
