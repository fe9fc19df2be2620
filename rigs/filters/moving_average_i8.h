/* Moving average of 8-bit samples (q7, i8): y[n] = (x[n] + ... + x[n-points+1]) / points, zeros before the start.
 *
 * Formats: in, ring and out are 8 bits, so that a ring of 16 points is 16 bytes; the sum has 32 bits and is exact. Bits
 * are lost once, in the division, which rounds halves upward. The quotient always fits: no saturation.
 */
#ifndef BOARD_MOVING_AVERAGE_I8_H
#define BOARD_MOVING_AVERAGE_I8_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct moving_average_i8 {
    int8_t* ring; /* points long */
    uint16_t points, position;
    int32_t sum;
};

/* `ring` holds `points` samples, 1 .. 65535, and stays the caller's. */
void moving_average_i8_init(struct moving_average_i8* filter, int8_t* ring, uint16_t points);
void moving_average_i8_reset(struct moving_average_i8* filter);
/* `out` may be `in`. */
void moving_average_i8_process(struct moving_average_i8* filter, const int8_t* in, int8_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
