/* Written by make.py: 50 Hz notch at 1200 Hz, quality 5 */
#ifndef BOARD_COEFFICIENTS_MAINS_NOTCH_H
#define BOARD_COEFFICIENTS_MAINS_NOTCH_H

#include "rigs/filters/biquad_q15.h"

#define MAINS_NOTCH_SECTIONS 1
static const struct biquad_q15_coefficients mains_notch_q15[MAINS_NOTCH_SECTIONS] = { /* Q14; a1, a2 negated */
    {15966, -30844, 15966, 30844, -15548}};

#endif
