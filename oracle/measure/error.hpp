// Response minus reference, sample by sample, in constant memory.
#pragma once

#include <cstdint>
#include <optional>
#include <span>

#include "oracle/measure/sums.hpp"

namespace halflsb {

/// All in value units of the signal (divide by lsb_value() for LSB).
struct ErrorFigures {
    std::int64_t samples = 0;
    double largest = 0.0;                ///< max |e|; NaN as soon as one e is NaN
    std::int64_t largest_index = -1;     ///< of the first sample that reaches it (the first NaN); -1 when samples == 0
    double lowest = 0.0, highest = 0.0;  ///< of e, NaN left out
    double rms = 0.0;                    ///< of e, the mean not removed; infinite or NaN when an e is
    double bias = 0.0;                   ///< mean of e
    bool identical = false;              ///< every e is exactly 0
    std::optional<double> snr_db;  ///< 10 lg(sum reference^2 / sum e^2); none when identical or the reference is silent
    std::int64_t first_beyond = -1;  ///< index of the first sample beyond the limit; -1 when none or no limit
    std::int64_t beyond = 0;         ///< how many there are
};

/// What an error may be, in value units.
struct ErrorEnds {
    double lowest = 0.0, highest = 0.0;

    double largest() const { return highest > -lowest ? highest : -lowest; }
};

/// Sums are compensated (sums.hpp), in the order of the samples: any split into blocks gives the
/// same figures, bit for bit.
class ErrorMeasure {
public:
    /// A sample is beyond the limit when not (lowest <= e <= highest), so NaN is beyond.
    explicit ErrorMeasure(std::optional<ErrorEnds> limit = std::nullopt);
    /// In value units, of either sign.
    explicit ErrorMeasure(double limit) : ErrorMeasure(ErrorEnds{-limit, limit}) {}
    /// The next samples; index 0 is the first one added unless first_index says otherwise.
    void add(std::span<const double> reference, std::span<const double> response);
    void start_at(std::int64_t first_index);
    ErrorFigures value() const;

private:
    std::optional<ErrorEnds> limit_;
    std::int64_t next_index_ = 0;
    ErrorFigures figures_;
    CompensatedSum sum_, sum_squares_, reference_squares_;
};

}  // namespace halflsb
