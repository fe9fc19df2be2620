#include "rigs/virtual-board/clean_recursive.hpp"

#include <algorithm>
#include <utility>

#include "rigs/filters/comb.h"
#include "rigs/filters/dc_blocker.h"
#include "rigs/filters/one_pole.h"

namespace halflsb::board {

namespace {

constexpr std::uint8_t level_shift = 4;
constexpr std::int16_t drain_leak_q15 = 128;
constexpr std::size_t echo_delay_samples = 24;
constexpr comb_q15_coefficients echo_coefficients_q14 = {8192, 4096, 4096};

template <typename Filter>
auto process_of(std::shared_ptr<Filter> filter,
                void (*process)(Filter*, const std::int16_t*, std::int16_t*, std::uint16_t)) {
    return [filter, process](const void* in, void* out, std::uint16_t count) {
        process(filter.get(), static_cast<const std::int16_t*>(in), static_cast<std::int16_t*>(out), count);
    };
}

}  // namespace

FilterParts level(std::string name, bool rounds) {
    auto s = std::make_shared<one_pole_q15>();
    one_pole_q15_init(s.get(), level_shift);
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::one_pole;
    parts.reset = [s] { one_pole_q15_reset(s.get()); };
    parts.reset_half = [s] { s->state &= ~0xFFFF; };  // its upper half stays
    parts.process = process_of(s, rounds ? one_pole_q15_process_rounded : one_pole_q15_process);
    return parts;
}

FilterParts drain(std::string name) {
    auto s = std::make_shared<dc_blocker_q15>();
    dc_blocker_q15_init(s.get(), drain_leak_q15);
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::dc_blocker;
    parts.reset = [s] { dc_blocker_q15_reset(s.get()); };
    parts.reset_half = [s] { s->state = 0; };  // not the previous sample
    parts.process = process_of(s, dc_blocker_q15_process);
    return parts;
}

FilterParts echo_comb(std::string name) {
    struct Storage {
        comb_q15_coefficients table = echo_coefficients_q14;
        std::vector<std::int16_t> past_in = std::vector<std::int16_t>(echo_delay_samples), past_out = past_in;
        comb_q15 filter{};
    };
    auto s = std::make_shared<Storage>();
    comb_q15_init(&s->filter, &s->table, s->past_in.data(), s->past_out.data(), echo_delay_samples);
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::comb;
    parts.tables = 1;
    parts.reset = [s] { comb_q15_reset(&s->filter); };
    parts.reset_half = [s] {
        std::fill(s->past_in.begin(), s->past_in.end(), std::int16_t{0});
        s->filter.position = 0;
    };
    parts.process = process_of(std::shared_ptr<comb_q15>(s, &s->filter), comb_q15_process);
    parts.load = [s](std::uint8_t, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
        return load_words(&s->table.direct, 3, offset, values, count);  // three words without gaps
    };
    return parts;
}

FilterParts channels_of(std::string name, std::vector<FilterParts> channels, bool alike) {
    FilterParts parts;
    parts.name = std::move(name);
    parts.kind = FilterKind::channels;
    parts.format = channels.at(0).format;
    parts.channels_alike = alike;
    parts.channels = std::move(channels);
    parts.reset = [each = parts.channels] {
        for (const FilterParts& channel : each) channel.reset();
    };
    parts.process = [each = parts.channels](const void* in, void* out, std::uint16_t count) {
        const std::size_t word = word_bytes(each[0].format);
        const auto* from = static_cast<const std::uint8_t*>(in);
        auto* to = static_cast<std::uint8_t*>(out);
        for (; count > 0; --count) {
            for (const FilterParts& channel : each) {
                channel.process(from, to, 1);
                from += word;
                to += word;
            }
        }
    };
    return parts;
}

}  // namespace halflsb::board
