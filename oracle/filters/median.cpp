#include "oracle/filters/median.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace halflsb {

MedianFilter::MedianFilter(const Median& design)
    : ring_(static_cast<std::size_t>(design.points), 0.0), sorted_(ring_) {}

void MedianFilter::reset() { preload(0.0); }

void MedianFilter::preload(double value) {
    std::fill(ring_.begin(), ring_.end(), value);
    sorted_ = std::isnan(value) ? std::vector<double>() : ring_;
    place_ = 0;
}

void MedianFilter::replace(double oldest, double newest) {
    if (!std::isnan(oldest)) {
        const auto at = std::lower_bound(sorted_.begin(), sorted_.end(), oldest);
        if (std::isnan(newest)) {
            sorted_.erase(at);
            return;
        }
        // Only what lies between the two places moves.
        const auto to = std::lower_bound(sorted_.begin(), sorted_.end(), newest);
        if (to > at) {
            std::move(at + 1, to, at);
            *(to - 1) = newest;
        } else {
            std::move_backward(to, at, at + 1);
            *to = newest;
        }
    } else if (!std::isnan(newest)) {
        sorted_.insert(std::lower_bound(sorted_.begin(), sorted_.end(), newest), newest);
    }
}

double MedianFilter::middle() const {
    const std::size_t points = ring_.size();
    if (sorted_.size() < points) return std::numeric_limits<double>::quiet_NaN();
    const double upper = sorted_[points / 2];
    return points % 2 == 1 ? upper : 0.5 * (sorted_[points / 2 - 1] + upper);
}

void MedianFilter::process(std::span<const double> in, std::span<double> out) {
    for (std::size_t i = 0; i < in.size(); ++i) {
        const double newest = in[i];
        replace(ring_[place_], newest);
        ring_[place_] = newest;
        place_ = place_ + 1 == ring_.size() ? 0 : place_ + 1;
        out[i] = middle();
    }
}

}  // namespace halflsb
