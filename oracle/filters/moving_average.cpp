#include "oracle/filters/moving_average.hpp"

#include <algorithm>

namespace halflsb {

MovingAverageFilter::MovingAverageFilter(const MovingAverage& design)
    : points_(design.points),
      stretch_(static_cast<std::size_t>(design.points), 0.0),
      tails_(static_cast<std::size_t>(design.points) + 1, 0.0) {}

void MovingAverageFilter::reset() {
    std::fill(tails_.begin(), tails_.end(), 0.0);
    filled_ = 0;
    head_ = 0.0;
}

void MovingAverageFilter::finish_stretch() {
    double tail = 0.0;
    for (std::size_t j = stretch_.size(); j-- > 0;) {
        tail += stretch_[j];
        tails_[j] = tail;
    }
    filled_ = 0;
    head_ = 0.0;
}

void MovingAverageFilter::process(std::span<const double> in, std::span<double> out) {
    std::size_t done = 0;
    while (done < in.size()) {
        const std::size_t count = std::min(in.size() - done, stretch_.size() - filled_);
        double head = head_;
        for (std::size_t i = 0; i < count; ++i) {
            const double sample = in[done + i];
            stretch_[filled_ + i] = sample;
            head += sample;
            out[done + i] = (head + tails_[filled_ + i + 1]) / points_;
        }
        head_ = head;
        filled_ += count;
        done += count;
        if (filled_ == stretch_.size()) finish_stretch();
    }
}

}  // namespace halflsb
