#include <algorithm>
#include <array>
#include <cmath>

#include "oracle/measure/response.hpp"
#include "oracle/measure/sums.hpp"
#include "oracle/measure/turns.hpp"

namespace halflsb {

namespace {

using Complex = std::complex<double>;

// Stretches begin at multiples of this index, so that block bounds do not move them.
constexpr std::size_t stretch_samples = 256;

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

// A part of the sums is a realisation.
class ToneResponse final : public ResponseMeasure {
public:
    ToneResponse(std::vector<double> tones, std::int64_t realisation, std::int64_t realisations, std::int64_t leading)
        : leading_left_(std::max<std::int64_t>(leading, 0)),
          length_(std::max<std::int64_t>(realisation, 1)),
          realisations_left_(std::max<std::int64_t>(realisations, 1)),
          tones_(tones.size()),
          sums_{ascending(std::move(tones)), BatchSums(tones_.size())} {
        const std::vector<double>& all = sums_.cycles_per_sample;
        for (std::size_t i = 0; i < all.size(); ++i) {
            tones_[i].cycles_per_sample = all[i];
            for (std::size_t m = 0; m < stretch_samples; ++m) {
                tones_[i].turn[m] = unit_of_turns(turns_modulo_1(-all[i], static_cast<double>(m)));
            }
        }
        for (std::size_t m = 0; m < stretch_samples; ++m) {
            window_turn_[m] = unit_of_turns(static_cast<double>(m) / static_cast<double>(length_));
        }
    }

    void add(std::span<const double> stimulus, std::span<const double> error) override {
        auto done = static_cast<std::size_t>(std::min(leading_left_, static_cast<std::int64_t>(stimulus.size())));
        leading_left_ -= static_cast<std::int64_t>(done);
        while (done < stimulus.size() && realisations_left_ > 0) {
            const auto to_end = static_cast<std::size_t>(length_ - first_) - filled_;
            const std::size_t count = std::min({stimulus.size() - done, stretch_samples - filled_, to_end});
            std::copy_n(stimulus.data() + done, count, stimulus_.data() + filled_);
            std::copy_n(error.data() + done, count, error_.data() + filled_);
            filled_ += count;
            done += count;
            if (filled_ < stretch_samples && count < to_end) return;
            add_stretch(filled_);
            first_ += static_cast<std::int64_t>(filled_);
            filled_ = 0;
            if (first_ == length_) finish_realisation();
        }
    }

    void finish() override {
        // A realisation that is cut counts only where there is no other.
        if (sums_.sums.parts() > 0) return;
        add_stretch(filled_);
        finish_realisation();
    }

    std::int64_t part_samples() const override { return length_; }

    const ResponseSums& sums() const override { return sums_; }

private:
    static std::vector<double> ascending(std::vector<double> tones) {
        std::sort(tones.begin(), tones.end());
        return tones;
    }

    void finish_realisation() {
        std::vector<Complex> cross;
        std::vector<double> power;
        for (Tone& tone : tones_) {
            const Complex x = tone.stimulus.value();
            cross.push_back(tone.error.value() * std::conj(x));
            power.push_back(std::norm(x));
            tone.stimulus = tone.error = ComplexSum();
        }
        sums_.sums.add(cross, power);
        sums_.averages += 1;
        first_ = 0;
        --realisations_left_;
    }

    void add_stretch(std::size_t held) {
        const Complex window_base = unit_of_turns(static_cast<double>(first_) / static_cast<double>(length_));
        std::array<double, stretch_samples> x{}, e{};
        for (std::size_t m = 0; m < held; ++m) {
            const Complex turn = window_turn_[m];
            const double cosine = window_base.real() * turn.real() - window_base.imag() * turn.imag();
            const double window = 0.5 - 0.5 * cosine;
            x[m] = window * stimulus_[m];
            e[m] = window * error_[m];
        }
        for (Tone& tone : tones_) {
            double x_re = 0.0, x_im = 0.0, e_re = 0.0, e_im = 0.0;
            for (std::size_t m = 0; m < held; ++m) {
                const Complex turn = tone.turn[m];
                x_re += x[m] * turn.real();
                x_im += x[m] * turn.imag();
                e_re += e[m] * turn.real();
                e_im += e[m] * turn.imag();
            }
            const Complex base = unit_of_turns(turns_modulo_1(-tone.cycles_per_sample, static_cast<double>(first_)));
            tone.stimulus.add(Complex(x_re, x_im) * base);
            tone.error.add(Complex(e_re, e_im) * base);
        }
    }

    std::int64_t leading_left_, length_, realisations_left_;
    std::vector<Tone> tones_;
    std::array<Complex, stretch_samples> window_turn_{};
    std::int64_t first_ = 0;  ///< index of the first held sample in its realisation
    std::size_t filled_ = 0;
    std::array<double, stretch_samples> stimulus_{}, error_{};
    ResponseSums sums_;
};

}  // namespace

std::unique_ptr<ResponseMeasure> make_tone_response(std::vector<double> tones_cycles_per_sample,
                                                    std::int64_t realisation_samples, std::int64_t realisations,
                                                    std::int64_t leading) {
    return std::make_unique<ToneResponse>(std::move(tones_cycles_per_sample), realisation_samples, realisations,
                                          leading);
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

}  // namespace halflsb
