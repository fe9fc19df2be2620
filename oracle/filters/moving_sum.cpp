#include "oracle/filters/moving_sum.hpp"

#include <algorithm>

namespace halflsb {

MovingSum::MovingSum(std::size_t points) : stretch_(points, 0.0), tails_(points + 1, 0.0) {}

void MovingSum::reset() {
    std::fill(tails_.begin(), tails_.end(), 0.0);
    filled_ = 0;
    head_ = 0.0;
}

void MovingSum::preload(double value) {
    // Products, not a sum of many: each is rounded once.
    for (std::size_t j = 0; j < stretch_.size(); ++j) tails_[j] = value * static_cast<double>(stretch_.size() - j);
}

void MovingSum::finish_stretch() {
    double tail = 0.0;
    for (std::size_t j = stretch_.size(); j-- > 0;) {
        tail += stretch_[j];
        tails_[j] = tail;
    }
    filled_ = 0;
    head_ = 0.0;
}

void MovingSum::process(std::span<const double> in, std::span<double> out) {
    std::size_t done = 0;
    while (done < in.size()) {
        const std::size_t count = std::min(in.size() - done, stretch_.size() - filled_);
        double head = head_;
        for (std::size_t i = 0; i < count; ++i) {
            const double sample = in[done + i];
            stretch_[filled_ + i] = sample;
            head += sample;
            out[done + i] = head + tails_[filled_ + i + 1];
        }
        head_ = head;
        filled_ += count;
        done += count;
        if (filled_ == stretch_.size()) finish_stretch();
    }
}

}  // namespace halflsb
