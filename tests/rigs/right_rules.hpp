// Rules with limits that every right board meets, for a chain that is linear and keeps its rate.
//
// The limits follow from the declared reference of the very codes that are sent, and from the derived bound E of the
// board's error against it: whatever the board's rounding does, it stays within. So a fail is never the board's.
#pragma once

#include <algorithm>
#include <cmath>
#include <complex>
#include <numbers>
#include <optional>
#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/drift_judge.hpp"
#include "oracle/judge/noise_judge.hpp"
#include "oracle/judge/step_window.hpp"
#include "oracle/judge/tail.hpp"
#include "oracle/judge/transition_judge.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/response.hpp"
#include "tests/support/plans.hpp"

namespace halflsb::test {

/// Of channel 1, from reset; all channels have the same chain here.
class RightRules {
public:
    RightRules(const Plan& plan, const Case& the_case) : plan_(plan), case_(the_case) {
        const Signal& signal = plan.signal;
        const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
        const auto channels = static_cast<std::size_t>(signal.channels);
        std::vector<Code> all(length * channels), codes(length);
        fill_case_codes(plan, the_case, 0, all);
        for (std::size_t n = 0; n < length; ++n) codes[n] = all[n * channels];
        stimulus_.resize(length);
        values_of(signal.input, codes, stimulus_);
        declared_.resize(length);
        design_.resize(length);
        chain_ = chain_of(plan, the_case, 1);
        make_declared_filter(*described_channel(plan, the_case, 1), signal.output_per_input)
            ->process(stimulus_, declared_);
        make_filter(chain_)->process(stimulus_, design_);
        for (double& value : design_) value *= signal.output_per_input;
        const double scale = std::fabs(signal.output_per_input);
        const auto bound = judged_bound(plan, the_case, 1);
        largest_ = bound ? scale * bound->largest() : INFINITY;
        range_ = bound ? scale * (bound->upper - bound->lower) : INFINITY;
        rms_ = bound ? scale * bound->rms : INFINITY;
    }

    /// Without it the limits below are infinite, and no rule is made.
    bool is_bounded() const { return std::isfinite(largest_); }

    /// Gain of white noise, of its power, and what is added: sqrt(P) of the response lies within rms of the declared
    /// one.
    std::optional<NoiseRule> noise(bool relative) const {
        const auto tail = tail_samples(plan_, case_, 1);
        const auto gain = white_noise_gain(plan_, case_, 1);
        if (!tail || !gain || *tail * 2 > size()) return std::nullopt;
        const auto from = static_cast<std::size_t>(*tail);
        // The bound is that of all samples; those behind the settling are fewer.
        const double rms = rms_ * std::sqrt(static_cast<double>(size()) / static_cast<double>(size() - *tail));
        const double design = deviation(design_, {}, from), declared = deviation(declared_, {}, from);
        if (!(design > 0.0) || rms > 0.3 * declared) return std::nullopt;
        const double scale = relative ? 1.0 : *gain;
        NoiseRule rule;
        rule.least_gain = GainLimit{scale * std::pow((declared - rms) / design, 2) * (1.0 - 1e-9), false};
        rule.largest_gain = GainLimit{scale * std::pow((declared + rms) / design, 2) * (1.0 + 1e-9), false};
        rule.excess = in_ratio(deviation(declared_, design_, from) + rms);
        rule.relative_to_design = relative;
        return rule;
    }

    /// Over `bins` of the measure from the first on: the declared response, and a margin for an error that is coherent
    /// with the stimulus in twice the share of its mean over all bins.
    std::optional<ResponseRule> response(std::size_t first, std::size_t bins, bool relative) const {
        const auto segment = response_segment_for(size());
        const double stimulus = deviation(stimulus_, {}, 0) * std::fabs(plan_.signal.output_per_input);
        if (!(stimulus > 0.0)) return std::nullopt;
        const std::vector<double> h = declared_impulse();
        double most = 0.0, least_db = INFINITY, largest_db = -INFINITY, weakest = INFINITY;
        first = std::min(first, segment / 2 - bins);
        for (std::size_t k = first; k < first + bins; ++k) {
            const double f = static_cast<double>(k) / static_cast<double>(segment);
            const double design = std::abs(response_at(chain_, f)), declared = std::abs(response_of(h, f));
            const double db = 20.0 * std::log10(declared / (relative ? design : 1.0)) +
                              (relative ? 0.0 : 20.0 * std::log10(std::fabs(plan_.signal.output_per_input)));
            least_db = std::min(least_db, db);
            largest_db = std::max(largest_db, db);
            weakest = std::min(weakest, declared);
            most = std::max(most, std::fabs(db));
        }
        const double margin = 2.0 * rms_ / (weakest * stimulus);
        if (!(margin < 0.1) || !std::isfinite(most)) return std::nullopt;
        const double hz = plan_.signal.rate_hz / static_cast<double>(segment);
        ResponseBand band{static_cast<double>(first) * hz, static_cast<double>(first + bins - 1) * hz, {}, {}};
        band.min_db = least_db + 20.0 * std::log10(1.0 - margin) - 1e-9;
        band.max_db = largest_db + 20.0 * std::log10(1.0 + margin) + 1e-9;
        ResponseRule rule;
        rule.bands = {band};
        rule.relative_to_design = relative;
        return rule;
    }

    /// The residual is at most what the board errs by, and what the sine was off when it was quantised: half a step of
    /// the input, by the L1 norm of the chain.
    std::optional<ToneRule> tone() const {
        const SampleFormat& input = plan_.signal.input;
        const double half_step = input.has_lsb() ? lsb_value(input) / 2.0 : 0.0;
        const double of_stimulus =
            half_step * l1_norm(declared_chain(from_rest(chain_)), 1e-3) * std::fabs(plan_.signal.output_per_input);
        const double error = largest_ + of_stimulus + finest_step(plan_.signal.output);
        const double rms = deviation(declared_, {}, declared_.size() / 2);
        if (!(rms > 3.0 * error)) return std::nullopt;
        ToneRule rule;
        rule.min_sinad_db = 20.0 * std::log10((rms - error) / error) - 0.1;  // half a record: not whole cycles
        rule.min_enob_bits = std::log2(2.0 * full_scale_value(plan_.signal.output) / (std::sqrt(12.0) * error));
        rule.max_thd_db = -*rule.min_sinad_db;
        rule.min_sfdr_db = *rule.min_sinad_db;
        return rule;
    }

    /// The figures of the declared response, each as far off as codes that are E off could have it.
    std::optional<TransitionRule> transition() const {
        const auto change = first_level_change(plan_, case_);
        const auto step = change ? step_window(plan_, case_, 1, *change) : std::nullopt;
        if (!step || step->window.begin >= step->step) return std::nullopt;
        TransitionQuestion question = transition_question({}, plan_.signal, *step);
        question.lsb = range_ + finest_step(plan_.signal.output);
        const auto answer = measure_transition(
            question, std::span(declared_).subspan(
                          static_cast<std::size_t>(step->window.begin),
                          static_cast<std::size_t>(std::min(step->window.end, size()) - step->window.begin)));
        if (!answer.figures) return std::nullopt;
        const auto limit = [](const TransitionFigure& found) -> std::optional<double> {
            if (!found.figure) return std::nullopt;
            return found.figure->value + found.figure->bound + 1e-6;
        };
        TransitionRule rule;
        const bool rises = step->levels.second > step->levels.first;
        (rises ? rule.max_rise_samples : rule.max_fall_samples) = limit(answer.figures->duration_samples);
        rule.max_overshoot_percent = limit(answer.figures->overshoot_percent);
        rule.max_undershoot_percent = limit(answer.figures->undershoot_percent);
        rule.max_preshoot_percent = limit(answer.figures->preshoot_percent);
        rule.max_settling_samples = limit(answer.figures->settling_samples);
        if (answer.figures->final_value.figure) {
            rule.final_value =
                in_ratio(std::fabs(answer.figures->final_value.figure->value - step->levels.second) + largest_);
        }
        if (limited_figures(rule).empty() && !rule.final_value) return std::nullopt;
        return rule;
    }

    /// A line through numbers within a range changes by 3/2 of it at most (half of them at either end).
    DriftRule drift() const {
        DriftRule rule;
        const double change = 1.5 * range_ + feigned_change_steps * finest_step(plan_.signal.output);
        rule.change = in_ratio(change);
        rule.slope = in_ratio(change * 3600.0 * plan_.signal.rate_hz / static_cast<double>(size()));
        return rule;
    }

private:
    std::int64_t size() const { return static_cast<std::int64_t>(stimulus_.size()); }
    Limit in_ratio(double value) const {
        return {value / full_scale_value(plan_.signal.output) * (1.0 + 1e-9), Limit::In::full_scale_ratio};
    }
    /// Of a less b (none: 0), from that sample on.
    static double deviation(const std::vector<double>& a, const std::vector<double>& b, std::size_t from) {
        double sum = 0.0, squares = 0.0;
        for (std::size_t n = from; n < a.size(); ++n) {
            const double d = a[n] - (b.empty() ? 0.0 : b[n]);
            sum += d;
            squares += d * d;
        }
        const auto count = static_cast<double>(a.size() - from);
        return std::sqrt(std::max(0.0, squares / count - sum / count * (sum / count)));
    }
    /// Of values that are not rounded, so a small impulse does; without output_per_input.
    std::vector<double> declared_impulse() const {
        std::vector<double> in(std::min<std::size_t>(stimulus_.size(), 8192)), out(in.size());
        const double small = std::ldexp(full_scale_value(plan_.signal.input), -10);
        in[0] = small;
        make_declared_filter(*described_channel(plan_, case_, 1), 1.0)->process(in, out);
        for (double& value : out) value /= small;
        return out;
    }
    static std::complex<double> response_of(const std::vector<double>& h, double cycles_per_sample) {
        const std::complex<double> turn = std::polar(1.0, -2.0 * std::numbers::pi * cycles_per_sample);
        std::complex<double> sum = 0.0;
        for (std::size_t n = h.size(); n-- > 0;) sum = sum * turn + h[n];
        return sum;
    }

    const Plan& plan_;
    const Case& case_;
    FilterChain chain_;
    std::vector<double> stimulus_, declared_, design_;
    double largest_ = 0.0, range_ = 0.0, rms_ = 0.0;  ///< of the error, values of the output
};

}  // namespace halflsb::test
