// Stretches of equal length in which tones have phases of their own: from the spread between them a measure learns how
// sure it is. Periods of one stretch cannot tell, because rounding errors repeat with them. Inside this room only.
#pragma once

#include <algorithm>
#include <cstdint>
#include <span>

#include "stimuli/shape.hpp"
#include "stimuli/tone_phase.hpp"

namespace halflsb {

/// Of a shape's own indices. What is left over at the end goes on in the phases of the last stretch.
struct Realisations {
    std::int64_t samples = 1;  ///< of each
    std::int64_t count = 1;

    /// Calls of_part(realisation, index in it, part) for each stretch that the span meets.
    template <class OfPart>
    void for_each_part(std::int64_t first_own_index, std::span<double> ratios, const OfPart& of_part) const {
        while (!ratios.empty()) {
            const std::int64_t realisation = std::min(first_own_index / samples, count - 1);
            const std::int64_t index = first_own_index - realisation * samples;
            std::size_t part = ratios.size();
            if (realisation < count - 1) {
                part = static_cast<std::size_t>(std::min(static_cast<std::int64_t>(part), samples - index));
            }
            of_part(realisation, index, ratios.first(part));
            ratios = ratios.subspan(part);
            first_own_index += static_cast<std::int64_t>(part);
        }
    }
};

Parameter realisations_parameter();
/// Reads it; refuses stretches that are too short for a response to be measured in one.
Outcome<Realisations> realisations_of(const Recipe& recipe, const ParameterValues& values, const Placement& placement);
/// As a measure is told of them.
Spectrum::Realisations in_spectrum(const Realisations& realisations, const Placement& placement);
/// Where the phases are those of one realisation to the end.
std::optional<std::int64_t> steady_from(const Realisations& realisations, const Placement& placement);

/// A tone that begins each realisation at a phase of its own: the first at that of `tone`, a later one at
///   2^-64 turns x number {bits of frequency_hz as a double} of (seed, purpose phases, stream = realisation).
/// By its frequency, so that tones that are added up under one seed have phases independent of each other.
class RealisedTone {
public:
    RealisedTone(const Tone& tone, double frequency_hz, std::uint64_t seed);
    Tone in(std::int64_t realisation) const;

private:
    Tone first_;
    std::uint64_t frequency_bits_, seed_;
};

}  // namespace halflsb
