#include "oracle/filters/moving_average.hpp"

namespace halflsb {

MovingAverageFilter::MovingAverageFilter(const MovingAverage& design, bool is_growing)
    : points_(design.points),
      is_growing_(is_growing),
      held_(is_growing ? 0.0 : points_),
      sum_(static_cast<std::size_t>(design.points)) {}

void MovingAverageFilter::reset() {
    held_ = is_growing_ ? 0.0 : points_;
    sum_.reset();
}

void MovingAverageFilter::preload(double value) {
    held_ = points_;
    sum_.preload(value);
}

void MovingAverageFilter::process(std::span<const double> in, std::span<double> out) {
    sum_.process(in, out);
    std::size_t done = 0;
    for (; done < in.size() && held_ < points_; ++done) out[done] /= ++held_;
    for (; done < in.size(); ++done) out[done] /= points_;
}

}  // namespace halflsb
