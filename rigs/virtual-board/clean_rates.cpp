#include "rigs/virtual-board/clean_rates.hpp"

#include <array>
#include <utility>

#include "rigs/filters/cic.h"
#include "rigs/filters/cic_pruned.h"
#include "rigs/filters/coefficients/droop.h"
#include "rigs/filters/coefficients/quarter.h"
#include "rigs/filters/coefficients/triple.h"
#include "rigs/filters/fir_rates.h"

namespace halflsb::board {

namespace {

constexpr std::uint8_t sharp_order = 3, gentle_order = 2;
constexpr std::uint16_t eighth = 8, quarter = 4, half = 2, triple = 3;
// (factor)^order of a decimator, factor^(order - 1) of an interpolator: the gain is 1.
constexpr std::uint8_t sharp_shift = 9, gentle_shift = 2;

/// `process` of a storage that lives as long as the row.
template <typename Storage>
FilterParts parts_of(std::string name, std::string what, std::uint16_t up, std::uint16_t down, void (*reset)(Storage&),
                     std::uint16_t (*process)(Storage&, const std::int16_t*, std::int16_t*, std::uint16_t)) {
    auto s = std::make_shared<Storage>();
    reset(*s);
    FilterParts parts;
    parts.name = std::move(name);
    parts.what = std::move(what);
    parts.kind = FilterKind::rate;
    parts.up = up;
    parts.down = down;
    parts.reset = [s, reset] { reset(*s); };
    parts.reset_half = parts.reset;
    parts.process_rate = [s, process](const void* in, void* out, std::uint16_t count) {
        return process(*s, static_cast<const std::int16_t*>(in), static_cast<std::int16_t*>(out), count);
    };
    return parts;
}

template <std::size_t count>
struct Fir {
    fir_rate_q15 filter{};
    std::array<std::int16_t, count> ring{};
};

struct Slow {
    cic_q15 cic{};
    Fir<DROOP_TAPS> droop{};
};

void reset_slow(Slow& s) {
    cic_q15_init(&s.cic, sharp_order, eighth, sharp_shift);
    fir_rate_q15_init(&s.droop.filter, droop_taps, s.droop.ring.data(), DROOP_TAPS, half, 15);
}

std::uint16_t process_slow(Slow& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
    std::int16_t* const begin = out;
    for (; count > 0; --count) {
        std::int16_t between = 0;
        if (cic_q15_decimate(&s.cic, *in++, &between) != 0) out += fir_q15_decimate(&s.droop.filter, between, out);
    }
    return static_cast<std::uint16_t>(out - begin);
}

}  // namespace

std::vector<FilterParts> rate_filters() {
    std::vector<FilterParts> filters;
    filters.push_back(parts_of<cic_q15>(
        "belt-eighth", "CIC decimator, order 3, returns with the last of 8, floors", 1, eighth,
        [](cic_q15& s) { cic_q15_init(&s, sharp_order, eighth, sharp_shift); },
        [](cic_q15& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
            return cic_decimator_q15_process(&s, in, out, count);
        }));
    filters.push_back(parts_of<cic_pruned_q15>(
        "belt-pruned", "CIC decimator, order 4, returns with the last of 16, ever shorter registers", 1,
        CIC_PRUNED_FACTOR, [](cic_pruned_q15& s) { cic_pruned_q15_reset(&s); },
        [](cic_pruned_q15& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
            return cic_pruned_q15_process(&s, in, out, count);
        }));
    filters.push_back(parts_of<cic_q15>(
        "belt-fourfold", "CIC interpolator, order 2, 4 for each, floors", quarter, 1,
        [](cic_q15& s) { cic_q15_init(&s, gentle_order, quarter, gentle_shift); },
        [](cic_q15& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
            return cic_interpolator_q15_process(&s, in, out, count);
        }));
    filters.push_back(parts_of<Fir<QUARTER_TAPS>>(
        "belt-quarter", "24-tap decimator, returns with the last of 4, halves upward", 1, quarter,
        [](Fir<QUARTER_TAPS>& s) {
            fir_rate_q15_init(&s.filter, quarter_taps, s.ring.data(), QUARTER_TAPS, quarter, 15);
        },
        [](Fir<QUARTER_TAPS>& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
            return fir_decimator_q15_process(&s.filter, in, out, count);
        }));
    filters.push_back(parts_of<Fir<TRIPLE_TAPS>>(
        "belt-triple", "24-tap interpolator, 3 for each, halves upward", triple, 1,
        [](Fir<TRIPLE_TAPS>& s) { fir_rate_q15_init(&s.filter, triple_taps, s.ring.data(), TRIPLE_TAPS, triple, 14); },
        [](Fir<TRIPLE_TAPS>& s, const std::int16_t* in, std::int16_t* out, std::uint16_t count) {
            return fir_interpolator_q15_process(&s.filter, in, out, count);
        }));
    filters.push_back(parts_of<Slow>("belt-slow", "CIC decimator by 8, then 7-tap decimator by 2", 1, eighth * half,
                                     reset_slow, process_slow));
    return filters;
}

}  // namespace halflsb::board
