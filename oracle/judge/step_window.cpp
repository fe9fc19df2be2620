#include "oracle/judge/step_window.hpp"

#include <algorithm>
#include <array>
#include <span>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/settling.hpp"
#include "oracle/measure/transition.hpp"

namespace halflsb {
namespace {

constexpr std::int64_t samples_before_step = 65536;

/// The first index from `first` on whose code is another one; `end` when there is none.
std::int64_t first_other(const Plan& plan, const Case& the_case, Code code, std::int64_t first, std::int64_t end) {
    std::array<Code, 4096> codes{};
    while (first < end) {
        const auto count = std::min<std::int64_t>(end - first, static_cast<std::int64_t>(codes.size()));
        const auto block = std::span(codes).first(static_cast<std::size_t>(count));
        fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first, block);
        const auto found = std::find_if(block.begin(), block.end(), [code](Code other) { return other != code; });
        if (found != block.end()) return first + (found - block.begin());
        first += count;
    }
    return end;
}

Code code_at(const Plan& plan, const Case& the_case, std::int64_t index) {
    Code code = 0;
    fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, index, std::span(&code, 1));
    return code;
}

/// Something other than the silence of a reset may stand in the filter before the step.
bool has_past(const Plan& plan, const Case& the_case, const FilterChain& chain, const LevelChange& change) {
    return the_case.start == Start::running || change.before != zero_code(plan.signal.input) ||
           std::any_of(chain.begin(), chain.end(),
                       [](const FilterStage& stage) { return stage.initial != Initial::zeros; });
}

}  // namespace

std::optional<LevelChange> first_level_change(const Plan& plan, const Case& the_case) {
    const std::int64_t length = the_case.stimulus->length_samples();
    LevelChange change;
    change.before = code_at(plan, the_case, 0);
    const std::int64_t searched = std::min(length, longest_level_samples);
    change.at = first_other(plan, the_case, change.before, 1, searched);
    if (change.at >= searched) return std::nullopt;
    change.after = code_at(plan, the_case, change.at);
    change.end =
        first_other(plan, the_case, change.after, change.at + 1, std::min(length, change.at + longest_level_samples));
    return change;
}

double gain_of_constant(const FilterChain& chain) {
    FilterChain linear;
    std::copy_if(chain.begin(), chain.end(), std::back_inserter(linear),
                 [](const FilterStage& stage) { return !std::holds_alternative<Median>(stage.design); });
    return response_at(linear, 0.0).real();
}

std::optional<StepWindow> step_window(const Plan& plan, const Case& the_case, int channel, const LevelChange& change) {
    const CaseRates rates(plan, the_case);
    const FilterChain chain = chain_of(plan, the_case, channel);
    const double gain = gain_of_constant(chain) * plan.signal.output_per_input;
    StepWindow step;
    step.step = rates.returned(change.at);
    step.levels = {gain * value_of(plan.signal.input, change.before), gain * value_of(plan.signal.input, change.after),
                   0.0};
    step.window = {first_judged_sample(plan, the_case), rates.returned(change.end)};
    if (has_past(plan, the_case, chain, change)) {
        const auto settled = first_settled_sample(plan, the_case, channel, 0, 0);
        if (!settled) return std::nullopt;
        step.window.begin = *settled;
    }
    step.window.begin = std::max(step.window.begin, step.step - samples_before_step);
    step.window.end = std::min(step.window.end, step.window.begin + static_cast<std::int64_t>(transition_most_samples));
    return step;
}

}  // namespace halflsb
