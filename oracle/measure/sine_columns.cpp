#include "oracle/measure/sine_columns.hpp"

#include "oracle/measure/sums.hpp"

namespace halflsb {

double sum_of_turns(double cycles_per_sample, std::size_t samples) {
    const double whole = std::nearbyint(cycles_per_sample), part = cycles_per_sample - whole;
    const bool negative = samples % 2 == 0 && std::remainder(whole, 2.0) != 0.0;
    const double length = static_cast<double>(samples);
    if (part == 0.0) return negative ? -length : length;
    // sin(pi N f) from N f less the nearest whole number, whose parity gives the sign.
    const double turns = turns_modulo_1(0.5 * part, length);
    const double sum = std::sin(2.0 * std::numbers::pi * turns) / std::sin(std::numbers::pi * part);
    return negative ? -sum : sum;
}

SineProducts products_with(double cycles_per_sample, std::span<const double> samples) {
    CompensatedSum cosines, sines;
    for_each_turn(cycles_per_sample, samples.size(), [&](std::size_t n, double cosine, double sine) {
        cosines.add(samples[n] * cosine);
        sines.add(samples[n] * sine);
    });
    return {cosines.value(), sines.value()};
}

NormalEquations::NormalEquations(std::vector<double> products, std::size_t unknowns)
    : unknowns_(unknowns), factor_(std::move(products)), scale_(unknowns) {
    constexpr double least_pivot = 1e-6;
    for (std::size_t i = 0; i < unknowns_; ++i) {
        if (!(at(i, i) > 0.0)) {
            usable_ = false;
            return;
        }
        scale_[i] = 1.0 / std::sqrt(at(i, i));
    }
    for (std::size_t i = 0; i < unknowns_; ++i) {
        for (std::size_t j = 0; j < unknowns_; ++j) at(i, j) *= scale_[i] * scale_[j];
    }
    for (std::size_t j = 0; j < unknowns_ && usable_; ++j) {
        double pivot = at(j, j);
        for (std::size_t k = 0; k < j; ++k) pivot -= at(j, k) * at(j, k);
        usable_ = pivot >= least_pivot;
        at(j, j) = std::sqrt(pivot);
        for (std::size_t i = j + 1; i < unknowns_; ++i) {
            double rest = at(i, j);
            for (std::size_t k = 0; k < j; ++k) rest -= at(i, k) * at(j, k);
            at(i, j) = rest / at(j, j);
        }
    }
}

std::vector<double> NormalEquations::solve(std::vector<double> right) const {
    for (std::size_t i = 0; i < unknowns_; ++i) {
        right[i] *= scale_[i];
        for (std::size_t k = 0; k < i; ++k) right[i] -= at(i, k) * right[k];
        right[i] /= at(i, i);
    }
    for (std::size_t i = unknowns_; i-- > 0;) {
        for (std::size_t k = i + 1; k < unknowns_; ++k) right[i] -= at(k, i) * right[k];
        right[i] /= at(i, i);
    }
    for (std::size_t i = 0; i < unknowns_; ++i) right[i] *= scale_[i];
    return right;
}

double NormalEquations::inverse(std::size_t row, std::size_t column) const {
    std::vector<double> unit(unknowns_, 0.0);
    unit[column] = 1.0;
    return solve(std::move(unit))[row];
}

}  // namespace halflsb
