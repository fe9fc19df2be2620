/* Written by make.py: Butterworth low-pass, order 4, corner 0.02 of the sample rate */
#ifndef BOARD_COEFFICIENTS_SETTLE_H
#define BOARD_COEFFICIENTS_SETTLE_H

#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/biquad_q31.h"
#include "rigs/filters/biquad_f32.h"

#define SETTLE_SECTIONS 2
static const struct biquad_q15_coefficients settle_q15[SETTLE_SECTIONS] = { /* Q14; a1, a2 negated */
    {58, 116, 58, 29136, -12983},
    {62, 123, 62, 31022, -14884}};
static const struct biquad_q31_coefficients settle_q31[SETTLE_SECTIONS] = { /* Q30; a1, a2 negated */
    {3794062, 7588125, 3794062, 1909449568, -850883994},
    {4039635, 8079269, 4039635, 2033039521, -975456236}};
static const struct biquad_f32_coefficients settle_f32[SETTLE_SECTIONS] = {
    {0.0035334958229213953f, 0.007066991645842791f, 0.0035334958229213953f, 1.7783135175704956f, -0.7924474477767944f},
    {0.003762203035876155f, 0.00752440607175231f, 0.003762203035876155f, 1.8934155702590942f, -0.9084644317626953f}};

#endif
