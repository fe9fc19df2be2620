#include "rigs/cortex-m4/filters.h"

#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/biquad_q31.h"
#include "rigs/filters/coefficients/mains-notch.h"
#include "rigs/filters/coefficients/quick-smoothing.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/coefficients/smoothing.h"
#include "rigs/filters/fir.h"
#include "rigs/filters/moving_average.h"

enum { load_cell_points = 16 };

static struct moving_average_q15 load_cell;
static int16_t load_cell_ring[load_cell_points];
static void load_cell_reset(void) { moving_average_q15_init(&load_cell, load_cell_ring, load_cell_points); }
static void load_cell_process(const void* in, void* out, uint16_t count) {
    moving_average_q15_process(&load_cell, in, out, count);
}

static struct fir_q15 smoothing;
static int16_t smoothing_ring[SMOOTHING_TAPS];
static void smoothing_reset(void) { fir_q15_init(&smoothing, smoothing_taps, smoothing_ring, SMOOTHING_TAPS); }
static void smoothing_process(const void* in, void* out, uint16_t count) {
    fir_q15_process(&smoothing, in, out, count);
}

static struct fir_q15 quick;
static int16_t quick_ring[QUICK_SMOOTHING_TAPS];
static void quick_reset(void) { fir_q15_init(&quick, quick_smoothing_taps, quick_ring, QUICK_SMOOTHING_TAPS); }
static void quick_process(const void* in, void* out, uint16_t count) { fir_q15_process(&quick, in, out, count); }

static struct biquad_q15 notch;
static struct biquad_q15_state notch_state[MAINS_NOTCH_SECTIONS];
static void notch_reset(void) { biquad_q15_init(&notch, mains_notch_q15, notch_state, MAINS_NOTCH_SECTIONS); }
static void notch_process(const void* in, void* out, uint16_t count) { biquad_q15_process(&notch, in, out, count); }

static struct biquad_q15 settle;
static struct biquad_q15_state settle_state[SETTLE_SECTIONS];
static void settle_reset(void) { biquad_q15_init(&settle, settle_q15, settle_state, SETTLE_SECTIONS); }
static void settle_process(const void* in, void* out, uint16_t count) { biquad_q15_process(&settle, in, out, count); }

static struct biquad_q31 settle_wide;
static struct biquad_q31_state settle_wide_state[SETTLE_SECTIONS];
static void settle_wide_reset(void) { biquad_q31_init(&settle_wide, settle_q31, settle_wide_state, SETTLE_SECTIONS); }
static void settle_wide_process(const void* in, void* out, uint16_t count) {
    biquad_q31_process(&settle_wide, in, out, count);
}

#define CALL(name, format, function) \
    { name, HALFLSB_CALL, format, format, 1, 1, 0, function##_reset, function##_process, NULL }

static const struct halflsb_filter filters[cw7_filter_count] = {
    [cw7_load_cell] = CALL("load-cell", HALFLSB_Q15, load_cell),
    [cw7_smoothing] = CALL("smoothing", HALFLSB_Q15, smoothing),
    [cw7_quick_smoothing] = CALL("quick-smoothing", HALFLSB_Q15, quick),
    [cw7_mains_notch] = CALL("mains-notch", HALFLSB_Q15, notch),
    [cw7_settle] = CALL("settle", HALFLSB_Q15, settle),
    [cw7_settle_q31] = CALL("settle-q31", HALFLSB_Q31, settle_wide),
};
const struct cw7_offer cw7_offer = {filters, cw7_filter_count};
