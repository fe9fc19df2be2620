#include "oracle/judge/response_judge.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/case_rates.hpp"

namespace halflsb {
namespace {

std::string hz_text(double hz) {
    char text[32];
    const auto end = std::to_chars(text, text + sizeof text, hz, std::chars_format::general, 6).ptr;
    return std::string(text, end) + " Hz";
}

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

struct Extreme {
    double gain_db;
    double hz;
};

JudgedFigure held(const Extreme& extreme, double limit_db, bool at_least, const ResponseBand& band) {
    JudgedFigure figure;
    figure.name = std::string(at_least ? "lowest" : "highest") + " gain from " + hz_text(band.from_hz) + " to " +
                  hz_text(band.to_hz);
    figure.limit = judged(limit_db);
    figure.unit = "dB";
    figure.at_least = at_least;
    const double gain_db = judged(extreme.gain_db);
    figure.verdict = pass_or_fail(at_least ? gain_db >= *figure.limit : gain_db <= *figure.limit);
    figure.note = "at " + hz_text(extreme.hz);
    if (std::isfinite(gain_db)) {
        figure.value = gain_db;
        figure.margin = judged(at_least ? gain_db - *figure.limit : *figure.limit - gain_db);
    } else {
        figure.note += std::isnan(gain_db) ? ", the response is not a number" : ", no output there";
    }
    return figure;
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

namespace {

class ResponseJudge final : public RuleJudge {
public:
    ResponseJudge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel)
        : rule_(rule),
          asked_(asked),
          channel_(channel),
          measure_(make_response_measure(channel.plan, channel.the_case, channel.lag_samples)) {}

    void add(const AlignedBlock& block) override {
        error_.resize(block.values.size());
        std::transform(block.values.begin(), block.values.end(), block.reference.design.begin(), error_.begin(),
                       [](double measured, double ideal) { return measured - ideal; });
        measure_->add(block.reference.stimulus, error_);
    }
    void finish() override { measure_->finish(); }
    RuleVerdict verdict(const RailWatch* rails) const override;

private:
    const ResponseRule& rule_;
    const Rule& asked_;
    JudgedChannel channel_;
    std::unique_ptr<ResponseMeasure> measure_;
    std::vector<double> error_;
};

RuleVerdict ResponseJudge::verdict(const RailWatch*) const {
    const Plan& plan = channel_.plan;
    const Case& the_case = channel_.the_case;
    const std::vector<ResponsePoint> points = measure_->value();
    RuleVerdict verdict{asked_, Verdict::pass, "design", {}, {}, std::nullopt};
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    const FilterChain chain = chain_of(plan, the_case, channel_.channel);
    const double returned_hz = returned_rate_hz(plan, the_case);
    const double of_sent = returned_per_sent(plan, the_case);
    for (const ResponseBand& band : rule_.bands) {
        std::optional<Extreme> lowest, highest;
        for (const ResponsePoint& point : points) {
            const double hz = point.cycles_per_sample * returned_hz;
            if (!within(hz, band) || (spectrum.tones.empty() && !has_power(spectrum, point.cycles_per_sample)))
                continue;
            const std::complex<double> design = response_at(chain, point.cycles_per_sample * of_sent);
            double measured_db = gain_db(design + point.difference);
            if (rule_.relative_to_design) measured_db -= gain_db(design);
            // NaN must not hide behind a comparison that is false.
            if (!lowest || !(measured_db >= lowest->gain_db)) lowest = Extreme{measured_db, hz};
            if (!highest || !(measured_db <= highest->gain_db)) highest = Extreme{measured_db, hz};
        }
        if (!lowest) {
            if (verdict.verdict == Verdict::pass) verdict.verdict = Verdict::undecided;
            verdict.reason = "the stimulus has no power from " + hz_text(band.from_hz) + " to " + hz_text(band.to_hz);
            continue;
        }
        if (band.min_db) verdict.figures.push_back(held(*lowest, *band.min_db, true, band));
        if (band.max_db) verdict.figures.push_back(held(*highest, *band.max_db, false, band));
    }
    if (worst_of(verdict.figures) == Verdict::fail) verdict.verdict = Verdict::fail;
    return verdict;
}

}  // namespace

WantedReferences wanted_by(const ResponseRule&, bool is_driven) { return {.design = is_driven}; }

std::unique_ptr<RuleJudge> make_judge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel) {
    if (!channel.is_driven()) return nullptr;
    return std::make_unique<ResponseJudge>(rule, asked, channel);
}

}  // namespace halflsb
