/* Written by make.py: 24-tap low-pass whose taps are not symmetric */
#ifndef BOARD_COEFFICIENTS_QUICK_SMOOTHING_H
#define BOARD_COEFFICIENTS_QUICK_SMOOTHING_H

#include <stdint.h>

#define QUICK_SMOOTHING_TAPS 24
static const int16_t quick_smoothing_taps[QUICK_SMOOTHING_TAPS] = { /* Q15 */
    6516, 8696, 8129, 6209, 3949, 1958, 506, -369, -763, -821,
    -689, -481, -274, -110, 0, 59, 78, 73, 56, 35,
    18, 5, -3, -7};

#endif
