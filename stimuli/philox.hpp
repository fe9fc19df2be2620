// Random numbers that are a pure function of a seed and a counter, so that a span of noise can be
// filled from anywhere.
//
// Philox4x32-10: J. K. Salmon, M. A. Moraes, R. O. Dror, D. E. Shaw, "Parallel random numbers: as
// easy as 1, 2, 3", SC 2011. Integer arithmetic only. Not for cryptography.
#pragma once

#include <array>
#include <cstdint>

namespace halflsb {

using PhiloxCounter = std::array<std::uint32_t, 4>;
using PhiloxKey = std::array<std::uint32_t, 2>;

/// Ten rounds on one counter block, as published.
constexpr PhiloxCounter philox4x32_10(PhiloxCounter counter, PhiloxKey key) {
    for (int round = 0; round < 10; ++round) {
        const std::uint64_t first = std::uint64_t{0xD2511F53} * counter[0];
        const std::uint64_t second = std::uint64_t{0xCD9E8D57} * counter[2];
        counter = {static_cast<std::uint32_t>(second >> 32) ^ counter[1] ^ key[0], static_cast<std::uint32_t>(second),
                   static_cast<std::uint32_t>(first >> 32) ^ counter[3] ^ key[1], static_cast<std::uint32_t>(first)};
        key[0] += 0x9E3779B9;  // the golden ratio and sqrt(3) - 1, times 2^32
        key[1] += 0xBB67AE85;
    }
    return counter;
}

/// What the numbers are for; different purposes of one seed never share a number.
enum class RandomPurpose : std::uint32_t { noise = 0, phases = 1 };

/// Two independent 64-bit numbers for each (seed, purpose, stream, pair).
///   counter = {pair low, pair high, purpose, stream}   key = {seed low, seed high}
///   first = word 0 + 2^32 word 1                       second = word 2 + 2^32 word 3
constexpr std::array<std::uint64_t, 2> random_pair(std::uint64_t seed, RandomPurpose purpose, std::uint64_t pair,
                                                   std::uint32_t stream = 0) {
    const PhiloxCounter words =
        philox4x32_10({static_cast<std::uint32_t>(pair), static_cast<std::uint32_t>(pair >> 32),
                       static_cast<std::uint32_t>(purpose), stream},
                      {static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32)});
    return {words[0] | std::uint64_t{words[1]} << 32, words[2] | std::uint64_t{words[3]} << 32};
}

/// Number `index` of the sequence: the first or second of pair index / 2.
constexpr std::uint64_t random_bits(std::uint64_t seed, RandomPurpose purpose, std::uint64_t index,
                                    std::uint32_t stream = 0) {
    return random_pair(seed, purpose, index / 2, stream)[index % 2];
}

}  // namespace halflsb
