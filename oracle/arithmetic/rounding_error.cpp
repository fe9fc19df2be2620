#include "oracle/arithmetic/rounding_error.hpp"

#include <algorithm>
#include <cmath>
#include <initializer_list>

namespace halflsb {

namespace {

/// The most parts whose remainders are told apart: round_to_whole needs exact fractions.
constexpr double most_parts = 0x1p40;

/// Of floor(x + c) the mean grows with c, up to that of half-up: half a part above 0 where ties come up. Numbers of one
/// part drop nothing as they are described; what is not known may have dropped a bit all the same.
RoundingError unknown_rounding(const RoundedNumbers& numbers) {
    const double parts = numbers.usual_parts > 0.0 ? numbers.usual_parts : numbers.parts;
    const double highest_mean = parts <= most_parts ? 0.5 / std::max(2.0, parts) : 0.0;
    return {-1.0, 0.5, -0.5, highest_mean, false, 1.0 / 12.0};
}

RoundingError of_real_numbers(Rounding rounding) {
    if (rounding == Rounding::floor) return {-1.0, 0.0, -0.5, -0.5, false, 1.0 / 12.0};
    if (rounding == Rounding::toward_zero) return {-1.0, 1.0, -0.5, 0.5, true, 1.0 / 12.0};
    return {-0.5, 0.5, 0.0, 0.0, false, 1.0 / 12.0};
}

// The error falls by 1 / parts from number to number and jumps at a whole or a half number; it is largest and smallest
// beside a jump or at an end of the range.
void find_ends(Rounding rounding, double parts, double first, double last, RoundingError& error) {
    const auto take = [&](double index) {
        if (!(index >= first && index <= last)) return;
        const double x = index / parts, e = round_to_whole(x, rounding) - x;
        error.lowest = std::min(error.lowest, e);
        error.highest = std::max(error.highest, e);
    };
    const auto take_around = [&](double x) {
        const double index = std::floor(x * parts);
        for (const double offset : {-1.0, 0.0, 1.0, 2.0}) take(index + offset);
    };
    take(first);
    take(last);
    const double low = first / parts, high = last / parts;
    for (const double around : {low, high, 0.0}) {
        for (double half = std::floor(2.0 * around) - 5.0; half <= 2.0 * around + 5.0; half += 1.0) {
            take_around(0.5 * half);
        }
    }
}

void find_moments(Rounding rounding, double parts, RoundingError& error) {
    const double flat = (1.0 - 1.0 / (parts * parts)) / 12.0, tie = 0.5 / parts;
    const bool has_ties = std::fmod(parts, 2.0) == 0.0;
    error.variance = flat;
    switch (rounding) {
        case Rounding::floor:
            error.mean_lowest = error.mean_highest = -(0.5 - tie);
            break;
        case Rounding::toward_zero:
            error.mean_lowest = -(0.5 - tie);
            error.mean_highest = 0.5 - tie;
            error.mean_varies = true;
            break;
        case Rounding::half_up:
            error.mean_lowest = error.mean_highest = has_ties ? tie : 0.0;
            break;
        case Rounding::half_away:
            // Ties go with the sign of the number: the mean is anything between those of half-up and half-down.
            error.mean_lowest = has_ties ? -tie : 0.0;
            error.mean_highest = -error.mean_lowest;
            error.mean_varies = has_ties;
            break;
        case Rounding::half_even:
            if (has_ties) error.variance = flat + tie * tie;  // a tie adds +-1/2 instead of 1/2
            break;
    }
}

}  // namespace

double RoundingError::largest() const { return std::max(-lowest, highest); }

RoundingError RoundingError::times(double factor) const {
    RoundingError scaled{lowest * factor,       highest * factor, mean_lowest * factor,
                         mean_highest * factor, mean_varies,      variance * factor * factor};
    if (factor < 0.0) {
        std::swap(scaled.lowest, scaled.highest);
        std::swap(scaled.mean_lowest, scaled.mean_highest);
    }
    return scaled;
}

RoundingError rounding_error_of_inexact(std::optional<Rounding> rounding) {
    if (!rounding) return {-1.0, 0.5, -1.0, 0.25, true, 0.25};
    if (*rounding == Rounding::floor) return {-1.0, 0.0, -1.0, 0.0, true, 0.25};
    if (*rounding == Rounding::toward_zero) return {-1.0, 1.0, -1.0, 1.0, true, 0.25};
    return {-0.5, 0.5, -0.25, 0.25, true, 0.125};
}

RoundingError operator+(const RoundingError& a, const RoundingError& b) {
    return {a.lowest + b.lowest,
            a.highest + b.highest,
            a.mean_lowest + b.mean_lowest,
            a.mean_highest + b.mean_highest,
            a.mean_varies || b.mean_varies,
            a.variance + b.variance};
}

RoundingError rounding_error(std::optional<Rounding> rounding, const RoundedNumbers& numbers) {
    if (!rounding) return unknown_rounding(numbers);
    // Beyond that the limit of ever finer ones, which contains them.
    RoundingError error;
    if (!(numbers.parts <= most_parts)) {
        error = of_real_numbers(*rounding);
        if (numbers.usual_parts > 0.0 && numbers.usual_parts <= most_parts) {
            error.mean_varies = false;
            error.mean_lowest = error.mean_highest = 0.0;
            find_moments(*rounding, numbers.usual_parts, error);
        }
        return error;
    }
    if (numbers.parts == 1.0) return error;
    // Within +-8 steps every kind of jump stands, on both sides of zero; a range away from zero is moved by whole,
    // even steps, which changes no error.
    double low = numbers.lowest, high = numbers.highest;
    if (low > 8.0) {
        const double moved = 2.0 * std::floor(0.5 * (low - 2.0));
        low -= moved;
        high -= moved;
    } else if (high < -8.0) {
        const double moved = 2.0 * std::ceil(0.5 * (high + 2.0));
        low -= moved;
        high -= moved;
    }
    low = std::max(low, -16.0);
    high = std::min(high, 16.0);
    // low and high are quotients: what their last place lost must not lose an end.
    constexpr double slack = 1e-6;
    find_ends(*rounding, numbers.parts, std::ceil(low * numbers.parts - slack),
              std::floor(high * numbers.parts + slack), error);
    find_moments(*rounding, numbers.usual_parts > 0.0 ? numbers.usual_parts : numbers.parts, error);
    // Where a narrow range leaves out some remainders, the moments are those of an error within its ends.
    error.mean_lowest = std::clamp(error.mean_lowest, error.lowest, error.highest);
    error.mean_highest = std::clamp(error.mean_highest, error.lowest, error.highest);
    return error;
}

}  // namespace halflsb
