#include "oracle/judge/covered_arithmetic.hpp"

#include <cmath>
#include <string>
#include <utility>

#include "oracle/arithmetic/family.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// Why no bound covers this arithmetic. {problem, remedy}
std::optional<std::pair<std::string, std::string>> why_not(const Signal& signal, const DescribedChain& chain) {
    int exponent = 0;
    if (std::frexp(signal.output_per_input, &exponent) != 0.5) {
        return std::pair("output_per_input is no power of two, and nothing says how it is rounded",
                         "give the scale as a stage of its own, or a number for the limit");
    }
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const DescribedStage& stage = chain.stages[i];
        if (stage.number == NumberKind::float32 && family_of(stage.stage) == Family::cic) {
            return std::pair("a cic in float32 has none: what its integrators lose no comb brings back",
                             "give number = \"integer\" and words of whole numbers, or a number for the limit");
        }
        if (stage.stage.initial == Initial::zeros) continue;
        // Whole numbers that start as if the first sample had gone on for ever err as if it had.
        const bool is_finite = samples_to_forget(stage).has_value() && stage.number == NumberKind::integer;
        if (stage.stage.initial == Initial::first_sample && is_finite) continue;
        return std::pair(
            "the state that initial puts into stage " + std::to_string(i + 1) + " is rounded in a way that nobody said",
            "leave initial out, or give a number for the limit");
    }
    return std::nullopt;
}

}  // namespace

std::optional<Refusal> not_covered(const Rule& asked, const Signal& signal, const Case& the_case,
                                   const DescribedChain& chain) {
    const auto why = why_not(signal, chain);
    if (!why) return std::nullopt;
    return Refusal{asked.position,
                   "no limit follows from the arithmetic in case \"" + the_case.name + "\": " + why->first,
                   why->second};
}

Refusal too_wide(const Rule& asked, const Signal& signal, const Case& the_case, double wanted) {
    const Limit::In in = natural_unit(signal);
    const std::string size = std::isfinite(wanted) ? "is " + brief(wanted / worth_of(in, signal)) + " " +
                                                         unit_name(in, signal) + ", wider than full scale"
                                                   : "has no end";
    return {asked.position, "the limit that follows from the arithmetic in case \"" + the_case.name + "\" " + size,
            "say more of the arithmetic (halflsb predict shows what it comes from), give a number, or use kind = "
            "\"exact\""};
}

}  // namespace halflsb
