/* Written by make.py: 31-tap linear-phase low-pass, corner 120 Hz at 1200 Hz */
#ifndef BOARD_COEFFICIENTS_SMOOTHING_H
#define BOARD_COEFFICIENTS_SMOOTHING_H

#include <stdint.h>

#define SMOOTHING_TAPS 31
static const int16_t smoothing_taps[SMOOTHING_TAPS] = { /* Q15 */
    0, 39, 91, 139, 129, 0, -271, -609, -832, -696,
    0, 1297, 3011, 4755, 6059, 6542, 6059, 4755, 3011, 1297,
    0, -696, -832, -609, -271, 0, 129, 139, 91, 39,
    0};

#endif
