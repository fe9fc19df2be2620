#include "oracle/judge/response_judge.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/clip_watch.hpp"
#include "oracle/judge/response_band.hpp"
#include "oracle/judge/response_phase.hpp"
#include "oracle/judge/response_plot.hpp"
#include "oracle/judge/rule_kinds.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/repeated_looks.hpp"

namespace halflsb {
namespace {

bool within(double hz, const ResponseBand& band) {
    // A frequency that was computed as k / segment x rate may miss an edge by a rounding.
    const double slack = 1e-9 * std::max(1.0, std::fabs(hz));
    return hz >= band.from_hz - slack && hz <= band.to_hz + slack;
}

bool has_power(const Spectrum& spectrum, double cycles_per_sample) {
    return std::any_of(spectrum.bands.begin(), spectrum.bands.end(), [&](const Spectrum::Band& band) {
        return cycles_per_sample >= band.from_cycles_per_sample && cycles_per_sample <= band.to_cycles_per_sample;
    });
}

}  // namespace

Spectrum measured_spectrum(const Plan& plan, const Case& the_case) {
    Spectrum spectrum = the_case.stimulus->spectrum();
    if (!spectrum.bands.empty()) spectrum.tones.clear();
    const double of_sent = returned_per_sent(plan, the_case);
    if (of_sent == 1.0) return spectrum;
    for (double& tone : spectrum.tones) tone /= of_sent;
    for (Spectrum::Band& band : spectrum.bands) {
        band.from_cycles_per_sample /= of_sent;
        band.to_cycles_per_sample /= of_sent;
    }
    return spectrum;
}

MeasuredRealisations measured_realisations(const Plan& plan, const Case& the_case, int lag_samples) {
    const Spectrum::Realisations sent = the_case.stimulus->spectrum().realisations;
    if (sent.count == 1) return {0, judged_samples(plan, the_case), 1};
    // Where the pairs of AlignedPass begin and end, as indices of the reference: before its own start it is silent.
    const std::int64_t discarded = first_judged_sample(plan, the_case);
    const std::int64_t begin = discarded > 0 ? discarded + std::max(-lag_samples, 0) : -lag_samples;
    const std::int64_t end = returned_samples(plan, the_case) - std::max(lag_samples, 0);
    // check() holds a realisation to whole cycles of the rate, so all return as many as the first.
    const CaseRates rates(plan, the_case);
    const std::int64_t first = rates.returned(sent.first_sample);
    const std::int64_t samples = std::max<std::int64_t>(rates.returned(sent.samples), 1);
    const std::int64_t skipped = begin > first ? (begin - first + samples - 1) / samples : 0;
    // All that is left has the phases of the last one.
    if (skipped >= sent.count) return {0, std::max<std::int64_t>(end - begin, 0), 1};
    const std::int64_t whole = std::min(sent.count, (end - first) / samples) - skipped;
    return {first + skipped * samples - begin, samples, std::max<std::int64_t>(whole, 1)};
}

std::unique_ptr<ResponseMeasure> make_response_measure(const Plan& plan, const Case& the_case, int lag_samples) {
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    if (spectrum.tones.empty()) return make_welch_response(response_segment_for(judged_samples(plan, the_case)));
    const MeasuredRealisations parts = measured_realisations(plan, the_case, lag_samples);
    return make_tone_response(spectrum.tones, parts.samples, parts.count, parts.leading);
}

std::vector<double> answerable_hz(const ResponseBand& band, const Plan& plan, const Case& the_case) {
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    const double rate_hz = returned_rate_hz(plan, the_case);
    std::vector<double> found;
    for (const double tone : spectrum.tones) {
        if (within(tone * rate_hz, band)) found.push_back(tone * rate_hz);
    }
    if (!spectrum.tones.empty()) return found;
    const std::size_t segment = response_segment_for(judged_samples(plan, the_case));
    for (std::size_t bin = 0; bin <= segment / 2; ++bin) {
        const double cycles_per_sample = static_cast<double>(bin) / static_cast<double>(segment);
        if (within(cycles_per_sample * rate_hz, band) && has_power(spectrum, cycles_per_sample))
            found.push_back(cycles_per_sample * rate_hz);
    }
    return found;
}

std::vector<double> answerable_hz(const ResponseMask& mask, const Plan& plan, const Case& the_case) {
    std::vector<double> found = answerable_hz(ResponseBand{mask.from_hz(), mask.to_hz(), {}, {}}, plan, the_case);
    std::erase_if(found, [&](double hz) {
        const MaskLimits limits = mask.limits_at(hz);
        return !std::isfinite(limits.min_db) && !std::isfinite(limits.max_db);
    });
    return found;
}

namespace {

/// Of the points of the measure those in the band that the stimulus answers for.
std::vector<BandPoint> points_in(const ResponseBand& band, const ResponseSums& sums, const JudgedChannel& channel) {
    const Spectrum spectrum = measured_spectrum(channel.plan, channel.the_case);
    const FilterChain chain = chain_of(channel.plan, channel.the_case, channel.channel);
    const double returned_hz = returned_rate_hz(channel.plan, channel.the_case);
    const double of_sent = returned_per_sent(channel.plan, channel.the_case);
    std::vector<BandPoint> points;
    for (std::size_t i = 0; i < sums.cycles_per_sample.size(); ++i) {
        const double cycles_per_sample = sums.cycles_per_sample[i], hz = cycles_per_sample * returned_hz;
        if (!within(hz, band) || (spectrum.tones.empty() && !has_power(spectrum, cycles_per_sample))) continue;
        points.push_back({i, hz, response_at(chain, cycles_per_sample * of_sent)});
    }
    return points;
}

/// Parts enough to know their spread well, or the budget: a test of fixed length would not do with fewer either.
std::int64_t spread_samples(const ResponseMeasure& measure, std::int64_t budget) {
    return std::min(16 * measure.part_samples(), budget);
}

/// A single look at the end where other rules hold the case until then: it need not share with others.
RepeatedLooks looks_at(const ResponseMeasure& measure, const JudgedChannel& channel) {
    const std::int64_t budget = judged_samples(channel.plan, channel.the_case);
    if (!may_end_early(channel.plan, channel.the_case)) return {budget, 1, budget};
    return {spread_samples(measure, budget), measure.part_samples(), budget};
}

class ResponseJudge final : public RuleJudge {
public:
    ResponseJudge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          confidence_(channel.plan.certainty.confidence),
          shown_channel_(channel.plan.signal.channels == 1 ? 0 : channel.channel),
          measure_(make_response_measure(channel.plan, channel.the_case, channel.lag_samples)),
          clips_(channel.plan.signal.output),
          looks_(looks_at(*measure_, channel)) {
        std::size_t decisions = 0;
        for (const ResponseBand& band : rule.bands) {
            auto points = points_in(band, measure_->sums(), channel);
            if (points.empty()) {
                without_points_.push_back("the stimulus has no power from " + hz_text(band.from_hz) + " to " +
                                          hz_text(band.to_hz));
                continue;
            }
            bands_.emplace_back(rule, band, std::move(points));
            decisions += bands_.back().decisions();
        }
        if (rule.mask) decisions += add_mask(*rule.mask, channel);
        phase_ = PhaseDecisions(rule.phase, points_in({0.0, HUGE_VAL, {}, {}}, measure_->sums(), channel),
                                measure_->sums(), channel);
        decisions += phase_.decisions();
        if (rule.phase.any() && phase_.decisions() == 0)
            without_points_.push_back("the stimulus has too few frequencies where the phase is limited");
        shares_of_point_ = shares_of_rule(channel.plan).alpha_over(std::max<std::size_t>(decisions, 1));
        if (channel.wants_plots) plotted_ = points_in({0.0, HUGE_VAL, {}, {}}, measure_->sums(), channel);
    }

    void add(const AlignedBlock& block) override {
        clips_.add(block);
        error_.resize(block.values.size());
        std::transform(block.values.begin(), block.values.end(), block.reference.design.begin(), error_.begin(),
                       [](double measured, double ideal) { return measured - ideal; });
        for (std::size_t done = 0; done < error_.size();) {
            const auto left = static_cast<std::size_t>(looks_.at_samples()[next_look_] - samples_);
            const std::size_t count = std::min(left, error_.size() - done);
            measure_->add(block.reference.stimulus.subspan(done, count), std::span(error_).subspan(done, count));
            samples_ += static_cast<std::int64_t>(count);
            done += count;
            // The last look is that of finish().
            if (samples_ < looks_.at_samples()[next_look_]) continue;
            if (next_look_ + 1 == looks_.at_samples().size()) return;
            ++next_look_;
            if (!is_decided()) look();
        }
    }

    /// What has clipped stays undecided, whatever follows.
    bool is_decided() const override { return decided_after_.has_value() || clips_.count() > 0; }

    void finish() override {
        measure_->finish();
        if (!is_decided()) look();
    }

    RuleVerdict verdict(const RailWatch* rails) const override;

    void plot(CasePlots& plots) const override {
        if (plotted_.empty()) return;
        plots.push_back(response_plot(rule_, plotted_, bands_, phase_, measure_->sums(), confidence_));
        plots.back().channel = shown_channel_;
    }

private:
    /// How many decisions it brings.
    std::size_t add_mask(const ResponseMask& mask, const JudgedChannel& channel) {
        BandDecision decision(rule_, mask, points_in({0.0, HUGE_VAL, {}, {}}, measure_->sums(), channel));
        if (decision.points().empty()) {
            without_points_.push_back("the stimulus has no power in the mask " + mask.name);
            return 0;
        }
        const double highest_hz = returned_rate_hz(channel.plan, channel.the_case) / 2.0;
        if (!mask.source.empty()) {
            about_mask_ = mask.source;
            if (mask.to_hz() > highest_hz) about_mask_ += "; what lies above " + hz_text(highest_hz) + " is left out";
            about_mask_ += "; judged from " + hz_text(decision.points().front().hz) + " to " +
                           hz_text(decision.points().back().hz) + "; " + mask.claim;
        }
        const std::size_t decisions = decision.decisions();
        bands_.push_back(std::move(decision));
        return decisions;
    }
    void look() {
        for (BandDecision& band : bands_)
            band.look(measure_->sums(), shares_of_point_.over_looks(looks_.at_samples().size()));
        phase_.look(measure_->sums(), shares_of_point_.over_looks(looks_.at_samples().size()));
        if (verdict_so_far() != Verdict::undecided) decided_after_ = samples_;
    }
    Verdict verdict_so_far() const {
        Verdict worst = phase_.verdict();
        for (const BandDecision& band : bands_) worst = std::max(worst, band.verdict());
        return worst;
    }
    std::string why_undecided() const;

    const ResponseRule& rule_;
    const Rule& asked_;
    double confidence_;
    int shown_channel_;
    std::unique_ptr<ResponseMeasure> measure_;
    ClipWatch clips_;
    RepeatedLooks looks_;
    std::size_t next_look_ = 0;
    std::int64_t samples_ = 0;
    std::optional<std::int64_t> decided_after_;  ///< samples
    ErrorShares shares_of_point_;
    std::vector<BandDecision> bands_;  ///< the mask is the last of them
    std::string about_mask_;           ///< that of a standard
    PhaseDecisions phase_;
    std::vector<std::string> without_points_;
    std::vector<double> error_;
    std::vector<BandPoint> plotted_;  ///< all that the stimulus answers for; empty where no plot is wanted
};

RuleVerdict ResponseJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, verdict_so_far(), "design", {}, {}, std::nullopt};
    const ResponseSums& sums = measure_->sums();
    const auto samples = static_cast<double>(samples_);
    Evidence evidence{decided_after_.value_or(samples_), looks_.at_samples().back(), 0.0};
    for (const BandDecision& band : bands_) {
        for (JudgedFigure& figure : band.figures(sums)) verdict.figures.push_back(std::move(figure));
        evidence.fixed_length_samples =
            std::max(evidence.fixed_length_samples, band.fixed_length_samples(sums, samples, shares_of_point_));
    }
    for (JudgedFigure& figure : phase_.figures(sums)) verdict.figures.push_back(std::move(figure));
    evidence.fixed_length_samples =
        std::max(evidence.fixed_length_samples, phase_.fixed_length_samples(sums, samples, shares_of_point_));
    if (evidence.fixed_length_samples > 0.0) {
        evidence.fixed_length_samples =
            judged(std::max(std::ceil(evidence.fixed_length_samples),
                            static_cast<double>(spread_samples(*measure_, evidence.budget_samples))));
        verdict.evidence = evidence;
    }
    if (clips_.count() > 0) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = clips_.reason();
    } else if (!without_points_.empty()) {
        if (verdict.verdict == Verdict::pass) verdict.verdict = Verdict::undecided;
        verdict.reason = without_points_.back();
    } else if (verdict.verdict == Verdict::undecided) {
        verdict.reason = why_undecided();
    }
    if (!about_mask_.empty()) verdict.reason += (verdict.reason.empty() ? "" : "; ") + about_mask_;
    return verdict;
}

std::string ResponseJudge::why_undecided() const {
    PhaseDecisions::Open of_phase = phase_.open(measure_->sums(), static_cast<double>(samples_), shares_of_point_);
    if (of_phase.is_not_a_number) return "the response holds a value that is not a finite number";
    std::size_t open = 0;
    double needed = 0.0;
    for (const BandDecision& band : bands_) {
        const BandDecision::Open of_band = band.open(measure_->sums(), static_cast<double>(samples_), shares_of_point_);
        if (of_band.is_not_a_number) return "the response holds a value that is not a finite number";
        open += of_band.gains;
        needed = std::max(needed, of_band.samples_needed);
    }
    if (open == 0) {
        return std::to_string(of_phase.figures) + (of_phase.figures == 1 ? " phase or delay" : " phases and delays") +
               " too near a limit to tell from " + std::to_string(samples_) + " samples" +
               (of_phase.samples_needed > 0.0
                    ? "; about " + brief(of_phase.samples_needed) + " would tell, or a wider delta_deg or delta_samples"
                    : ": this stimulus has no spread that says how sure they are");
    }
    const std::string what = std::to_string(open) + (open == 1 ? " gain" : " gains") + " too near a limit to tell";
    if (!(needed > 0.0)) return what + ": this stimulus has no spread that says how sure they are";
    return what + " from " + std::to_string(samples_) + " samples; about " + brief(needed) +
           " would tell, or a wider delta_db";
}

}  // namespace

WantedReferences wanted_by(const ResponseRule&, bool is_driven) { return {.design = is_driven}; }

std::unique_ptr<RuleJudge> make_judge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    return std::make_unique<ResponseJudge>(rule, asked, channel);
}

}  // namespace halflsb
