// What the tests of oracle share: reproducible noise, and the ways to cut a record into blocks.
#pragma once

#include <catch2/catch.hpp>
#include <cmath>
#include <cstdint>
#include <cstring>
#include <span>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb::testing {

/// SplitMix64 (Steele, Lea and Flood 2014): the same numbers on every machine.
class Random {
public:
    explicit Random(std::uint64_t seed) : state_(seed) {}
    std::uint64_t bits() {
        std::uint64_t z = (state_ += 0x9e3779b97f4a7c15u);
        z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9u;
        z = (z ^ (z >> 27)) * 0x94d049bb133111ebu;
        return z ^ (z >> 31);
    }
    /// Uniform in -1 .. 1, a multiple of 2^-52.
    double ratio() { return static_cast<double>(static_cast<std::int64_t>(bits()) >> 11) * 0x1p-52; }
    /// Uniform in low .. high.
    double between(double low, double high) { return low + (high - low) * 0.5 * (ratio() + 1.0); }
    /// A whole number in low .. high.
    std::int64_t whole(std::int64_t low, std::int64_t high) {
        return low + static_cast<std::int64_t>(bits() % static_cast<std::uint64_t>(high - low + 1));
    }

private:
    std::uint64_t state_;
};

inline std::vector<double> noise(std::size_t length, std::uint64_t seed) {
    Random random(seed);
    std::vector<double> samples(length);
    for (double& sample : samples) sample = random.ratio();
    return samples;
}

/// Noise of q15 codes: multiples of 2^-15.
inline std::vector<double> q15_noise(std::size_t length, std::uint64_t seed) {
    Random random(seed);
    std::vector<double> samples(length);
    for (double& sample : samples) sample = static_cast<double>(random.whole(-32768, 32767)) * 0x1p-15;
    return samples;
}

inline bool same_bits(std::span<const double> a, std::span<const double> b) {
    return a.size() == b.size() && (a.empty() || std::memcmp(a.data(), b.data(), a.size_bytes()) == 0);
}

inline std::vector<double> run(Filter& filter, std::span<const double> in) {
    std::vector<double> out(in.size());
    filter.process(in, out);
    return out;
}

inline std::vector<double> run(const FilterChain& chain, std::span<const double> in) {
    return run(*make_filter(chain), in);
}

/// Calls take(first, count) for the whole record: all at once, single samples, primes, all but the
/// last, or random sizes with some empty ones.
enum class Split { whole, singles, prime, all_but_one, random };
inline constexpr Split every_split[] = {Split::whole, Split::singles, Split::prime, Split::all_but_one, Split::random};

template <class Take>
void for_blocks(Split split, std::size_t length, Take take) {
    Random random(length);
    std::size_t first = 0;
    while (first < length) {
        std::size_t count = length;
        if (split == Split::singles) count = 1;
        if (split == Split::prime) count = 127;
        if (split == Split::all_but_one && length > 1) count = first == 0 ? length - 1 : 1;
        if (split == Split::random) count = static_cast<std::size_t>(random.whole(0, 700));
        if (count > length - first) count = length - first;
        take(first, count);
        first += count;
    }
}

inline FilterStage stage(FilterDesign design, std::optional<int> bits = std::nullopt) {
    return FilterStage{std::move(design), bits};
}

/// The Audio EQ Cookbook's low-pass, high-pass and notch.
enum class Shape { low_pass, high_pass, notch };
inline BiquadSection cookbook(Shape shape, double cycles_per_sample, double q) {
    const double w = 2.0 * 3.14159265358979323846 * cycles_per_sample;
    const double c = std::cos(w), alpha = std::sin(w) / (2.0 * q), a0 = 1.0 + alpha;
    BiquadSection s;
    s.a1 = -2.0 * c / a0;
    s.a2 = (1.0 - alpha) / a0;
    if (shape == Shape::low_pass) s.b0 = s.b2 = (1.0 - c) / 2.0 / a0, s.b1 = (1.0 - c) / a0;
    if (shape == Shape::high_pass) s.b0 = s.b2 = (1.0 + c) / 2.0 / a0, s.b1 = -(1.0 + c) / a0;
    if (shape == Shape::notch) s.b0 = s.b2 = 1.0 / a0, s.b1 = s.a1;
    return s;
}

}  // namespace halflsb::testing
