#include "rigs/virtual-board/clean_averages.hpp"

#include <algorithm>
#include <utility>

#include "rigs/filters/moving_average.h"
#include "rigs/filters/moving_average_i24.h"
#include "rigs/filters/moving_average_i8.h"
#include "rigs/filters/moving_average_offset.h"

namespace halflsb::board {

namespace {

// Storage is shared by a filter's functions, which the board keeps for as long as it runs.

template <typename Filter, typename Sample>
struct Storage {
    std::vector<Sample> ring;
    Filter filter{};

    void clear_half() {
        std::fill_n(ring.begin(), filter.points / 2, Sample{0});
        filter.position = 0;
        filter.sum = 0;
    }
};

/// `Sample` is what the ring holds, `Word` what the samples are in memory: the format says more than its type.
template <typename Filter, typename Sample, typename Word>
FilterParts average(std::string name, Format format, int points, void (*init)(Filter*, Sample*, std::uint16_t),
                    void (*reset)(Filter*), void (*process)(Filter*, const Word*, Word*, std::uint16_t)) {
    auto s = std::make_shared<Storage<Filter, Sample>>();
    s->ring.resize(static_cast<std::size_t>(points));
    init(&s->filter, s->ring.data(), static_cast<std::uint16_t>(points));
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::average;
    parts.format = format;
    parts.reset = [s, reset] { reset(&s->filter); };
    parts.reset_half = [s] { s->clear_half(); };
    parts.process = [s, process](const void* in, void* out, std::uint16_t count) {
        process(&s->filter, static_cast<const Word*>(in), static_cast<Word*>(out), count);
    };
    parts.variant = [format, points](const Deviation& deviation) {
        const int bits = value_bits(format);
        return zero_code(format) == 0 ? average_variant(points, bits, deviation)
                                      : offset_average_variant(points, bits, deviation);
    };
    return parts;
}

}  // namespace

FilterParts average_of(std::string name, Format format, int points) {
    const auto narrow = [&](auto process) {
        return average(std::move(name), format, points, moving_average_q15_init, moving_average_q15_reset, process);
    };
    const auto wide = [&](auto process) {
        return average(std::move(name), format, points, moving_average_i32_init, moving_average_i32_reset, process);
    };
    switch (format) {
        case HALFLSB_Q7:
        case HALFLSB_I8:
            return average(std::move(name), format, points, moving_average_i8_init, moving_average_i8_reset,
                           moving_average_i8_process);
        case HALFLSB_U8:
            return narrow(moving_average_u8_process);
        case HALFLSB_U12:
            return narrow(moving_average_u12_process);
        case HALFLSB_U12 | HALFLSB_LEFT:
            return narrow(moving_average_u12_left_process);
        case HALFLSB_U16:
            return narrow(moving_average_u16_process);
        case HALFLSB_I16 | HALFLSB_BIG:
            return narrow(moving_average_i16_big_process);
        case HALFLSB_I24 | HALFLSB_LEFT:
            return wide(moving_average_i24_left_process);
        case HALFLSB_I24 | HALFLSB_PACKED:
            return wide(moving_average_i24_packed_process);
        case HALFLSB_I24:
        case HALFLSB_I32:
            return wide(moving_average_i32_process);
        default:
            return narrow(moving_average_q15_process);
    }
}

FilterParts adjustable_average(std::string name, AverageSetting& setting) {
    auto s = std::make_shared<Storage<moving_average_q15, std::int16_t>>();
    s->ring.resize(static_cast<std::size_t>(average_points_most));
    const auto init = [s, &setting] {
        moving_average_q15_init(&s->filter, s->ring.data(), static_cast<std::uint16_t>(setting.points));
    };
    init();
    setting.changed = init;
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::adjustable_average;
    parts.reset = [s] { moving_average_q15_reset(&s->filter); };
    parts.reset_half = [s] { s->clear_half(); };
    parts.process = [s](const void* in, void* out, std::uint16_t count) {
        moving_average_q15_process(&s->filter, static_cast<const std::int16_t*>(in), static_cast<std::int16_t*>(out),
                                   count);
    };
    return parts;
}

}  // namespace halflsb::board
