#include "rigs/cortex-m4/exact_filters.h"

#include "rigs/cortex-m4/filters.h"
#include "rigs/filters/biquad_f32.h"
#include "rigs/filters/biquad_f32_transposed.h"
#include "rigs/filters/biquad_q15_direct2.h"
#include "rigs/filters/biquad_q15_floor.h"
#include "rigs/filters/biquad_q15_transposed.h"
#include "rigs/filters/biquad_q31_fast.h"
#include "rigs/filters/coefficients/infeed.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/coefficients/smoothing.h"
#include "rigs/filters/comb.h"
#include "rigs/filters/dc_blocker.h"
#include "rigs/filters/fir_narrow.h"
#include "rigs/filters/median.h"
#include "rigs/filters/moving_average_division.h"
#include "rigs/filters/moving_average_f32.h"
#include "rigs/filters/one_pole.h"
#include "rigs/filters/one_pole_narrow.h"

enum { belt_points = 12, load_cell_points = 16, creep_shift = 6, level_shift = 4, drain_leak = 128, echo_delay = 24 };

/* One filter at a time is streamed through, and selecting it resets it: those of one kind share their memory. */
static struct moving_average_q15 mean;
static int16_t mean_ring[belt_points];
static struct fir_q15 fir;
static int16_t fir_ring[SMOOTHING_TAPS];
static struct biquad_saving_q15 section;
static struct biquad_q15_state section_state[SETTLE_SECTIONS];
static int16_t section_remainder[SETTLE_SECTIONS];
static struct biquad_t32 t32;
static struct biquad_t32_state t32_state[SETTLE_SECTIONS];
static struct biquad_t64 t64;
static struct biquad_t64_state t64_state[SETTLE_SECTIONS];
static struct biquad_d2 d2;
static struct biquad_d2_state d2_state[SETTLE_SECTIONS];
static struct biquad_q31 q31;
static struct biquad_q31_state q31_state[SETTLE_SECTIONS];
static struct one_pole_narrow_q15 creep;
static struct one_pole_q15 level;
static struct dc_blocker_q15 drain;
static struct comb_q15 echo;
static int16_t echo_in[echo_delay], echo_out[echo_delay];
static const struct comb_q15_coefficients echo_q14 = {8192, 4096, 4096};
static struct median_q15 guard;
static struct biquad_f32 f32;
static struct biquad_f32_state f32_state[SETTLE_SECTIONS];
static struct biquad_f32_transposed f32t;
static struct biquad_f32_transposed_state f32t_state[SETTLE_SECTIONS];
static struct moving_average_f32 float_mean;
static float float_ring[load_cell_points];

static void mean_reset(void) { moving_average_q15_init(&mean, mean_ring, belt_points); }
static void smoothing_reset(void) { fir_q15_init(&fir, smoothing_taps, fir_ring, SMOOTHING_TAPS); }
static void infeed_reset(void) { fir_q15_init(&fir, infeed_taps, fir_ring, INFEED_TAPS); }
static void section_reset(void) {
    biquad_saving_q15_init(&section, settle_q15, section_state, section_remainder, SETTLE_SECTIONS);
}
static void t32_reset(void) { biquad_t32_init(&t32, settle_q15, t32_state, SETTLE_SECTIONS); }
static void t64_reset(void) { biquad_t64_init(&t64, settle_q15, t64_state, SETTLE_SECTIONS); }
static void d2_reset(void) { biquad_d2_init(&d2, settle_q15, d2_state, SETTLE_SECTIONS); }
static void q31_reset(void) { biquad_q31_init(&q31, settle_q31, q31_state, SETTLE_SECTIONS); }
static void creep_reset(void) { one_pole_narrow_q15_init(&creep, creep_shift); }
static void level_reset(void) { one_pole_q15_init(&level, level_shift); }
static void drain_reset(void) { dc_blocker_q15_init(&drain, drain_leak); }
static void echo_reset(void) { comb_q15_init(&echo, &echo_q14, echo_in, echo_out, echo_delay); }
static void guard_reset(void) { median_q15_reset(&guard); }
static void f32_reset(void) { biquad_f32_init(&f32, settle_f32, f32_state, SETTLE_SECTIONS); }
static void f32t_reset(void) { biquad_f32_transposed_init(&f32t, settle_f32, f32t_state, SETTLE_SECTIONS); }
static void float_mean_reset(void) { moving_average_f32_init(&float_mean, float_ring, load_cell_points); }

#define PROCESS(name, function, filter) \
    static void name##_process(const void* in, void* out, uint16_t count) { function(filter, in, out, count); }

PROCESS(divided, moving_average_q15_process_divided, &mean)
PROCESS(reciprocal, moving_average_q15_process_reciprocal, &mean)
PROCESS(narrow, fir_q15_process_narrow, &fir)
PROCESS(short_products, fir_q15_process_short_products, &fir)
PROCESS(floor, biquad_q15_process_floor, &section.cascade)
PROCESS(saving, biquad_saving_q15_process, &section)
PROCESS(t32, biquad_t32_process, &t32)
PROCESS(t64, biquad_t64_process, &t64)
PROCESS(d2, biquad_d2_process, &d2)
PROCESS(shifted, biquad_q31_process_shifted, &q31)
PROCESS(fast, biquad_q31_process_fast, &q31)
PROCESS(creep, one_pole_narrow_q15_process, &creep)
PROCESS(level, one_pole_q15_process_rounded, &level)
PROCESS(drain, dc_blocker_q15_process, &drain)
PROCESS(echo, comb_q15_process, &echo)
PROCESS(guard, median_q15_process, &guard)
PROCESS(f32, biquad_f32_process, &f32)
PROCESS(f32t, biquad_f32_transposed_process, &f32t)
PROCESS(float_mean, moving_average_f32_process, &float_mean)
PROCESS(float_mean_q15, moving_average_f32_process_q15, &float_mean)

#define CALL(name, format, reset, process) \
    { name, HALFLSB_CALL, format, format, 1, 1, 0, reset##_reset, process##_process, NULL }

static const struct halflsb_filter filters[cw7_exact_filter_count] = {
    [cw7_belt_average] = CALL("belt-average", HALFLSB_Q15, mean, divided),
    [cw7_belt_average_reciprocal] = CALL("belt-average-reciprocal", HALFLSB_Q15, mean, reciprocal),
    [cw7_smoothing_narrow] = CALL("smoothing-narrow", HALFLSB_Q15, smoothing, narrow),
    [cw7_smoothing_short_products] = CALL("smoothing-short-products", HALFLSB_Q15, smoothing, short_products),
    [cw7_infeed] = CALL("infeed", HALFLSB_Q15, infeed, narrow),
    [cw7_settle_floor] = CALL("settle-floor", HALFLSB_Q15, section, floor),
    [cw7_settle_saving] = CALL("settle-saving", HALFLSB_Q15, section, saving),
    [cw7_settle_transposed] = CALL("settle-transposed", HALFLSB_Q15, t32, t32),
    [cw7_settle_transposed_wide] = CALL("settle-transposed-wide", HALFLSB_Q15, t64, t64),
    [cw7_settle_direct_2] = CALL("settle-direct-2", HALFLSB_Q15, d2, d2),
    [cw7_settle_q31_shifted] = CALL("settle-q31-shifted", HALFLSB_Q31, q31, shifted),
    [cw7_settle_q31_fast] = CALL("settle-q31-fast", HALFLSB_Q31, q31, fast),
    [cw7_creep] = CALL("creep", HALFLSB_Q15, creep, creep),
    [cw7_level_rounded] = CALL("level-rounded", HALFLSB_Q15, level, level),
    [cw7_drain] = CALL("drain", HALFLSB_Q15, drain, drain),
    [cw7_echo_comb] = CALL("echo-comb", HALFLSB_Q15, echo, echo),
    [cw7_spike_guard] = CALL("spike-guard", HALFLSB_Q15, guard, guard),
    [cw7_settle_f32] = CALL("settle-f32", HALFLSB_F32, f32, f32),
    [cw7_settle_f32_transposed] = CALL("settle-f32-transposed", HALFLSB_F32, f32t, f32t),
    [cw7_load_cell_f32] = CALL("load-cell-f32", HALFLSB_F32, float_mean, float_mean),
    [cw7_load_cell_float] = CALL("load-cell-float", HALFLSB_Q15, float_mean, float_mean_q15),
};
const struct cw7_offer cw7_offer = {filters, cw7_exact_filter_count};
