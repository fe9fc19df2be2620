#include "runner/paper_arithmetic.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/limit_cycle.hpp"
#include "oracle/filters/channel_stages.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "runner/paper_filter.hpp"
#include "runner/paper_headroom.hpp"

namespace halflsb {
namespace {

/// Samples whose twins are run for sensitivity, over all cases; each change costs a pass of them and a judge.
constexpr std::int64_t sight_budget = std::int64_t{1} << 19;
constexpr std::int64_t operations_for_free = 64;

FilterChain with_rounding(FilterChain chain) {
    for (FilterStage& stage : chain) {
        if (!stage.arithmetic.rounding && stage.arithmetic.number != NumberKind::float32)
            stage.arithmetic.rounding = Rounding::half_up;
    }
    return chain;
}

std::string why(const ErrorBound& bound, const BoundUse& use) {
    const std::string past = use.has_past ? ", and the case before" : "";
    if (!use.noise_like) return "worst case: the stimulus is no white noise" + past;
    if (bound.is_statistical) return "statistics of noise" + past;
    return "worst case in part: where noise stands less than 6 bits above what is dropped" + past;
}

PredictedError error_of(const ErrorBound& bound, const BoundUse& use, double worth) {
    return {bound.lower / worth,      bound.upper / worth,  bound.rms / worth, bound.bias_lower / worth,
            bound.bias_upper / worth, bound.is_statistical, why(bound, use)};
}

std::vector<PredictedTerm> terms_of(const ErrorBound& bound, double worth) {
    std::vector<PredictedTerm> terms;
    for (const BoundTerm& term : bound.terms) {
        terms.push_back({term.name, term.count, term.step / worth, term.lowest, term.highest, term.l1, term.noise_gain,
                         term.dc_gain, term.lower / worth, term.upper / worth, term.formula});
    }
    return terms;
}

/// The channel that a case drives, when it is one of those that have this filter; else the one given.
int channel_of(const Plan& plan, const Case& the_case, int channel) {
    return the_case.channel && !channels_differ(plan.filter) ? *the_case.channel : channel;
}

std::vector<PredictedCaseError> case_errors(const Plan& plan, int channel, const std::vector<std::size_t>& selected,
                                            const PredictedError& general, double worth,
                                            const std::function<bool()>& go_on) {
    std::vector<PredictedCaseError> told;
    for (const std::size_t index : selected) {
        if (!go_on()) break;
        const Case& the_case = plan.cases[index];
        if (the_case.companion) continue;  // held against its base
        const int driven = channel_of(plan, the_case, channel);
        const auto bound = judged_bound(plan, the_case, driven);
        if (!bound) continue;
        const BoundUse use = bound_use(plan, the_case, driven);
        PredictedError error = error_of(*bound, use, worth);
        PredictedError as_general = error;
        as_general.why = general.why;
        if (as_general == general) continue;
        told.push_back({the_case.name, use.samples, std::move(error)});
    }
    return told;
}

PredictedSilence silence_of(const DescribedChain& described, double worth) {
    const SilenceBound bound = silence_bound(described);
    PredictedSilence silence{bound.lower / worth, bound.upper / worth, bound.lowest_code, bound.highest_code, {}, {}};
    if (bound.searched)
        silence.searched = {bound.searched->lowest, bound.searched->highest, bound.searched->period_samples};
    for (const DeadBandEstimate& estimate : bound.estimates)
        silence.estimates.push_back({estimate.name, estimate.step / worth, estimate.oscillation, estimate.constant});
    return silence;
}

std::int64_t longest_case(const Plan& plan, const std::vector<std::size_t>& selected) {
    std::int64_t longest = 1;
    for (const std::size_t index : selected) longest = std::max(longest, judged_samples(plan, plan.cases[index]));
    return longest;
}

/// What a sample costs beside one of a short filter.
Plan with_rounding(Plan plan) {
    plan.filter = with_rounding(std::move(plan.filter));
    for (Case& the_case : plan.cases) {
        if (the_case.filter) the_case.filter = with_rounding(std::move(*the_case.filter));
    }
    return plan;
}

}  // namespace

std::vector<PredictedAssumption> assumptions_of(const DescribedChain& chain) {
    std::vector<PredictedAssumption> all;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const DescribedStage& stage = chain.stages[i];
        if (stage.number != NumberKind::integer) continue;
        const auto& said = stage.stage.arithmetic;
        PredictedAssumption assumed{i + 1, {}};
        if (!stage.rounding_is_said) assumed.taken.push_back("each rounding anywhere from floor to half-up");
        if (!said.accumulator_bits && has_word(stage.stage, "accumulator_bits"))
            assumed.taken.push_back("an accumulator as wide as it takes");
        if (!stage.coefficients_are_said)
            assumed.taken.push_back(
                "coefficients as they are designed (where the firmware rounds them, say coefficient_fraction_bits)");
        if (!stage.words_are_said) assumed.taken.push_back("words behind it as fine as it takes");
        const bool saturates = i + 1 == chain.stages.size() && said.output_overflow == Overflow::saturate;
        if (!assumed.taken.empty() && saturates) assumed.taken.push_back("an output that saturates");
        if (!assumed.taken.empty()) all.push_back(std::move(assumed));
    }
    return all;
}

PredictedArithmetic predict_arithmetic(const Plan& plan, const DescribedChain& described, int channel,
                                       const std::vector<std::size_t>& selected, const std::function<bool()>& go_on) {
    const double worth = output_worth(plan.signal);
    PredictedArithmetic told;
    told.assumed = assumptions_of(described);
    BoundUse use;
    use.samples = longest_case(plan, selected);
    const ErrorBound bound = derive(described, use);
    told.error = error_of(bound, use, worth);
    told.reference_error = bound.reference_error / worth;
    told.terms = terms_of(bound, worth);
    const bool rounding_is_open = std::any_of(described.stages.begin(), described.stages.end(),
                                              [](const DescribedStage& stage) { return !stage.rounding_is_said; });
    if (rounding_is_open) {
        const FilterChain chain = with_rounding(chain_of_channel(plan.filter, channel));
        const auto said =
            describe(chain, plan.signal.input, plan.signal.output, plan.signal.output_per_input).described;
        if (said) told.largest_if_rounding_said = derive(*said, use).largest() / worth;
    }
    told.cases = case_errors(plan, channel, selected, told.error, worth, go_on);
    if (!go_on()) return told;
    told.nodes = predict_nodes(described);
    told.registers = predict_registers(described);
    told.coefficients = predict_coefficients(described);
    if (plan.signal.output.has_lsb() && go_on()) told.silence = silence_of(described, worth);
    return told;
}

PredictedSight predict_sight(const Plan& plan, const std::vector<std::size_t>& selected,
                             const std::function<bool()>& go_on) {
    PredictedSight sight;
    std::vector<std::size_t> looked_at;
    std::int64_t samples = 0;
    std::size_t cases = 0;
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        // The same twin gives the same answer twice: of companions only linearity sees an arithmetic.
        if (the_case.companion && !std::holds_alternative<LinearityRule>(the_case.rules.front().kind)) continue;
        ++cases;
        samples += std::min(the_case.stimulus->length_samples(), sensitivity_samples(plan.filter)) *
                   plan.signal.channels * (1 + operations_a_sample(plan.filter) / operations_for_free);
        if (samples <= sight_budget || looked_at.empty()) looked_at.push_back(index);
        sight.has_exact_rule =
            sight.has_exact_rule || std::any_of(the_case.rules.begin(), the_case.rules.end(), [](const Rule& rule) {
                return std::holds_alternative<ExactRule>(rule.kind);
            });
    }
    sight.cases = looked_at.size();
    sight.cases_left_out = cases - looked_at.size();
    sight.sensitivity = sensitivity(plan, looked_at, go_on);
    if (sight.sensitivity.unknown.empty() || plan.filter_is_unknown) return sight;
    // Nothing is promised of the rounding: told is what these rules see when it is the usual one.
    Sensitivity assumed = sensitivity(with_rounding(plan), looked_at, go_on);
    if (!assumed.unknown.empty()) return sight;
    sight.sensitivity = std::move(assumed);
    sight.rounding_is_assumed = true;
    return sight;
}

}  // namespace halflsb
