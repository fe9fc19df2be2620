// How much of a signal comes through where it should not: a response that should be silent, regressed on several
// references at several lags.
//
//   b = Sxy / Sxx        centred sums; of the reference and lag whose correlation Sxy^2 / (Sxx Syy) is the largest
//
// not the largest b: a leak that bypassed a filter, regressed on what the filter returns, looks larger than it is by
// up to 1 over the filter's noise gain. The uncertainty is that of a ratio estimator over batches in time, from
// e = Sxy - b Sxx of each: u^2 = B / (B - 1) sum e^2 / Sxx^2 (Cochran 1977, Sampling Techniques, 6.3, from memory), B -
// 1 degrees of freedom. As the largest of all candidates is told, the caller shares alpha over candidates().
#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "oracle/measure/figure.hpp"

namespace halflsb {

inline constexpr int coupling_batches = 32;
inline constexpr int coupling_lags = 32;  ///< to either side

struct CouplingFigures {
    Figure amplitude;           ///< of either sign, per unit of the reference
    double correlation = 0.0;   ///< -1 .. 1
    std::size_t reference = 0;  ///< which one
    int lag_samples = 0;        ///< how late the response is; negative: early
    bool varies = false;        ///< the response does, and the reference; else nothing couples
};

class CouplingMeasure {
public:
    /// `samples` that will be added; what comes beyond them counts for the last batch.
    CouplingMeasure(std::size_t references, std::int64_t samples);
    /// The next samples; every reference and the response have one length.
    void add(std::span<const std::span<const double>> references, std::span<const double> response);
    std::size_t candidates() const { return references_ * lags; }
    double degrees() const { return coupling_batches - 1; }
    /// Of a response with a value that is not finite: not finite.
    CouplingFigures value() const;

private:
    static constexpr std::size_t lags = 2 * coupling_lags + 1;
    struct Sums {
        double x = 0.0, xx = 0.0, xy = 0.0;
    };
    struct Response {
        double count = 0.0, y = 0.0, yy = 0.0;
    };
    void take(std::int64_t index, std::size_t place);
    Sums& at(std::size_t batch, std::size_t candidate) { return sums_[batch * candidates() + candidate]; }
    const Sums& at(std::size_t batch, std::size_t candidate) const { return sums_[batch * candidates() + candidate]; }

    std::size_t references_;
    std::int64_t samples_;
    std::int64_t first_ = 0;              ///< index of the first one that is kept
    std::vector<std::vector<double>> x_;  ///< the kept ones of each reference
    std::vector<double> y_;
    std::vector<Sums> sums_;  ///< batch by batch, in it reference by reference, in it lag by lag
    std::vector<Response> responses_;
};

}  // namespace halflsb
