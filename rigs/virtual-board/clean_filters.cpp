#include "rigs/virtual-board/clean_filters.hpp"

#include <algorithm>
#include <cstring>
#include <type_traits>
#include <utility>

#include "rigs/filters/biquad_f32.h"
#include "rigs/filters/coefficients/designs.h"
#include "rigs/filters/coefficients/mains-notch.h"
#include "rigs/filters/coefficients/quick-smoothing.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/coefficients/smoothing.h"
#include "rigs/filters/fir.h"
#include "rigs/virtual-board/clean_averages.hpp"
#include "rigs/virtual-board/clean_recursive.hpp"

namespace halflsb::board {

namespace {

// Each filter's storage is shared by its functions, which the board keeps for as long as it runs.

template <std::size_t count>
FilterParts fir(std::string name, FilterKind kind, const std::int16_t (&taps)[count], const double (&design)[count],
                const TableFaults& faults) {
    struct Storage {
        std::vector<std::int16_t> taps, ring;
        fir_q15 filter{};
    };
    auto s = std::make_shared<Storage>();
    s->taps.assign(taps, taps + count);
    if (faults.truncated) {
        std::transform(design, design + count, s->taps.begin(),
                       [](double tap) { return static_cast<std::int16_t>(tap * 32768.0); });
    }
    if (faults.reversed) std::reverse(s->taps.begin(), s->taps.end());
    s->ring.resize(count);
    fir_q15_init(&s->filter, s->taps.data(), s->ring.data(), count);
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = kind;
    parts.tables = 1;
    parts.reset = [s] { fir_q15_reset(&s->filter); };
    parts.reset_half = [s] {
        std::fill_n(s->ring.begin(), s->ring.size() / 2, std::int16_t{0});
        s->filter.position = 0;
    };
    parts.process = [s](const void* in, void* out, std::uint16_t samples) {
        fir_q15_process(&s->filter, static_cast<const std::int16_t*>(in), static_cast<std::int16_t*>(out), samples);
    };
    parts.load = [s](std::uint8_t, std::uint16_t offset, const std::int32_t* values, std::uint8_t number) {
        return load_words(s->taps.data(), s->taps.size(), offset, values, number);
    };
    parts.variant = [s](const Deviation& deviation) {
        return fir_variant(s->taps.data(), static_cast<int>(s->taps.size()), deviation);
    };
    return parts;
}

/// The three widths of biquad differ in names only.
struct Q15 {
    using Word = std::int16_t;
    using Coefficients = biquad_q15_coefficients;
    using State = biquad_q15_state;
    using Filter = biquad_q15;
    static constexpr FilterKind kind = FilterKind::biquad_q15;
    static constexpr halflsb_format format = HALFLSB_Q15;
    static constexpr double one = 16384.0;
    static constexpr auto init = biquad_q15_init;
    static constexpr auto reset = biquad_q15_reset;
    static constexpr auto process = biquad_q15_process;
};
struct Q31 {
    using Word = std::int32_t;
    using Coefficients = biquad_q31_coefficients;
    using State = biquad_q31_state;
    using Filter = biquad_q31;
    static constexpr FilterKind kind = FilterKind::biquad_q31;
    static constexpr halflsb_format format = HALFLSB_Q31;
    static constexpr double one = 1073741824.0;
    static constexpr auto init = biquad_q31_init;
    static constexpr auto reset = biquad_q31_reset;
    static constexpr auto process = biquad_q31_process;
};
struct F32 {
    using Word = float;
    using Coefficients = biquad_f32_coefficients;
    using State = biquad_f32_state;
    using Filter = biquad_f32;
    static constexpr FilterKind kind = FilterKind::biquad_f32;
    static constexpr halflsb_format format = HALFLSB_F32;
    static constexpr double one = 1.0;
    static constexpr auto init = biquad_f32_init;
    static constexpr auto reset = biquad_f32_reset;
    static constexpr auto process = biquad_f32_process;
};

template <typename Width, std::size_t sections>
FilterParts biquad(std::string name, const typename Width::Coefficients (&table)[sections],
                   const double (&design)[sections * 5], const TableFaults& faults) {
    using Word = typename Width::Word;
    struct Storage {
        std::vector<typename Width::Coefficients> table;
        std::vector<typename Width::State> state;
        typename Width::Filter filter{};
    };
    auto s = std::make_shared<Storage>();
    s->table.assign(table, table + sections);
    for (std::size_t i = 0; i < sections; ++i) {
        typename Width::Coefficients& c = s->table[i];
        if (faults.truncated) {
            const double* d = design + 5 * i;
            const auto cast = [](double value) { return static_cast<Word>(value * Width::one); };
            c = {cast(d[0]), cast(d[1]), cast(d[2]), cast(-d[3]), cast(-d[4])};
        }
        if (faults.a1_flipped) c.a1 = static_cast<Word>(-c.a1);
    }
    s->state.resize(sections);
    Width::init(&s->filter, s->table.data(), s->state.data(), static_cast<std::uint8_t>(sections));
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = Width::kind;
    parts.format = Width::format;
    parts.tables = 1;
    parts.reset = [s] { Width::reset(&s->filter); };
    parts.reset_half = [s] {
        for (auto& state : s->state) state.x1 = state.x2 = 0;
    };
    parts.process = [s](const void* in, void* out, std::uint16_t count) {
        Width::process(&s->filter, static_cast<const Word*>(in), static_cast<Word*>(out), count);
    };
    parts.load = [s](std::uint8_t, std::uint16_t offset, const std::int32_t* values, std::uint8_t number) {
        Word* words = reinterpret_cast<Word*>(s->table.data());  // five words a section, without gaps
        if constexpr (std::is_same_v<Word, float>) {
            if (std::size_t{offset} + number > s->table.size() * 5) return false;
            std::memcpy(words + offset, values, number * sizeof(float));  // values are the bits
            return true;
        } else {
            return load_words(words, s->table.size() * 5, offset, values, number);
        }
    };
    if constexpr (!std::is_same_v<Word, float>) {
        parts.variant = [s](const Deviation& deviation) {
            return biquad_variant(s->table.data(), static_cast<int>(s->table.size()), deviation);
        };
    }
    return parts;
}

std::string what_it_is(const FilterParts& filter) {
    switch (filter.kind) {
        case FilterKind::average:
            return "16-point mean, exact sum, halves upward";
        case FilterKind::adjustable_average:
            return "mean of \"average-points\" samples, exact sum, halves upward";
        case FilterKind::symmetric_fir:
            return "31-tap low-pass, halves upward at the output, saturates";
        case FilterKind::asymmetric_fir:
            return "24-tap low-pass, halves upward at the output, saturates";
        case FilterKind::biquad_q15:
        case FilterKind::biquad_q31:
            return filter.name == "mains-notch" ? "50 Hz notch, halves upward, saturates"
                                                : "24 Hz low-pass, two sections, each halves upward and saturates";
        case FilterKind::biquad_f32:
            return "24 Hz low-pass, two sections, each product and sum to the nearest float";
        case FilterKind::one_pole:
            return filter.name == "level" ? "one-pole, 1/16, wide state, floors"
                                          : "one-pole, 1/16, wide state, halves upward";
        case FilterKind::dc_blocker:
            return "DC blocker, pole at 1 - 2^-8, wide state, floors and keeps the fraction, saturates";
        case FilterKind::comb:
            return "1/2 x[n] + 1/4 x[n-24] + 1/4 y[n-24], halves upward, saturates";
        case FilterKind::channels:
            return filter.channels_alike ? "load-cell on each channel" : "load-cell on channel 1, settle on channel 2";
        case FilterKind::decision:
        case FilterKind::rate:
            break;  // each says it itself
    }
    return "";
}

}  // namespace

std::vector<FilterParts> all_filters(const TableFaults& faults, AverageSetting& setting) {
    std::vector<FilterParts> filters;
    filters.push_back(average_of("load-cell", HALFLSB_Q15, 16));
    filters.push_back(fir("smoothing", FilterKind::symmetric_fir, smoothing_taps, smoothing_design, faults));
    filters.push_back(
        fir("quick-smoothing", FilterKind::asymmetric_fir, quick_smoothing_taps, quick_smoothing_design, faults));
    filters.push_back(biquad<Q15>("mains-notch", mains_notch_q15, mains_notch_design, faults));
    filters.push_back(biquad<Q15>("settle", settle_q15, settle_design, faults));
    filters.push_back(biquad<Q31>("settle-q31", settle_q31, settle_design, faults));
    filters.push_back(biquad<F32>("settle-f32", settle_f32, settle_design, faults));
    filters.push_back(level("level", false));
    filters.push_back(level("level-rounded", true));
    filters.push_back(drain("drain"));
    filters.push_back(echo_comb("echo-comb"));
    filters.push_back(adjustable_average("average", setting));
    filters.push_back(average_of("average-q7", HALFLSB_Q7, 16));
    filters.push_back(average_of("average-i8", HALFLSB_I8, 16));
    filters.push_back(average_of("average-i16", HALFLSB_I16, 16));
    filters.push_back(average_of("average-i16-big", HALFLSB_I16 | HALFLSB_BIG, 16));
    filters.push_back(average_of("average-i24", HALFLSB_I24, 16));
    filters.push_back(average_of("average-i24-packed", HALFLSB_I24 | HALFLSB_PACKED, 16));
    filters.push_back(average_of("average-i32", HALFLSB_I32, 16));
    filters.push_back(average_of("average-u8", HALFLSB_U8, 16));
    filters.push_back(average_of("average-u12", HALFLSB_U12, 16));
    filters.push_back(average_of("average-u12-left", HALFLSB_U12 | HALFLSB_LEFT, 16));
    filters.push_back(average_of("average-u16", HALFLSB_U16, 16));
    filters.push_back(
        channels_of("pair", {average_of("left", HALFLSB_Q15, 16), average_of("right", HALFLSB_Q15, 16)}, true));
    filters.push_back(channels_of(
        "pair-mixed", {average_of("left", HALFLSB_Q15, 16), biquad<Q15>("right", settle_q15, settle_design, faults)},
        false));
    for (FilterParts& filter : filters) filter.what = what_it_is(filter);
    return filters;
}

}  // namespace halflsb::board
