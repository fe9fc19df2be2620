// What a plan's [[filter]] comes to: the numbers of each kind of filter. filter.hpp makes filters of them.
//
// One sign convention everywhere: y[n] = sum b[k] x[n-k] - sum a[k] y[n-k], a0 = 1. Zeros stand before the start
// unless the stage says otherwise (Initial in filter.hpp).
//
// Kinds that change the rate. A decimator of R returns, as its output m, what the filter at the rate of its input
// returns at input index m R + phase_samples, phase_samples 0 .. R - 1: 0 returns with the first input of each R, R - 1
// waits for the last. An interpolator of R puts R - 1 zeros behind each input and filters at the higher rate: input n
// comes out from output n R on.
#pragma once

#include <optional>
#include <variant>
#include <vector>

namespace halflsb {

/// y[n] = (x[n] + ... + x[n-points+1]) / points
struct MovingAverage {
    int points = 1;
    bool operator==(const MovingAverage&) const = default;
};

/// y[n] = sum taps[k] x[n-k]
struct Fir {
    std::vector<double> taps;
    bool operator==(const Fir&) const = default;
};

/// H(z) = (b0 + b1 z^-1 + b2 z^-2) / (1 + a1 z^-1 + a2 z^-2)
struct BiquadSection {
    double b0 = 1.0, b1 = 0.0, b2 = 0.0, a1 = 0.0, a2 = 0.0;
    bool operator==(const BiquadSection&) const = default;
};

/// Sections in the order in which the signal passes them.
struct BiquadCascade {
    std::vector<BiquadSection> sections;
    bool operator==(const BiquadCascade&) const = default;
};

/// y[n] = direct x[n] + forward x[n-delay_samples] - feedback y[n-delay_samples]
struct Comb {
    int delay_samples = 1;
    double direct = 1.0, forward = 0.0, feedback = 0.0;
    bool operator==(const Comb&) const = default;
};

/// y[n] = b[0] x[n] + ... - a[1] y[n-1] - a[2] y[n-2] ...; a[0] is 1, both lists have 1 .. 33 numbers.
struct Recursion {
    std::vector<double> b, a;
    bool operator==(const Recursion&) const = default;
};

/// The middle one of the last `points` samples by size; the mean of the middle two where points is even. Not linear.
struct Median {
    int points = 1;
    bool operator==(const Median&) const = default;
};

/// N = order moving sums of R M samples (R = factor, M = delay_samples), then one output for R inputs: Hogenauer
/// (1981), "An economical class of digital filters for decimation and interpolation". The gain (R M)^N at zero
/// frequency is divided by 2^shift_bits, or by itself where there is no shift.
struct CicDecimator {
    int order = 1, factor = 2, delay_samples = 1;
    std::optional<int> shift_bits = {};
    int phase_samples = 0;
    bool operator==(const CicDecimator&) const = default;
};

/// R - 1 zeros behind each input, then N moving sums of R M samples. The gain R^(N-1) M^N at zero frequency is divided
/// by 2^shift_bits, or by itself where there is no shift.
struct CicInterpolator {
    int order = 1, factor = 2, delay_samples = 1;
    std::optional<int> shift_bits = {};
    bool operator==(const CicInterpolator&) const = default;
};

/// y[m] = sum taps[k] x[m factor + phase_samples - k]. Fewer taps than factor are taken: one tap of 1 keeps each
/// factor-th sample.
struct FirDecimator {
    std::vector<double> taps;
    int factor = 2;
    int phase_samples = 0;
    bool operator==(const FirDecimator&) const = default;
};

/// y[m] = sum taps[k] u[m-k], u the input with factor - 1 zeros behind each sample. The taps are used as they are: the
/// gain at zero frequency is the sum of them over factor. Their number is a multiple of factor.
struct FirInterpolator {
    std::vector<double> taps;
    int factor = 2;
    bool operator==(const FirInterpolator&) const = default;
};

using FilterDesign = std::variant<MovingAverage, Fir, BiquadCascade, Comb, Recursion, Median, CicDecimator,
                                  CicInterpolator, FirDecimator, FirInterpolator>;

}  // namespace halflsb
