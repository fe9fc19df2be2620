/* Written by make.py: 24-tap low-pass of three times the rate, gain 3 */
#ifndef BOARD_COEFFICIENTS_TRIPLE_H
#define BOARD_COEFFICIENTS_TRIPLE_H

#include <stdint.h>

#define TRIPLE_TAPS 24
static const int16_t triple_taps[TRIPLE_TAPS] = { /* Q14 */
    -62, 37, 219, 377, 177, -616, -1619, -1706, 314, 4597,
    9691, 13167, 13167, 9691, 4597, 314, -1706, -1619, -616, 177,
    377, 219, 37, -62};

#endif
