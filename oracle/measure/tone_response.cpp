#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <numbers>

#include "oracle/measure/response.hpp"
#include "oracle/measure/sums.hpp"

namespace halflsb {

namespace {

using Complex = std::complex<double>;

// Stretches begin at multiples of this index, so that block bounds do not move them.
constexpr std::size_t stretch_samples = 256;

Complex unit_at_turns(double turns) {
    const double angle = 2.0 * std::numbers::pi * turns;
    return {std::cos(angle), std::sin(angle)};
}

// a * b modulo 1, exact but for the last rounding, so that phases stay true after 1e9 samples.
double product_modulo_1(double a, double b) {
    const double product = a * b;
    return std::remainder(product, 1.0) + std::fma(a, b, -product);
}

struct ComplexSum {
    CompensatedSum real, imaginary;
    void add(Complex term) {
        real.add(term.real());
        imaginary.add(term.imag());
    }
    Complex value() const { return {real.value(), imaginary.value()}; }
};

// sum w[n] s[n] e^(-j 2 pi f n): each stretch turns from its own start by a table, and the phase of
// its start is computed afresh.
struct Tone {
    double cycles_per_sample = 0.0;
    std::array<Complex, stretch_samples> turn{};
    ComplexSum stimulus, error;
};

class ToneResponse final : public ResponseMeasure {
public:
    ToneResponse(std::vector<double> tones, std::int64_t length) : length_(std::max<std::int64_t>(length, 1)) {
        std::sort(tones.begin(), tones.end());
        tones_.resize(tones.size());
        for (std::size_t i = 0; i < tones.size(); ++i) {
            tones_[i].cycles_per_sample = tones[i];
            for (std::size_t m = 0; m < stretch_samples; ++m) {
                tones_[i].turn[m] = unit_at_turns(product_modulo_1(-tones[i], static_cast<double>(m)));
            }
        }
        for (std::size_t m = 0; m < stretch_samples; ++m) {
            window_turn_[m] = unit_at_turns(static_cast<double>(m) / static_cast<double>(length_));
        }
    }

    void add(std::span<const double> stimulus, std::span<const double> error) override {
        std::size_t done = 0;
        while (done < stimulus.size()) {
            const std::size_t count = std::min(stimulus.size() - done, stretch_samples - filled_);
            std::copy_n(stimulus.data() + done, count, stimulus_.data() + filled_);
            std::copy_n(error.data() + done, count, error_.data() + filled_);
            filled_ += count;
            done += count;
            if (filled_ < stretch_samples) return;
            add_stretch(filled_, tones_);
            first_ += static_cast<std::int64_t>(stretch_samples);
            filled_ = 0;
        }
    }

    std::vector<ResponsePoint> value() const override {
        std::vector<Tone> tones = tones_;
        add_stretch(filled_, tones);
        std::vector<ResponsePoint> points;
        for (const Tone& tone : tones) points.push_back(point_of(tone));
        return points;
    }

private:
    void add_stretch(std::size_t held, std::vector<Tone>& tones) const {
        if (first_ >= length_) return;
        const auto count =
            static_cast<std::size_t>(std::min<std::int64_t>(static_cast<std::int64_t>(held), length_ - first_));
        const Complex window_base = unit_at_turns(static_cast<double>(first_) / static_cast<double>(length_));
        std::array<double, stretch_samples> x{}, e{};
        for (std::size_t m = 0; m < count; ++m) {
            const Complex turn = window_turn_[m];
            const double cosine = window_base.real() * turn.real() - window_base.imag() * turn.imag();
            const double window = 0.5 - 0.5 * cosine;
            x[m] = window * stimulus_[m];
            e[m] = window * error_[m];
        }
        for (Tone& tone : tones) {
            double x_re = 0.0, x_im = 0.0, e_re = 0.0, e_im = 0.0;
            for (std::size_t m = 0; m < count; ++m) {
                const Complex turn = tone.turn[m];
                x_re += x[m] * turn.real();
                x_im += x[m] * turn.imag();
                e_re += e[m] * turn.real();
                e_im += e[m] * turn.imag();
            }
            const Complex base = unit_at_turns(product_modulo_1(-tone.cycles_per_sample, static_cast<double>(first_)));
            tone.stimulus.add(Complex(x_re, x_im) * base);
            tone.error.add(Complex(e_re, e_im) * base);
        }
    }

    static ResponsePoint point_of(const Tone& tone) {
        constexpr double none = std::numeric_limits<double>::quiet_NaN();
        const Complex x = tone.stimulus.value(), e = tone.error.value();
        ResponsePoint point;
        point.cycles_per_sample = tone.cycles_per_sample;
        point.stimulus_power = std::norm(x);
        point.difference = point.stimulus_power > 0.0 ? e * std::conj(x) / point.stimulus_power : Complex(none, none);
        point.averages = 1;
        return point;
    }

    std::int64_t length_;
    std::vector<Tone> tones_;
    std::array<Complex, stretch_samples> window_turn_{};
    std::int64_t first_ = 0;  ///< index of the first held sample
    std::size_t filled_ = 0;
    std::array<double, stretch_samples> stimulus_{}, error_{};
};

}  // namespace

std::unique_ptr<ResponseMeasure> make_tone_response(std::vector<double> tones_cycles_per_sample,
                                                    std::int64_t length_samples) {
    return std::make_unique<ToneResponse>(std::move(tones_cycles_per_sample), length_samples);
}

bool tones_resolved(const std::vector<double>& tones_cycles_per_sample, std::int64_t length_samples) {
    if (length_samples <= 0) return false;
    // A distance of exactly four bins must not fail for the rounding of the frequencies.
    const double least = (4.0 - 1e-6) / static_cast<double>(length_samples);
    std::vector<double> tones = tones_cycles_per_sample;
    std::sort(tones.begin(), tones.end());
    double before = 0.0;
    for (const double tone : tones) {
        if (!(tone - before >= least)) return false;
        before = tone;
    }
    return tones.empty() || 0.5 - before >= least;
}

double gain_db(std::complex<double> response) { return 20.0 * std::log10(std::abs(response)); }

}  // namespace halflsb
