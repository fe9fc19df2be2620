// Judges the rule `deadline`: what the filter takes a sample, by the board's own counter. It looks at no code, and at
// all channels at once: a block is answered for all of them.
//
// The limits of a percentile are decided by counting the blocks beyond it; what is told as its value comes from a
// histogram (log_histogram.hpp), on the side of the limit that the count says. Constant memory.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "oracle/judge/block_ticks.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/log_histogram.hpp"

namespace halflsb {

/// Some rule of the case asks for them: a run keeps them then.
bool wants_ticks(const Case& the_case);

class DeadlineJudge {
public:
    /// Plan, case and rule must outlive the judge; the rule's kind is DeadlineRule.
    DeadlineJudge(const Plan& plan, const Case& the_case, const Rule& rule);
    /// The next blocks of the case, in order.
    void add(const TickCounter& counter, std::span<const BlockTicks> blocks);
    RuleVerdict verdict() const;

private:
    void add(const BlockTicks& block);
    std::string why_not_judged() const;
    JudgedFigure largest_figure() const;
    JudgedFigure period_figure(double max_period_ratio) const;
    JudgedFigure percentile_figure() const;
    JudgedFigure told(double percentile) const;
    void doubt(double limit_ticks, JudgedFigure& figure) const;
    std::string remarks(Verdict verdict) const;

    const Case& case_;
    const Rule& rule_;
    const DeadlineRule& asked_;
    double rate_hz_;
    TickCounter counter_;

    std::int64_t blocks_ = 0, samples_ = 0;
    std::int64_t longest_block_ = 0;  ///< samples
    std::int64_t contradictory_ = 0;  ///< blocks whose mean is above the largest of their samples
    bool sees_samples_ = false;       ///< some block has a sample above its mean, so samples are timed one by one
    bool counts_ = false;             ///< some block took a tick
    std::uint32_t largest_ = 0;
    std::int64_t slowest_first_ = 0, slowest_samples_ = 0;  ///< the first block with the largest
    LogHistogram means_;                                    ///< ticks per sample, a block each
    std::int64_t beyond_ = 0;                               ///< blocks whose mean is above max_percentile_ticks
    std::optional<double> smallest_beyond_, largest_within_;
};

/// Any case can answer.
void check(const DeadlineRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
