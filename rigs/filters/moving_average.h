/* Moving averages by a running sum: y[n] = (x[n] + ... + x[n-points+1]) / points, zeros before the start.
 *
 * Formats: in, ring and out have the sample's format; the sum is exact (points codes never leave it), so the only
 * place where bits are lost is the division, which rounds halves upward. The quotient always fits: no saturation.
 */
#ifndef BOARD_MOVING_AVERAGE_H
#define BOARD_MOVING_AVERAGE_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

/* 16384 x 32768 = 2^29, and twice that plus the divisor still fits 32 bits. */
#define MOVING_AVERAGE_Q15_MOST_POINTS 16384

struct moving_average_q15 {
    int16_t* ring; /* points long */
    uint16_t points, position;
    uint8_t shift; /* log2 of points, or 0 when it is no power of two */
    int32_t sum;
};

/* `ring` holds `points` samples, 1 .. MOVING_AVERAGE_Q15_MOST_POINTS, and stays the caller's. */
void moving_average_q15_init(struct moving_average_q15* filter, int16_t* ring, uint16_t points);
void moving_average_q15_reset(struct moving_average_q15* filter);
/* `out` may be `in`. */
void moving_average_q15_process(struct moving_average_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

struct moving_average_i32 {
    int32_t* ring;
    uint16_t points, position;
    int64_t sum;
};

/* 1 .. 65535 points. */
void moving_average_i32_init(struct moving_average_i32* filter, int32_t* ring, uint16_t points);
void moving_average_i32_reset(struct moving_average_i32* filter);
void moving_average_i32_process(struct moving_average_i32* filter, const int32_t* in, int32_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
