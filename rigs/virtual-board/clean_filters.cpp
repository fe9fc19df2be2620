#include "rigs/virtual-board/clean_filters.hpp"

#include <algorithm>
#include <cstring>
#include <limits>
#include <type_traits>
#include <utility>

#include "rigs/filters/biquad_f32.h"
#include "rigs/filters/coefficients/designs.h"
#include "rigs/filters/coefficients/mains-notch.h"
#include "rigs/filters/coefficients/quick-smoothing.h"
#include "rigs/filters/coefficients/settle.h"
#include "rigs/filters/coefficients/smoothing.h"
#include "rigs/filters/fir.h"
#include "rigs/filters/moving_average.h"

namespace halflsb::board {

namespace {

// Each filter's storage is shared by its functions, which the board keeps for as long as it runs.

/// With a setting, its value is the window, and its `changed` makes the filter anew.
FilterParts average_q15(std::string name, halflsb_format format, int points, AverageSetting* setting = nullptr) {
    struct Storage {
        std::vector<std::int16_t> ring = std::vector<std::int16_t>(static_cast<std::size_t>(average_points_most));
        moving_average_q15 filter{};
        void init(int window) { moving_average_q15_init(&filter, ring.data(), static_cast<std::uint16_t>(window)); }
    };
    auto s = std::make_shared<Storage>();
    s->init(points);
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = setting == nullptr ? FilterKind::average : FilterKind::adjustable_average;
    parts.format = format;
    parts.reset = [s] { moving_average_q15_reset(&s->filter); };
    parts.reset_half = [s] {
        std::fill_n(s->ring.begin(), s->filter.points / 2, std::int16_t{0});
        s->filter.position = 0;
        s->filter.sum = 0;
    };
    parts.process = [s](const void* in, void* out, std::uint16_t count) {
        moving_average_q15_process(&s->filter, static_cast<const std::int16_t*>(in), static_cast<std::int16_t*>(out),
                                   count);
    };
    if (setting != nullptr) {
        setting->changed = [s, setting] { s->init(setting->points); };
    } else {
        parts.variant = [points](const Deviation& deviation) { return average_variant(points, 16, deviation); };
    }
    return parts;
}

FilterParts average_i32(std::string name, int points) {
    struct Storage {
        std::vector<std::int32_t> ring;
        moving_average_i32 filter{};
    };
    auto s = std::make_shared<Storage>();
    s->ring.resize(static_cast<std::size_t>(points));
    moving_average_i32_init(&s->filter, s->ring.data(), static_cast<std::uint16_t>(points));
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::average;
    parts.format = HALFLSB_I32;
    parts.reset = [s] { moving_average_i32_reset(&s->filter); };
    parts.reset_half = [s] {
        std::fill_n(s->ring.begin(), s->ring.size() / 2, 0);
        s->filter.position = 0;
        s->filter.sum = 0;
    };
    parts.process = [s](const void* in, void* out, std::uint16_t count) {
        moving_average_i32_process(&s->filter, static_cast<const std::int32_t*>(in), static_cast<std::int32_t*>(out),
                                   count);
    };
    parts.variant = [points](const Deviation& deviation) { return average_variant(points, 32, deviation); };
    return parts;
}

template <typename Word>
bool load_words(Word* table, std::size_t size, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
    if (std::size_t{offset} + count > size) return false;
    for (int i = 0; i < count; ++i) {
        if (values[i] < std::numeric_limits<Word>::min() || values[i] > std::numeric_limits<Word>::max()) return false;
    }
    std::transform(values, values + count, table + offset, [](std::int32_t v) { return static_cast<Word>(v); });
    return true;
}

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

}  // namespace

std::vector<FilterParts> all_filters(const TableFaults& faults, AverageSetting& setting) {
    std::vector<FilterParts> filters;
    filters.push_back(average_q15("load-cell", HALFLSB_Q15, 16));
    filters.push_back(fir("smoothing", FilterKind::symmetric_fir, smoothing_taps, smoothing_design, faults));
    filters.push_back(
        fir("quick-smoothing", FilterKind::asymmetric_fir, quick_smoothing_taps, quick_smoothing_design, faults));
    filters.push_back(biquad<Q15>("mains-notch", mains_notch_q15, mains_notch_design, faults));
    filters.push_back(biquad<Q15>("settle", settle_q15, settle_design, faults));
    filters.push_back(biquad<Q31>("settle-q31", settle_q31, settle_design, faults));
    filters.push_back(biquad<F32>("settle-f32", settle_f32, settle_design, faults));
    filters.push_back(average_q15("average", HALFLSB_Q15, setting.points, &setting));
    filters.push_back(average_q15("average-i16", HALFLSB_I16, 16));
    filters.push_back(average_i32("average-i32", 16));
    return filters;
}

}  // namespace halflsb::board
