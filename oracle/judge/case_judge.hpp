// Judges one case as its response arrives: blocks in, verdicts out, constant memory.
#pragma once

#include <cstdint>
#include <functional>
#include <span>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/channel_judge.hpp"
#include "oracle/judge/deadline_judge.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/plots.hpp"
#include "oracle/judge/sent_block.hpp"
#include "oracle/judge/time_trace.hpp"
#include "oracle/judge/unchanged_judge.hpp"
#include "oracle/judge/verdict.hpp"

namespace halflsb {

/// Reads response codes again, from instant `first_index` on, all channels; the capture has them all.
using ResponseReplay = std::function<Outcome<void>(std::int64_t first_index, std::span<Code> codes)>;

struct CaseJudgement {
    /// In the order of the case, and for each rule in that of the channels; `unchanged` and `deadline` are judged over
    /// all channels at once. Left out: a response or latency rule on a channel that is not driven, an implicit latency
    /// rule where a channel could not tell.
    std::vector<RuleVerdict> rules;
    bool latency_told = false;  ///< by some channel
    CasePlots plots;            ///< channel by channel; none where the judge was not to make any
};

class CaseJudge {
public:
    /// The plan and the case must outlive the judge. Plots change no verdict.
    CaseJudge(const Plan& plan, const Case& the_case, bool wants_plots = false);
    /// The next response samples, in order from instant 0: whole instants, a code a channel, adjacent. Where the rate
    /// changes, those of a rate cycle that is not whole yet wait for the rest of it.
    void add(std::span<const Code> response);
    /// What the board says of the time that the next blocks took; only where some rule asks (wants_ticks).
    void add_ticks(const TickCounter& counter, std::span<const BlockTicks> blocks);
    /// No verdict changes with what may follow: nothing more need be sent.
    bool is_decided() const;
    /// After the last sample; only once. `replay` is asked only when some channel's response fits better at
    /// another lag than the expected one: the case is then gone through a second time. Fails when replay does.
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
    std::vector<ChannelJudge> channels_;  ///< none when the filter is unknown: there is no reference
    std::vector<UnchangedJudge> unchanged_;
    std::vector<DeadlineJudge> deadlines_;
    std::vector<TimeTrace> traces_;                ///< of each channel when the filter is unknown and plots are wanted
    std::int64_t sent_samples_ = 0, samples_ = 0;  ///< instants; of the response those that were looked at
    std::vector<Code> waiting_;                    ///< of the response, the rest
    std::vector<Code> one_;
};

}  // namespace halflsb
