// The two levels between which a record makes its transition, where nobody can say them: by the mode of a histogram
// (IEEE 181-2011, 5.2, histogram mode; from memory). 100 bins between the least and the greatest sample; the lower
// level is the mean of the samples in the fullest of the lower 50 bins, the upper one that of the upper 50; of equally
// full bins the outermost counts. It needs a record that stays at either level for longer than it takes from one to the
// other: the mode of a ramp alone means nothing.
#pragma once

#include <optional>
#include <span>

namespace halflsb {

struct StateLevels {
    double first = 0.0, second = 0.0;  ///< in order of time
    /// Of each level: a bin's width / sqrt(12), since the state may lie anywhere in its bin; 0 for levels that are
    /// given.
    double standard_uncertainty = 0.0;
};

/// None when the samples are all the same, when one of them is not finite, or when the record begins and ends in the
/// same half. Cost: three passes.
std::optional<StateLevels> state_levels_of(std::span<const double> samples);

}  // namespace halflsb
