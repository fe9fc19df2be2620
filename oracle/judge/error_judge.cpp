#include "oracle/judge/error_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/error_figures.hpp"
#include "oracle/judge/first_bad_watch.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/error.hpp"

namespace halflsb {
namespace {

bool is_wider_once_clipped(const DerivedLimits& derived) {
    return derived.worst_rms != derived.rms || derived.worst_bias.lowest != derived.bias.lowest ||
           derived.worst_bias.highest != derived.bias.highest;
}

std::optional<ErrorEnds> largest_ends(const ErrorRule& rule, const JudgedChannel& channel) {
    if (!rule.largest) return std::nullopt;
    if (rule.largest->is_derived) return channel.derived.error;
    const double largest = value_of(*rule.largest, channel.plan.signal);
    return ErrorEnds{-largest, largest};
}

class ErrorJudge final : public RuleJudge {
public:
    ErrorJudge(const ErrorRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          channel_(channel),
          measure_(largest_ends(rule, channel)),
          watch_(channel.plan.signal.output),
          is_derived_(is_derived(rule)) {}

    void add(const AlignedBlock& block) override;
    RuleVerdict verdict(const RailWatch* rails) const override;
    void plot(CasePlots& plots) const override;

private:
    void add_stretch(const AlignedBlock& block, std::size_t from, std::size_t to);
    JudgedFigure told(const std::optional<Limit>& limit, std::string name, double value, double derived) const;
    JudgedFigure told_within(const Limit& limit, std::string name, ErrorEnds found, const ErrorEnds& derived) const;
    JudgedFigure snr(const ErrorFigures& figures) const;
    void tell_figures(const ErrorFigures& figures, bool clipped, RuleVerdict& verdict) const;

    const ErrorRule& rule_;
    const Rule& asked_;
    JudgedChannel channel_;
    ErrorMeasure measure_;
    FirstBadWatch watch_;
    bool is_derived_;
    std::int64_t exempt_ = 0;  ///< samples of which derived limits claim nothing
};

void ErrorJudge::add_stretch(const AlignedBlock& block, std::size_t from, std::size_t to) {
    measure_.start_at(block.first_index + static_cast<std::int64_t>(from));
    measure_.add(block.reference.declared.subspan(from, to - from), block.values.subspan(from, to - from));
}

void ErrorJudge::add(const AlignedBlock& block) {
    const std::size_t count = block.codes.size();
    const std::span<const std::uint8_t> exempt = block.reference.exempt;
    if (!is_derived_ || exempt.empty()) {
        add_stretch(block, 0, count);
    } else {
        for (std::size_t done = 0; done < count;) {  // stretches of samples that count, and of those that do not
            const bool counts = exempt[done] == 0;
            std::size_t end = done + 1;
            while (end < count && (exempt[end] == 0) == counts) ++end;
            if (counts) {
                add_stretch(block, done, end);
            } else {
                exempt_ += static_cast<std::int64_t>(end - done);
            }
            done = end;
        }
    }
    watch_.add(block.first_index, block.reference.codes, block.reference.declared, block.codes,
               measure_.value().first_beyond);
}

JudgedFigure ErrorJudge::told(const std::optional<Limit>& limit, std::string name, double value, double derived) const {
    const Signal& signal = channel_.plan.signal;
    const Limit::In in = limit ? limit->in : natural_unit(signal);
    const double worth = worth_of(in, signal);
    if (!limit)
        return {std::move(name),       judged(value / worth),
                std::nullopt,          std::nullopt,
                unit_name(in, signal), false,
                Verdict::pass,         {}};
    JudgedFigure figure = at_most(std::move(name), value / worth, limit->is_derived ? derived / worth : limit->number,
                                  unit_name(in, signal));
    if (limit->is_derived) figure.note = "derived";
    return figure;
}

JudgedFigure ErrorJudge::told_within(const Limit& limit, std::string name, ErrorEnds found,
                                     const ErrorEnds& derived) const {
    const double worth = worth_of(limit.in, channel_.plan.signal);
    return within(std::move(name), {found.lowest / worth, found.highest / worth},
                  {derived.lowest / worth, derived.highest / worth}, unit_name(limit.in, channel_.plan.signal));
}

JudgedFigure ErrorJudge::snr(const ErrorFigures& figures) const {
    JudgedFigure snr{"snr", std::nullopt, std::nullopt, std::nullopt, "dB", true, Verdict::pass, {}};
    if (figures.snr_db) snr.value = judged(*figures.snr_db);
    if (!rule_.min_snr_db) return snr;
    snr.limit = judged(*rule_.min_snr_db);
    if (figures.identical) {
        snr.note = "identical";
    } else if (snr.value) {
        snr.margin = judged(*snr.value - *snr.limit);
        snr.verdict = pass_or_fail(*snr.value >= *snr.limit);
    } else {
        snr.verdict = Verdict::fail;
        snr.note = "the reference is silent";
    }
    return snr;
}

void ErrorJudge::tell_figures(const ErrorFigures& figures, bool clipped, RuleVerdict& verdict) const {
    const DerivedLimits& derived = channel_.derived;
    if (rule_.largest && rule_.largest->is_derived) {
        const bool is_number = !std::isnan(figures.largest);
        verdict.figures.push_back(told_within(
            *rule_.largest, "max",
            is_number ? ErrorEnds{figures.lowest, figures.highest} : ErrorEnds{figures.largest, figures.largest},
            derived.error));
    } else {
        verdict.figures.push_back(told(rule_.largest, "max", figures.largest, 0.0));
    }
    verdict.figures.push_back(told(rule_.rms, "rms", figures.rms, clipped ? derived.worst_rms : derived.rms));
    if (rule_.bias && rule_.bias->is_derived) {
        // The limit of the bias is that of the whole record: the mean over a part of it may be as large as any sample.
        const ErrorEnds& ends = exempt_ > 0 ? derived.error : clipped ? derived.worst_bias : derived.bias;
        verdict.figures.push_back(told_within(*rule_.bias, "bias", {figures.bias, figures.bias}, ends));
    } else {
        verdict.figures.push_back(told(rule_.bias, "bias", rule_.bias ? std::abs(figures.bias) : figures.bias, 0.0));
        // The limit holds for the magnitude; which way the firmware leans is the first thing its author asks.
        if (rule_.bias && figures.bias < 0.0) verdict.figures.back().note = "negative";
    }
    if (channel_.is_driven() && (rule_.min_snr_db || figures.snr_db)) verdict.figures.push_back(snr(figures));
}

RuleVerdict ErrorJudge::verdict(const RailWatch* rails) const {
    const ErrorFigures figures = measure_.value();
    RuleVerdict verdict{asked_, Verdict::undecided, "declared", {}, {}, watch_.found()};
    const auto clip = rails == nullptr ? std::nullopt : rails->first_clip_index();
    tell_figures(figures, clip.has_value(), verdict);
    if (figures.samples == 0) {
        verdict.reason = exempt_ > 0 ? exempt_text(exempt_, rails) : "no sample was compared";
        return verdict;
    }
    verdict.verdict = worst_of(verdict.figures);
    if (figures.identical) verdict.reason = "every sample equals the reference";
    if (figures.beyond > 0) {
        verdict.reason =
            std::to_string(figures.beyond) + " of " + std::to_string(figures.samples) + " samples beyond max";
    }
    if (exempt_ > 0) {
        verdict.reason += (verdict.reason.empty() ? "" : "; ") + exempt_text(exempt_, rails);
    } else if (is_derived_ && clip && is_wider_once_clipped(channel_.derived)) {
        verdict.reason += (verdict.reason.empty() ? "" : "; ") +
                          ("from sample " + std::to_string(*clip) +
                           " on a rail may be reached: derived rms and bias are those of the worst case");
    }
    // The measure compares unrounded, the verdict rounded figures: a pass shows no bad sample.
    if (verdict.verdict == Verdict::pass) verdict.first_bad.reset();
    return verdict;
}

/// The limits of the largest error, in every plot of errors.
void ErrorJudge::plot(CasePlots& plots) const {
    if (!rule_.largest) return;
    const Signal& signal = channel_.plan.signal;
    const double largest = rule_.largest->is_derived ? 0.0 : value_of(*rule_.largest, signal);
    const ErrorEnds ends = rule_.largest->is_derived ? channel_.derived.error : ErrorEnds{-largest, largest};
    const double worth = worth_of(natural_unit(signal), signal);
    for (Plot& plot : plots) {
        for (PlotPanel& panel : plot.panels) {
            if (panel.quantity != error_panel) continue;
            const ErrorFigures found = measure_.value();
            panel.limits.push_back(
                {-HUGE_VAL, HUGE_VAL, ends.lowest / worth, ends.highest / worth, pass_or_fail(found.beyond == 0)});
        }
    }
}

}  // namespace

WantedReferences wanted_by(const ErrorRule& rule, bool) { return {.rails = is_derived(rule)}; }

std::unique_ptr<RuleJudge> make_judge(const ErrorRule& rule, const Rule& asked, const JudgedChannel& channel) {
    // A channel that got zeros has a silent reference, so its SNR is no figure.
    if (!channel.is_driven() && !rule.largest && !rule.rms && !rule.bias) return nullptr;
    return std::make_unique<ErrorJudge>(rule, asked, channel);
}

}  // namespace halflsb
