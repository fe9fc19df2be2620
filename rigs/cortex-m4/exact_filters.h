/* The bench variant of the CW-7: its filters again, each with another decision about arithmetic. What each computes is
 * written for a plan in tests/rigs/exact. Its filters as its greeting lists them. */
#ifndef CW7_EXACT_FILTERS_H
#define CW7_EXACT_FILTERS_H

enum {
    cw7_belt_average,
    cw7_belt_average_reciprocal,
    cw7_smoothing_narrow,
    cw7_smoothing_short_products,
    cw7_infeed,
    cw7_settle_floor,
    cw7_settle_saving,
    cw7_settle_transposed,
    cw7_settle_transposed_wide,
    cw7_settle_direct_2,
    cw7_settle_q31_shifted,
    cw7_settle_q31_fast,
    cw7_creep,
    cw7_level_rounded,
    cw7_drain,
    cw7_echo_comb,
    cw7_spike_guard,
    cw7_settle_f32,
    cw7_settle_f32_transposed,
    cw7_load_cell_f32,
    cw7_load_cell_float,
    cw7_exact_filter_count
};

#endif
