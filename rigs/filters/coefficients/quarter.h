/* Written by make.py: 24-tap low-pass for each fourth sample */
#ifndef BOARD_COEFFICIENTS_QUARTER_H
#define BOARD_COEFFICIENTS_QUARTER_H

#include <stdint.h>

#define QUARTER_TAPS 24
static const int16_t quarter_taps[QUARTER_TAPS] = { /* Q15 */
    24, -22, -117, -271, -420, -404, -28, 837, 2156, 3693,
    5063, 5873, 5873, 5063, 3693, 2156, 837, -28, -404, -420,
    -271, -117, -22, 24};

#endif
