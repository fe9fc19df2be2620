#include "oracle/measure/error.hpp"

#include <cmath>

namespace halflsb {

ErrorMeasure::ErrorMeasure(std::optional<ErrorEnds> limit) : limit_(limit) {}

void ErrorMeasure::start_at(std::int64_t first_index) { next_index_ = first_index; }

void ErrorMeasure::add(std::span<const double> reference, std::span<const double> response) {
    // Work on locals: the compiler cannot keep members in registers across the loads.
    CompensatedSum sum = sum_, squares = sum_squares_, reference_squares = reference_squares_;
    double largest = figures_.largest, lowest = figures_.lowest, highest = figures_.highest;
    std::int64_t largest_index = figures_.largest_index;
    const bool limited = limit_.has_value();
    const ErrorEnds limit = limit_.value_or(ErrorEnds{});
    if (largest_index < 0 && !reference.empty()) {
        lowest = HUGE_VAL;
        highest = -HUGE_VAL;
    }
    for (std::size_t i = 0; i < reference.size(); ++i) {
        const double e = response[i] - reference[i];
        const double size = std::fabs(e);
        sum.add(e);
        squares.add(e * e);
        reference_squares.add(reference[i] * reference[i]);
        // Not (size <= largest) also lets a NaN in, and nothing displaces a NaN.
        if ((!(size <= largest) && !std::isnan(largest)) || largest_index < 0) {
            largest = size;
            largest_index = next_index_ + static_cast<std::int64_t>(i);
        }
        if (e < lowest) lowest = e;
        if (e > highest) highest = e;
        if (limited && !(e >= limit.lowest && e <= limit.highest)) {
            if (figures_.beyond == 0) figures_.first_beyond = next_index_ + static_cast<std::int64_t>(i);
            ++figures_.beyond;
        }
    }
    sum_ = sum;
    sum_squares_ = squares;
    reference_squares_ = reference_squares;
    figures_.largest = largest;
    figures_.lowest = lowest;
    figures_.highest = highest;
    figures_.largest_index = largest_index;
    figures_.samples += static_cast<std::int64_t>(reference.size());
    next_index_ += static_cast<std::int64_t>(reference.size());
}

ErrorFigures ErrorMeasure::value() const {
    ErrorFigures figures = figures_;
    if (figures.samples == 0) return figures;
    const auto samples = static_cast<double>(figures.samples);
    const double error_energy = sum_squares_.value(), reference_energy = reference_squares_.value();
    figures.rms = std::sqrt(error_energy / samples);
    figures.bias = sum_.value() / samples;
    figures.identical = figures.largest == 0.0;
    if (!figures.identical && reference_energy > 0.0) {
        figures.snr_db = 10.0 * std::log10(reference_energy / error_energy);
    }
    return figures;
}

}  // namespace halflsb
