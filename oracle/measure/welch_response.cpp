#include <algorithm>
#include <cmath>
#include <kissfft/kissfft.hh>
#include <numbers>

#include "oracle/measure/response.hpp"

namespace halflsb {

namespace {

using Complex = std::complex<double>;

std::vector<double> periodic_hann(std::size_t length) {
    std::vector<double> window(length);
    for (std::size_t n = 0; n < length; ++n) {
        // sin^2 keeps the ends accurate, where 1 - cos would cancel.
        const double s = std::sin(std::numbers::pi * static_cast<double>(n) / static_cast<double>(length));
        window[n] = s * s;
    }
    return window;
}

// Of two Hann windows that overlap by half, sum w[n] w[n + N/2] / sum w^2 = 1/6; a cross spectrum of independent
// signals has the product of both correlations.
constexpr double hann_overlap = 1.0 / 6.0;

// The kernel is |W|^2; its variance is that of w' against w: sum w'^2 / (4 pi^2 sum w^2) x N^2 = 1/3.
constexpr double hann_smoothing_bins2 = 1.0 / 3.0;

// Two segments of one signal share a complex transform, one as its real, one as its imaginary part;
// not stimulus and error, because the rounding of the large one would then stand in the small one. An
// error of exactly 0 gives a difference of exactly 0.
class WelchResponse final : public ResponseMeasure {
public:
    explicit WelchResponse(std::size_t segment)
        : segment_(segment),
          window_(periodic_hann(segment)),
          fft_(segment, false),
          stimulus_(segment, 0.0),
          error_(segment, 0.0),
          waiting_stimulus_(segment),
          waiting_error_(segment),
          sums_{frequencies(segment),        BatchSums(segment / 2 + 1), 0, 2.0,
                hann_overlap * hann_overlap, hann_smoothing_bins2} {}

    void add(std::span<const double> stimulus, std::span<const double> error) override {
        std::size_t done = 0;
        while (done < stimulus.size()) {
            const std::size_t count = std::min(stimulus.size() - done, segment_ - filled_);
            std::copy_n(stimulus.data() + done, count, stimulus_.data() + filled_);
            std::copy_n(error.data() + done, count, error_.data() + filled_);
            filled_ += count;
            fresh_ = true;
            done += count;
            if (filled_ == segment_) finish_segment();
        }
    }

    void finish() override {
        // Whatever has no partner yet: a waiting segment, a cut last one, or both.
        if (!has_waiting_ && !fresh_) return;
        if (fresh_) {
            std::fill(stimulus_.begin() + static_cast<std::ptrdiff_t>(filled_), stimulus_.end(), 0.0);
            std::fill(error_.begin() + static_cast<std::ptrdiff_t>(filled_), error_.end(), 0.0);
            finish_segment();
        }
        if (has_waiting_) {
            // Its partner stays empty.
            for (Complex& sample : waiting_stimulus_) sample.imag(0.0);
            for (Complex& sample : waiting_error_) sample.imag(0.0);
            add_pair();
            has_waiting_ = false;
            sums_.averages += 1;
        }
    }

    // Two segments that overlap by half begin a whole segment behind the two before.
    std::int64_t part_samples() const override { return static_cast<std::int64_t>(segment_); }

    const ResponseSums& sums() const override { return sums_; }

private:
    static std::vector<double> frequencies(std::size_t segment) {
        std::vector<double> bins(segment / 2 + 1);
        for (std::size_t k = 0; k < bins.size(); ++k) bins[k] = static_cast<double>(k) / static_cast<double>(segment);
        return bins;
    }

    void finish_segment() {
        for (std::size_t n = 0; n < segment_; ++n) {
            if (has_waiting_) {
                waiting_stimulus_[n].imag(window_[n] * stimulus_[n]);
                waiting_error_[n].imag(window_[n] * error_[n]);
            } else {
                waiting_stimulus_[n] = window_[n] * stimulus_[n];
                waiting_error_[n] = window_[n] * error_[n];
            }
        }
        if (has_waiting_) {
            add_pair();
            sums_.averages += 2;
        }
        has_waiting_ = !has_waiting_;
        const auto half = static_cast<std::ptrdiff_t>(segment_ / 2);
        std::copy(stimulus_.begin() + half, stimulus_.end(), stimulus_.begin());
        std::copy(error_.begin() + half, error_.end(), error_.begin());
        filled_ = segment_ / 2;
        fresh_ = false;
    }

    void add_pair() {
        std::vector<Complex> x(segment_), e(segment_), cross(sums_.sums.points());
        std::vector<double> power(sums_.sums.points());
        fft_.transform(waiting_stimulus_.data(), x.data());
        fft_.transform(waiting_error_.data(), e.data());
        for (std::size_t k = 0; k <= segment_ / 2; ++k) {
            // With Z = A + jB of two real signals: 2 A(k) = Z(k) + conj Z(-k), 2j B(k) = Z(k) - conj Z(-k), and
            // sums over both segments need no separation:
            // |A|^2 + |B|^2 = (|Z(k)|^2 + |Z(-k)|^2) / 2, and likewise for the cross spectra.
            const std::size_t mirror = (segment_ - k) % segment_;
            power[k] = 0.5 * (std::norm(x[k]) + std::norm(x[mirror]));
            cross[k] = 0.5 * (times_conjugate(e[k], x[k]) + std::conj(times_conjugate(e[mirror], x[mirror])));
        }
        sums_.sums.add(cross, power);
    }

    static Complex times_conjugate(Complex a, Complex b) {
        return {a.real() * b.real() + a.imag() * b.imag(), a.imag() * b.real() - a.real() * b.imag()};
    }

    std::size_t segment_;
    std::vector<double> window_;
    kissfft<double> fft_;
    std::vector<double> stimulus_, error_;  ///< the segment being filled
    std::size_t filled_ = 0;
    bool fresh_ = false;                                     ///< it holds samples that no segment has seen
    std::vector<Complex> waiting_stimulus_, waiting_error_;  ///< a windowed segment without a partner
    bool has_waiting_ = false;
    ResponseSums sums_;
};

}  // namespace

std::size_t response_segment_for(std::int64_t length_samples) {
    constexpr std::size_t shortest = 64, longest = 4096;
    std::size_t segment = longest;
    // Eight segments that overlap by half span 4.5 segments.
    while (segment > shortest && static_cast<std::int64_t>(segment + 7 * (segment / 2)) > length_samples) segment /= 2;
    return segment;
}

std::unique_ptr<ResponseMeasure> make_welch_response(std::size_t segment) {
    return std::make_unique<WelchResponse>(segment);
}

}  // namespace halflsb
