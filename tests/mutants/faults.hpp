// One-line changes of a firmware that was right: what each does, by name. Which fault of which filter it stands for
// says pairs.cpp.
#pragma once

namespace halflsb::mutants {

enum class Fault {
    none,
    // Rounding, width, overflow.
    floor,             // A01
    toward_zero,       // A02: `/` for the shift
    half_away,         // A03
    half_even,         // A03
    products_floored,  // A04
    products_rounded,  // A04
    constant_twice,    // A05
    output_wraps,      // A07, A13
    feedback_unheld,   // A08
    held_between,      // A09
    sum_32,            // A10, A11: int32_t acc
    direct_2,          // A12
    direct_2_wraps,    // A12
    saving,            // A24
    no_saving,         // A14, where the plan says that the fraction is saved
    narrow_state,      // A15: y += (x - y) >> k
    narrow_divided,    // A15: y += (x - y) / (1 << k)
    products_16,       // A17
    products_upper,    // A18
    sum_16,            // A22
    sum_u16,           // A22
    // Coefficients.
    coarse,             // C01: rounded in fewer bits
    q14,                // C02: in 14 bits where the plan has more
    cut,                // C03
    scale_less,         // C04
    shift_less,         // C05
    shift_more,         // C05
    by_largest,         // C06
    a1_sign,            // C07
    a2_sign,            // C07
    tables_exchanged,   // C09
    reversed,           // C10
    zero_first,         // C12
    taps_floored,       // C13
    b1_one_more,        // C14
    b0_over_a0,         // C15: divided once more
    b_times_a0,         // C15: the division left out
    twice_the_cutoff,   // C16
    cleared_on_update,  // C18
    bypass,             // C19, S20
    // Structure and state.
    one_late,             // S01
    window_15_by_16,      // S02
    window_15_by_15,      // S02
    window_17_by_16,      // S02
    window_17_by_17,      // S02
    ring_from_1,          // S03: the ring begins again at 1
    ring_read_short,      // S03: read from N - 2 on after 0
    sum_kept,             // S05
    half_reset,           // S06
    no_reset,             // S07
    garbage_at_power_up,  // S08
    first_sample,         // S09
    growing,              // S09
    x_order,              // S10
    y_order,              // S10
    state_exchanged,      // S11: each 64 samples
    one_filter,           // S15
    coupled,              // S16: 1/128 of the other channel's input
    slipped,              // S16
    last_phase,           // S17
    each_second,          // S18
    called_twice,         // S18
    // Floating point.
    running_sum,     // F01
    never_cleared,   // F03
    double_literal,  // F04
    cast,            // F10
    // Representation.
    offset_kept,       // N01: into 16 bits
    offset_kept_wide,  // N01: into 32 bits
    read_unsigned,     // N02, N03
    bytes_swapped,     // N04
    negated,           // N06
    no_data,           // N08: each 500th
    unsigned_inside,   // N09
    // Acquisition.
    half_repeated,   // D01: block 9
    torn_block,      // D02: the last 20 of 64
    sample_lost,     // D03: each 1000th, in front of the filter
    output_lost,     // D03: behind it
    sample_doubled,  // D04
    output_doubled,  // D04
    stale_line,      // D06: 16 samples of the lap before
    rotated,         // D07: from block 20 on
    block_skipped,   // D12: block 12 of 64 is not computed, its output is that of the block before
    slot_again,      // D14: an output ring of 256 sends a slot of 64 again
};

}  // namespace halflsb::mutants
