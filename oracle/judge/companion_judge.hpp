// Judges a companion: its response against that of its base, sample by sample, on every channel.
//
// repeat, blocks and shift compare bit for bit, or within max_lsb; linearity within a limit. A response that clips is
// not linear, and what a clipped state becomes nobody knows here: linearity looks at no sample from the first on at
// which a response stands at an end of the output's word, or at which the declared arithmetic may reach a rail, for
// either stimulus (rail_watch.hpp). Constant memory; the base's response is read in the same pieces as this one comes
// in.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/judge/base_response.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/sent_block.hpp"
#include "oracle/judge/time_trace.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/sums.hpp"

namespace halflsb {

class CompanionJudge {
public:
    /// Of a case that is a companion; its only rule is the one that asked for it. Plan, case and what `base` reads
    /// outlive the judge.
    CompanionJudge(const Plan& plan, const Case& the_case, BaseResponse base, bool wants_plots = false);
    /// The next instants of the response, from 0 on, a code a channel; `sent` made the codes that belong to them, from
    /// `first_sent` on. Fails when the base cannot be read.
    Outcome<void> add(const SentBlock& sent, std::int64_t first_sent, std::span<const Code> response);
    /// After the last sample, channel by channel.
    std::vector<RuleVerdict> verdicts() const;
    void plot(CasePlots& plots) const;

private:
    /// Where the declared arithmetic may reach a rail.
    struct Rails {
        RailWatch own, of_base;
        std::vector<double> values;
        std::vector<std::uint8_t> exempt;
    };
    struct Channel {
        explicit Channel(const SampleFormat& output) : watch(output) {}
        FirstBadWatch watch;
        std::optional<Rails> rails;
        std::optional<TimeTrace> trace;
        std::optional<double> limit;  ///< as a value; none: bit for bit
        std::optional<double> bias_limit;
        std::vector<double> expected;
        std::vector<bool> at_rail;
        std::int64_t compared = 0, differing = 0;
        std::int64_t first_differing = -1, last_differing = -1, first_bad = -1;
        std::int64_t clipped_from = -1;
        std::string clipped_at;  ///< where, for people
        bool is_finite = true;
        bool same_place = true;  ///< all that differ stand at one place of their blocks
        double largest = 0.0;
        CompensatedSum sum;
    };
    Outcome<void> read_base(std::int64_t count);
    void watch_rails(Channel& channel, int number, const SentBlock& sent, std::int64_t first_sent);
    void trace(Channel& channel, std::span<const Code> sent, std::span<const Code> response);
    void compare(Channel& channel, std::span<const Code> response);
    std::string why_not_comparable() const;
    void settle_limits(int number, Channel& channel) const;
    RuleVerdict verdict_of_channel(const Channel& channel) const;
    void add_figures(const Channel& channel, RuleVerdict& verdict) const;
    std::string differences_text(const Channel& channel) const;
    bool is_linearity() const { return std::holds_alternative<LinearityRule>(rule_.kind); }

    const Plan& plan_;
    const Case& case_;
    const Rule& rule_;
    BaseResponse base_;
    const Companion& companion_;
    const Case* base_case_;  ///< nullptr where the plan does not have it
    CaseRates rates_;
    std::size_t width_;  ///< channels
    std::int64_t first_judged_;
    std::string not_comparable_;
    std::int64_t samples_ = 0;  ///< instants that came
    std::vector<Channel> channels_;
    std::vector<Code> base_codes_, one_, sent_codes_;
    std::vector<double> sent_values_, values_;
};

/// What may be said on paper of the case that a rule has sent once more.
void check(const RepeatRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);
void check(const BlocksRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);
void check(const ShiftRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);
void check(const LinearityRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
