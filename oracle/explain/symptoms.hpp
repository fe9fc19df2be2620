// What can be seen of a response without knowing what was done: how it differs from what the plan declares.
//
// Cheap statistics of all captures, in one pass each. They lay out an unknown cause; they never name one.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

struct Symptoms {
    std::int64_t samples = 0, differing = 0;
    // Response less declared, in output LSB, over all samples.
    double mean_lsb = 0.0, rms_lsb = 0.0, largest_lsb = 0.0;
    /// The same mean where the declared output is above and below zero; none where it never is.
    std::optional<double> mean_above_lsb, mean_below_lsb;
    int largest_case = -1;  ///< index in the captures
    std::int64_t largest_index = -1;
    /// The lag that fits best behind the first difference, within +-16 samples, of the case where that is; positive:
    /// the response comes late. And how many samples of a hundred are equal then.
    std::int64_t lag_samples = 0;
    double equal_at_lag_percent = 0.0;
    /// Low bits that are 0 in every sample that came back, and in what the plan declares.
    int zero_bits = 0, declared_zero_bits = 0;
    /// A length of blocks at whose place `block_place` more than nine of ten differences lie; 0: none of 2 .. 4096.
    std::int64_t block_samples = 0, block_place = 0;
    /// The longest stretch of equal samples while the declared output moves.
    std::int64_t longest_held_samples = 0;
};

/// nullopt where there is no twin of the board, or codes have no LSB.
std::optional<Symptoms> symptoms_of(const BoardDescription& declared, const CaptureSet& captures);

}  // namespace halflsb
