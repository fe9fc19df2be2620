#include "oracle/measure/tone.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "oracle/measure/spur.hpp"

namespace halflsb {

namespace {

constexpr double db_per_neper_of_power = 10.0 / std::numbers::ln10;

double relative(const Figure& figure) { return figure.standard_uncertainty / figure.value; }

// 10 lg of the ratio of two independent powers.
Figure ratio_db(const Figure& above, const Figure& below) {
    return {10.0 * std::log10(above.value / below.value),
            db_per_neper_of_power * std::hypot(relative(above), relative(below))};
}

// By the fit with the harmonics: what one of them leaks into the fit of the sine alone is no tone.
bool stands_out(const HarmonicFit& joint, std::span<const double> samples) {
    double largest = 0.0;
    for (const double sample : samples) largest = std::max(largest, std::abs(sample));
    if (!(joint.amplitude > largest * 0x1p-40)) return false;
    // Of noise alone N a^2 / (4 s^2) is exponential with mean 1.
    const double length = static_cast<double>(samples.size());
    return length * joint.amplitude * joint.amplitude > 4.0 * joint.noise_variance * std::log(1e6);
}

Figure power_of(const SineFit& fit, double noise_variance) {
    const double power = 0.5 * fit.amplitude.value * fit.amplitude.value,
                 share = noise_variance / static_cast<double>(fit.samples);
    return {power, std::sqrt(4.0 * share * power + 4.0 * share * share)};
}

// The noise-like part by chi square, each harmonic by its own.
Figure noise_and_distortion(const SineFit& fit, const HarmonicFit& joint) {
    const double freedom = static_cast<double>(fit.samples - joint.columns);
    double variance = 2.0 * joint.rest_mean_square * joint.rest_mean_square / freedom;
    for (const Harmonic& harmonic : joint.harmonics) {
        variance += harmonic.mean_square.standard_uncertainty * harmonic.mean_square.standard_uncertainty;
    }
    return {fit.rms_residual * fit.rms_residual, std::sqrt(variance)};
}

void set_enob(ToneFigures& figures, const Figure& nad, std::optional<double> full_scale) {
    const double octaves = 0.5 * relative(nad) / std::numbers::ln2;
    const double db_per_bit = 20.0 * std::log10(2.0);
    figures.enob_of_sinad_bits = {(figures.sinad_db->value - 10.0 * std::log10(1.5)) / db_per_bit,
                                  figures.sinad_db->standard_uncertainty / db_per_bit};
    if (full_scale) figures.enob_bits = {std::log2(2.0 * *full_scale / std::sqrt(12.0 * nad.value)), octaves};
}

void set_thd(ToneFigures& figures, const HarmonicFit& joint) {
    Figure sum;
    double variance = 0.0, noise = 0.0;
    bool any = false;
    for (const Harmonic& harmonic : joint.harmonics) {
        if (harmonic.place != HarmonicPlace::own) continue;
        any = true;
        sum.value += harmonic.mean_square.value;
        variance += harmonic.mean_square.standard_uncertainty * harmonic.mean_square.standard_uncertainty;
        noise += harmonic.noise_mean_square;
    }
    sum.standard_uncertainty = std::sqrt(variance);
    if (!any || !(sum.value > 0.0)) return;
    const double ratio = std::sqrt(sum.value / joint.mean_square.value);
    figures.thd_db = ratio_db(sum, joint.mean_square);
    figures.thd_percent = {100.0 * ratio, 100.0 * ratio * 0.5 * std::hypot(relative(sum), relative(joint.mean_square))};
    figures.thd_of_noise_percent = 100.0 * std::sqrt(noise / joint.mean_square.value);
}

}  // namespace

ToneAnswer measure_tone(const ToneQuestion& question, std::span<const double> samples) {
    if (samples.size() < tone_least_samples) return {std::nullopt, ToneFault::too_short};
    if (samples.size() > tone_most_samples) return {std::nullopt, ToneFault::too_long};
    const SineFitAnswer sine = question.fits_frequency ? fit_sine_near(question.cycles_per_sample, samples)
                                                       : fit_sine_at(question.cycles_per_sample, samples);
    if (!sine.fit) return {std::nullopt, sine.fault};
    ToneFigures figures;
    figures.fundamental = *sine.fit;
    const double f = sine.fit->cycles_per_sample.value;
    auto joint = fit_harmonics(f, question.highest_harmonic, samples);
    if (!joint) return {std::nullopt, ToneFault::not_determined};
    if (!stands_out(*joint, samples)) return {std::nullopt, ToneFault::no_tone};
    figures.harmonics = joint->harmonics;
    figures.is_perfect =
        !(sine.fit->rms_residual > 0x1p-46 * (sine.fit->amplitude.value + std::abs(sine.fit->offset.value)));
    if (figures.is_perfect) return {std::move(figures), ToneFault::none};

    const Figure power = power_of(*sine.fit, joint->noise_variance), nad = noise_and_distortion(*sine.fit, *joint);
    figures.sinad_db = ratio_db(power, nad);
    set_enob(figures, nad, question.full_scale);
    set_thd(figures, *joint);
    if (const auto spur = largest_spur(std::move(joint->without_fundamental), f, joint->noise_variance)) {
        figures.sfdr_db = ratio_db(joint->mean_square, spur->mean_square);
        figures.spur_cycles_per_sample = spur->cycles_per_sample;
        figures.spur_is_line = spur->is_line;
    }
    return {std::move(figures), ToneFault::none};
}

void ToneMeasure::add(std::span<const double> response) {
    const std::size_t kept = std::min(response.size(), tone_most_samples - record_.size());
    is_too_long_ = is_too_long_ || kept < response.size();
    record_.insert(record_.end(), response.begin(), response.begin() + static_cast<std::ptrdiff_t>(kept));
}

ToneAnswer ToneMeasure::value() const {
    if (is_too_long_) return {std::nullopt, ToneFault::too_long};
    return measure_tone(question_, record_);
}

}  // namespace halflsb
