// Noise power: how much of a noise a filter lets through, and how much its board adds.
//
//     ratio  = mean (y - mean y)^2 / mean (x - mean x)^2       x stimulus, y response of the same n
//     excess = mean e^2 - (mean e)^2                           e = response - reference
//
// Of white noise, a filter's ratio is sum h^2: 1 / M of a moving average of M points, alpha / (2 - alpha) of a
// one-pole.
//
// Uncertainties. Both are means of a function of each sample, to first order in the noise (delta method; Cochran 1977
// for the ratio; from memory):
//     ratio  - truth = mean d,  d = ((y - mean y)^2 - ratio (x - mean x)^2) / mean (x - mean x)^2
//     excess - truth = mean d,  d = (e - mean e)^2 - excess
// so u^2 = v / N, v the long-run variance of d (series_variance.hpp), from the means of 129 .. 256 blocks. It knows of
// y's correlation in time without being told the filter, and of what y and x have in common: for a filter h and white
// x, of any distribution (sum h^2 = ratio, so x(n)^2 itself cancels from the sum of d),
//     v = 2 (sum_k r(k)^2 - ratio^2),  r(k) = sum_n h(n) h(n + k),
// where powers of unrelated normal records would have 2 (sum_k r(k)^2 + ratio^2): twice that for a moving average of 4
// points, and nothing is left of it for a plain gain. The run should be 200 times as long as the filter remembers, or
// more: at 100 times an interval of 95 % holds in 92.5 %, the ratio is skew in its noise and v too small. Removing the mean takes the long-run variance of the samples / N from their power; it is put back, as it is
// estimated from the means of the blocks.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string_view>

#include "oracle/measure/doubling_blocks.hpp"
#include "oracle/measure/figure.hpp"

namespace halflsb {

inline constexpr std::int64_t noise_least_samples = 256;

enum class NoiseFault {
    none,
    too_short,        ///< fewer than noise_least_samples
    not_finite,       ///< a sample is NaN or infinite, or its square is
    silent_stimulus,  ///< every sample of the stimulus is the same
};
/// The reason in words that can stand after "cannot be judged: ".
std::string_view reason_of(NoiseFault fault);

struct NoiseRatioFigures {
    std::int64_t samples = 0;
    int degrees = 0;  ///< of freedom, Student's t
    Figure ratio;
    std::optional<Figure> ratio_db;                     ///< 10 lg; none for a silent response
    double stimulus_power = 0.0, response_power = 0.0;  ///< mean removed, square of the samples' unit
    double stimulus_mean = 0.0, response_mean = 0.0;
};

struct NoiseRatioAnswer {
    std::optional<NoiseRatioFigures> figures;
    NoiseFault fault = NoiseFault::none;  ///< none exactly when there are figures
};

/// Up to 2^62 samples; 16 KiB. Any split into blocks gives the same figures, bit for bit. Settling is left out by the
/// caller.
class NoiseRatioMeasure {
public:
    /// stimulus.size() == response.size(): the next samples.
    void add(std::span<const double> stimulus, std::span<const double> response);
    NoiseRatioAnswer value() const;

private:
    // Samples count from the first ones, so that a mean far above the noise does not drown it.
    double first_stimulus_ = 0.0, first_response_ = 0.0;
    DoublingBlocks<4> blocks_;  ///< x, y, x^2, y^2
};

struct ExcessNoiseFigures {
    std::int64_t samples = 0;
    int degrees = 0;  ///< of freedom, Student's t
    Figure power;     ///< square of the samples' unit
    Figure bias;      ///< mean e
};

struct ExcessNoiseAnswer {
    std::optional<ExcessNoiseFigures> figures;
    NoiseFault fault = NoiseFault::none;  ///< none exactly when there are figures
};

/// As above, 8 KiB.
class ExcessNoiseMeasure {
public:
    /// reference.size() == response.size(): the next samples.
    void add(std::span<const double> reference, std::span<const double> response);
    ExcessNoiseAnswer value() const;

private:
    double first_ = 0.0;
    DoublingBlocks<2> blocks_;  ///< e, e^2
};

}  // namespace halflsb
