#include "runner/standard_facts.hpp"

#include <algorithm>

#include "oracle/filters/channel_stages.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "runner/paper_arithmetic.hpp"

namespace halflsb {
namespace {

std::vector<CasePurpose> purposes_of(const Plan& plan, const std::vector<std::size_t>& cases) {
    std::vector<CasePurpose> all;
    for (const std::size_t index : cases) all.push_back({plan.cases[index].name, plan.cases[index].purpose});
    return all;
}

bool has_derived_limit(const Case& the_case) {
    return std::any_of(the_case.rules.begin(), the_case.rules.end(), [](const Rule& rule) {
        const auto* error = std::get_if<ErrorRule>(&rule.kind);
        const auto* linearity = std::get_if<LinearityRule>(&rule.kind);
        return (error != nullptr && is_derived(*error)) || (linearity != nullptr && !linearity->largest);
    });
}

/// One sentence a stage, of the channel where it stands.
std::vector<std::string> assumed_sentences(const Plan& plan, const Case& the_case) {
    std::vector<std::string> sentences;
    const int channels = channels_differ(plan.filter) ? plan.signal.channels : 1;
    for (int channel = 1; channel <= channels; ++channel) {
        const auto described = described_channel(plan, the_case, channel);
        if (!described) continue;
        for (const PredictedAssumption& stage : assumptions_of(*described)) {
            std::string sentence = channels > 1 ? "channel " + std::to_string(channel) + ", " : "";
            sentence += "stage " + std::to_string(stage.stage) + ": ";
            for (std::size_t i = 0; i < stage.taken.size(); ++i) sentence += (i == 0 ? "" : ", ") + stage.taken[i];
            sentences.push_back(sentence + "; what [arithmetic] says narrows the limits");
        }
    }
    return sentences;
}

}  // namespace

TakenByItself taken_by_itself(const Plan& plan, const std::vector<std::size_t>& selected,
                              const std::vector<std::size_t>& left_out, const std::string& why_left_out) {
    TakenByItself taken;
    taken.left_out = purposes_of(plan, left_out);
    taken.why_left_out = why_left_out;
    if (!selected.empty() && plan.cases[selected.front()].is_standard) taken.added = purposes_of(plan, selected);
    for (const std::size_t index : selected) {
        if (plan.filter_is_unknown || !has_derived_limit(plan.cases[index])) continue;
        taken.assumed = assumed_sentences(plan, plan.cases[index]);
        break;
    }
    return taken;
}

}  // namespace halflsb
