#include "oracle/judge/deadline_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/error_figures.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

std::string percentile_name(double percentile) { return number_text(percentile) + " % of blocks"; }

JudgedFigure without_limit(std::string name, double value) {
    return {std::move(name), judged(value), std::nullopt, std::nullopt, "ticks", false, Verdict::pass, {}};
}

}  // namespace

bool wants_ticks(const Case& the_case) {
    return std::any_of(the_case.rules.begin(), the_case.rules.end(),
                       [](const Rule& rule) { return std::holds_alternative<DeadlineRule>(rule.kind); });
}

DeadlineJudge::DeadlineJudge(const Plan& plan, const Case& the_case, const Rule& rule)
    : case_(the_case), rule_(rule), asked_(std::get<DeadlineRule>(rule.kind)), rate_hz_(rate_hz_of(plan, the_case)) {}

void DeadlineJudge::add(const TickCounter& counter, std::span<const BlockTicks> blocks) {
    counter_ = counter;
    for (const BlockTicks& block : blocks) {
        if (block.samples > 0) add(block);
    }
}

void DeadlineJudge::add(const BlockTicks& block) {
    const double mean = static_cast<double>(block.total) / static_cast<double>(block.samples);
    const double rounded_up = std::ceil(mean);
    counts_ = counts_ || block.total > 0 || block.largest > 0;
    if (rounded_up > block.largest && block.largest < most_ticks_told) ++contradictory_;
    if (rounded_up < block.largest) sees_samples_ = true;
    if (blocks_ == 0 || block.largest > largest_) {
        largest_ = block.largest;
        slowest_first_ = samples_;
        slowest_samples_ = block.samples;
    }
    means_.add(mean);
    if (asked_.max_percentile_ticks) {
        const double compared = judged(mean);
        if (compared > judged(*asked_.max_percentile_ticks)) {
            ++beyond_;
            smallest_beyond_ = std::min(smallest_beyond_.value_or(compared), compared);
        } else {
            largest_within_ = std::max(largest_within_.value_or(compared), compared);
        }
    }
    longest_block_ = std::max(longest_block_, block.samples);
    samples_ += block.samples;
    ++blocks_;
}

std::string DeadlineJudge::why_not_judged() const {
    if (blocks_ == 0) return "the run kept no ticks of this case; capture anew with halflsb check";
    if (counter_.hz == 0 || counter_.bits <= 0)
        return "the board has no tick counter; give the kit one (ticks, tick_hz, tick_bits), or leave the rule out";
    if (samples_ != case_.stimulus->length_samples()) {
        return "the ticks of " + std::to_string(samples_) + " samples are there, and the stimulus has " +
               std::to_string(case_.stimulus->length_samples()) + "; capture anew with halflsb check";
    }
    if (!counts_) return "the board's tick counter stands still: no block took a tick; start the counter";
    if (contradictory_ > 0) {
        return "the board contradicts itself: in " + std::to_string(contradictory_) + " of " + std::to_string(blocks_) +
               " blocks the ticks of all samples are more than the largest of one allows; correct the firmware "
               "(docs/wire.md, Ticks)";
    }
    return {};
}

/// What a pass cannot rest on: a block that wraps the counter looks short.
void DeadlineJudge::doubt(double limit_ticks, JudgedFigure& figure) const {
    if (!figure.passed()) return;
    if (largest_ >= most_ticks_told && limit_ticks >= most_ticks_told) {
        figure.verdict = Verdict::undecided;
        figure.note = std::to_string(most_ticks_told) + " ticks, or more: a board tells no larger number";
    } else if (limit_ticks * static_cast<double>(longest_block_) >= std::ldexp(1.0, counter_.bits)) {
        figure.verdict = Verdict::undecided;
        figure.note = "a block that takes longer than the limit wraps the board's counter of " +
                      std::to_string(counter_.bits) + " bits; use smaller blocks or a slower counter";
    }
}

JudgedFigure DeadlineJudge::largest_figure() const {
    if (!asked_.max_ticks) return without_limit("largest", largest_);
    JudgedFigure figure = at_most("largest", largest_, *asked_.max_ticks, "ticks");
    doubt(*asked_.max_ticks, figure);
    return figure;
}

JudgedFigure DeadlineJudge::period_figure(double max_period_ratio) const {
    const double period_ticks = static_cast<double>(counter_.hz) / rate_hz_;
    JudgedFigure figure = at_most("longest", largest_ / period_ticks, max_period_ratio, "of the sample period");
    doubt(max_period_ratio * period_ticks, figure);
    return figure;
}

JudgedFigure DeadlineJudge::told(double percentile) const {
    return without_limit(percentile_name(percentile), means_.quantile(percentile / 100.0));
}

/// Nearest rank: the block of rank ceil(p n) is within the limit when no more than n - ceil(p n) are beyond it.
JudgedFigure DeadlineJudge::percentile_figure() const {
    const double share = *asked_.percentile / 100.0, limit = *asked_.max_percentile_ticks;
    const std::int64_t allowed = blocks_ - nearest_rank(share, blocks_);
    const bool passes = beyond_ <= allowed;
    double value = judged(means_.quantile(share));
    if (passes && largest_within_) value = std::min(value, *largest_within_);
    if (!passes && smallest_beyond_) value = std::max(value, *smallest_beyond_);
    JudgedFigure figure = at_most(percentile_name(*asked_.percentile), value, limit, "ticks");
    figure.verdict = pass_or_fail(passes);
    doubt(limit, figure);
    if (beyond_ > 0 && figure.note.empty())
        figure.note = std::to_string(beyond_) + " of " + std::to_string(blocks_) + " beyond";
    return figure;
}

std::string DeadlineJudge::remarks(Verdict verdict) const {
    std::string text;
    if (verdict != Verdict::pass) {
        text = "the slowest block is " + (slowest_samples_ == 1
                                              ? "sample " + std::to_string(slowest_first_)
                                              : "samples " + std::to_string(slowest_first_) + " to " +
                                                    std::to_string(slowest_first_ + slowest_samples_ - 1));
    }
    if (!sees_samples_ && longest_block_ > 1) {
        text += text.empty() ? "" : "; ";
        text += "the board times whole blocks, of up to " + std::to_string(longest_block_) +
                " samples: what is told of a sample is the mean of its block";
    }
    return text;
}

RuleVerdict DeadlineJudge::verdict() const {
    RuleVerdict verdict{rule_, Verdict::undecided, {}, {}, why_not_judged(), std::nullopt};
    if (!verdict.reason.empty()) return verdict;
    verdict.figures.push_back(largest_figure());
    if (asked_.max_period_ratio) verdict.figures.push_back(period_figure(*asked_.max_period_ratio));
    if (asked_.max_percentile_ticks) verdict.figures.push_back(percentile_figure());
    for (const double percentile : {50.0, 99.0}) {
        if (asked_.percentile != percentile) verdict.figures.push_back(told(percentile));
    }
    verdict.verdict = worst_of(verdict.figures);
    verdict.reason = remarks(verdict.verdict);
    return verdict;
}

void check(const DeadlineRule&, const Rule&, const Plan&, const Case&, std::vector<Refusal>&) {}

}  // namespace halflsb
