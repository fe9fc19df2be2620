#include "rigs/cortex-m4/rate_filters.h"

#include "rigs/cortex-m4/filters.h"
#include "rigs/filters/cic.h"
#include "rigs/filters/coefficients/droop.h"
#include "rigs/filters/coefficients/quarter.h"
#include "rigs/filters/coefficients/triple.h"
#include "rigs/filters/fir_rates.h"

enum { sharp_order = 3, eighth = 8, sharp_shift = 9, gentle_order = 2, fourfold = 4, gentle_shift = 2 };
enum { quarter = 4, triple = 3, half = 2 };

/* One filter at a time is streamed through, and selecting it resets it: they share their memory. */
static struct cic_q15 cic;
static struct fir_rate_q15 fir;
static int16_t ring[QUARTER_TAPS > TRIPLE_TAPS ? QUARTER_TAPS : TRIPLE_TAPS];

static void eighth_reset(void) { cic_q15_init(&cic, sharp_order, eighth, sharp_shift); }
static void fourfold_reset(void) { cic_q15_init(&cic, gentle_order, fourfold, gentle_shift); }
static void quarter_reset(void) { fir_rate_q15_init(&fir, quarter_taps, ring, QUARTER_TAPS, quarter, 15); }
static void triple_reset(void) { fir_rate_q15_init(&fir, triple_taps, ring, TRIPLE_TAPS, triple, 14); }
static void slow_reset(void) {
    eighth_reset();
    fir_rate_q15_init(&fir, droop_taps, ring, DROOP_TAPS, half, 15);
}

static uint16_t eighth_process(const void* in, void* out, uint16_t count) {
    return cic_decimator_q15_process(&cic, in, out, count);
}
static uint16_t fourfold_process(const void* in, void* out, uint16_t count) {
    return cic_interpolator_q15_process(&cic, in, out, count);
}
static uint16_t quarter_process(const void* in, void* out, uint16_t count) {
    return fir_decimator_q15_process(&fir, in, out, count);
}
static uint16_t triple_process(const void* in, void* out, uint16_t count) {
    return fir_interpolator_q15_process(&fir, in, out, count);
}
static uint16_t slow_process(const void* in, void* out, uint16_t count) {
    const int16_t* from = in;
    int16_t *const begin = out, *to = out, between;
    for (; count > 0; count--)
        if (cic_q15_decimate(&cic, *from++, &between)) to += fir_q15_decimate(&fir, between, to);
    return (uint16_t)(to - begin);
}

#define CALL(name, up, down, function)                                                                 \
    {                                                                                                  \
        name, HALFLSB_CALL, HALFLSB_Q15, HALFLSB_Q15, 1, 1, 0, function##_reset, NULL, NULL, up, down, \
            function##_process                                                                         \
    }

static const struct halflsb_filter filters[cw7_rate_filter_count] = {
    [cw7_belt_eighth] = CALL("belt-eighth", 1, eighth, eighth),
    [cw7_belt_fourfold] = CALL("belt-fourfold", fourfold, 1, fourfold),
    [cw7_belt_quarter] = CALL("belt-quarter", 1, quarter, quarter),
    [cw7_belt_triple] = CALL("belt-triple", triple, 1, triple),
    [cw7_belt_slow] = CALL("belt-slow", 1, eighth* half, slow),
};
const struct cw7_offer cw7_offer = {filters, cw7_rate_filter_count};
