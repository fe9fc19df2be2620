// Consecutive samples thinned to the lowest and the highest of each bucket, so that no peak is lost, in constant
// memory: when all buckets are full, each two neighbours become one (as measure/doubling_blocks.hpp does with sums).
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <vector>

namespace halflsb {

/// Of the finite samples of one signal in a bucket.
struct Extremes {
    double low = std::numeric_limits<double>::infinity(), high = -std::numeric_limits<double>::infinity();
    bool low_comes_first = true;
    bool has_gap = false;  ///< a sample was not a finite number

    bool is_empty() const { return !(low <= high); }
    void add(double value) {
        if (!std::isfinite(value)) {
            has_gap = true;
            return;
        }
        const bool is_first = is_empty();
        if (value < low) {
            low = value;
            if (!is_first) low_comes_first = false;
        }
        if (value > high) {
            high = value;
            if (!is_first) low_comes_first = true;
        }
    }
    /// With those that come behind.
    void join(const Extremes& later) {
        has_gap = has_gap || later.has_gap;
        if (later.is_empty()) return;
        const bool lower = later.low<low, higher = later.high> high;
        if (lower && higher)
            low_comes_first = later.low_comes_first;
        else if (lower || higher)
            low_comes_first = higher;
        if (lower) low = later.low;
        if (higher) high = later.high;
    }
};

/// Of `Signals` signals side by side.
template <std::size_t Signals>
class ThinnedSamples {
public:
    using Bucket = std::array<Extremes, Signals>;

    /// most: an even number, 2 or more.
    explicit ThinnedSamples(std::size_t most) : most_(most) {}

    void add(const std::array<double, Signals>& samples) {
        if (buckets_.empty() || in_last_ == bucket_samples_) begin_bucket();
        Bucket& last = buckets_.back();
        for (std::size_t k = 0; k < Signals; ++k) last[k].add(samples[k]);
        ++in_last_;
    }
    /// Of every bucket but the last, which may hold fewer.
    std::int64_t bucket_samples() const { return bucket_samples_; }
    std::int64_t samples_in(std::size_t bucket) const {
        return bucket + 1 < buckets_.size() ? bucket_samples_ : in_last_;
    }
    const std::vector<Bucket>& buckets() const { return buckets_; }

private:
    void begin_bucket() {
        if (buckets_.size() == most_) {
            for (std::size_t i = 0; i < most_ / 2; ++i) {
                Bucket joined = buckets_[2 * i];
                for (std::size_t k = 0; k < Signals; ++k) joined[k].join(buckets_[2 * i + 1][k]);
                buckets_[i] = joined;
            }
            buckets_.resize(most_ / 2);
            bucket_samples_ *= 2;
        }
        buckets_.emplace_back();
        in_last_ = 0;
    }

    std::size_t most_;
    std::int64_t bucket_samples_ = 1, in_last_ = 0;
    std::vector<Bucket> buckets_;
};

}  // namespace halflsb
