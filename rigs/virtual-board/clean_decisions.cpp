#include "rigs/virtual-board/clean_decisions.hpp"

#include <algorithm>
#include <array>
#include <utility>

#include "rigs/filters/biquad_f32_transposed.h"
#include "rigs/filters/biquad_q15_direct2.h"
#include "rigs/filters/biquad_q15_floor.h"
#include "rigs/filters/biquad_q15_transposed.h"
#include "rigs/filters/biquad_q31_fast.h"
#include "rigs/filters/coefficients/infeed.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/coefficients/smoothing.h"
#include "rigs/filters/fir_narrow.h"
#include "rigs/filters/median.h"
#include "rigs/filters/moving_average_division.h"
#include "rigs/filters/moving_average_f32.h"
#include "rigs/filters/one_pole_narrow.h"
#include "rigs/virtual-board/clean_rates.hpp"

namespace halflsb::board {

namespace {

constexpr std::uint16_t belt_points = 12;
constexpr std::uint16_t load_cell_points = 16;
constexpr std::uint8_t creep_shift = 6;

// Each filter's storage is shared by its functions, which the board keeps for as long as it runs. `reset` makes the
// filter as after power-up, `reset_half` clears what its memory has first.
template <typename Storage, typename Word, typename Filter>
FilterParts parts_of(std::string name, std::string what, Format format, Filter Storage::*filter,
                     void (*process)(Filter*, const Word*, Word*, std::uint16_t), void (*reset)(Storage&),
                     void (*reset_half)(Storage&)) {
    auto s = std::make_shared<Storage>();
    reset(*s);
    FilterParts parts;
    parts.name = std::move(name);
    parts.what = std::move(what);
    parts.kind = FilterKind::decision;
    parts.format = format;
    parts.reset = [s, reset] { reset(*s); };
    parts.reset_half = [s, reset_half] { reset_half(*s); };
    parts.process = [s, filter, process](const void* in, void* out, std::uint16_t count) {
        process(&((*s).*filter), static_cast<const Word*>(in), static_cast<Word*>(out), count);
    };
    return parts;
}

struct Mean {
    moving_average_q15 filter{};
    std::array<std::int16_t, belt_points> ring{};
};

FilterParts belt_average(std::string name, std::string what,
                         void (*process)(moving_average_q15*, const std::int16_t*, std::int16_t*, std::uint16_t)) {
    return parts_of<Mean>(
        std::move(name), std::move(what), HALFLSB_Q15, &Mean::filter, process,
        [](Mean& s) { moving_average_q15_init(&s.filter, s.ring.data(), belt_points); },
        [](Mean& s) { s.filter.sum = 0; });
}

struct FloatMean {
    moving_average_f32 filter{};
    std::array<float, load_cell_points> ring{};
};

template <typename Word>
FilterParts float_average(std::string name, std::string what, Format format,
                          void (*process)(moving_average_f32*, const Word*, Word*, std::uint16_t)) {
    return parts_of<FloatMean>(
        std::move(name), std::move(what), format, &FloatMean::filter, process,
        [](FloatMean& s) { moving_average_f32_init(&s.filter, s.ring.data(), load_cell_points); },
        [](FloatMean& s) { s.filter.sum = 0.0f; });
}

template <std::size_t count, const std::int16_t (*taps)[count]>
struct Taps {
    fir_q15 filter{};
    std::array<std::int16_t, count> ring{};
    static void reset(Taps& s) { fir_q15_init(&s.filter, *taps, s.ring.data(), count); }
    static void reset_half(Taps& s) { std::fill_n(s.ring.begin(), count / 2, std::int16_t{0}); }
    static FilterParts parts(std::string name, std::string what,
                             void (*process)(fir_q15*, const std::int16_t*, std::int16_t*, std::uint16_t)) {
        return parts_of<Taps>(std::move(name), std::move(what), HALFLSB_Q15, &Taps::filter, process, reset, reset_half);
    }
};
using Smoothing = Taps<SMOOTHING_TAPS, &smoothing_taps>;
using Infeed = Taps<INFEED_TAPS, &infeed_taps>;

struct Saving {
    biquad_saving_q15 filter{};
    std::array<biquad_q15_state, SETTLE_SECTIONS> state{};
    std::array<std::int16_t, SETTLE_SECTIONS> remainder{};
};

/// Two sections of `settle`, whose state has nothing but numbers of one type, the first to be cleared first.
template <typename Filter, typename State, typename Coefficients, auto init, const auto* table, auto first>
struct Sections {
    Filter filter{};
    std::array<State, SETTLE_SECTIONS> state{};
    static void reset(Sections& s) { init(&s.filter, *table, s.state.data(), SETTLE_SECTIONS); }
    static void reset_half(Sections& s) {
        for (State& each : s.state) each.*first = {};
    }
    template <typename Word>
    static FilterParts parts(std::string name, std::string what, Format format,
                             void (*process)(Filter*, const Word*, Word*, std::uint16_t)) {
        return parts_of<Sections>(std::move(name), std::move(what), format, &Sections::filter, process, reset,
                                  reset_half);
    }
};
using Plain = Sections<biquad_q15, biquad_q15_state, biquad_q15_coefficients, biquad_q15_init, &settle_q15,
                       &biquad_q15_state::x1>;
using Transposed32 = Sections<biquad_t32, biquad_t32_state, biquad_q15_coefficients, biquad_t32_init, &settle_q15,
                              &biquad_t32_state::s1>;
using Transposed64 = Sections<biquad_t64, biquad_t64_state, biquad_q15_coefficients, biquad_t64_init, &settle_q15,
                              &biquad_t64_state::s1>;
using Direct2 =
    Sections<biquad_d2, biquad_d2_state, biquad_q15_coefficients, biquad_d2_init, &settle_q15, &biquad_d2_state::w1>;
using Q31 = Sections<biquad_q31, biquad_q31_state, biquad_q31_coefficients, biquad_q31_init, &settle_q31,
                     &biquad_q31_state::x1>;
using TransposedF32 = Sections<biquad_f32_transposed, biquad_f32_transposed_state, biquad_f32_coefficients,
                               biquad_f32_transposed_init, &settle_f32, &biquad_f32_transposed_state::s1>;

struct Creep {
    one_pole_narrow_q15 filter{};
};
struct Guard {
    median_q15 filter{};
};

}  // namespace

std::vector<FilterParts> decision_filters() {
    const std::string sections = "24 Hz low-pass, two sections, ";
    std::vector<FilterParts> filters;
    filters.push_back(
        belt_average("belt-average", "12-point mean, exact sum, toward zero", moving_average_q15_process_divided));
    filters.push_back(belt_average("belt-average-reciprocal", "12-point mean, exact sum, times 5461 / 65536",
                                   moving_average_q15_process_reciprocal));
    filters.push_back(Smoothing::parts("smoothing-narrow", "31-tap low-pass, 32-bit sum that wraps, halves upward",
                                       fir_q15_process_narrow));
    filters.push_back(Smoothing::parts("smoothing-short-products", "31-tap low-pass, each product floored",
                                       fir_q15_process_short_products));
    filters.push_back(
        Infeed::parts("infeed", "6-tap difference, 32-bit sum that wraps, halves upward", fir_q15_process_narrow));
    filters.push_back(
        Plain::parts("settle-floor", sections + "each floors and saturates", HALFLSB_Q15, biquad_q15_process_floor));
    filters.push_back(parts_of<Saving>(
        "settle-saving", sections + "each floors, keeps the fraction and saturates", HALFLSB_Q15, &Saving::filter,
        biquad_saving_q15_process,
        [](Saving& s) {
            biquad_saving_q15_init(&s.filter, settle_q15, s.state.data(), s.remainder.data(), SETTLE_SECTIONS);
        },
        [](Saving& s) { biquad_q15_reset(&s.filter.cascade); }));
    filters.push_back(Transposed32::parts("settle-transposed", sections + "transposed, states of 32 bits", HALFLSB_Q15,
                                          biquad_t32_process));
    filters.push_back(Transposed64::parts("settle-transposed-wide", sections + "transposed, states of 64 bits",
                                          HALFLSB_Q15, biquad_t64_process));
    filters.push_back(Direct2::parts("settle-direct-2", sections + "direct form II, states of 32 bits", HALFLSB_Q15,
                                     biquad_d2_process));
    filters.push_back(Q31::parts("settle-q31-shifted", sections + "64-bit sums, each floors and wraps", HALFLSB_Q31,
                                 biquad_q31_process_shifted));
    filters.push_back(Q31::parts("settle-q31-fast", sections + "upper halves of products, 32-bit sums", HALFLSB_Q31,
                                 biquad_q31_process_fast));
    filters.push_back(parts_of<Creep>(
        "creep", "one-pole, 1/64, state of 16 bits, floors", HALFLSB_Q15, &Creep::filter, one_pole_narrow_q15_process,
        [](Creep& s) { one_pole_narrow_q15_init(&s.filter, creep_shift); },
        [](Creep& s) { s.filter.y = static_cast<std::int16_t>(s.filter.y & ~0xFF); }));
    filters.push_back(parts_of<Guard>(
        "spike-guard", "median of 5", HALFLSB_Q15, &Guard::filter, median_q15_process,
        [](Guard& s) { median_q15_reset(&s.filter); },
        [](Guard& s) { std::fill_n(s.filter.past, MEDIAN_POINTS / 2, std::int16_t{0}); }));
    filters.push_back(TransposedF32::parts("settle-f32-transposed",
                                           sections + "transposed, each product and sum to the nearest float",
                                           HALFLSB_F32, biquad_f32_transposed_process));
    filters.push_back(float_average("load-cell-f32", "16-point mean, running sum of floats", HALFLSB_F32,
                                    moving_average_f32_process));
    filters.push_back(float_average("load-cell-float", "16-point mean, running sum of floats, cast", HALFLSB_Q15,
                                    moving_average_f32_process_q15));
    return filters;
}

std::vector<FilterParts> every_filter(const TableFaults& faults, AverageSetting& setting) {
    std::vector<FilterParts> filters = all_filters(faults, setting);
    for (FilterParts& filter : decision_filters()) filters.push_back(std::move(filter));
    for (FilterParts& filter : rate_filters()) filters.push_back(std::move(filter));
    return filters;
}

}  // namespace halflsb::board
