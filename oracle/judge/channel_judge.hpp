// Judges one channel of a case by its error, exact, response and latency rules, in constant memory.
//
// A channel that is not driven got zeros: it is held against the filter of zeros, so that what leaks into it
// from a driven one is an error; it says nothing of latency or response.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "oracle/judge/aligned_pass.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/lag.hpp"

namespace halflsb {

class ChannelJudge {
public:
    /// The plan and the case must outlive the judge; channels count from 1. The filter must be known.
    ChannelJudge(const Plan& plan, const Case& the_case, int channel, bool wants_plots = false);

    int channel() const { return judged_.channel; }
    /// The channel's next codes, in whole rate cycles (case_rates.hpp), from index 0 on.
    void add(std::span<const Code> sent, std::span<const Code> response);
    /// Nothing that may follow changes a verdict, and the latency has been told where a rule asks.
    bool is_decided() const;
    /// After the last sample. True when the response fits better at another lag than the expected one: all
    /// samples must then come once more, to add_again().
    bool begin_second_pass();
    bool is_in_second_pass() const { return second_.has_value(); }
    void add_again(std::span<const Code> sent, std::span<const Code> response);
    /// After the last of them; nothing to do without a second pass.
    void end_second_pass();

    /// The reference could tell this channel's latency.
    bool latency_told() const;
    /// On a rule of the case, after all samples; none where the rule says nothing of this channel.
    std::optional<RuleVerdict> verdict(const Rule& rule) const;
    /// Appends the plots of the channel, at the lag that its rules were judged at; none where they are not wanted.
    void plot(CasePlots& plots) const;

private:
    struct SecondPass {
        AlignedPass pass;
        ReferenceSource reference;
    };
    /// What the lag came to.
    enum class Latency { not_told, not_finite, as_expected, other, fits_nowhere };
    Latency latency_found() const;
    std::optional<RuleVerdict> latency_verdict(const Rule& rule) const;
    /// What the latency is beside whole samples, where that was measured, at the lag that the rules are judged at.
    void add_fraction(const Rule& rule, RuleVerdict& verdict) const;

    JudgedChannel judged_;
    const Rule* latency_rule_;
    int expected_lag_;
    WantedReferences wanted_;
    ReferenceSource reference_;
    AlignedPass pass_;
    int window_;
    LagMeasure lag_;
    LagDiscrimination discrimination_;
    double evidence_needed_;
    bool has_evidence_ = false;
    /// A response that is one code throughout lies as well at one lag as at any other; a stimulus below half an LSB at
    /// the output leaves right firmware such a one.
    std::optional<Code> first_code_;
    bool response_moves_ = false;
    std::size_t unlooked_samples_ = 0;
    std::vector<double> response_values_;
    std::optional<LagFigures> lags_;  ///< after begin_second_pass()
    std::optional<SecondPass> second_;
};

}  // namespace halflsb
