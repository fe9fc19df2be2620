/* Written by make.py: 7-tap compensation of a CIC's droop */
#ifndef BOARD_COEFFICIENTS_DROOP_H
#define BOARD_COEFFICIENTS_DROOP_H

#include <stdint.h>

#define DROOP_TAPS 7
static const int16_t droop_taps[DROOP_TAPS] = { /* Q15 */
    -1638, 0, 9830, 16384, 9830, 0, -1638};

#endif
