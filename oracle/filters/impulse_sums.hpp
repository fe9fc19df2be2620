// Sums over an impulse response without end, run until the rest does not matter. Private to this room.
#pragma once

#include <array>
#include <cmath>
#include <cstdint>

#include "oracle/filters/impulse_run.hpp"

namespace halflsb {

inline constexpr std::int64_t most_impulse_samples = std::int64_t{1} << 24;

/// What of_piece(piece) gives of each piece, added up until is_done(sums, rest), rest a bound of what is to come of
/// sum |h|. Where most_impulse_samples are not enough the slowest pole alone is left, and each further quarter is a
/// fixed fraction of the one before: the rest of that series is added. `power` is that of h in the sums.
template <std::size_t count, class OfPiece, class IsDone>
std::array<double, count> sums_over_impulse(const FilterChain& chain, double power, OfPiece of_piece, IsDone is_done) {
    constexpr auto piece_samples = static_cast<std::int64_t>(ImpulseRun::piece_samples);
    constexpr std::int64_t most = most_impulse_samples;
    ImpulseRun run(chain);
    std::array<double, count> sums{}, last_quarter{};
    for (std::int64_t samples = 0; samples < most; samples += piece_samples) {
        const std::array<double, count> part = of_piece(run.next());
        for (std::size_t i = 0; i < count; ++i) {
            sums[i] += part[i];
            if (samples >= most - most / 4) last_quarter[i] += part[i];
        }
        if (is_done(sums, run.rest())) return sums;
    }
    const double decay = std::exp(0.25 * power * static_cast<double>(most) * std::log(largest_pole_radius(chain)));
    for (std::size_t i = 0; i < count; ++i) sums[i] += decay < 1.0 ? last_quarter[i] * decay / (1.0 - decay) : no_limit;
    return sums;
}

}  // namespace halflsb
