// Judges one case as its response arrives: blocks in, verdicts out, constant memory.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "oracle/judge/base_response.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/channel_judge.hpp"
#include "oracle/judge/companion_judge.hpp"
#include "oracle/judge/deadline_judge.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/plots.hpp"
#include "oracle/judge/sent_block.hpp"
#include "oracle/judge/time_trace.hpp"
#include "oracle/judge/unchanged_judge.hpp"
#include "oracle/judge/verdict.hpp"

namespace halflsb {

struct CaseJudgement {
    /// In the order of the case, and for each rule in that of the channels; `unchanged` and `deadline` are judged over
    /// all channels at once, and so is a companion. Left out: a response or latency rule on a channel that is not
    /// driven, an implicit latency rule where a channel could not tell.
    std::vector<RuleVerdict> rules;
    bool latency_told = false;  ///< by some channel
    CasePlots plots;            ///< channel by channel; none where the judge was not to make any
};

class CaseJudge {
public:
    /// The plan and the case must outlive the judge. Plots change no verdict. `base` is read where the case is a
    /// companion.
    CaseJudge(const Plan& plan, const Case& the_case, bool wants_plots = false, BaseResponse base = {});
    /// The next response samples, in order from instant 0: whole instants, a code a channel, adjacent. Where the rate
    /// changes, those of a rate cycle that is not whole yet wait for the rest of it.
    void add(std::span<const Code> response);
    /// What the board says of the time that the next blocks took; only where some rule asks (wants_ticks).
    void add_ticks(const TickCounter& counter, std::span<const BlockTicks> blocks);
    /// No verdict changes with what may follow: nothing more need be sent.
    bool is_decided() const;
    /// After the last sample; only once. `replay` is asked only when some channel's response fits better at
    /// another lag than the expected one: the case is then gone through a second time. Fails when replay does, or when
    /// the base could not be read.
    Outcome<CaseJudgement> finish(const ResponseReplay& replay);

private:
    void add_cycles(std::span<const Code> response);
    void trace_unknown(std::span<const Code> response);
    Outcome<void> go_through_again(const ResponseReplay& replay);

    const Plan& plan_;
    const Case& case_;
    CaseRates rates_;
    std::int64_t block_returned_;  ///< most instants of the response that are looked at together, whole cycles
    SentBlock sent_;
    /// None when the filter is unknown, so that there is no reference, and of a companion, which has another.
    std::vector<ChannelJudge> channels_;
    std::optional<CompanionJudge> companion_;
    std::optional<Error> base_unread_;
    std::vector<UnchangedJudge> unchanged_;
    std::vector<DeadlineJudge> deadlines_;
    std::vector<TimeTrace> traces_;                ///< of each channel where no judge has one and plots are wanted
    std::int64_t sent_samples_ = 0, samples_ = 0;  ///< instants; of the response those that were looked at
    std::vector<Code> waiting_;                    ///< of the response, the rest
    std::vector<Code> one_;
};

}  // namespace halflsb
