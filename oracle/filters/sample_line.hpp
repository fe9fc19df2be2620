// The samples that an FIR looks at: those of the past in front of those that have just come, one behind the other,
// moved to the front only when the room is used up. Private to this room.
#pragma once

#include <algorithm>
#include <cstddef>
#include <span>
#include <vector>

namespace halflsb {

class SampleLine {
public:
    explicit SampleLine(std::size_t taps)
        : past_(taps - 1), end_(past_), line_(past_ + std::max(taps, least_room_samples), 0.0) {}

    /// As if every sample of the past had been that.
    void fill(double value) {
        end_ = past_;
        std::fill(line_.begin(), line_.begin() + static_cast<std::ptrdiff_t>(past_), value);
    }

    /// As many of `in` as there is room for, at least one of them. In front of the first stand the taps - 1 before it.
    std::span<const double> take(std::span<const double> in) {
        if (end_ == line_.size()) {
            std::copy(line_.end() - static_cast<std::ptrdiff_t>(past_), line_.end(), line_.begin());
            end_ = past_;
        }
        const std::size_t count = std::min(in.size(), line_.size() - end_);
        double* const fresh = line_.data() + end_;
        std::copy_n(in.data(), count, fresh);
        end_ += count;
        return {fresh, count};
    }

private:
    static constexpr std::size_t least_room_samples = 2048;

    std::size_t past_, end_;  ///< samples before the first tap's; in use
    std::vector<double> line_;
};

/// taps[0] x newest + taps[1] x the one before it + ..., added in this order.
inline double newest_first_sum(const std::vector<double>& taps, const double* newest) {
    double sum = 0.0;
    for (const double tap : taps) sum += tap * *newest--;
    return sum;
}

}  // namespace halflsb
