#include "oracle/judge/aligned_pass.hpp"

#include <algorithm>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/rule_kinds.hpp"

namespace halflsb {

AlignedPass::AlignedPass(const JudgedChannel& channel, int lag_samples)
    : signal_(channel.plan.signal),
      lag_(lag_samples),
      first_judged_(first_judged_sample(channel.plan, channel.the_case)),
      to_skip_(lag_samples < 0 ? static_cast<std::size_t>(-lag_samples) : 0),
      silence_(lag_samples > 0 ? static_cast<std::size_t>(lag_samples) : 0) {
    if (first_judged_ > 0 && lag_samples > 0) first_judged_ += lag_samples;
    JudgedChannel at_lag = channel;
    at_lag.lag_samples = lag_samples;
    for (const Rule& rule : channel.the_case.rules) {
        if (auto judge = make_judge(rule, at_lag)) judges_.push_back({&rule, std::move(judge)});
    }
    if (channel.wants_plots) trace_.emplace(channel.plan, channel.the_case, channel.channel, lag_samples);
}

void AlignedPass::add(const ReferenceBlock& reference, std::span<const Code> response) {
    if (lag_ == 0) {
        measure_judged(reference, response);
        return;
    }
    // Of the references that there are: a wanted twin may have no description.
    if (silence_ > 0 && !reference.codes.empty()) {
        waiting_.append_silence(
            silence_, signal_,
            {.design = !reference.design.empty(), .twin = !reference.twin.empty(), .rails = !reference.exempt.empty()});
        silence_ = 0;
    }
    const auto skip = std::min(to_skip_, reference.codes.size());
    to_skip_ -= skip;
    waiting_.append(reference.after(skip));
    response_.insert(response_.end(), response.begin(), response.end());
    const std::size_t ready = std::min(waiting_.size(), response_.size());
    measure_judged(waiting_.first(ready), std::span(response_).first(ready));
    waiting_.drop(ready);
    response_.erase(response_.begin(), response_.begin() + static_cast<std::ptrdiff_t>(ready));
}

void AlignedPass::finish() {
    for (const Judged& judged : judges_) judged.judge->finish();
}

bool AlignedPass::is_decided() const {
    return std::all_of(judges_.begin(), judges_.end(), [](const Judged& judged) { return judged.judge->is_decided(); });
}

void AlignedPass::measure_judged(const ReferenceBlock& reference, std::span<const Code> response) {
    const auto count = static_cast<std::int64_t>(response.size());
    const auto unjudged = static_cast<std::size_t>(std::clamp<std::int64_t>(first_judged_ - next_index_, 0, count));
    next_index_ += static_cast<std::int64_t>(unjudged);
    measure(reference.after(unjudged), response.subspan(unjudged));
}

void AlignedPass::measure(const ReferenceBlock& reference, std::span<const Code> response) {
    response_values_.resize(response.size());
    values_of(signal_.output, response, response_values_);
    const AlignedBlock block{next_index_, reference, response, response_values_};
    for (const Judged& judged : judges_) judged.judge->add(block);
    if (trace_) trace_->add(block);
    next_index_ += static_cast<std::int64_t>(response.size());
}

void AlignedPass::plot(CasePlots& plots) const {
    if (!trace_) return;
    // Each judge finds the plots of its own channel alone.
    CasePlots of_channel;
    trace_->plot(of_channel);
    for (const Judged& judged : judges_) judged.judge->plot(of_channel);
    for (Plot& plot : of_channel) plots.push_back(std::move(plot));
}

std::optional<RuleVerdict> AlignedPass::verdict(const Rule& rule, const RailWatch* rails) const {
    for (const Judged& judged : judges_) {
        if (judged.rule == &rule) return judged.judge->verdict(rails);
    }
    return std::nullopt;
}

}  // namespace halflsb
