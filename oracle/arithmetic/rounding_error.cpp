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
    double parts = numbers.usual_parts > 0.0 ? numbers.usual_parts : numbers.parts;
    if (numbers.may_lean_to_even) parts *= 0.5;
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

struct Moments {
    double mean_lowest = 0.0, mean_highest = 0.0, variance = 0.0;
    bool mean_varies = false;
};

/// Of remainders k / count, or (k + 1/2) / count when they are `between`, k = 0 .. count - 1, each as likely.
Moments moments_of(Rounding rounding, double count, bool between) {
    Moments moments;
    const double flat = (1.0 - 1.0 / (count * count)) / 12.0, tie = 0.5 / count;
    const bool has_ties = std::fmod(count, 2.0) == (between ? 1.0 : 0.0);
    const double floored = between ? 0.5 : 0.5 - tie;
    moments.variance = flat;
    switch (rounding) {
        case Rounding::floor:
            moments.mean_lowest = moments.mean_highest = -floored;
            break;
        case Rounding::toward_zero:
            moments.mean_lowest = -floored;
            moments.mean_highest = floored;
            moments.mean_varies = true;
            break;
        case Rounding::half_up:
            moments.mean_lowest = moments.mean_highest = has_ties ? tie : 0.0;
            break;
        case Rounding::half_away:
            // Ties go with the sign of the number: the mean is anything between those of half-up and half-down.
            moments.mean_lowest = has_ties ? -tie : 0.0;
            moments.mean_highest = -moments.mean_lowest;
            moments.mean_varies = has_ties;
            break;
        case Rounding::half_even:
            if (has_ties) moments.variance = flat + tie * tie;  // a tie adds +-1/2 instead of 1/2
            break;
    }
    return moments;
}

/// Moments of either, or of any mixture: the variance of a mixture is at most the larger one, and a quarter of the
/// square of what the means differ by.
Moments either(const Moments& a, const Moments& b) {
    const double lowest = std::min(a.mean_lowest, b.mean_lowest), highest = std::max(a.mean_highest, b.mean_highest);
    const double apart = std::max(std::fabs(a.mean_lowest - b.mean_lowest), std::fabs(a.mean_highest - b.mean_highest));
    return {lowest, highest, std::max(a.variance, b.variance) + 0.25 * apart * apart, a.mean_varies || b.mean_varies};
}

void find_moments(Rounding rounding, double parts, const RoundedNumbers& numbers, RoundingError& error) {
    Moments moments = moments_of(rounding, parts, false);
    if (numbers.may_lean_to_even && std::fmod(parts, 2.0) == 0.0) {
        // Of even words the multiples of 2 / parts come up alone, moved by what is carried.
        moments = either(moments, moments_of(rounding, 0.5 * parts, false));
        if (numbers.carries) moments = either(moments, moments_of(rounding, 0.5 * parts, true));
    }
    error.mean_lowest = moments.mean_lowest;
    error.mean_highest = moments.mean_highest;
    error.mean_varies = moments.mean_varies;
    error.variance = moments.variance;
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
            find_moments(*rounding, numbers.usual_parts, numbers, error);
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
    find_moments(*rounding, numbers.usual_parts > 0.0 ? numbers.usual_parts : numbers.parts, numbers, error);
    // Where a narrow range leaves out some remainders, the moments are those of an error within its ends.
    error.mean_lowest = std::clamp(error.mean_lowest, error.lowest, error.highest);
    error.mean_highest = std::clamp(error.mean_highest, error.lowest, error.highest);
    return error;
}

}  // namespace halflsb
