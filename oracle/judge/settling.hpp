// When a response has nothing left of the filter's start: rules about a steady tone, or about a step that is not the
// first thing the filter sees, look at no sample before.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Beyond it a filter counts as one that does not settle: as long as the longest record that a tone is measured over.
inline constexpr std::int64_t longest_settling_samples = std::int64_t{1} << 20;

/// After so many sent samples of a steady stimulus the response on the channel lies within 1/16 LSB of the one that it
/// goes on to, for the design and for its rounded coefficients, whatever went before (flush_samples in filter.hpp; f32:
/// of finest_step()). That is 13 dB below the noise of the rounding, LSB / sqrt(12), even if it did not decay: 0.2 dB
/// of a SINAD. nullopt: more than the longest, or not known. What was found is kept with the plan (limit_store.hpp).
std::optional<std::int64_t> settling_samples(const Plan& plan, const Case& the_case, int channel);

/// Index of the first judged sample of the response, at that lag, that comes so long after the sent one `from`; nullopt
/// as above.
std::optional<std::int64_t> first_settled_sample(const Plan& plan, const Case& the_case, int channel, std::int64_t from,
                                                 int lag_samples);

}  // namespace halflsb
