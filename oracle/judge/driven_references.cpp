#include "oracle/judge/driven_references.hpp"

#include <algorithm>

namespace halflsb {

DrivenReferences::DrivenReferences(const Plan& plan, const Case& the_case, int idle)
    : idle_(idle),
      driven_(the_case.channel.value_or(1)),
      rates_(plan, the_case),
      sent_(plan, the_case),
      through_idle_(plan, the_case, idle, {}),
      through_driven_(plan, the_case, driven_, {}),
      values_(chain_of(plan, the_case, idle) == chain_of(plan, the_case, driven_) ? 2 : 3) {}

std::string DrivenReferences::name(std::size_t reference) const {
    const std::string driven = "what channel " + std::to_string(driven_);
    if (reference == 0) return driven + " was sent, not filtered";
    if (reference == 1 && count() == 3)
        return driven + " was sent, through the filter of channel " + std::to_string(idle_);
    return driven + " returns";
}

void DrivenReferences::make_more() {
    const std::int64_t inputs =
        rates_.cycles_within(static_cast<std::int64_t>(judge_block_samples)) * rates_.cycle().inputs;
    sent_.take(sent_samples_, static_cast<std::size_t>(inputs));
    sent_samples_ += inputs;
    const auto codes = sent_.of_channel(driven_);
    const ReferenceBlock idle = through_idle_.next(codes);
    values_[0].insert(values_[0].end(), idle.stimulus.begin(), idle.stimulus.end());
    values_[1].insert(values_[1].end(), idle.declared.begin(), idle.declared.end());
    if (count() < 3) return;
    const ReferenceBlock driven = through_driven_.next(codes);
    values_[2].insert(values_[2].end(), driven.declared.begin(), driven.declared.end());
}

std::vector<std::span<const double>> DrivenReferences::take(std::int64_t first_index, std::size_t samples) {
    // Once, at a positive lag: before the first sample sent there was silence.
    if (first_index < first_) {
        const auto missing = static_cast<std::size_t>(first_ - first_index);
        for (std::vector<double>& each : values_) each.insert(each.begin(), missing, 0.0);
        first_ = first_index;
    }
    const std::int64_t end = first_index + static_cast<std::int64_t>(samples);
    while (first_ + static_cast<std::int64_t>(values_.front().size()) < end) make_more();
    const auto gone = static_cast<std::ptrdiff_t>(first_index - first_);
    for (std::vector<double>& each : values_) each.erase(each.begin(), each.begin() + gone);
    first_ = first_index;
    std::vector<std::span<const double>> taken;
    for (const std::vector<double>& each : values_) taken.push_back(std::span(each).first(samples));
    return taken;
}

}  // namespace halflsb
