#include "oracle/measure/lag.hpp"

#include <algorithm>
#include <cmath>
#include <cstring>
#include <limits>

namespace halflsb {

namespace {

// Stretches begin at multiples of this index, so that block bounds do not move them.
constexpr std::size_t stretch_samples = 1024;

// Two doubles in one register of any 64-bit processor; each lag keeps its own lane and its own order.
using Pair = double __attribute__((vector_size(16)));
constexpr std::size_t tile_lags = 12;

// sums[i] += sum over m of (y[m] - r[m + i])^2 for tile_lags neighbouring i.
void add_tile(const double* y, const double* r, std::size_t count, double* sums) {
    Pair s0{}, s1{}, s2{}, s3{}, s4{}, s5{};
    for (std::size_t m = 0; m < count; ++m) {
        const Pair now = {y[m], y[m]};
        Pair x[tile_lags / 2];
        std::memcpy(x, r + m, sizeof x);
        const Pair d0 = now - x[0], d1 = now - x[1], d2 = now - x[2];
        const Pair d3 = now - x[3], d4 = now - x[4], d5 = now - x[5];
        s0 += d0 * d0;
        s1 += d1 * d1;
        s2 += d2 * d2;
        s3 += d3 * d3;
        s4 += d4 * d4;
        s5 += d5 * d5;
    }
    Pair totals[tile_lags / 2];
    std::memcpy(totals, sums, sizeof totals);
    totals[0] += s0;
    totals[1] += s1;
    totals[2] += s2;
    totals[3] += s3;
    totals[4] += s4;
    totals[5] += s5;
    std::memcpy(sums, totals, sizeof totals);
}

void add_single(const double* y, const double* r, std::size_t count, double* sum) {
    double s = 0.0;
    for (std::size_t m = 0; m < count; ++m) {
        const double d = y[m] - r[m];
        s += d * d;
    }
    *sum += s;
}

std::size_t past(int window) { return static_cast<std::size_t>(std::max(window, 0)); }

// The lag with the smallest sum; of equals the nearest to `wanted`, then the positive one. NaN loses.
int smallest_lag(const std::vector<double>& sums, int window, int wanted, bool zero_counts) {
    int best = 0;
    double least = std::numeric_limits<double>::infinity();
    bool found = false;
    for (int k = window; k >= -window; --k) {
        if (k == 0 && !zero_counts) continue;
        double sum = sums[static_cast<std::size_t>(k + window)];
        if (std::isnan(sum)) sum = std::numeric_limits<double>::infinity();
        if (!found || sum < least || (sum == least && std::abs(k - wanted) < std::abs(best - wanted))) {
            best = k;
            least = sum;
            found = true;
        }
    }
    return best;
}

}  // namespace

int lag_window_for(std::int64_t length_samples) {
    const std::int64_t half = (length_samples - 1) / 2;
    return static_cast<int>(std::clamp<std::int64_t>(half, 0, lag_window_samples));
}

LagSums::LagSums(int window, std::int64_t first_summed)
    : window_(std::max(window, 0)),
      past_left_(std::max<std::int64_t>(first_summed, 0)),
      r_(stretch_samples + 2 * past(window), 0.0),
      y_(stretch_samples + past(window), 0.0),
      sums_(2 * past(window) + 1, 0.0) {}

std::size_t LagSums::ready() const { return held_ > past(window_) ? held_ - past(window_) : 0; }

std::int64_t LagSums::summed() const { return finished_ + static_cast<std::int64_t>(ready()); }

void LagSums::add_stretch(std::size_t count, std::vector<double>& sums) const {
    std::size_t i = 0;
    for (; i + tile_lags <= sums.size(); i += tile_lags) add_tile(y_.data(), r_.data() + i, count, sums.data() + i);
    for (; i < sums.size(); ++i) add_single(y_.data(), r_.data() + i, count, sums.data() + i);
}

// The front of r_ holds the `window` samples before the first n; the newest ones push the others out.
void LagSums::add_past(std::span<const double> r) {
    const auto front = std::span(r_).first(past(window_));
    const std::size_t fresh = std::min(r.size(), front.size());
    std::copy(front.begin() + static_cast<std::ptrdiff_t>(fresh), front.end(), front.begin());
    std::copy_n(r.end() - static_cast<std::ptrdiff_t>(fresh), fresh, front.end() - static_cast<std::ptrdiff_t>(fresh));
}

void LagSums::add(std::span<const double> r, std::span<const double> y) {
    const std::size_t before = past(window_);
    auto done = static_cast<std::size_t>(std::min<std::int64_t>(past_left_, static_cast<std::int64_t>(r.size())));
    past_left_ -= static_cast<std::int64_t>(done);
    add_past(r.first(done));
    while (done < r.size()) {
        const std::size_t count = std::min(r.size() - done, y_.size() - held_);
        std::copy_n(r.data() + done, count, r_.data() + before + held_);
        std::copy_n(y.data() + done, count, y_.data() + held_);
        held_ += count;
        done += count;
        if (held_ < y_.size()) return;
        add_stretch(stretch_samples, sums_);
        finished_ += static_cast<std::int64_t>(stretch_samples);
        held_ -= stretch_samples;
        std::copy(r_.begin() + stretch_samples, r_.end(), r_.begin());
        std::copy(y_.begin() + stretch_samples, y_.end(), y_.begin());
    }
}

std::vector<double> LagSums::residual() const {
    std::vector<double> sums = sums_;
    add_stretch(ready(), sums);
    std::reverse(sums.begin(), sums.end());
    return sums;
}

LagMeasure::LagMeasure(int window, int expected_lag, std::int64_t first_summed)
    : sums_(window, first_summed), expected_lag_(expected_lag) {}

void LagMeasure::add(std::span<const double> reference, std::span<const double> response) {
    sums_.add(reference, response);
}

LagFigures LagMeasure::value() const {
    LagFigures figures;
    figures.window = sums_.window();
    figures.samples = sums_.summed();
    figures.residual = sums_.residual();
    figures.best_lag = smallest_lag(figures.residual, figures.window, expected_lag_, true);
    return figures;
}

LagDiscrimination::LagDiscrimination(int window, std::int64_t first_summed) : sums_(window, first_summed) {}

void LagDiscrimination::add(std::span<const double> reference) { sums_.add(reference, reference); }

int LagDiscrimination::hardest_lag() const { return smallest_lag(sums_.residual(), sums_.window(), 0, false); }

double LagDiscrimination::smallest() const {
    if (sums_.window() == 0) return 0.0;
    return sums_.residual()[static_cast<std::size_t>(hardest_lag() + sums_.window())];
}

}  // namespace halflsb
