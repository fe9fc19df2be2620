// The error of one rounding: which values it can have, and its mean and variance where every remainder is as likely as
// any other.
//
// A number x in steps of the last place kept is a multiple of 1 / parts: 2^d when d bits are dropped, the points when
// a sum is divided by them. error = rounded(x) - x, so a floor makes errors of -(1 - 1 / parts) .. 0, a half-up of
// -(1/2 - 1 / parts) .. 1/2 when parts is even. Mean and variance are those of the parts equally likely remainders
// (check-values of a requantiser: mean of half-up 1 / (2 parts), variance (1 - parts^-2) / 12).
#pragma once

#include <optional>

#include "stimuli/rounding.hpp"

namespace halflsb {

/// In steps of the last place kept; times a step, as a value.
struct RoundingError {
    double lowest = 0.0, highest = 0.0;
    /// The mean lies between these. They differ where the rounding is not known, or where it goes with the sign of the
    /// number (toward zero).
    double mean_lowest = 0.0, mean_highest = 0.0;
    bool mean_varies = false;  ///< it may change from sample to sample
    double variance = 0.0;

    double largest() const;  ///< |error|
    RoundingError times(double factor) const;
};

/// Independent errors added: ends, means and variances.
RoundingError operator+(const RoundingError& a, const RoundingError& b);

/// The numbers that are rounded: multiples of 1 / parts (parts >= 1, whole; or infinite) from lowest to highest, in
/// steps. Ends further out than a few steps make no difference.
struct RoundedNumbers {
    double parts = 1.0;
    double lowest = -8.0, highest = 8.0;
    /// Of the numbers that come up as long as nothing is clipped, at most parts; mean and variance are theirs. 0:
    /// parts.
    double usual_parts = 0.0;
    /// Words in them were rounded half to even, so that more of them may be even than odd, in a share that hangs on the
    /// filter: mean and variance are the widest over all shares (docs/methods.md, "Derived limits").
    bool may_lean_to_even = false;
    /// What was dropped before is added: then the remainders of even words may as well be the odd multiples.
    bool carries = false;
};

/// The ends are attained, each by one of these numbers (where parts is finite). nullopt: any rounding from floor to
/// half-up, that is floor(x + c) with a c of 0 .. 1/2: -1 .. 1/2, mean -1/2 .. 1 / (2 parts), at most 1/4.
RoundingError rounding_error(std::optional<Rounding> rounding, const RoundedNumbers& numbers);

/// Of numbers that are off by a little themselves, as floats are. They may crowd at multiples of some 1 / Q (a mean of
/// whole numbers) and fall to either side of a whole number or a half one: at Q = 1 a floor is off by 0 or by -1, at
/// Q = 2 a half-up by 0 or by either half. Mean and variance are the widest of all Q.
RoundingError rounding_error_of_inexact(std::optional<Rounding> rounding);

}  // namespace halflsb
