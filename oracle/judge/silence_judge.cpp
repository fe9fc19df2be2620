#include "oracle/judge/silence_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/error_figures.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/silence_span.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/error.hpp"
#include "oracle/measure/period.hpp"

namespace halflsb {
namespace {

ErrorEnds ends_of(const SilenceRule& rule, const JudgedChannel& channel) {
    if (rule.largest->is_derived)
        return derived_silence(channel.plan, channel.the_case, channel.channel).value_or(ErrorEnds{});
    const double largest = value_of(*rule.largest, channel.plan.signal);
    return {-largest, largest};
}

class SilenceJudge final : public RuleJudge {
public:
    SilenceJudge(const SilenceRule& rule, const Rule& asked, const JudgedChannel& channel, std::int64_t first_index)
        : limit_(*rule.largest),
          asked_(asked),
          signal_(channel.plan.signal),
          ends_(ends_of(rule, channel)),
          begin_(first_index + channel.lag_samples),
          measure_(ends_),
          watch_(signal_.output) {}

    void add(const AlignedBlock& block) override;
    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    JudgedFigure figure(const ErrorFigures& found) const;
    std::string kind_text(const ErrorFigures& found) const;

    const Limit limit_;
    const Rule& asked_;
    const Signal& signal_;
    ErrorEnds ends_;
    std::int64_t begin_;  ///< index of the response
    ErrorMeasure measure_;
    FirstBadWatch watch_;
    PeriodWatch period_;
    std::int64_t exempt_ = 0;       ///< samples of which a derived limit claims nothing
    std::int64_t last_sound_ = -1;  ///< index of the last sample that is not 0
    std::vector<double> silence_;
};

void SilenceJudge::add(const AlignedBlock& block) {
    const auto count = static_cast<std::int64_t>(block.codes.size());
    const auto skipped = static_cast<std::size_t>(std::clamp<std::int64_t>(begin_ - block.first_index, 0, count));
    const std::int64_t first_index = block.first_index + static_cast<std::int64_t>(skipped);
    const auto codes = block.codes.subspan(skipped);
    const auto values = block.values.subspan(skipped);
    silence_.assign(values.size(), 0.0);
    period_.add(codes);
    for (std::size_t i = 0; i < values.size(); ++i) {
        const std::int64_t index = first_index + static_cast<std::int64_t>(i);
        if (values[i] != 0.0) last_sound_ = index;
        if (limit_.is_derived && !block.reference.exempt.empty() && block.reference.exempt[skipped + i] != 0) {
            ++exempt_;
            continue;
        }
        measure_.start_at(index);
        measure_.add(std::span(silence_).subspan(i, 1), values.subspan(i, 1));
    }
    watch_.add(first_index, block.reference.codes.subspan(skipped), silence_, codes, measure_.value().first_beyond);
}

JudgedFigure SilenceJudge::figure(const ErrorFigures& found) const {
    const double worth = worth_of(limit_.in, signal_);
    const std::string unit = unit_name(limit_.in, signal_);
    if (!limit_.is_derived) return at_most("remains", found.largest / worth, limit_.number, unit);
    return within("remains", {found.lowest / worth, found.highest / worth},
                  {ends_.lowest / worth, ends_.highest / worth}, unit);
}

/// Stuck, a cycle, or neither.
std::string SilenceJudge::kind_text(const ErrorFigures& found) const {
    if (found.largest == 0.0) return {};
    const std::vector<Code> stretch = period_.last_stretch();
    const auto period = smallest_period(stretch);
    if (!period) return "neither stands nor repeats";
    if (*period > 1) return "repeats every " + std::to_string(*period) + " samples";
    const double value = halflsb::value_of(signal_.output, stretch.back());
    if (value == 0.0) return "silent after sample " + std::to_string(last_sound_);
    return "stands at " + brief(value / worth_of(limit_.in, signal_)) + " " + unit_name(limit_.in, signal_);
}

RuleVerdict SilenceJudge::verdict(const RailWatch* rails) const {
    RuleVerdict verdict{asked_, Verdict::undecided, {}, {}, {}, watch_.found()};
    const ErrorFigures found = measure_.value();
    if (found.samples == 0) {
        verdict.reason = exempt_ > 0 ? exempt_text(exempt_, rails) : "no sample of silence was compared";
        return verdict;
    }
    JudgedFigure remains = figure(found);
    if (!std::isfinite(found.largest)) {
        remains.value.reset();
        remains.margin.reset();
        remains.verdict = Verdict::undecided;
        verdict.reason = "the response holds a value that is not a finite number";
    } else {
        const std::string kind = kind_text(found);
        if (!kind.empty()) remains.note = remains.note.empty() ? kind : kind + "; " + remains.note;
        if (found.beyond > 0) {
            verdict.reason = std::to_string(found.beyond) + " of " + std::to_string(found.samples) + " samples from " +
                             std::to_string(begin_) + " on beyond max";
        } else if (found.identical) {
            verdict.reason = "nothing remains from sample " + std::to_string(begin_) + " on";
        }
        if (exempt_ > 0) verdict.reason += (verdict.reason.empty() ? "" : "; ") + exempt_text(exempt_, rails);
    }
    verdict.verdict = remains.verdict;
    verdict.figures.push_back(std::move(remains));
    if (verdict.verdict != Verdict::fail) verdict.first_bad.reset();
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const SilenceRule& rule, bool) { return {.rails = rule.largest->is_derived}; }

std::unique_ptr<RuleJudge> make_judge(const SilenceRule& rule, const Rule& asked, const JudgedChannel& channel) {
    const auto span = silence_span(channel.plan, channel.the_case, channel.channel);
    if (!span) return nullptr;  // check() has refused it
    return std::make_unique<SilenceJudge>(rule, asked, channel, span->first_index);
}

}  // namespace halflsb
