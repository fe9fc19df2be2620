#include "oracle/judge/noise_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/clip_watch.hpp"
#include "oracle/judge/tail.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/noise_power.hpp"

namespace halflsb {
namespace {

double decibels(double power_ratio) { return 10.0 * std::log10(power_ratio); }
double from_decibels(double db) { return std::pow(10.0, db / 10.0); }

class NoiseJudge final : public RuleJudge {
public:
    NoiseJudge(const NoiseRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          signal_(channel.plan.signal),
          clips_(signal_.output),
          design_gain_(white_noise_gain(channel.plan, channel.the_case, channel.channel)),
          is_over_design_(rule.relative_to_design || design_gain_.has_value()) {
        const CaseRates rates(channel.plan, channel.the_case);
        const std::int64_t tail = tail_samples(channel.plan, channel.the_case, channel.channel).value_or(0);
        begin_ = rates.returned(tail) + channel.lag_samples;
        // An interpolator's stimulus stands as R times the value and R - 1 zeros: R times the power that was sent.
        scale_ = rule.relative_to_design ? 1.0 : design_gain_.value_or(rates.ratio().up);
        const auto limits = static_cast<std::size_t>(rule.least_gain.has_value()) +
                            static_cast<std::size_t>(rule.largest_gain.has_value()) +
                            static_cast<std::size_t>(rule.excess.has_value());
        shares_ = shares_of_rule(channel.plan).alpha_over(limits);
    }

    void add(const AlignedBlock& block) override {
        clips_.add(block);
        const auto count = static_cast<std::int64_t>(block.values.size());
        const auto skipped = static_cast<std::size_t>(std::clamp<std::int64_t>(begin_ - block.first_index, 0, count));
        const auto values = block.values.subspan(skipped);
        const auto design = block.reference.design.subspan(skipped);
        gain_.add(is_over_design_ ? design : block.reference.stimulus.subspan(skipped), values);
        excess_.add(design, values);
    }

    RuleVerdict verdict(const RailWatch*) const override;

private:
    JudgedFigure gain_figure(const NoiseRatioFigures& found, const GainLimit& limit, bool at_least) const;
    JudgedFigure excess_figure(const ExcessNoiseFigures& found) const;
    std::string undecided_text(std::int64_t samples) const;

    const NoiseRule& rule_;
    const Rule& asked_;
    const Signal& signal_;
    ClipWatch clips_;
    std::optional<double> design_gain_;  ///< of white noise
    bool is_over_design_;                ///< the measured ratio is that to the design's power
    double scale_ = 1.0;                 ///< of a measured ratio
    std::int64_t begin_ = 0;             ///< index of the response, behind the settling
    ErrorShares shares_;
    NoiseRatioMeasure gain_;
    ExcessNoiseMeasure excess_;
};

JudgedFigure NoiseJudge::gain_figure(const NoiseRatioFigures& found, const GainLimit& limit, bool at_least) const {
    const std::string name = rule_.relative_to_design ? "noise gain over the design's" : "noise gain";
    const double degrees = found.degrees;
    JudgedFigure figure;
    if (!limit.is_db) {
        const double zone =
            limit.number * (at_least ? 1.0 - from_decibels(-rule_.delta_db) : from_decibels(rule_.delta_db) - 1.0);
        figure = decided(name, {found.ratio.value * scale_, found.ratio.standard_uncertainty * scale_}, degrees,
                         {.limit = limit.number, .at_least = at_least, .zone = zone}, "", shares_);
    } else if (found.ratio_db) {
        figure = decided(name, {found.ratio_db->value + decibels(scale_), found.ratio_db->standard_uncertainty},
                         degrees, {.limit = limit.number, .at_least = at_least, .zone = rule_.delta_db}, "dB", shares_);
    } else {
        figure = {name, std::nullopt, judged(limit.number), std::nullopt, "dB", at_least, Verdict::pass, {}};
        figure.verdict = pass_or_fail(!at_least);
        figure.note = "the response does not vary";
        return figure;
    }
    if (design_gain_ && !rule_.relative_to_design && *design_gain_ > 0.0) {
        figure.note =
            "design: " + brief(limit.is_db ? decibels(*design_gain_) : *design_gain_) + (limit.is_db ? " dB" : "");
    }
    return figure;
}

JudgedFigure NoiseJudge::excess_figure(const ExcessNoiseFigures& found) const {
    const Limit& limit = *rule_.excess;
    const double worth = worth_of(limit.in, signal_), rms = std::sqrt(found.power.value);
    // d sqrt(P) = dP / (2 sqrt(P)).
    const double u = rms > 0.0 ? found.power.standard_uncertainty / (2.0 * rms) : 0.0;
    const double zone = limit.number * (std::sqrt(from_decibels(rule_.delta_db)) - 1.0);
    return decided("added noise", {rms / worth, u / worth}, found.degrees, {.limit = limit.number, .zone = zone},
                   unit_name(limit.in, signal_), shares_);
}

std::string NoiseJudge::undecided_text(std::int64_t samples) const {
    return "too near a limit to tell from " + std::to_string(samples) +
           " samples: give the stimulus more, or a wider delta_db";
}

RuleVerdict NoiseJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "design", {}, {}, std::nullopt};
    const NoiseRatioAnswer gain = gain_.value();
    const ExcessNoiseAnswer excess = excess_.value();
    if (gain.figures && excess.figures) {
        if (rule_.least_gain) verdict.figures.push_back(gain_figure(*gain.figures, *rule_.least_gain, true));
        if (rule_.largest_gain) verdict.figures.push_back(gain_figure(*gain.figures, *rule_.largest_gain, false));
        if (rule_.excess) verdict.figures.push_back(excess_figure(*excess.figures));
        verdict.verdict = worst_of(verdict.figures);
    }
    if (clips_.count() > 0) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = clips_.reason();
    } else if (!gain.figures || !excess.figures) {
        const NoiseFault fault = gain.figures ? excess.fault : gain.fault;
        verdict.reason = "cannot be judged: " + std::string(fault == NoiseFault::silent_stimulus && is_over_design_
                                                                ? "the design's response does not vary"
                                                                : reason_of(fault));
    } else if (verdict.verdict == Verdict::undecided) {
        verdict.reason = undecided_text(gain.figures->samples);
    }
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const NoiseRule&, bool is_driven) { return {.design = is_driven}; }

std::unique_ptr<RuleJudge> make_judge(const NoiseRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    return std::make_unique<NoiseJudge>(rule, asked, channel);
}

}  // namespace halflsb
