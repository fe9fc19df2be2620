// The largest line of a record from which the fundamental was taken off. Used inside oracle/measure.
//
// Spectrum: 4-term Blackman-Harris window (Harris 1978: side lobes -92 dB, main lobe +-4 bins, noise bandwidth
// 2.00435 bins), zeros up to a power of two. Left out: the main lobes about 0 and about the fundamental, that is
// less than 4 / samples from either: a spur there is not seen. No scalloping: the largest bin's frequency is
// refined to the maximum of the windowed transform (three parabolas through its logarithm), and the level is taken
// there. Within 4 / samples of half the rate a line and its image overlap; there the level of a line at exactly
// half the rate is right, of another it may be 3 dB off.
#pragma once

#include <optional>
#include <vector>

#include "oracle/measure/sine_fit.hpp"

namespace halflsb {

struct Spur {
    double cycles_per_sample = 0.0;
    Figure mean_square;  ///< samples' unit squared
    /// Whether noise of the given variance would show as large a line in less than one of a thousand records;
    /// else it is the largest of the noise, whose uncertainty is that of the largest of N / 2 exponentials
    /// (pi / sqrt 6 of their mean: Gumbel 1958, from memory).
    bool is_line = false;
};

/// Nothing when all bins are left out or the rest has no power. Memory: 24 bytes a sample of the power of two
/// that holds the record, the record itself among them. Cost: one transform and nine passes.
std::optional<Spur> largest_spur(std::vector<double> without_fundamental, double fundamental_cycles_per_sample,
                                 double noise_variance);

}  // namespace halflsb
