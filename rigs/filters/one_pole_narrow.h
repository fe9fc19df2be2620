/* The one-pole of one_pole.h as it is mostly written, with a state no wider than a sample:
 *
 *   y += (x - y) >> shift
 *
 * Formats: q15 samples and state; the difference has 17 bits. Bits are lost in the shift, floored, every time: a
 * constant is reached from above, and from below y comes to rest up to 2^shift - 1 codes short of it. y stays between
 * the samples that it has seen: no saturation.
 */
#ifndef BOARD_ONE_POLE_NARROW_H
#define BOARD_ONE_POLE_NARROW_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

struct one_pole_narrow_q15 {
    int16_t y;
    uint8_t shift;
};

/* shift: 1 .. 15. */
void one_pole_narrow_q15_init(struct one_pole_narrow_q15* filter, uint8_t shift);
void one_pole_narrow_q15_reset(struct one_pole_narrow_q15* filter);
/* `out` may be `in`. */
void one_pole_narrow_q15_process(struct one_pole_narrow_q15* filter, const int16_t* in, int16_t* out, uint16_t count);

#ifdef __cplusplus
}
#endif

#endif
