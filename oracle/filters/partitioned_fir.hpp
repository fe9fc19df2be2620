// A long FIR by FFT, without waiting for a block: partitioned overlap-save convolution (Gardner 1995, "Efficient
// convolution without input-output delay", here with parts of one size).
//
// The taps are cut into parts of B. The first part runs in direct form, sample by sample. Whenever a stretch of B
// inputs is full, counted from the reset and not from any block, the spectra of this stretch and the ones before are
// multiplied with those of the other parts: what these will add to the next stretch of outputs. So each output is
// there with its input, and the bits do not depend on how the input is split.
//
// Accuracy: |error| <= some 20 x 2^-53 sqrt(sum taps^2) x sqrt(sum x^2) over the window, of which the direct form has
// N 2^-53 sum |taps x|; far below 1e-12 of the largest output, but a silent stretch near a loud one is not exactly
// silent. A NaN is gone one stretch later than in direct form. Cost: B multiply-adds, two transforms of 2 B for B
// samples, and 4 multiply-adds for each part: with 65,536 taps a twentieth of the direct form.
#pragma once

#include <complex>
#include <kissfft/kissfft.hh>
#include <vector>

#include "oracle/filters/fir.hpp"
#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class PartitionedFirFilter final : public StageFilter {
public:
    /// More than one part of taps; part_of chooses its length.
    explicit PartitionedFirFilter(const Fir& design);
    void reset() override;
    void preload(double value) override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    /// Bins 0 .. B of a transform of 2 B real values; the others are their conjugates.
    struct Spectrum {
        explicit Spectrum(std::size_t bins) : real(bins, 0.0), imaginary(bins, 0.0) {}
        std::vector<double> real, imaginary;
    };

    void transform(std::span<const double> values, Spectrum& into);
    void finish_stretch();
    void predict();

    std::size_t part_;  ///< B
    FirFilter head_;
    kissfft<double> forward_, inverse_;
    std::vector<std::complex<double>> time_, bins_;  ///< scratch of the transforms
    Spectrum sum_;
    std::vector<Spectrum> parts_;   ///< of the taps from B on
    std::vector<Spectrum> inputs_;  ///< of the last stretches, as many as parts: each with the one before it
    std::size_t newest_ = 0;        ///< in inputs_
    std::vector<double> window_;    ///< the last full stretch and the present one
    std::vector<double> tail_;      ///< what the parts from B on add to the present stretch
    std::size_t filled_ = 0;        ///< of the present stretch
};

/// From so many taps on make_filter takes this form. Measured (tests/bench): with fewer the direct form is as fast.
inline constexpr std::size_t least_partitioned_taps = 1024;

}  // namespace halflsb
