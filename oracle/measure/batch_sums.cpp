#include "oracle/measure/batch_sums.hpp"

#include <limits>

namespace halflsb {

BatchSums::BatchSums(std::size_t points, std::size_t most) : points_(points), most_(most) {}

void BatchSums::add(std::span<const std::complex<double>> cross, std::span<const double> power) {
    if (batches_ == 0 || parts_in_last_ == parts_a_batch_) {
        if (batches_ == most_) merge_neighbours();
        ++batches_;
        parts_in_last_ = 0;
        cross_.resize(batches_ * points_);
        power_.resize(batches_ * points_);
    }
    const std::size_t row = (batches_ - 1) * points_;
    for (std::size_t point = 0; point < points_; ++point) {
        cross_[row + point] += cross[point];
        power_[row + point] += power[point];
    }
    ++parts_in_last_;
    ++parts_;
}

BatchSums::Total BatchSums::total(std::size_t point) const {
    Total total;
    for (std::size_t batch = 0; batch < batches_; ++batch) {
        total.cross += cross(batch, point);
        total.power += power(batch, point);
    }
    return total;
}

std::complex<double> BatchSums::Total::ratio() const {
    constexpr double none = std::numeric_limits<double>::quiet_NaN();
    return power > 0.0 ? cross / power : std::complex<double>(none, none);
}

void BatchSums::merge_neighbours() {
    batches_ /= 2;
    parts_a_batch_ *= 2;
    for (std::size_t batch = 0; batch < batches_; ++batch) {
        for (std::size_t point = 0; point < points_; ++point) {
            const std::size_t to = batch * points_ + point, first = 2 * batch * points_ + point;
            cross_[to] = cross_[first] + cross_[first + points_];
            power_[to] = power_[first] + power_[first + points_];
        }
    }
    cross_.resize(batches_ * points_);
    power_.resize(batches_ * points_);
}

}  // namespace halflsb
