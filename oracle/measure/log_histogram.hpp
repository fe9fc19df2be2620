// Percentiles of what has no end that is known beforehand, in constant memory: ticks, times of a round trip.
//
// Each power of two is cut into 256 equal bins, so what is told of a value is within 1/512 of it. Not for verdicts near
// a limit: those count.
#pragma once

#include <cstdint>
#include <map>

namespace halflsb {

/// 1 .. count, the smallest rank that has at least `share` (0 .. 1) of all at or below it.
std::int64_t nearest_rank(double share, std::int64_t count);

class LogHistogram {
public:
    /// Finite, not negative.
    void add(double value);
    std::int64_t count() const { return count_; }
    double smallest() const { return smallest_; }
    double largest() const { return largest_; }
    /// The value of nearest_rank(), to 1/512 of it; the smallest and the largest are exact. Needs count() > 0.
    double quantile(double share) const;

private:
    /// Bin by bin, ascending; at most 256 for each power of two that a double has, in truth a few hundred.
    std::map<int, std::int64_t> bins_;
    std::int64_t count_ = 0, zeros_ = 0;
    double smallest_ = 0.0, largest_ = 0.0;
};

}  // namespace halflsb
