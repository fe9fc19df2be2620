/* Written by make.py: 6-tap difference of two means, gain 5.2 at most */
#ifndef BOARD_COEFFICIENTS_INFEED_H
#define BOARD_COEFFICIENTS_INFEED_H

#include <stdint.h>

#define INFEED_TAPS 6
static const int16_t infeed_taps[INFEED_TAPS] = { /* Q15 */
    29491, 29491, 26214, -29491, -29491, -26214};

#endif
