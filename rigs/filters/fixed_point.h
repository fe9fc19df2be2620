/* Fixed-point steps that the filters share. `>>` of a negative number is arithmetic on every compiler we build with
 * (gcc, clang); C99 leaves it to them. */
#ifndef BOARD_FIXED_POINT_H
#define BOARD_FIXED_POINT_H

#include <stdint.h>

static inline int16_t saturate_q15(int64_t value) {
    if (value > INT16_MAX) return INT16_MAX;
    if (value < INT16_MIN) return INT16_MIN;
    return (int16_t)value;
}

static inline int32_t saturate_q31(int64_t value) {
    if (value > INT32_MAX) return INT32_MAX;
    if (value < INT32_MIN) return INT32_MIN;
    return (int32_t)value;
}

/* Drops `bits` fraction bits (1 or more), halves upward. */
static inline int64_t round_half_up(int64_t value, unsigned bits) {
    return (value + ((int64_t)1 << (bits - 1))) >> bits;
}

/* floor(sum / points + 1/2) = floor((2 sum + points) / (2 points)); C divides toward zero, so a negative remainder
 * takes one off. */
static inline int64_t divide_half_up(int64_t sum, int64_t points) {
    const int64_t dividend = 2 * sum + points, divisor = 2 * points;
    return dividend / divisor - (dividend % divisor < 0);
}

#endif
