#include "oracle/judge/transition_judge.hpp"

#include <algorithm>
#include <cmath>
#include <string>
#include <utility>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/clip_watch.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/quantile.hpp"

namespace halflsb {

TransitionQuestion transition_question(const TransitionRule& rule, const Signal& signal, const StepWindow& step) {
    TransitionQuestion question;
    question.step_index = step.step - step.window.begin;
    question.levels = step.levels;
    question.low_percent = rule.low_percent;
    question.high_percent = rule.high_percent;
    question.band_percent = rule.band_percent;
    question.lsb = signal.output.has_lsb() ? lsb_value(signal.output) : 0.0;
    return question;
}

std::vector<LimitedFigure> limited_figures(const TransitionRule& rule) {
    using Figures = TransitionFigures;
    std::vector<LimitedFigure> found;
    const auto add = [&](const char* name, const char* unit, TransitionFigure Figures::*figure,
                         const std::optional<double>& limit) {
        if (limit) found.push_back({name, unit, figure, *limit});
    };
    add("rise", "samples", &Figures::duration_samples, rule.max_rise_samples);
    add("fall", "samples", &Figures::duration_samples, rule.max_fall_samples);
    add("overshoot", "%", &Figures::overshoot_percent, rule.max_overshoot_percent);
    add("undershoot", "%", &Figures::undershoot_percent, rule.max_undershoot_percent);
    add("preshoot", "%", &Figures::preshoot_percent, rule.max_preshoot_percent);
    add("settling", "samples", &Figures::settling_samples, rule.max_settling_samples);
    return found;
}

namespace {

std::size_t count_of(const TransitionRule& rule) { return limited_figures(rule).size() + (rule.final_value ? 1 : 0); }

/// The step as it stands in the response at that lag.
StepWindow shifted(StepWindow step, int lag_samples, std::int64_t returned) {
    step.step += lag_samples;
    step.window.begin += std::max(lag_samples, 0);  // an early response is judged from the same sample on
    step.window.end = std::min(step.window.end + lag_samples, returned - std::max(-lag_samples, 0));
    return step;
}

class TransitionJudge final : public RuleJudge {
public:
    TransitionJudge(const TransitionRule& rule, const Rule& asked, const JudgedChannel& channel, const StepWindow& step)
        : rule_(rule),
          asked_(asked),
          signal_(channel.plan.signal),
          step_(shifted(step, channel.lag_samples, returned_samples(channel.plan, channel.the_case))),
          shares_(shares_of_rule(channel.plan).alpha_over(count_of(rule))),
          clips_(channel.plan.signal.output) {}

    void add(const AlignedBlock& block) override {
        const AlignedBlock judged = within(block, step_.window);
        if (judged.values.empty()) return;
        clips_.add(judged);
        record_.insert(record_.end(), judged.values.begin(), judged.values.end());
    }

    void finish() override {
        question_ = transition_question(rule_, signal_, step_);
        // Of a response that was cut short (predict looks at the first samples) the end is not the end.
        const bool is_whole = static_cast<std::int64_t>(record_.size()) == step_.window.samples();
        answer_ = is_whole ? measure_transition(question_, record_)
                           : TransitionAnswer{std::nullopt, TransitionFault::too_short};
        if (answer_.figures) last_outside_ = last_outside();
        samples_ = record_.size();
        record_ = {};
    }

    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    std::optional<double> last_outside() const;
    JudgedFigure told(const LimitedFigure& limited) const;
    JudgedFigure final_value() const;
    /// Of the noise, which the samples before the step tell.
    double degrees() const { return static_cast<double>(question_.step_index) - 1.0; }

    const TransitionRule& rule_;
    const Rule& asked_;
    const Signal& signal_;
    StepWindow step_;
    ErrorShares shares_;
    ClipWatch clips_;
    std::vector<double> record_;
    std::size_t samples_ = 0;
    TransitionQuestion question_;
    TransitionAnswer answer_;
    std::optional<double> last_outside_;  ///< samples after the step's; surely outside the band
};

/// Neither the code nor the noise of any sample, of all of them, puts it there.
std::optional<double> TransitionJudge::last_outside() const {
    const double amplitude = std::fabs(step_.levels.second - step_.levels.first);
    const double noise = answer_.figures->noise;
    const double alpha = shares_.alpha_over(record_.size()).alpha;
    const double reach = 0.01 * rule_.band_percent * amplitude + question_.lsb +
                         (noise > 0.0 ? noise * student_quantile_above(alpha, degrees()) : 0.0);
    for (std::size_t n = record_.size(); n-- > 0;) {
        if (std::fabs(record_[n] - step_.levels.second) > reach)
            return static_cast<double>(n) - static_cast<double>(question_.step_index);
    }
    return std::nullopt;
}

JudgedFigure TransitionJudge::told(const LimitedFigure& limited) const {
    const TransitionFigure& found = (*answer_.figures).*(limited.figure);
    const FigureLimit limit{limited.limit, false};
    if (found.figure) {
        // The farthest of so many samples: each gets its part of the chance.
        const bool is_farthest = std::string_view(limited.unit) == "%";
        return decided(limited.name, *found.figure, degrees(), limit, limited.unit,
                       is_farthest ? shares_.alpha_over(samples_) : shares_);
    }
    const TransitionFigure& mid = answer_.figures->mid_instant;
    if (limited.figure == &TransitionFigures::settling_samples && mid.figure && last_outside_) {
        // It has not settled then, whenever it does.
        Figure least = *mid.figure;
        least.value = *last_outside_ - mid.figure->value;
        JudgedFigure late = decided(limited.name, least, degrees(), limit, limited.unit, shares_);
        if (late.verdict == Verdict::fail) {
            late.note = "or more: outside the band in the final stretch";
            return late;
        }
    }
    JudgedFigure none{limited.name, std::nullopt, judged(limited.limit), std::nullopt,
                      limited.unit, false,        Verdict::undecided,    std::string(reason_of(found.fault))};
    return none;
}

JudgedFigure TransitionJudge::final_value() const {
    const double worth = worth_of(rule_.final_value->in, signal_);
    const std::string unit = unit_name(rule_.final_value->in, signal_);
    const TransitionFigure& found = answer_.figures->final_value;
    if (!found.figure) {
        return {"final error", std::nullopt,       judged(rule_.final_value->number),  std::nullopt, unit,
                false,         Verdict::undecided, std::string(reason_of(found.fault))};
    }
    const double off = (found.figure->value - step_.levels.second) / worth;
    JudgedFigure figure =
        decided("final error", {std::fabs(off), found.figure->standard_uncertainty / std::fabs(worth), 0.0},
                answer_.figures->final_value_degrees, {rule_.final_value->number, false}, unit, shares_);
    if (off < 0.0 && figure.note.empty()) figure.note = "below the design's";
    return figure;
}

RuleVerdict TransitionJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "design", {}, {}, std::nullopt};
    if (!answer_.figures) {
        verdict.reason = "the transition cannot be judged: " + std::string(reason_of(answer_.fault));
    } else {
        for (const LimitedFigure& limited : limited_figures(rule_)) verdict.figures.push_back(told(limited));
        if (rule_.final_value) verdict.figures.push_back(final_value());
        verdict.verdict = worst_of(verdict.figures);
    }
    if (clips_.count() > 0) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = clips_.reason();
    } else if (answer_.figures && verdict.verdict == Verdict::undecided) {
        const auto is_open = [](const JudgedFigure& figure) { return figure.verdict == Verdict::undecided; };
        const auto open = std::find_if(verdict.figures.begin(), verdict.figures.end(), is_open);
        verdict.reason = open->value
                             ? "the " + open->name +
                                   " is too near its limit to tell with these codes and this noise; give the step "
                                   "a higher level, or the limit more room"
                             : "the " + open->name + " cannot be judged: " + open->note +
                                   "; a rule of kind \"error\" shows what came back";
    }
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const TransitionRule&, bool is_driven) { return {.design = is_driven}; }

std::unique_ptr<RuleJudge> make_judge(const TransitionRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    // check() has refused what has no step.
    const auto change = first_level_change(channel.plan, channel.the_case);
    const auto step = change ? step_window(channel.plan, channel.the_case, channel.channel, *change) : std::nullopt;
    return std::make_unique<TransitionJudge>(rule, asked, channel, step.value_or(StepWindow{}));
}

}  // namespace halflsb
