// Drift: the slope of an error over a long run, in constant memory, with an uncertainty that knows of correlated
// errors.
//
// The means of 129 .. 256 blocks (doubling_blocks.hpp) are fitted by a straight line, each weighed by its samples:
// least squares. Its variance is v / sum n_b (x_b - mean)^2, v the long-run variance of what the line leaves
// (series_variance.hpp); the fit has Student's t with `degrees` degrees of freedom. A line is what is asked for: a bend
// is counted as noise and makes the slope less sure.
//
// An error that stands still on one code has slope 0 and uncertainty 0, and that is what the board did. What a rounding
// to nearest can hide of a slope, or feign, is at most sum |x| LSB / 2 over sum x^2, so 1.5 LSB over the run's length;
// without noise a ramp of fewer than some four LSB is sure to that alone. A longer one climbs in stairs, which are
// no noise, and the uncertainty is then a guide that is too large.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string_view>

#include "oracle/measure/doubling_blocks.hpp"
#include "oracle/measure/figure.hpp"

namespace halflsb {

inline constexpr std::int64_t drift_least_samples = 256;

/// Values are in the unit of the error.
struct DriftFigures {
    std::int64_t first_index = 0, samples = 0;
    std::int64_t block_samples = 0;  ///< of each but the last, which may have fewer
    std::size_t blocks = 0;
    int degrees = 0;  ///< of freedom, of the uncertainties of all figures here
    Figure slope_per_sample;
    std::optional<Figure> slope_per_hour;  ///< given a rate
    Figure intercept;                      ///< of the line, at first_index
    Figure change_over_run;                ///< of the line, from the first sample to the last
    /// Mean of the last full block less that of the first; no line is assumed.
    Figure last_less_first;
    /// Mean of a full block less that of the first, the one of largest magnitude: shows a drift that came back.
    double largest_change = 0.0;
    std::int64_t largest_change_index = 0;  ///< of that block's first sample
};

enum class DriftFault {
    none,
    too_short,   ///< fewer than drift_least_samples
    not_finite,  ///< an error is NaN or infinite
};
/// The reason in words that can stand after "cannot be judged: ".
std::string_view reason_of(DriftFault fault);

struct DriftAnswer {
    std::optional<DriftFigures> figures;
    DriftFault fault = DriftFault::none;  ///< none exactly when there are figures
};

/// Up to 2^62 samples; 4 KiB. Some two nanoseconds a sample. Any split into blocks gives the same figures, bit for bit.
class DriftMeasure {
public:
    /// rate_hz: samples a second, above 0.
    explicit DriftMeasure(std::optional<double> rate_hz = std::nullopt) : rate_hz_(rate_hz) {}
    /// reference.size() == response.size(); the next samples. Index 0 is the first one unless start_at says otherwise.
    void add(std::span<const double> reference, std::span<const double> response);
    void start_at(std::int64_t first_index) { first_index_ = first_index; }
    DriftAnswer value() const;

private:
    std::optional<double> rate_hz_;
    std::int64_t first_index_ = 0;
    DoublingBlocks<1> blocks_;
};

}  // namespace halflsb
