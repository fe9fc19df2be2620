// How long a filter remembers: how many samples until nothing is left of what it was sent.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Sent zeros until less than half an LSB (finest_step) is left of whatever full scale there was before them, by the
/// design and by its declared coefficients, and nothing in stages without feedback up to the first that feeds back.
/// In whole rate cycles. nullopt: no number up to 2^24 could be proven to do.
std::optional<std::int64_t> tail_samples(const Plan& plan, const Case& the_case, int channel);

}  // namespace halflsb
