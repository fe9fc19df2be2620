#include "oracle/judge/tone_judge.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <utility>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/clip_watch.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/quantile.hpp"
#include "oracle/measure/tone.hpp"

namespace halflsb {

bool is_repeating(const std::vector<double>& samples, double cycles_per_sample) {
    // A sine whose cycles fit a whole number of samples but for 2^-30 of a turn has the same codes again in all but the
    // rarest samples; those are compared.
    const std::size_t most = samples.size() / 2;
    std::size_t period = 0;
    for (std::size_t n = 1; n <= most && period == 0; ++n) {
        const double cycles = cycles_per_sample * static_cast<double>(n);
        if (std::fabs(cycles - std::round(cycles)) <= 0x1p-30) period = n;
    }
    return period > 0 &&
           std::equal(samples.begin() + static_cast<std::ptrdiff_t>(period), samples.end(), samples.begin());
}

namespace {

/// "harmonics 2 to 10", without those that stand on something else.
std::string harmonics_text(const std::vector<Harmonic>& harmonics, int highest) {
    std::string text = "harmonics 2 to " + std::to_string(highest), without;
    for (const Harmonic& harmonic : harmonics) {
        if (harmonic.place != HarmonicPlace::own)
            without += (without.empty() ? "" : ", ") + std::to_string(harmonic.order);
    }
    return without.empty() ? text : text + "; not " + without + ", which fold onto others";
}

class ToneJudge final : public RuleJudge {
public:
    ToneJudge(const ToneRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          cycles_per_sample_(lone_tone(channel.plan, channel.the_case).value_or(0.0)),
          rate_hz_(returned_rate_hz(channel.plan, channel.the_case)),
          full_scale_(full_scale_value(channel.plan.signal.output)),
          window_(tone_window(channel.plan, channel.the_case, channel.channel, channel.lag_samples)
                      .value_or(SampleWindow{})),
          clips_(channel.plan.signal.output) {
        std::size_t limits = 0;
        for (const auto* limit : {&rule.min_sinad_db, &rule.min_enob_bits, &rule.max_thd_db, &rule.min_sfdr_db})
            limits += limit->has_value() ? 1 : 0;
        shares_ = shares_of_rule(channel.plan).alpha_over(std::max<std::size_t>(limits, 1));
    }

    void add(const AlignedBlock& block) override {
        const AlignedBlock judged = within(block, window_);
        if (judged.values.empty()) return;
        clips_.add(judged);
        record_.insert(record_.end(), judged.values.begin(), judged.values.end());
    }

    void finish() override {
        answer_ =
            measure_tone({cycles_per_sample_, rule_.fits_frequency, rule_.highest_harmonic, full_scale_}, record_);
        repeats_ = !rule_.fits_frequency && is_repeating(record_, cycles_per_sample_);
        samples_ = record_.size();
        record_ = {};
    }

    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    std::string hz_of(double cycles_per_sample) const { return brief(cycles_per_sample * rate_hz_) + " Hz"; }
    JudgedFigure told(std::string name, std::string unit, const std::optional<Figure>& figure, const FigureLimit& limit,
                      std::string note) const;
    JudgedFigure thd() const;
    JudgedFigure sfdr() const;
    std::string why_undecided(const RuleVerdict& verdict) const;
    double degrees() const { return static_cast<double>(samples_) - 2.0 * rule_.highest_harmonic - 1.0; }

    const ToneRule& rule_;
    const Rule& asked_;
    double cycles_per_sample_, rate_hz_, full_scale_;
    SampleWindow window_;
    ClipWatch clips_;
    ErrorShares shares_;
    std::vector<double> record_;
    std::size_t samples_ = 0;
    ToneAnswer answer_;
    bool repeats_ = false;
};

/// A figure that is missing has no residual to be made of: as with an exact match, that passes.
JudgedFigure ToneJudge::told(std::string name, std::string unit, const std::optional<Figure>& figure,
                             const FigureLimit& limit, std::string note) const {
    if (!figure) {
        return {std::move(name), std::nullopt,   judged(limit.limit), std::nullopt,
                std::move(unit), limit.at_least, Verdict::pass,       "no residual"};
    }
    JudgedFigure made = decided(std::move(name), {figure->value, repeats_ ? 0.0 : figure->standard_uncertainty},
                                degrees(), limit, std::move(unit), shares_);
    if (repeats_) made.uncertainty.reset();
    if (made.note.empty()) made.note = std::move(note);
    return made;
}

/// In decibels what noise adds to the harmonics looks like distortion; in powers its mean can be taken off again.
JudgedFigure ToneJudge::thd() const {
    const ToneFigures& figures = *answer_.figures;
    JudgedFigure figure = told("thd", "dB", figures.thd_db, {*rule_.max_thd_db, false},
                               harmonics_text(figures.harmonics, rule_.highest_harmonic));
    if (figure.verdict != Verdict::fail || repeats_) return figure;
    const double power = std::pow(10.0, figures.thd_db->value / 10.0),
                 noise = std::pow(0.01 * figures.thd_of_noise_percent, 2);
    const double uncertainty = power * figures.thd_db->standard_uncertainty * std::numbers::ln10 / 10.0;
    const JudgedFigure without_noise = decided("", {power - noise, uncertainty}, degrees(),
                                               {std::pow(10.0, *rule_.max_thd_db / 10.0), false}, "", shares_);
    if (without_noise.verdict == Verdict::fail) return figure;
    figure.verdict = Verdict::undecided;
    figure.note = "noise alone would show " + brief(10.0 * std::log10(noise)) + " dB";
    return figure;
}

JudgedFigure ToneJudge::sfdr() const {
    const ToneFigures& figures = *answer_.figures;
    const std::string place = figures.sfdr_db ? hz_of(figures.spur_cycles_per_sample) : "";
    JudgedFigure figure = told("sfdr", "dB", figures.sfdr_db, {*rule_.min_sfdr_db, true}, "to " + place);
    if (figure.verdict != Verdict::fail || repeats_ || figures.spur_is_line) return figure;
    figure.verdict = Verdict::undecided;
    figure.note = "the largest line, at " + place + ", is no larger than noise shows";
    return figure;
}

RuleVerdict ToneJudge::verdict(const RailWatch*) const {
    RuleVerdict verdict{asked_, Verdict::undecided, {}, {}, {}, std::nullopt};
    if (!answer_.figures) {
        verdict.reason = "the tone of " + hz_of(cycles_per_sample_) +
                         " cannot be judged: " + std::string(reason_of(answer_.fault)) +
                         "; a rule of kind \"error\" shows what came back";
    } else {
        const ToneFigures& figures = *answer_.figures;
        if (rule_.min_sinad_db)
            verdict.figures.push_back(told("sinad", "dB", figures.sinad_db, {*rule_.min_sinad_db, true}, ""));
        if (rule_.min_enob_bits)
            verdict.figures.push_back(told("enob", "bits", figures.enob_bits, {*rule_.min_enob_bits, true}, ""));
        if (rule_.max_thd_db) verdict.figures.push_back(thd());
        if (rule_.min_sfdr_db) verdict.figures.push_back(sfdr());
        verdict.verdict = worst_of(verdict.figures);
    }
    if (clips_.count() > 0) {
        verdict.verdict = Verdict::undecided;
        verdict.reason = clips_.reason();
    } else if (answer_.figures && verdict.verdict == Verdict::undecided) {
        verdict.reason = why_undecided(verdict);
    }
    return verdict;
}

std::string ToneJudge::why_undecided(const RuleVerdict& verdict) const {
    std::size_t open = 0;
    double factor = 0.0;  // of the samples: the uncertainty falls with their square root
    for (const JudgedFigure& figure : verdict.figures) {
        if (figure.verdict != Verdict::undecided) continue;
        ++open;
        if (!figure.margin || !figure.uncertainty || *figure.margin == 0.0) continue;
        const double reach =
            *figure.uncertainty * normal_quantile_above(*figure.margin < 0.0 ? shares_.alpha : shares_.beta);
        factor = std::max(factor, std::pow(reach / *figure.margin, 2));
    }
    const std::string what = std::to_string(open) + (open == 1 ? " figure" : " figures") +
                             " too near a limit to tell from " + std::to_string(samples_) + " samples; ";
    const double needed = factor * static_cast<double>(samples_);
    if (needed > static_cast<double>(samples_) && needed <= static_cast<double>(tone_most_samples))
        return what + "about " + brief(needed) + " would tell";
    return what + "give the stimulus a higher level, or the limit more room";
}

}  // namespace

WantedReferences wanted_by(const ToneRule&, bool is_driven) { return {.design = is_driven}; }

std::unique_ptr<RuleJudge> make_judge(const ToneRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    return std::make_unique<ToneJudge>(rule, asked, channel);
}

}  // namespace halflsb
