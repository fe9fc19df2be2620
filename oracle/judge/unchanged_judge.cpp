#include "oracle/judge/unchanged_judge.hpp"

#include <algorithm>
#include <cstdlib>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

std::string count_text(std::int64_t count) { return std::to_string(count); }

std::int64_t stretches_of(const AcceptedResponse& accepted) {
    if (accepted.block_samples <= 0) return 0;
    return (accepted.samples + accepted.block_samples - 1) / accepted.block_samples;
}

constexpr const char* damaged = "the baseline contradicts itself: ";
constexpr const char* accept_again = "; accept a good run again";

}  // namespace

UnchangedJudge::UnchangedJudge(const Plan& plan, const Case& the_case, const Rule& rule)
    : plan_(plan),
      case_(the_case),
      rule_(rule),
      asked_(std::get<UnchangedRule>(rule.kind)),
      channels_(static_cast<std::size_t>(plan.signal.channels)),
      not_comparable_(why_not_comparable()) {
    if (!not_comparable_.empty()) return;
    // A limit of 0 asks for every bit, and f32 has no LSB to count in.
    if (asked_.largest && asked_.largest->number > 0.0 && plan.signal.output.has_lsb())
        limit_lsb_ = judged(value_of(*asked_.largest, plan.signal) / lsb_value(plan.signal.output));
    kept_ = static_cast<std::int64_t>(asked_.accepted->kept.size() / channels_);
    sent_digest_ = asked_.accepted->make_digest();
    response_digest_ = asked_.accepted->make_digest();
}

std::string UnchangedJudge::why_not_comparable() const {
    if (asked_.accepted == nullptr)
        return asked_.missing.empty() ? "there is no accepted run of this case" : asked_.missing;
    if (case_.start == Start::running)
        return "a case that starts running begins in a state that the accepted run did not have";
    const AcceptedResponse& accepted = *asked_.accepted;
    if (!accepted.make_digest || accepted.response_sha256.empty() || accepted.stimulus_sha256.empty())
        return "the baseline has no hash of this case" + std::string(accept_again);
    const std::size_t kept = accepted.kept.size();
    if (kept % channels_ != 0 || static_cast<std::int64_t>(kept / channels_) > accepted.samples) {
        return damaged + count_text(accepted.samples) + " samples of " + count_text(plan_.signal.channels) +
               (channels_ == 1 ? " channel" : " channels") + ", and " + std::to_string(kept) + " codes kept of them" +
               accept_again;
    }
    const auto hashes = static_cast<std::int64_t>(accepted.block_sha256.size());
    if (hashes > 0 && hashes != stretches_of(accepted)) {
        return damaged + count_text(accepted.samples) + " samples in stretches of " +
               count_text(accepted.block_samples) + ", and " + count_text(hashes) + " hashes of them" + accept_again;
    }
    return {};
}

void UnchangedJudge::add(std::span<const Code> sent, std::span<const Code> response) {
    if (!not_comparable_.empty()) return;
    sent_digest_->add(plan_.signal.input, sent);
    response_digest_->add(plan_.signal.output, response);
    compare_kept(response);
    compare_stretches(samples_, response);
    samples_ += static_cast<std::int64_t>(response.size() / channels_);
}

bool UnchangedJudge::is_beyond(std::int64_t difference_lsb) const {
    return limit_lsb_ ? !(judged(static_cast<double>(difference_lsb)) <= *limit_lsb_) : difference_lsb != 0;
}

void UnchangedJudge::compare_kept(std::span<const Code> response) {
    const auto instants = static_cast<std::int64_t>(response.size() / channels_);
    // What a good response mostly is; the last instants still go one by one, for those around a later difference.
    const std::int64_t equal_to = samples_ + instants - shown_neighbours;
    std::int64_t first = samples_;
    if (bad_index_ < 0 && equal_to > samples_ && samples_ + instants <= kept_ &&
        std::equal(response.begin(), response.end(),
                   asked_.accepted->kept.begin() + samples_ * static_cast<std::int64_t>(channels_))) {
        around_.clear();
        first = equal_to;
    }
    for (std::int64_t index = first; index < samples_ + instants; ++index) {
        // Beyond the kept ones nothing is compared, and codes only matter as neighbours.
        if (index >= kept_ && (bad_index_ < 0 || index > bad_index_ + shown_neighbours)) return;
        compare_instant(index, response.subspan(static_cast<std::size_t>(index - samples_) * channels_, channels_));
    }
}

void UnchangedJudge::compare_instant(std::int64_t index, std::span<const Code> codes) {
    bool is_changed = false;
    for (std::size_t c = 0; index < kept_ && c < channels_; ++c) {
        const Code accepted = asked_.accepted->kept[static_cast<std::size_t>(index) * channels_ + c];
        const std::int64_t difference = std::abs(std::int64_t{codes[c]} - std::int64_t{accepted});
        is_changed = is_changed || difference != 0;
        largest_lsb_ = std::max(largest_lsb_, difference);
        if (bad_index_ < 0 && is_beyond(difference)) {
            bad_index_ = index;
            bad_channel_ = c;
        }
    }
    if (is_changed) ++changed_;
    if (bad_index_ >= 0 && index > bad_index_ + shown_neighbours) return;
    if (around_.empty()) around_first_ = index;
    around_.insert(around_.end(), codes.begin(), codes.end());
    const auto most = static_cast<std::size_t>(bad_index_ < 0 ? shown_neighbours : 2 * shown_neighbours + 1);
    if (around_.size() > most * channels_) {
        around_.erase(around_.begin(), around_.begin() + static_cast<std::ptrdiff_t>(channels_));
        ++around_first_;
    }
}

void UnchangedJudge::compare_stretches(std::int64_t index, std::span<const Code> response) {
    const AcceptedResponse& accepted = *asked_.accepted;
    if (accepted.block_sha256.empty() || kept_ == accepted.samples) return;
    while (!response.empty() && stretch_first_ < 0 && index < accepted.samples) {
        const std::int64_t stretch = index / accepted.block_samples;
        const std::int64_t begin = stretch * accepted.block_samples;
        const std::int64_t end = std::min(begin + accepted.block_samples, accepted.samples);
        const auto instants = static_cast<std::int64_t>(response.size() / channels_);
        const auto here = response.first(static_cast<std::size_t>(std::min(instants, end - index)) * channels_);
        if (end > kept_) {
            if (!stretch_digest_) stretch_digest_ = accepted.make_digest();
            stretch_digest_->add(plan_.signal.output, here);
        }
        index += static_cast<std::int64_t>(here.size() / channels_);
        response = response.subspan(here.size());
        if (index < end || !stretch_digest_) continue;
        if (stretch_digest_->value() != accepted.block_sha256[static_cast<std::size_t>(stretch)]) {
            stretch_first_ = std::max(begin, kept_);
            stretch_last_ = end - 1;
        }
        stretch_digest_.reset();
    }
}

RuleVerdict UnchangedJudge::verdict() {
    RuleVerdict verdict{rule_, Verdict::undecided, "accepted", {}, not_comparable_, std::nullopt};
    if (!not_comparable_.empty()) return verdict;
    const AcceptedResponse& accepted = *asked_.accepted;
    if (samples_ != accepted.samples) {
        verdict.reason = "this response has " + count_text(samples_) + " samples and that of the accepted run of " +
                         accepted.origin + " has " + count_text(accepted.samples) + ", so they cannot be compared";
        return verdict;
    }
    if (sent_digest_->value() != accepted.stimulus_sha256) {
        verdict.reason = "the stimulus is not that of the accepted run of " + accepted.origin;
        return verdict;
    }
    const bool is_same = response_digest_->value() == accepted.response_sha256;
    verdict.reason = contradiction(is_same);
    if (!verdict.reason.empty()) return verdict;
    if (limit_lsb_) {
        judge_within(is_same, verdict);
    } else {
        judge_exactly(is_same, verdict);
    }
    if (is_same) verdict.reason = "every sample equals the accepted run of " + accepted.origin;
    if (verdict.verdict == Verdict::fail && bad_index_ >= 0) verdict.first_bad = around_bad();
    return verdict;
}

std::string UnchangedJudge::contradiction(bool is_same) const {
    std::string text;
    if (is_same && (changed_ > 0 || stretch_first_ >= 0)) {
        text = "its hash is that of this response, but what it keeps of the samples is not";
    } else if (!is_same && changed_ == 0 && keeps_all()) {
        text = "its hash is not that of this response, but all its samples are";
    }
    return text.empty() ? text : damaged + text + accept_again;
}

void UnchangedJudge::judge_exactly(bool is_same, RuleVerdict& verdict) const {
    verdict.verdict = is_same ? Verdict::pass : Verdict::fail;
    JudgedFigure figure{
        "changed samples", std::nullopt, 0.0, std::nullopt, "samples", false, pass_or_fail(is_same), {}};
    if (is_same || changed_ > 0) {
        figure.value = judged(static_cast<double>(changed_));
        figure.margin = judged(0.0 - *figure.value);
        if (!is_same && !keeps_all()) figure.note = "of the first " + count_text(kept_);
    } else {
        figure.note = "beyond the kept samples";
    }
    verdict.figures.push_back(std::move(figure));
    verdict.reason = changed_ > 0 ? differences_text() : beyond_kept_text();
}

void UnchangedJudge::judge_within(bool is_same, RuleVerdict& verdict) const {
    JudgedFigure figure{
        "max", judged(static_cast<double>(largest_lsb_)), limit_lsb_, std::nullopt, "LSB", false, Verdict::pass, {}};
    figure.verdict = pass_or_fail(*figure.value <= *figure.limit);
    figure.margin = judged(*figure.limit - *figure.value);
    // Beyond the kept samples an equal hash shows that nothing changed; an unequal one does not say by how much.
    const bool is_shown = is_same || keeps_all() || (!asked_.accepted->block_sha256.empty() && stretch_first_ < 0);
    if (!figure.passed()) {
        verdict.verdict = Verdict::fail;
    } else if (is_shown) {
        verdict.verdict = Verdict::pass;
    }
    if (!is_same && !keeps_all()) figure.note = "of the first " + count_text(kept_);
    verdict.figures.push_back(std::move(figure));
    if (changed_ > 0) verdict.reason = differences_text();
    if (verdict.verdict != Verdict::undecided) return;
    verdict.reason += verdict.reason.empty() ? "" : "; ";
    verdict.reason += "beyond the first " + count_text(kept_) + " samples the baseline keeps only hashes, which differ";
    if (stretch_first_ >= 0) {
        verdict.reason += " first in samples " + count_text(stretch_first_) + " to " + count_text(stretch_last_);
    }
    verdict.reason += ": by how much cannot be told";
}

std::string UnchangedJudge::differences_text() const {
    std::string text = count_text(changed_) + " of " +
                       (keeps_all() ? count_text(samples_) + " samples"
                                    : "the first " + count_text(kept_) + " samples, which the baseline keeps,") +
                       (changed_ == 1 ? " differs" : " differ") + " from the accepted run of " +
                       asked_.accepted->origin;
    if (plan_.signal.output.has_lsb())
        text += (changed_ == 1 ? ", by " : ", by up to ") + count_text(largest_lsb_) + " LSB";
    if (channels_ > 1 && bad_index_ >= 0) {
        text += std::string("; the first ") + (limit_lsb_ ? "beyond max" : "difference") + " is in channel " +
                std::to_string(bad_channel_ + 1);
    }
    return text;
}

std::string UnchangedJudge::beyond_kept_text() const {
    const std::string run = "the accepted run of " + asked_.accepted->origin;
    if (stretch_first_ >= 0) {
        return "the first difference from " + run + " lies in samples " + count_text(stretch_first_) + " to " +
               count_text(stretch_last_) + ", of which the baseline keeps only a hash";
    }
    return "the hash of the response differs from that of " + run + ", of which the baseline keeps the first " +
           count_text(kept_) + " samples";
}

Neighbourhood UnchangedJudge::around_bad() const {
    Neighbourhood around;
    around.index = bad_index_;
    around.first_index = around_first_;
    const CodeScale scale(plan_.signal.output);
    const std::size_t instants = around_.size() / channels_;
    const CaseRates rates(plan_, case_);
    std::vector<Code> sent(channels_);
    for (std::size_t i = 0; i < instants; ++i) {
        fill_case_codes(plan_, case_, rates.newest_sent(around_first_ + static_cast<std::int64_t>(i)), sent);
        around.stimulus.push_back(sent[bad_channel_]);
        around.response.push_back(around_[i * channels_ + bad_channel_]);
        const std::int64_t index = around_first_ + static_cast<std::int64_t>(i);
        if (index >= kept_) continue;
        const Code accepted = asked_.accepted->kept[static_cast<std::size_t>(index) * channels_ + bad_channel_];
        around.reference.push_back(scale.of_value(value_of(plan_.signal.output, accepted)));
    }
    return around;
}

void check(const UnchangedRule&, const Rule& asked, const Plan&, const Case& the_case, std::vector<Refusal>& refusals) {
    if (the_case.start != Start::running) return;
    refusals.push_back({asked.position,
                        "case \"" + the_case.name +
                            "\" starts running, so its first samples hang on what ran before it and cannot equal "
                            "those of an accepted run",
                        "start it with \"reset\" or \"flush\", or write the rule in another case"});
}

}  // namespace halflsb
