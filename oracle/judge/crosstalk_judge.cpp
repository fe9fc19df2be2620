#include "oracle/judge/crosstalk_judge.hpp"

#include <algorithm>
#include <cmath>
#include <optional>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/driven_references.hpp"
#include "oracle/judge/error_figures.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/coupling.hpp"
#include "oracle/measure/decibels.hpp"
#include "oracle/measure/error.hpp"

namespace halflsb {
namespace {

std::optional<ErrorEnds> ends_of(const CrosstalkRule& rule, const JudgedChannel& channel) {
    if (!rule.largest) return std::nullopt;
    if (rule.largest->is_derived) {
        const auto derived = derived_limits(channel.plan, channel.the_case, channel.channel);
        return derived ? derived->error : ErrorEnds{};
    }
    const double largest = value_of(*rule.largest, channel.plan.signal);
    return ErrorEnds{-largest, largest};
}

/// The coupling, where it is asked for.
struct Coupling {
    DrivenReferences references;
    CouplingMeasure measure;
};

class CrosstalkJudge final : public RuleJudge {
public:
    CrosstalkJudge(const CrosstalkRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          channel_(channel),
          ends_(ends_of(rule, channel)),
          largest_(ends_),
          watch_(channel.plan.signal.output) {
        if (!rule.max_db) return;
        DrivenReferences references(channel.plan, channel.the_case, channel.channel);
        const std::size_t count = references.count();
        coupling_.emplace(
            Coupling{std::move(references), CouplingMeasure(count, judged_samples(channel.plan, channel.the_case))});
    }

    void add(const AlignedBlock& block) override;
    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    JudgedFigure largest_figure(const ErrorFigures& found) const;
    JudgedFigure coupling_figure(const CouplingFigures& found) const;

    const CrosstalkRule& rule_;
    const Rule& asked_;
    JudgedChannel channel_;
    std::optional<ErrorEnds> ends_;
    ErrorMeasure largest_;
    FirstBadWatch watch_;
    std::optional<Coupling> coupling_;
    std::vector<double> leaked_;
};

void CrosstalkJudge::add(const AlignedBlock& block) {
    if (block.codes.empty()) return;
    const std::span<const double> silent = block.reference.declared;  // what zeros give
    largest_.start_at(block.first_index);
    largest_.add(silent, block.values);
    watch_.add(block.first_index, block.reference.codes, silent, block.codes, largest_.value().first_beyond);
    if (!coupling_) return;
    leaked_.resize(block.values.size());
    for (std::size_t i = 0; i < leaked_.size(); ++i) leaked_[i] = block.values[i] - silent[i];
    const auto references = coupling_->references.take(block.first_index - channel_.lag_samples, leaked_.size());
    coupling_->measure.add(references, leaked_);
}

JudgedFigure CrosstalkJudge::largest_figure(const ErrorFigures& found) const {
    const Signal& signal = channel_.plan.signal;
    const double worth = worth_of(rule_.largest->in, signal);
    const std::string unit = unit_name(rule_.largest->in, signal);
    JudgedFigure figure = rule_.largest->is_derived
                              ? within("largest", {found.lowest / worth, found.highest / worth},
                                       {ends_->lowest / worth, ends_->highest / worth}, unit)
                              : at_most("largest", found.largest / worth, rule_.largest->number, unit);
    if (std::isfinite(found.largest)) return figure;
    figure.value.reset();
    figure.margin.reset();
    figure.verdict = Verdict::undecided;
    return figure;
}

/// Decided as an amplitude, which is what is normal; told in decibels.
JudgedFigure CrosstalkJudge::coupling_figure(const CouplingFigures& found) const {
    const double limit_db = *rule_.max_db;
    if (!found.varies && std::isfinite(found.amplitude.value)) {
        JudgedFigure none{"coupling", std::nullopt, judged(limit_db), std::nullopt, "dB", false, Verdict::pass, {}};
        none.note = "the response does not vary";
        return none;
    }
    // Of either sign, of whichever candidate is the largest.
    const std::size_t chances = 2 * coupling_->measure.candidates();
    const Figure amplitude{std::fabs(found.amplitude.value), found.amplitude.standard_uncertainty};
    JudgedFigure figure =
        decided("coupling", amplitude, coupling_->measure.degrees(), {.limit = amplitude_of_db(limit_db)}, "dB",
                shares_of_rule(channel_.plan).alpha_over(chances));
    figure.limit = judged(limit_db);
    if (!figure.value) return figure;
    figure.value = judged(db_of_amplitude(amplitude.value));
    figure.margin = judged(*figure.limit - *figure.value);
    figure.uncertainty = judged(db_per_neper * amplitude.standard_uncertainty / amplitude.value);
    return figure;
}

RuleVerdict CrosstalkJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, "declared", {}, {}, watch_.found()};
    const ErrorFigures found = largest_.value();
    if (found.samples == 0) {
        verdict.reason = "no sample was compared";
        return verdict;
    }
    if (rule_.largest) verdict.figures.push_back(largest_figure(found));
    if (coupling_) {
        const CouplingFigures coupled = coupling_->measure.value();
        verdict.figures.push_back(coupling_figure(coupled));
        if (verdict.figures.back().verdict == Verdict::fail) {
            verdict.reason = "what comes through is " + coupling_->references.name(coupled.reference);
            const int lag = coupled.lag_samples + channel_.lag_samples;
            if (lag != 0) {
                verdict.reason += ", " + std::to_string(std::abs(lag)) +
                                  (std::abs(lag) == 1 ? " sample " : " samples ") + (lag > 0 ? "late" : "early");
            }
        }
    }
    verdict.verdict = worst_of(verdict.figures);
    if (!std::isfinite(found.largest)) {
        verdict.reason = "the response holds a value that is not a finite number";
    } else if (found.identical) {
        verdict.reason = "nothing comes through: every sample is as silent as the reference";
    } else if (found.beyond > 0) {
        verdict.reason += (verdict.reason.empty() ? "" : "; ") + std::to_string(found.beyond) + " of " +
                          std::to_string(found.samples) + " samples beyond max";
    }
    if (verdict.verdict == Verdict::pass) verdict.first_bad.reset();
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const CrosstalkRule&, bool) { return {}; }

std::unique_ptr<RuleJudge> make_judge(const CrosstalkRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (channel.is_driven()) return nullptr;
    return std::make_unique<CrosstalkJudge>(rule, asked, channel);
}

}  // namespace halflsb
