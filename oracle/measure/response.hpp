// Frequency response from a stimulus x and the error e = response - design reference:
//
//     H(f) = H_design(f) + S_xe(f) / S_xx(f)
//
// The closed form carries the bulk, only the small rest is estimated, so the leakage of the window
// cancels (design 7). Two measures: at the bins of a Welch average (Welch 1967; periodic Hann window,
// 50 % overlap) for broadband stimuli, and at the exact frequencies of tones.
#pragma once

#include <complex>
#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <vector>

#include "oracle/measure/batch_sums.hpp"

namespace halflsb {

/// One estimated point of S_xe / S_xx.
struct ResponsePoint {
    double cycles_per_sample = 0.0;
    std::complex<double> difference;  ///< estimated H - H_design; NaN where the stimulus has no power at all
    double stimulus_power = 0.0;      ///< mean |X|^2 of the windowed segments, for judging coverage
    std::int64_t averages = 0;
};

/// All that a measure has seen, batch by batch; response_estimate.hpp says how sure it is.
struct ResponseSums {
    std::vector<double> cycles_per_sample;  ///< ascending, one a point of `sums`
    BatchSums sums;                         ///< megabytes: not to be copied
    std::int64_t averages = 0;              ///< segments or realisations
    double segments_a_part = 1.0;           ///< of the parts in `sums`
    /// Correlation of what two neighbouring segments say, 0 where they share no sample.
    double neighbour_correlation = 0.0;
    /// What the window does to a response that bends from bin to bin: it is smoothed by a kernel of this variance, in
    /// bins^2. 0 where points are not bins.
    double smoothing_bins2 = 0.0;
};

class ResponseMeasure {
public:
    virtual ~ResponseMeasure() = default;
    /// stimulus.size() == error.size(); consecutive samples. Any split into blocks gives the same
    /// figures, bit for bit.
    virtual void add(std::span<const double> stimulus, std::span<const double> error) = 0;
    /// Samples that one more part of the sums takes.
    virtual std::int64_t part_samples() const = 0;
    /// No more samples follow: what was cut at the end counts as well. Once.
    virtual void finish() = 0;
    /// Of what is whole; after finish(), of everything.
    virtual const ResponseSums& sums() const = 0;
    /// Of the same. Ascending in frequency.
    std::vector<ResponsePoint> value() const;
};

/// Segment length for a record: the largest power of two that gives at least 8 segments, within
/// 64 .. 4096; the record itself must hold at least one segment of 64.
std::size_t response_segment_for(std::int64_t length_samples);

/// Bins k / segment, k = 0 .. segment / 2. A last incomplete segment is padded with zeros.
std::unique_ptr<ResponseMeasure> make_welch_response(std::size_t segment);

/// One point per tone, ascending, by correlation with a Hann window over each realisation: so many samples in which
/// the tones keep their phases, one after the other, `realisations` in all. The tones must be resolved (below) in
/// one. `leading` samples before the first and those beyond the last count nothing, nor does a realisation that is cut,
/// unless there is no other. Cost: about four multiply-adds a sample and tone.
std::unique_ptr<ResponseMeasure> make_tone_response(std::vector<double> tones_cycles_per_sample,
                                                    std::int64_t realisation_samples, std::int64_t realisations = 1,
                                                    std::int64_t leading = 0);

/// Whether a Hann window over that many samples keeps the tones apart: each at least 4 / length from
/// every other, from 0 and from 1/2. Its side lobes are then below -50 dB (Harris 1978), so a tone
/// takes up at most 1/300 of a neighbour's *difference* from the design.
bool tones_resolved(const std::vector<double>& tones_cycles_per_sample, std::int64_t length_samples);

/// 20 lg |H|; minus infinity for 0.
double gain_db(std::complex<double> response);

}  // namespace halflsb
