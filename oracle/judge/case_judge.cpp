#include "oracle/judge/case_judge.hpp"

#include <algorithm>
#include <cassert>

#include "oracle/judge/rule_kinds.hpp"

namespace halflsb {
namespace {

/// What a plan with an unknown filter should not ask; the reader refuses it, and it never passes.
RuleVerdict without_reference(const Rule& rule) {
    return {rule, Verdict::undecided, {}, {}, "the filter is unknown, so there is no reference", std::nullopt};
}

/// Of a rule whose companions nobody made (companion_case.hpp).
RuleVerdict without_companions(const Rule& rule) {
    return {rule, Verdict::undecided, {}, {}, "the stimulus was not sent again", std::nullopt};
}

bool is_implicit_latency(const Rule& rule) {
    const auto* latency = std::get_if<LatencyRule>(&rule.kind);
    return latency != nullptr && latency->implicit;
}

}  // namespace

CaseJudge::CaseJudge(const Plan& plan, const Case& the_case, bool wants_plots, BaseResponse base)
    : plan_(plan),
      case_(the_case),
      rates_(plan, the_case),
      block_returned_(rates_.cycles_within(judge_block_samples) * rates_.cycle().outputs),
      sent_(plan, the_case) {
    if (the_case.companion) {
        companion_.emplace(plan, the_case, std::move(base), wants_plots);
    } else if (!plan.filter_is_unknown) {
        channels_.reserve(static_cast<std::size_t>(plan.signal.channels));
        for (int channel = 1; channel <= plan.signal.channels; ++channel)
            channels_.emplace_back(plan, the_case, channel, wants_plots);
    } else if (wants_plots) {
        for (int channel = 1; channel <= plan.signal.channels; ++channel)
            traces_.emplace_back(plan, the_case, channel, 0);
    }
    for (const Rule& rule : the_case.rules) {
        if (std::holds_alternative<UnchangedRule>(rule.kind)) unchanged_.emplace_back(plan, the_case, rule);
        if (std::holds_alternative<DeadlineRule>(rule.kind)) deadlines_.emplace_back(plan, the_case, rule);
    }
}

void CaseJudge::add(std::span<const Code> response) {
    const auto channels = static_cast<std::size_t>(plan_.signal.channels);
    assert(response.size() % channels == 0);
    const std::size_t cycle = static_cast<std::size_t>(rates_.cycle().outputs) * channels;
    if (!waiting_.empty()) {
        const std::size_t missing = std::min(cycle - waiting_.size(), response.size());
        waiting_.insert(waiting_.end(), response.begin(), response.begin() + static_cast<std::ptrdiff_t>(missing));
        response = response.subspan(missing);
        if (waiting_.size() < cycle) return;
        add_cycles(waiting_);
        waiting_.clear();
    }
    const std::size_t whole = response.size() / cycle * cycle;
    add_cycles(response.first(whole));
    waiting_.assign(response.begin() + static_cast<std::ptrdiff_t>(whole), response.end());
}

void CaseJudge::add_ticks(const TickCounter& counter, std::span<const BlockTicks> blocks) {
    for (DeadlineJudge& judge : deadlines_) judge.add(counter, blocks);
}

void CaseJudge::add_cycles(std::span<const Code> response) {
    const auto channels = static_cast<std::size_t>(plan_.signal.channels);
    while (!response.empty()) {
        const auto part =
            response.first(std::min(response.size(), static_cast<std::size_t>(block_returned_) * channels));
        const auto returned = static_cast<std::int64_t>(part.size() / channels);
        const std::int64_t sent = rates_.sent_for(returned);
        sent_.take(sent_samples_, static_cast<std::size_t>(sent));
        for (ChannelJudge& judge : channels_) {
            judge.add(sent_.of_channel(judge.channel()),
                      one_channel(part, plan_.signal.channels, judge.channel(), one_));
        }
        for (UnchangedJudge& judge : unchanged_) judge.add(sent_.of_all(), part);
        if (companion_ && !base_unread_) {
            if (auto read = companion_->add(sent_, sent_samples_, part); !read) base_unread_ = read.error();
        }
        trace_unknown(part);
        sent_samples_ += sent;
        samples_ += returned;
        response = response.subspan(part.size());
    }
}

void CaseJudge::trace_unknown(std::span<const Code> response) {
    for (std::size_t i = 0; i < traces_.size(); ++i) {
        const int channel = static_cast<int>(i) + 1;
        const auto sent = sent_.of_channel(channel);
        const auto returned = one_channel(response, plan_.signal.channels, channel, one_);
        std::vector<double> stimulus(sent.size()), values(returned.size());
        values_of(plan_.signal.input, sent, stimulus);
        for (double& value : stimulus) value *= plan_.signal.output_per_input;
        values_of(plan_.signal.output, returned, values);
        AlignedBlock block{samples_, {}, returned, values};
        block.reference.stimulus = stimulus;
        traces_[i].add(block);
    }
}

bool CaseJudge::is_decided() const {
    return may_end_early(plan_, case_) && std::all_of(channels_.begin(), channels_.end(),
                                                      [](const ChannelJudge& judge) { return judge.is_decided(); });
}

Outcome<void> CaseJudge::go_through_again(const ResponseReplay& replay) {
    const auto channels = static_cast<std::size_t>(plan_.signal.channels);
    std::vector<Code> codes;
    for (std::int64_t first = 0, first_sent = 0; first < samples_;) {
        const std::int64_t count = std::min(block_returned_, samples_ - first);
        const std::int64_t sent = rates_.sent_for(count);
        codes.resize(static_cast<std::size_t>(count) * channels);
        if (auto read = replay(first, codes); !read) return read.error();
        sent_.take(first_sent, static_cast<std::size_t>(sent));
        for (ChannelJudge& judge : channels_) {
            if (!judge.is_in_second_pass()) continue;
            judge.add_again(sent_.of_channel(judge.channel()),
                            one_channel(codes, plan_.signal.channels, judge.channel(), one_));
        }
        first += count;
        first_sent += sent;
    }
    return {};
}

Outcome<CaseJudgement> CaseJudge::finish(const ResponseReplay& replay) {
    if (base_unread_) return *base_unread_;
    bool goes_again = false;
    for (ChannelJudge& judge : channels_) goes_again = judge.begin_second_pass() || goes_again;
    if (goes_again) {
        if (auto done = go_through_again(replay); !done) return done.error();
    }
    for (ChannelJudge& judge : channels_) judge.end_second_pass();
    CaseJudgement judgement;
    judgement.latency_told =
        std::any_of(channels_.begin(), channels_.end(), [](const ChannelJudge& judge) { return judge.latency_told(); });
    auto unchanged = unchanged_.begin();
    auto deadline = deadlines_.begin();
    for (const Rule& rule : case_.rules) {
        if (std::holds_alternative<UnchangedRule>(rule.kind)) {
            judgement.rules.push_back((unchanged++)->verdict());
        } else if (!companions_of(rule).empty()) {
            if (!companion_) judgement.rules.push_back(without_companions(rule));
        } else if (std::holds_alternative<DeadlineRule>(rule.kind)) {
            judgement.rules.push_back((deadline++)->verdict());
        } else if (plan_.filter_is_unknown) {
            if (!is_implicit_latency(rule)) judgement.rules.push_back(without_reference(rule));
        } else {
            for (const ChannelJudge& judge : channels_) {
                if (auto verdict = judge.verdict(rule)) judgement.rules.push_back(std::move(*verdict));
            }
        }
    }
    if (companion_) {
        for (RuleVerdict& verdict : companion_->verdicts()) judgement.rules.push_back(std::move(verdict));
        companion_->plot(judgement.plots);
    }
    for (const ChannelJudge& judge : channels_) judge.plot(judgement.plots);
    for (const TimeTrace& trace : traces_) trace.plot(judgement.plots);
    return judgement;
}

}  // namespace halflsb
