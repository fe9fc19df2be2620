#include "oracle/judge/latency_fraction.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/certainty.hpp"
#include "oracle/judge/latency_check.hpp"
#include "oracle/judge/response_band.hpp"
#include "oracle/measure/fractional_delay.hpp"

namespace halflsb {
namespace {

class LatencyFraction final : public RuleJudge {
public:
    LatencyFraction(const LatencyRule& rule, const Rule& asked, const JudgedChannel& channel)
        : limit_(rule.max_fraction_samples),
          asked_(asked),
          rate_hz_(returned_rate_hz(channel.plan, channel.the_case)),
          // Either end of the limit may be left.
          shares_(shares_of_rule(channel.plan).alpha_over(2)),
          measure_(make_welch_response(delay_segment_for(judged_samples(channel.plan, channel.the_case)))) {}

    void add(const AlignedBlock& block) override {
        error_.resize(block.values.size());
        std::transform(block.values.begin(), block.values.end(), block.reference.declared.begin(), error_.begin(),
                       [](double measured, double reference) { return measured - reference; });
        measure_->add(block.reference.declared, error_);
    }
    /// What is only told holds up no case.
    bool is_decided() const override { return !limit_; }
    void finish() override { measure_->finish(); }

    RuleVerdict verdict(const RailWatch*) const override {
        RuleVerdict verdict{asked_, Verdict::pass, "declared", {}, {}, std::nullopt};
        const auto delay = fractional_delay(measure_->sums());
        const bool is_known = delay && delay->degrees > 0.0 && std::isfinite(delay->standard_uncertainty);
        if (!is_known) {
            if (!limit_) return verdict;
            verdict.verdict = Verdict::undecided;
            verdict.reason = delay ? "nothing says how sure the fraction of the latency is: use noise"
                                   : "too few frequencies stand clear of what the board adds to tell a fraction of "
                                     "the latency; use louder noise, or a longer one";
            return verdict;
        }
        JudgedFigure figure;
        if (limit_) {
            figure = decided("fraction", {std::fabs(delay->samples), delay->standard_uncertainty, 0.0}, delay->degrees,
                             {*limit_, false, 0.0}, "samples", shares_);
            verdict.verdict = figure.verdict;
            if (verdict.verdict == Verdict::undecided)
                verdict.reason = "the fraction of the latency is too near its limit to tell; lengthen the noise";
        } else {
            figure.name = "fraction";
            figure.unit = "samples";
            figure.value = judged(delay->samples);
            figure.uncertainty = judged(delay->standard_uncertainty);
        }
        figure.note = std::string(delay->samples < 0.0 ? "early" : "late") + ", by the phase from " +
                      hz_text(delay->from_cycles_per_sample * rate_hz_) + " to " +
                      hz_text(delay->to_cycles_per_sample * rate_hz_);
        verdict.figures.push_back(std::move(figure));
        return verdict;
    }

private:
    std::optional<double> limit_;
    const Rule& asked_;
    double rate_hz_;
    ErrorShares shares_;
    std::unique_ptr<ResponseMeasure> measure_;
    std::vector<double> error_;
};

}  // namespace

std::unique_ptr<RuleJudge> make_judge(const LatencyRule& rule, const Rule& asked, const JudgedChannel& channel) {
    const bool asks = !rule.implicit && channel.is_driven();
    if (!asks || !tells_fraction(channel.plan, channel.the_case)) return nullptr;
    return std::make_unique<LatencyFraction>(rule, asked, channel);
}

}  // namespace halflsb
