// Whole-sample delay of the response behind the reference, and whether a reference can tell it.
//
// For each lag k in -window .. window the squared residual is R(k) = sum (y[n] - r[n-k])^2, and the
// reference's own difference is D(k) = sum (r[n-k] - r[n])^2; both over the same n for every k: from
// first_summed (0 unless said) to length - 1 - window, r being zero before its start. So the last `window`
// samples decide nothing and no lag is favoured by a shorter sum. Direct differences, no transforms: an exact match
// gives exactly 0. Terms are summed in the order of n, in stretches of 1024 whose sums are then added: none is
// negative, so R and D are within (1024 + samples / 1024 + 4) 2^-53 of themselves, 1.1e-11 after 1e8 samples. A NaN
// makes each R it touches NaN, which counts as larger than any number.
#pragma once

#include <cstddef>
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
    std::int64_t samples = 0;      ///< how many n were summed
    std::vector<double> residual;  ///< R(k), index k + window
    int best_lag = 0;  ///< smallest R; of equals (all, when nothing was summed) the one nearest to expected_lag, then
                       ///< the positive one
    double residual_at(int lag) const { return residual[static_cast<std::size_t>(lag + window)]; }
};

/// sum (y[n] - r[n-k])^2 for each lag; what the two measures below share.
class LagSums {
public:
    /// Samples before `first_summed` only fill the past of r: no n among them is summed.
    explicit LagSums(int window, std::int64_t first_summed = 0);
    void add(std::span<const double> r, std::span<const double> y);
    /// Index k + window; over the n that have been summed.
    std::vector<double> residual() const;
    /// How many n: those with `window` samples after them.
    std::int64_t summed() const;
    int window() const { return window_; }

private:
    void add_stretch(std::size_t count, std::vector<double>& sums) const;
    void add_past(std::span<const double> r);
    std::size_t ready() const;

    int window_;
    std::int64_t past_left_;     ///< samples still to come before the first n
    std::int64_t finished_ = 0;  ///< n in whole stretches, already in sums_
    std::size_t held_ = 0;       ///< samples of y that are held, those after finished_
    std::vector<double> r_, y_;  ///< r_ starts `window` samples before y_
    std::vector<double> sums_;   ///< by ascending index of r, so the lag window - i
};

/// O(window) per sample, constant memory. Any split into blocks gives the same figures, bit for bit.
class LagMeasure {
public:
    explicit LagMeasure(int window, int expected_lag = 0, std::int64_t first_summed = 0);
    void add(std::span<const double> reference, std::span<const double> response);
    LagFigures value() const;

private:
    LagSums sums_;
    int expected_lag_;
};

/// D(k) of a reference, to decide before streaming whether a case can tell its latency: it can when
/// smallest() >= 130 sigma^2 (design: sigma the larger of 1 output LSB and the case's rms limit).
class LagDiscrimination {
public:
    explicit LagDiscrimination(int window, std::int64_t first_summed = 0);
    void add(std::span<const double> reference);
    /// min over k != 0 of D(k); 0 when window is 0.
    double smallest() const;
    /// The k of smallest(); of equals the one nearest to 0, then the positive one; 0 when window is 0.
    int hardest_lag() const;

private:
    LagSums sums_;
};

}  // namespace halflsb
