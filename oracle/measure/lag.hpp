// Whole-sample delay of the response behind the reference, and whether a reference can tell it.
//
// For each lag k in -window .. window the squared residual is R(k) = sum (y[n] - r[n-k])^2, and the
// reference's own difference is D(k) = sum (r[n-k] - r[n])^2; both over the same n for every k: from 0
// to length - 1 - window, r being zero before its start. So the last `window` samples decide nothing
// and no lag is favoured by a shorter sum. Direct differences, no transforms: an exact match gives
// exactly 0.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

namespace halflsb {

/// The window of design: lags of -64 .. 64 samples, less for short records.
inline constexpr int lag_window_samples = 64;
/// The window for a record of that length: min(64, (length - 1) / 2), at least 0.
int lag_window_for(std::int64_t length_samples);

struct LagFigures {
    int window = 0;
    std::int64_t samples = 0;       ///< how many n were summed
    std::vector<double> residual;   ///< R(k), index k + window
    int best_lag = 0;               ///< smallest R; of equals the one nearest to expected_lag, then the positive one
    double residual_at(int lag) const { return residual[static_cast<std::size_t>(lag + window)]; }
};

/// O(window) per sample, constant memory. Any split into blocks gives the same figures, bit for bit.
class LagMeasure {
public:
    explicit LagMeasure(int window, int expected_lag = 0);
    void add(std::span<const double> reference, std::span<const double> response);
    LagFigures value() const;

private:
    int window_;
    int expected_lag_;
    std::int64_t samples_ = 0;
    std::vector<double> reference_tail_, response_tail_;
    std::vector<double> residual_;
};

/// D(k) of a reference, to decide before streaming whether a case can tell its latency: it can when
/// smallest() >= 130 sigma^2 (design: sigma the larger of 1 output LSB and the case's rms limit).
class LagDiscrimination {
public:
    explicit LagDiscrimination(int window);
    void add(std::span<const double> reference);
    /// min over k != 0 of D(k); 0 when window is 0.
    double smallest() const;
    /// The k of smallest().
    int hardest_lag() const;

private:
    int window_;
    std::int64_t samples_ = 0;
    std::vector<double> tail_;
    std::vector<double> difference_;
};

}  // namespace halflsb
