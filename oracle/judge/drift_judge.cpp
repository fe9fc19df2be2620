#include "oracle/judge/drift_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/drift.hpp"
#include "oracle/measure/quantile.hpp"

namespace halflsb {
namespace {

class DriftJudge final : public RuleJudge {
public:
    DriftJudge(const DriftRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          signal_(channel.plan.signal),
          measure_(returned_rate_hz(channel.plan, channel.the_case)),
          rate_hz_(returned_rate_hz(channel.plan, channel.the_case)) {
        // Either sign of each.
        const std::size_t sides = (rule.slope ? 2 : 0) + (rule.change ? 2 : 0);
        shares_ = shares_of_rule(channel.plan).alpha_over(sides);
    }

    void add(const AlignedBlock& block) override {
        if (!has_started_ && !block.values.empty()) measure_.start_at(block.first_index);
        has_started_ = has_started_ || !block.values.empty();
        measure_.add(block.reference.declared, block.values);
    }

    RuleVerdict verdict(const RailWatch*) const override;

private:
    JudgedFigure figure(std::string name, Figure found, const DriftFigures& of, const Limit& limit, double bound,
                        const std::string& per) const;
    double samples_to_tell(const JudgedFigure& slope, const DriftFigures& found) const;
    /// What rounding may feign, as values of the output.
    double feigned_change() const { return feigned_change_steps * finest_step(signal_.output); }
    double feigned_slope(double samples) const { return feigned_change() * 3600.0 * rate_hz_ / samples; }

    const DriftRule& rule_;
    const Rule& asked_;
    const Signal& signal_;
    DriftMeasure measure_;
    double rate_hz_;
    ErrorShares shares_;
    bool has_started_ = false;
};

/// `bound` is what rounding may feign; values of the output.
JudgedFigure DriftJudge::figure(std::string name, Figure found, const DriftFigures& of, const Limit& limit,
                                double bound, const std::string& per) const {
    const double worth = worth_of(limit.in, signal_);
    JudgedFigure figure =
        decided(std::move(name), {std::fabs(found.value) / worth, found.standard_uncertainty / worth, bound / worth},
                of.degrees, {.limit = limit.number}, unit_name(limit.in, signal_) + per, shares_);
    figure.note = (found.value < 0.0 ? "falling; " : "") + ("rounding may feign " + brief(bound / worth));
    return figure;
}

/// Of a slope: what rounding may feign of it shrinks with the length, what noise may with its power 3/2. 0: a change,
/// or one that lies on its limit.
double DriftJudge::samples_to_tell(const JudgedFigure& slope, const DriftFigures& found) const {
    if (!rule_.slope || slope.verdict != Verdict::undecided || !slope.margin || !slope.uncertainty) return 0.0;
    if (*slope.margin == 0.0) return 0.0;
    const auto samples = static_cast<double>(found.samples);
    const double share = *slope.margin > 0.0 ? shares_.beta : shares_.alpha;
    const double reach = *slope.uncertainty * student_quantile_above(share, found.degrees);
    const double feigned = feigned_slope(samples) / worth_of(rule_.slope->in, signal_);
    return samples * std::max(1.0, (reach + feigned) / std::fabs(*slope.margin));
}

RuleVerdict DriftJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "declared", {}, {}, std::nullopt};
    const DriftAnswer answer = measure_.value();
    if (!answer.figures) {
        verdict.reason = "cannot be judged: " + std::string(reason_of(answer.fault));
        return verdict;
    }
    const DriftFigures& found = *answer.figures;
    if (rule_.slope) {
        verdict.figures.push_back(figure("slope", *found.slope_per_hour, found, *rule_.slope,
                                         feigned_slope(static_cast<double>(found.samples)), " per hour"));
    }
    if (rule_.change) {
        verdict.figures.push_back(
            figure("change over the run", found.change_over_run, found, *rule_.change, feigned_change(), ""));
    }
    verdict.verdict = worst_of(verdict.figures);
    if (verdict.verdict == Verdict::undecided) {
        verdict.reason = "too near a limit to tell from " + std::to_string(found.samples) + " samples";
        const double needed = samples_to_tell(verdict.figures.front(), found);
        if (needed > 0.0) verdict.reason += "; about " + brief(needed) + " would tell";
    }
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const DriftRule&, bool) { return {}; }

std::unique_ptr<RuleJudge> make_judge(const DriftRule& rule, const Rule& asked, const JudgedChannel& channel) {
    return std::make_unique<DriftJudge>(rule, asked, channel);
}

}  // namespace halflsb
