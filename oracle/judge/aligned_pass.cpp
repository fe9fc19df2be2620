#include "oracle/judge/aligned_pass.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/response_verdict.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// Figures are held against their limits after rounding, so that limit, margin and verdict agree.
JudgedFigure at_most(std::string name, double value, double limit, std::string unit) {
    JudgedFigure figure{std::move(name), judged(value), judged(limit), std::nullopt, std::move(unit), false, false, {}};
    figure.passed = *figure.value <= *figure.limit;
    figure.margin = judged(*figure.limit - *figure.value);
    return figure;
}

/// Errors against what each sign may come to: told is the one with the least room, and its end as the limit.
JudgedFigure within(std::string name, const ErrorEnds& found, const ErrorEnds& limits, std::string unit) {
    // + 0.0: no figure is -0.
    const double lowest = judged(found.lowest) + 0.0, highest = judged(found.highest) + 0.0;
    const double lower = judged(limits.lowest) + 0.0, upper = judged(limits.highest) + 0.0;
    const bool is_low = lowest - lower < upper - highest;
    JudgedFigure figure{std::move(name),
                        is_low ? lowest : highest,
                        is_low ? lower : upper,
                        std::nullopt,
                        std::move(unit),
                        is_low,
                        false,
                        {}};
    figure.passed = lowest >= lower && highest <= upper;
    figure.margin = judged(is_low ? lowest - lower : upper - highest);
    figure.note = "derived, " + brief(lower) + " .. " + brief(upper);
    return figure;
}

bool is_wider_once_clipped(const DerivedLimits& derived) {
    return derived.worst_rms != derived.rms || derived.worst_bias.lowest != derived.bias.lowest ||
           derived.worst_bias.highest != derived.bias.highest;
}

/// Where derived limits say nothing, and which word stands in their way.
std::string exempt_text(std::int64_t exempt, const RailWatch* rails) {
    const auto from = rails == nullptr ? std::nullopt : rails->first_unsafe_index();
    if (!from) return "derived limits say nothing of " + std::to_string(exempt) + " samples";
    return "from sample " + std::to_string(*from) + " on " + rails->unsafe_node() +
           " may leave its word: derived limits say nothing of " + std::to_string(exempt) +
           (exempt == 1 ? " sample" : " samples") + ", only exact does";
}

}  // namespace

AlignedPass::AlignedPass(const Plan& plan, const Case& the_case, int channel, int lag_samples,
                         const DerivedLimits& derived)
    : plan_(plan),
      case_(the_case),
      channel_(channel),
      is_driven_(is_driven(the_case, channel)),
      lag_(lag_samples),
      first_judged_(first_judged_sample(plan, the_case)),
      derived_(derived),
      to_skip_(lag_samples < 0 ? static_cast<std::size_t>(-lag_samples) : 0) {
    if (first_judged_ > 0 && lag_samples > 0) first_judged_ += lag_samples;
    for (const Rule& rule : the_case.rules) {
        if (const auto* error = std::get_if<ErrorRule>(&rule.kind); error != nullptr && says_something(*error)) {
            std::optional<ErrorEnds> limit;
            if (error->largest && error->largest->is_derived) {
                limit = derived_.error;
            } else if (error->largest) {
                const double largest = value_of(*error->largest, plan.signal);
                limit = ErrorEnds{-largest, largest};
            }
            error_rules_.push_back({&rule, ErrorMeasure(limit), FirstBadWatch(plan.signal.output), is_derived(*error)});
            error_rules_.back().measure.start_at(first_judged_);
        }
    }
    const WantedReferences wanted = wanted_references(the_case, channel);
    if (wanted.design) response_measure_ = make_response_measure(plan, the_case);
    if (wanted.twin) exact_.emplace(plan.signal.output);
    if (lag_samples > 0) waiting_.append_silence(static_cast<std::size_t>(lag_samples), plan.signal, wanted);
}

bool AlignedPass::says_something(const ErrorRule& rule) const {
    // A channel that got zeros has a silent reference, so its SNR is no figure.
    return is_driven_ || rule.largest || rule.rms || rule.bias;
}

void AlignedPass::add(const ReferenceBlock& reference, std::span<const Code> response) {
    if (lag_ == 0) {
        measure_judged(reference, response);
        return;
    }
    const auto skip = std::min(to_skip_, reference.codes.size());
    to_skip_ -= skip;
    waiting_.append(reference.after(skip));
    response_.insert(response_.end(), response.begin(), response.end());
    const std::size_t ready = std::min(waiting_.size(), response_.size());
    measure_judged(waiting_.first(ready), std::span(response_).first(ready));
    waiting_.drop(ready);
    response_.erase(response_.begin(), response_.begin() + static_cast<std::ptrdiff_t>(ready));
}

void AlignedPass::measure_judged(const ReferenceBlock& reference, std::span<const Code> response) {
    const auto count = static_cast<std::int64_t>(response.size());
    const auto unjudged = static_cast<std::size_t>(std::clamp<std::int64_t>(first_judged_ - next_index_, 0, count));
    next_index_ += static_cast<std::int64_t>(unjudged);
    measure(reference.after(unjudged), response.subspan(unjudged));
}

void AlignedPass::measure(const ReferenceBlock& reference, std::span<const Code> response) {
    response_values_.resize(response.size());
    values_of(plan_.signal.output, response, response_values_);
    for (ErrorRuleState& state : error_rules_) state.add(next_index_, reference, response, response_values_);
    if (exact_) exact_->add(next_index_, reference.codes, reference.twin, response);
    if (response_measure_) {
        design_error_.resize(response.size());
        std::transform(response_values_.begin(), response_values_.end(), reference.design.begin(),
                       design_error_.begin(), [](double measured, double ideal) { return measured - ideal; });
        response_measure_->add(reference.stimulus, design_error_);
    }
    next_index_ += static_cast<std::int64_t>(response.size());
}

void AlignedPass::ErrorRuleState::add(std::int64_t first_index, const ReferenceBlock& reference,
                                      std::span<const Code> response, std::span<const double> response_values) {
    const std::size_t count = response.size();
    std::size_t done = is_derived ? 0 : count;
    if (!is_derived) measure.add(reference.declared, response_values);
    while (done < count) {  // stretches of samples that count, and of those that do not
        const bool counts = reference.exempt.empty() || reference.exempt[done] == 0;
        std::size_t end = done + 1;
        while (end < count && (reference.exempt.empty() || reference.exempt[end] == 0) == counts) ++end;
        if (counts) {
            measure.start_at(first_index + static_cast<std::int64_t>(done));
            measure.add(reference.declared.subspan(done, end - done), response_values.subspan(done, end - done));
        } else {
            exempt += static_cast<std::int64_t>(end - done);
        }
        done = end;
    }
    watch.add(first_index, reference.codes, reference.declared, response, measure.value().first_beyond);
}

RuleVerdict AlignedPass::error_verdict(const ErrorRuleState& state, const RailWatch* rails) const {
    const auto& rule = std::get<ErrorRule>(state.rule->kind);
    const ErrorFigures figures = state.measure.value();
    RuleVerdict verdict{*state.rule, Verdict::undecided, "declared", {}, {}, state.watch.found()};
    const auto clip = rails == nullptr ? std::nullopt : rails->first_clip_index();
    const auto told = [&](const std::optional<Limit>& limit, std::string name, double value, double derived) {
        const Limit::In in = limit ? limit->in : natural_unit(plan_.signal);
        const double worth = worth_of(in, plan_.signal);
        if (limit) {
            verdict.figures.push_back(at_most(std::move(name), value / worth,
                                              limit->is_derived ? derived / worth : limit->number,
                                              unit_name(in, plan_.signal)));
            if (limit->is_derived) verdict.figures.back().note = "derived";
        } else {
            verdict.figures.push_back({std::move(name),
                                       judged(value / worth),
                                       std::nullopt,
                                       std::nullopt,
                                       unit_name(in, plan_.signal),
                                       false,
                                       true,
                                       {}});
        }
    };
    const auto told_within = [&](const Limit& limit, std::string name, ErrorEnds found, const ErrorEnds& derived) {
        const double worth = worth_of(limit.in, plan_.signal);
        verdict.figures.push_back(within(std::move(name), {found.lowest / worth, found.highest / worth},
                                         {derived.lowest / worth, derived.highest / worth},
                                         unit_name(limit.in, plan_.signal)));
    };
    if (rule.largest && rule.largest->is_derived) {
        const bool is_number = !std::isnan(figures.largest);
        told_within(
            *rule.largest, "max",
            is_number ? ErrorEnds{figures.lowest, figures.highest} : ErrorEnds{figures.largest, figures.largest},
            derived_.error);
    } else {
        told(rule.largest, "max", figures.largest, 0.0);
    }
    told(rule.rms, "rms", figures.rms, clip ? derived_.worst_rms : derived_.rms);
    if (rule.bias && rule.bias->is_derived) {
        // The limit of the bias is that of the whole record: the mean over a part of it may be as large as any sample.
        const ErrorEnds& ends = state.exempt > 0 ? derived_.error : clip ? derived_.worst_bias : derived_.bias;
        told_within(*rule.bias, "bias", {figures.bias, figures.bias}, ends);
    } else {
        told(rule.bias, "bias", rule.bias ? std::abs(figures.bias) : figures.bias, 0.0);
        // The limit holds for the magnitude; which way the firmware leans is the first thing its author asks.
        if (rule.bias && figures.bias < 0.0) verdict.figures.back().note = "negative";
    }
    if (is_driven_ && (rule.min_snr_db || figures.snr_db)) {
        JudgedFigure snr{"snr", std::nullopt, std::nullopt, std::nullopt, "dB", true, true, {}};
        if (figures.snr_db) snr.value = judged(*figures.snr_db);
        if (rule.min_snr_db) {
            snr.limit = judged(*rule.min_snr_db);
            if (figures.identical) {
                snr.note = "identical";
            } else if (snr.value) {
                snr.margin = judged(*snr.value - *snr.limit);
                snr.passed = *snr.value >= *snr.limit;
            } else {
                snr.passed = false;
                snr.note = "the reference is silent";
            }
        }
        verdict.figures.push_back(std::move(snr));
    }
    if (figures.samples == 0) {
        verdict.reason = state.exempt > 0 ? exempt_text(state.exempt, rails) : "no sample was compared";
        return verdict;
    }
    const bool passed =
        std::all_of(verdict.figures.begin(), verdict.figures.end(), [](const JudgedFigure& f) { return f.passed; });
    verdict.verdict = passed ? Verdict::pass : Verdict::fail;
    if (figures.identical) verdict.reason = "every sample equals the reference";
    if (figures.beyond > 0) {
        verdict.reason =
            std::to_string(figures.beyond) + " of " + std::to_string(figures.samples) + " samples beyond max";
    }
    if (state.exempt > 0) {
        verdict.reason += (verdict.reason.empty() ? "" : "; ") + exempt_text(state.exempt, rails);
    } else if (state.is_derived && clip && is_wider_once_clipped(derived_)) {
        verdict.reason += (verdict.reason.empty() ? "" : "; ") +
                          ("from sample " + std::to_string(*clip) +
                           " on a rail may be reached: derived rms and bias are those of the worst case");
    }
    // The measure compares unrounded, the verdict rounded figures: a pass shows no bad sample.
    if (passed) verdict.first_bad.reset();
    return verdict;
}

std::optional<RuleVerdict> AlignedPass::verdict(const Rule& rule, const RailWatch* rails) const {
    if (const auto* response = std::get_if<ResponseRule>(&rule.kind)) {
        if (!response_measure_) return std::nullopt;
        return judge_response(*response, rule, plan_, case_, channel_, response_measure_->value());
    }
    if (std::holds_alternative<ExactRule>(rule.kind) && exact_) return exact_->verdict(rule);
    for (const ErrorRuleState& state : error_rules_) {
        if (state.rule == &rule) return error_verdict(state, rails);
    }
    return std::nullopt;
}

bool AlignedPass::error_rules_pass(const RailWatch* rails) const {
    return std::all_of(error_rules_.begin(), error_rules_.end(), [&](const ErrorRuleState& state) {
        return error_verdict(state, rails).verdict == Verdict::pass;
    });
}

}  // namespace halflsb
