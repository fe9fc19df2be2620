// A tone and its harmonics, fitted together: offset, fundamental and orders 2 .. N at the exact multiples of the
// fundamental's frequency, folded into 0 .. 1/2. Fitted together, a record that is not coherent leaks nothing
// from one into another. Used inside oracle/measure.
#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <vector>

#include "oracle/measure/sine_fit.hpp"

namespace halflsb {

/// A sampled harmonic can fall on something else; its power cannot then be told apart and is not counted twice.
enum class HarmonicPlace {
    own,             ///< counted
    on_fundamental,  ///< within 1 / samples of it: part of its power
    on_offset,       ///< within 1 / samples of frequency 0
    on_earlier,      ///< within 1 / samples of an earlier harmonic, whose power has both
};

struct Harmonic {
    int order = 2;
    double cycles_per_sample = 0.0;  ///< folded; exactly 1/2 when nearer to it than half of 1 / samples
    HarmonicPlace place = HarmonicPlace::own;
    int shares_with = 0;  ///< the earlier order, for on_earlier
    /// Of its sine (at 1/2: of the alternating sequence), samples' unit squared; 0 with no place of its own. On
    /// average larger than the truth by `noise_mean_square`, what noise alone shows there.
    Figure mean_square;
    double noise_mean_square = 0.0;
};

struct HarmonicFit {
    std::vector<Harmonic> harmonics;  ///< by order, those without a place of their own too
    double amplitude = 0.0;           ///< of the fundamental, peak
    Figure mean_square;               ///< of the fundamental
    double rest_mean_square = 0.0;    ///< of what is left of the record, divided by N
    double noise_variance = 0.0;      ///< the same divided by N - columns
    std::size_t columns = 0;
    /// The record less offset and fundamental; the harmonics are still in it.
    std::vector<double> without_fundamental;
};

/// Where the harmonics 2 .. highest of the fundamental fall in a record of that many samples.
std::vector<Harmonic> folded_harmonics(double cycles_per_sample, int highest, std::size_t samples);

/// Nothing when the columns are too much alike to be told apart. Uncertainties as in sine_fit.hpp, from the
/// noise variance; a squared amplitude by the delta method with its second-order term:
/// var P = 4 s P + 2 k s^2, s = variance / N, k = 2 columns (1 at half the rate).
/// Cost: 20 operations a sample and harmonic; 8 bytes a sample.
std::optional<HarmonicFit> fit_harmonics(double cycles_per_sample, int highest, std::span<const double> samples);

}  // namespace halflsb
