#include "stimuli/realisations.hpp"

#include <bit>

#include "stimuli/philox.hpp"

namespace halflsb {

namespace {

/// As many as a response is measured from where there are no tones: the shortest segment.
constexpr std::int64_t shortest_realisation_samples = 64;

}  // namespace

Parameter realisations_parameter() {
    return {.name = "realisations",
            .type = ParameterType::integer,
            .minimum = 1.0,
            .maximum = 1000.0,
            .default_value = 1.0,
            .help =
                "So many stretches of equal length, each with phases of its own; their spread says how sure a "
                "response is. Samples left over at the end go on in the phases of the last."};
}

Outcome<Realisations> realisations_of(const Recipe& recipe, const ParameterValues& values, const Placement& placement) {
    const std::int64_t own = placement.own_samples();
    const std::int64_t count = values.integer(recipe, "realisations").value_or(1);
    // One stretch needs no other to be told from, so short stimuli stay what they were.
    if (count == 1 || own / count >= shortest_realisation_samples) return Realisations{own / count, count};
    const std::int64_t most = own / shortest_realisation_samples;
    const std::int64_t length = placement.at_samples + count * shortest_realisation_samples;
    std::string remedy = most > 1 ? "give at most " + std::to_string(most) : "leave it out";
    if (length <= longest_stimulus_samples) remedy += ", or a length_samples of at least " + std::to_string(length);
    return refused("realisations",
                   std::to_string(count) + " realisations of " + std::to_string(own) + " samples have " +
                       std::to_string(own / count) + " each, and the least is " +
                       std::to_string(shortest_realisation_samples),
                   std::move(remedy));
}

Spectrum::Realisations in_spectrum(const Realisations& realisations, const Placement& placement) {
    if (realisations.count == 1) return {};
    return {placement.at_samples, realisations.samples, realisations.count};
}

std::optional<std::int64_t> steady_from(const Realisations& realisations, const Placement& placement) {
    if (realisations.count > 1) return std::nullopt;
    return placement.at_samples;
}

RealisedTone::RealisedTone(const Tone& tone, double frequency_hz, std::uint64_t seed)
    : first_(tone), frequency_bits_(std::bit_cast<std::uint64_t>(frequency_hz)), seed_(seed) {}

Tone RealisedTone::in(std::int64_t realisation) const {
    if (realisation == 0) return first_;
    const std::uint64_t drawn =
        random_bits(seed_, RandomPurpose::phases, frequency_bits_, static_cast<std::uint32_t>(realisation));
    return {first_.step, Uint128{drawn} << 64};
}

}  // namespace halflsb
